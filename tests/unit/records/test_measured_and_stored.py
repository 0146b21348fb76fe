"""Measurements against what is computed, stored charge over cases, tables in cases."""

import json
from pathlib import Path

import pytest

import calcdoc
from calcdoc.records.record import Crosscheck, Record
from calcdoc.records.store import to_json
from tests.helpers.checking import TITLE
from tests.helpers.design import worked
from tests.unit.test_governing import TABLE

DESIGN = {
    "conditions": "V = 230 V ± 10 %\nT_a = 25 °C ± 10 K",
    "inputs": "I = 20 mA -1 % +3 %",
    "derive": "P [W] = V*I\nT_b = T_a + 10 K/W*P",
}


def measured(text: str) -> Crosscheck:
    """One measurement of the design."""
    (found,) = worked(**DESIGN, crosschecks=f"K: measured {text}").record.crosschecks
    return found


@pytest.mark.parametrize(
    ("given", "difference", "own", "other"),
    [
        ("4.75 W -2 % +9 %", 0.15, 0.095, 0.138),  # above: its lower band, the computed upper one
        ("4.45 W -9 % +2 %", -0.15, 0.089, 0.046),  # below: its upper band, the computed lower one
        ("4.6 W ± 1 %", 0.0, 0.046, 0.138),
        ("4.75 W ± 0.1 mW", 0.15, 0.0001, 0.138),
    ],
)
def test_sides_that_face_each_other(
    given: str, difference: float, own: float, other: float
) -> None:
    """The root sum square of both bands counts, each on the side that faces the other value."""
    found = measured(f"P_m = {given} against P at V = 230 V")
    assert found.difference == pytest.approx(difference, abs=1e-12)
    allowed = (own**2 + other**2) ** 0.5
    assert found.allowed == pytest.approx(allowed)
    assert found.agrees is (abs(difference) <= allowed)
    assert (found.form, found.unit, found.at) == ("measured against", "W", {"V": "230 V"})


def test_both_verdicts_are_among_them() -> None:
    """A measurement agrees at the edge of what is allowed and differs beyond it."""
    agrees = [measured(f"P_m = {m} ± 0.1 mW against P at V = 230 V").agrees
              for m in ("4.738 W", "4.739 W", "4.554 W", "4.553 W")]  # fmt: skip
    assert agrees == [True, False, True, False]


def test_conditions_that_are_not_set_keep_their_band() -> None:
    """The conditions of the measurement stand as it says, all others within their bands."""
    bound = measured("P_m = 4.75 W ± 0.1 mW against P at V = 230 V")
    free = measured("P_m = 4.75 W ± 0.1 mW against P")
    assert bound.second_band == "4.554 W to 4.738 W"
    assert free.second_band == "4.099 W to 5.212 W"
    assert (free.at, free.second_text) == ({}, "4.600 W")
    assert free.allowed == pytest.approx(230 * 1.1 * 0.0206 - 4.6)
    away = measured("P_m = 4.75 W ± 0.1 mW against P at V = 240 V ± 1 %, I = 19.8 mA")
    assert away.second_text == "4.752 W"
    assert away.difference == pytest.approx(-0.002)


def test_temperatures_are_compared_as_differences() -> None:
    """A measured temperature differs by kelvins, whatever its own scale is."""
    found = measured("T_m = 76 °C ± 2 K against T_b at V = 230 V, T_a = 27 °C")
    assert found.unit == "K"
    assert found.difference == pytest.approx(3.0)
    assert found.allowed == pytest.approx((2**2 + 1.38**2) ** 0.5)
    assert (found.agrees, found.first_text, found.second_text) == (False, "76 °C", "73.00 °C")
    assert measured("T_m = 75 °C ± 2 K against T_b at V = 230 V, T_a = 27 °C").agrees


STORED = {
    "conditions": "V = 230 V ± 10 %",
    "inputs": "C = 10 µF ± 20 %\nR_b = 1 MΩ\nx = 1 ± 0.5",
    "derive": "V_pk = sqrt(2)*V",
    "hazards": "supply V\nstored C at V_pk through R_b",
}


def stored(cases: str) -> Record:
    """A reservoir with a bleed resistor in some cases."""
    return worked(**STORED, **({"cases": cases} if cases else {})).record


@pytest.mark.parametrize(
    ("cases", "said", "time"),
    [
        ("", "up to 358 V to 60 V through R_b in at most 21.5 s over all tolerances;", "21.5 s"),
        ("mode low: V = 120 V",
         "up to 358 V to 60 V through R_b in at most 21.5 s over all tolerances and cases;",
         "21.5 s"),
        ("fault aged: R_b = 10*R_b",
         "in at most 215 s over all tolerances and cases, in the case aged;", "215 s"),
        ("fault high: V = 400 V\nfault aged: R_b = 10*R_b",
         "falls from up to 566 V to 60 V through R_b in at most 215 s over", "215 s"),
        ("fault big: C = 20 µF ± 50 %", "in at most 53.6 s over all tolerances and cases, in the",
         "53.6 s"),
    ],
)  # fmt: skip
def test_stored_charge_over_cases(cases: str, said: str, time: str) -> None:
    """The greatest voltage and the greatest time over every case, with the case that gives it."""
    made = stored(cases)
    (caution,) = [each.text for each in made.cautions if "Stored charge" in each.text]
    assert said in caution.replace("\xa0", " ")
    assert made.hazards[1].result == time


