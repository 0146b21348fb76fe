"""Hazards: what they compute, and the cautions they print."""

import pytest

from tests.helpers.checking import TITLE, rendered
from tests.helpers.design import Worked, worked

GIVEN = "V = {voltage}\nC = 10 µF\nR = 1 MΩ"


def hazard(voltage: str, line: str) -> Worked:
    """A design with one voltage and one declared hazard."""
    return worked(inputs=GIVEN.format(voltage=voltage), hazards=line)


def dangers(design: Worked) -> list[str]:
    """The first sentence of every danger."""
    return [each.text.split(". ")[0] for each in design.record.cautions if each.signal == "danger"]


@pytest.mark.parametrize(
    "voltage", ["300 V ± 10 %", "-300 V ± 10 %", "-330 .. 0 .. 10 V", "-10 .. 0 .. 330 V"]
)
def test_stored_charge_of_either_sign(voltage: str) -> None:
    """The discharge begins at the greatest size of the voltage, whatever its sign."""
    found = hazard(voltage, "stored C at V through R")
    assert [each.result for each in found.record.hazards] == ["17.1 s"]
    (danger,) = dangers(found)
    assert danger == (
        "Stored charge: after disconnection C falls from up to 330\u00a0V to 60\u00a0V through R in"
        " at most 17.1\u00a0s over all tolerances; with an open bleed resistor it stays charged"
    )


@pytest.mark.parametrize("voltage", ["60 V", "-60 V", "-60 .. 0 .. 60 V"])
def test_stored_charge_that_is_safe(voltage: str) -> None:
    """Sixty volts of either sign are not above sixty volts."""
    found = hazard(voltage, "stored C at V through R")
    assert [each.result for each in found.record.hazards] == ["not above 60 V"]
    assert dangers(found) == []


@pytest.mark.parametrize(
    ("line", "result", "advice"),
    [
        (
            "stored C at V",
            "no discharge path",
            "Waiting does not help: discharge it through a resistor, then measure, before touching",
        ),
        ("stored C at V through R", "17.1 s", "Wait, then measure, before touching"),
    ],
)
def test_what_to_do_about_a_stored_charge(line: str, result: str, advice: str) -> None:
    """Waiting is advised only where there is a discharge path; else a resistor."""
    found = hazard("300 V ± 10 %", line).record
    assert [each.result for each in found.hazards] == [result]
    (danger,) = (each.text for each in found.cautions if each.text.startswith("Stored charge"))
    assert danger.endswith(
        f". The LED string stops conducting below its own voltage and does not discharge it."
        f" {advice}."
    )


@pytest.mark.parametrize("voltage", ["-46 V ± 10 %", "46 V ± 10 %"])
def test_supply_of_either_sign(voltage: str) -> None:
    """A supply that reaches more than fifty volts of either sign is dangerous."""
    assert dangers(hazard(voltage, "supply V")) == ["Mains voltage can kill"]


@pytest.mark.parametrize(
    ("written", "printed"),
    [
        ("danger: mA are enough to kill", "mA are enough to kill"),
        ("danger: h and min of waiting", "h and min of waiting"),
        ("danger: a stored charge", "A stored charge"),
        ("danger: don't touch", "Don't touch"),
        ("danger: k is a factor", "k is a factor"),
        ("danger:\n\nmind the step", "Mind the step"),
        ("danger: {k:value} too many", "2 too many"),
    ],
)
def test_capital_of_a_caution(written: str, printed: str) -> None:
    """A caution begins with a capital, unless it begins with a unit or a symbol."""
    found = worked(inputs="k = 2", caution=written).record
    assert [each.text for each in found.cautions if each.origin == "author"] == [printed]


@pytest.mark.parametrize(
    ("first", "word", "signal"),
    [
        ("warn: hot", "warn", "warning"),
        ("Warnings: hot", "Warnings", "warning"),
        ("wanring : hot", "wanring", "warning"),
        ("Dangerous: hot", "Dangerous", "danger"),
        ("dagner: hot", "dagner", "danger"),
        ("cautious: hot", "cautious", "caution"),
        ("notic: hot", "notic", "notice"),
        ("**Warning:** hot", "Warning", "warning"),
    ],
)
def test_word_near_a_signal_word(first: str, word: str, signal: str) -> None:
    """A word near to a signal word and a colon is refused, not lowered to a caution."""
    found = rendered(f"{TITLE}```caution\n{first}\n```\n").splitlines()
    column = first.index(word)
    said = first.split(":", maxsplit=1)[0].rstrip()
    assert found[0] == (
        f"lamp.md:7:{column + 1}: error[syntax]: expected danger, warning, caution or notice before"
        f" the colon, found `{said}`"
    )
    assert found[1:] == [
        "  |",
        f"7 | {first}",
        f"  | {' ' * column}{'^' * len(word)}",
        f"help: did you mean `{signal}:`?",
    ]


@pytest.mark.parametrize(
    "first", ["wiring: hot", "Note: hot", "fire: hot", "warn of it", "0 V: on"]
)
def test_word_that_is_no_signal(first: str) -> None:
    """Other words before a colon belong to the text."""
    assert rendered(f"{TITLE}```caution\n{first}\n```\n") == ""
