"""Which limit of a criterion governs, and what a band with a look-up may claim."""

from pathlib import Path

import pytest

import calcdoc
from calcdoc.page.lines import subject
from calcdoc.records.record import Criterion
from tests.helpers.checking import TITLE
from tests.helpers.design import worked

TABLE = """\
title = "Test curve"
edition = "2026"
clause = "1"
rows = [[0, 4], [10, 2], [20, 9], [30, 1]]

[[axis]]
name = "a"
unit = "V"
rule = "linear"

[value]
unit = "mm"
"""


def _judged(text: str, **blocks: str) -> Criterion:
    return worked(**blocks, criteria=f"R: {text}").criterion("R")


def test_series_governed_by_least_share() -> None:
    """Elements with limits of their own size are compared by their share of the limit."""
    found = _judged(
        "I[n] <= 100 mA/n for n in 3..9 odd", derive="I[n] [mA] = 30 mA/n^2*3 for n in 3..9 odd"
    )
    assert found.governing == {"n": "3"}
    assert found.margin == pytest.approx(0.7)
    assert found.rows[0].margin == pytest.approx(0.7)
    other = _judged(
        "I[n] <= 100 mA/n for n in 3..9 odd", derive="I[n] [mA] = 2 mA + 0 mA*n for n in 3..9 odd"
    )
    assert other.governing == {"n": "9"}
    assert other.margin == pytest.approx(1 - 2 / (100 / 9))


def test_failing_element_governs() -> None:
    """An element that fails governs, whatever the other shares are."""
    found = _judged(
        "I[n] <= 30 mA for n in 3..9 odd", derive="I[n] [mA] = 5 mA*n for n in 3..9 odd"
    )
    assert (found.verdict, found.governing) == ("fail", {"n": "9"})


def test_two_sides_name_the_smaller_share() -> None:
    """The nearer side is shown; the other side is named when its share is the smaller one."""
    found = _judged("1 W <= P <= 100 W", inputs="P = 50 W -90 % +90 %")
    assert (found.relation, found.margin, found.remark) == (">=", 4.0, "to the other limit 5.0 %")
    assert _judged("40 W <= P <= 100 W", inputs="P = 50 W ± 10 %").remark == ""


@pytest.mark.parametrize(
    ("formula", "band", "proof"),
    [
        ('lookup("lin", a) - lookup("lin", a)', (-7, 7), "bounded"),
        ('lookup("lin", a)*a/(1 V)', (6, 189), "bounded"),
        ('lookup("lin", lookup("lin", a)*1 V/mm)*a*1 1/V', None, "bounded"),
        ('lookup("lin", a)*b', (2, 27), "exact"),
        ('lookup("lin", 12 V)*a', None, "exact"),
        ('lookup("lin", a)', (2, 9), "exact"),
    ],
)
def test_look_up_claims(
    tmp_path: Path, formula: str, band: tuple[float, float] | None, proof: str
) -> None:
    """A band in which a look-up and its argument both count is bounded, never called exact."""
    (tmp_path / "tables").mkdir()
    (tmp_path / "tables" / "lin.toml").write_text(TABLE)
    text = f"{TITLE}\n```inputs\na = 12 V ± 9 V\nb = 2 ± 1\n```\n```derive\nx = {formula}\n```\n"
    (tmp_path / "trial.md").write_text(text)
    record = calcdoc.record(calcdoc.evaluate(calcdoc.read(tmp_path / "trial.md")))
    found = next(each for each in record.quantities if each.symbol == "x")
    assert found.proof == proof
    if band:
        assert (found.least, found.greatest) == pytest.approx(band)


def test_one_word_of_a_test_is_words() -> None:
    """What a test is about is a sentence, also when it is one word or looks like a quantity."""
    for what in ("temperature", "5 V", "creepage"):
        assert subject(_judged_by_test(what)) == what


def _judged_by_test(what: str) -> Criterion:
    return worked(criteria=f"T1: by test: {what}").criterion("T1")