def test_stored_charge_that_a_case_cannot_tell() -> None:
    """A case in which the time cannot be computed is named in the caution, never left out."""
    made = stored("fault first one: V = 230 V*sqrt(0 - x)")
    (caution,) = [each.text for each in made.cautions if "Stored charge" in each.text]
    assert "It could not be computed in first one." in caution


def test_a_supply_that_only_a_case_makes_dangerous() -> None:
    """The mains caution counts every case."""
    blocks = {"conditions": "V = 24 V", "hazards": "supply V"}
    assert not _danger(worked(**blocks).record)
    assert _danger(worked(**blocks, cases="fault mains: V = 230 V").record)


def _danger(made: Record) -> bool:
    return any("Mains voltage can kill" in each.text for each in made.cautions)


def test_a_table_that_ends_only_in_a_fault(tmp_path: Path) -> None:
    """Outside its table a look-up is not decided in the fault; the normal case has its value."""
    (tmp_path / "tables").mkdir()
    (tmp_path / "tables" / "lin.toml").write_text(TABLE)
    blocks = (
        '```inputs\na = 12 V ± 1 V\n```\n```derive\nx = lookup("lin", a)\ny = 2*x\n```\n'
        "```cases\nfault out: a = 31 V\nfault last: a = 30 V\n```\n"
        "```criteria\nR: y <= 20 mm in every case\n```\n"
    )  # fmt: skip
    (tmp_path / "trial.md").write_text(TITLE + blocks)
    made = calcdoc.record(calcdoc.evaluate(calcdoc.read(tmp_path / "trial.md")))
    (found,) = made.criteria
    assert {name: each.verdict for name, each in found.by_case.items()} == {
        "normal": "pass", "out": "not decided", "last": "pass",
    }  # fmt: skip
    assert found.reason == "in out: `a` lies outside of the table `lin`"
    by_case = {each.symbol: each.by_case for each in made.quantities}
    assert (by_case["x"]["last"].nominal, by_case["y"]["last"].nominal) == (1.0, 2.0)
    assert by_case["x"]["out"].nominal is None
    assert by_case["y"]["out"].reason == by_case["x"]["out"].reason


CRITERION_CASE = {
    "value", "limit", "margin", "margin_abs", "verdict", "margin_text", "accepted", "reason",
}  # fmt: skip


def test_keys_of_the_json() -> None:
    """Every key of contract 4.1 stands in the JSON, and null only where nothing can be."""
    made = worked(
        inputs="x = 4 ± 1",
        derive="y = sqrt(x)\nz[n] = y*n for n in 1..3 odd",
        cases="mode dim: x = 2 ± 0.5\nfault neg: x = -1",
        criteria="R: y <= 2 in every case\nS: y <= 9 by sampling 99 %\nA: any of R, S\n"
        "T: y <= 2\naccept T | reason | until 2027-06-30",
    )
    data = json.loads(to_json(made.record))
    by_id = {each["id"]: each for each in data["criteria"]}
    assert {frozenset(each) for each in by_id["R"]["by_case"].values()} == {
        frozenset(CRITERION_CASE)
    }
    assert by_id["R"]["by_case"]["neg"]["value"] is None
    assert by_id["R"]["by_case"]["dim"]["value"] == pytest.approx(2.5**0.5)
    assert (by_id["R"]["case"], by_id["R"]["route_of"], by_id["A"]["route_of"]) == (
        "normal", "A", "",
    )  # fmt: skip
    low, high = by_id["S"]["interval"]
    assert low < by_id["S"]["value"] < high
    assert by_id["S"]["standard_error"] > 0
    assert (by_id["R"]["interval"], by_id["R"]["standard_error"]) == (None, None)
    assert (by_id["T"]["verdict"], by_id["T"]["accepted"]) == ("fail", "reason, until 2027-06-30")
    by_symbol = {each["symbol"]: each["by_case"] for each in data["quantities"]}
    assert set(by_symbol["y"]) == {"dim", "neg"}
    assert by_symbol["y"]["neg"]["nominal"] is None
    assert by_symbol["z"]["dim"]["nominal"] == pytest.approx([2**0.5, 3 * 2**0.5])
    assert by_symbol["x"]["dim"]["least"] == 1.5
    assert [each["name"] for each in data["cases"]] == ["normal", "dim", "neg"]
