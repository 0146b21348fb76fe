"""Hazards: what they compute, and the cautions they print."""

import pytest

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


@pytest.mark.parametrize("voltage", ["-46 V ± 10 %", "46 V ± 10 %"])
def test_supply_of_either_sign(voltage: str) -> None:
    """A supply that reaches more than fifty volts of either sign is dangerous."""
    assert dangers(hazard(voltage, "supply V")) == ["Mains voltage can kill"]
