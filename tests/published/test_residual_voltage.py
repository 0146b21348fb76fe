"""Method residual-voltage.

Sources: worked numbers of IEC 60950-1 (facts S1: 340 V, one time constant, secondary source; its
text uses 37 %, so it says 125.8 V) and IEC 61010-1 (S2: 4.4 µF at 80 V, secondary source); the
others (S3 and section 6.1) were computed from the limits of IEC 60335-1, 22.5 (secondary source).
"""

import pytest

from tests.helpers.design import Worked, worked

USE = "use residual-voltage as bleed"


def bleed(*lines: str) -> Worked:
    """The method with what it takes."""
    return worked("\n".join((USE, *lines)))


def test_s1_one_time_constant() -> None:
    """S1: 340 V falls to 125 V in one time constant."""
    found = bleed("C = 100 nF", "R = 10 MΩ", "V_0 = 340 V", "t_wait = 1 s")
    assert found["bleed.tau"].nominal == pytest.approx(1)
    assert found["bleed.V_res"].nominal == pytest.approx(125.1, abs=1)


def test_s2_charge() -> None:
    """S2: 4.4 µF at 80 V hold 352 µC."""
    found = bleed("C = 4.4 µF", "R = 1 MΩ", "V_0 = 80 V")
    assert found["bleed.Q_0"].nominal == pytest.approx(352)


@pytest.mark.parametrize(
    ("capacitance", "safe", "wait", "megohms"),
    [("100 nF", 34, 1, 4.249), ("10 µF", 50, 60, 3.049), ("100 nF", 60, 2, 11.20)],
)
def test_s3_bleeder(capacitance: str, safe: int, wait: int, megohms: float) -> None:
    """S3 and section 6.1: the greatest bleed resistor for 357.80 V."""
    found = bleed(
        f"C = {capacitance}",
        "R = 1 MΩ",
        "V_0 = 357.80 V",
        f"V_safe = {safe} V",
        f"t_wait = {wait} s",
    )
    assert found["bleed.R_max"].nominal == pytest.approx(megohms, rel=1e-3)


def test_time_to_safe_voltage() -> None:
    """Section 6.1, inputs seen: 470 µF at 385 V through 33 kΩ take 28.83 s to 60 V."""
    found = bleed("C = 470 µF", "R = 33 kΩ", "V_0 = 385 V", "V_safe = 60 V")
    assert found["bleed.t_safe"].nominal == pytest.approx(28.83, abs=0.005)
