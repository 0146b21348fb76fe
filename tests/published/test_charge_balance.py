"""Method charge-balance.

Sources: Sedra/Smith, peak rectifier with a bridge (facts R3 to R5; C seen in a published solution,
which rounds the load current, the rest from memory); facts 1.3 (R8, R9: computed for an ideal
source and a constant current). The condition that the ripple stays below half of the crest is our
own; up to it the textbook is compared with the ideal source.
"""

import pytest

from tests.helpers.design import Worked, worked


def reservoir(volts: str, amps: str, farads: str, hertz: str) -> Worked:
    """The method with what it takes."""
    return worked(
        f"use charge-balance as cb\nV_pk = {volts}\nI = {amps}\nC = {farads}\nf_line = {hertz}"
    )


def test_r3_to_r5_textbook() -> None:
    """R3 to R5: 1281 µF at 0.1537 A leave 1 V of ripple; 0.36 rad, 1.45 A, 2.74 A (0.1487 A)."""
    found = reservoir("15.37 V", "0.1537 A", "1281 µF", "60 Hz")
    assert found["cb.V_r"].nominal == pytest.approx(1.0, abs=0.003)
    assert found["cb.theta_c"].nominal == pytest.approx(20.67, abs=0.05)
    found = reservoir("15.37 V", "0.1487 A", "1239.2 µF", "60 Hz")
    assert found["cb.I_D_mean"].nominal == pytest.approx(1450, abs=10)
    assert found["cb.I_D_pk"].nominal == pytest.approx(2740, abs=10)


@pytest.mark.parametrize(
    ("takes", "least", "ripple", "start", "end", "peak", "line", "capacitor"),
    [
        (("325.2691 V", "40 mA", "10 µF", "50 Hz"),
         291.382, 33.887, 26.386, 2.243, 494.1, 115.43, 108.28),
        (("325.2691 V", "40 mA", "4.7 µF", "50 Hz"),
         258.905, 66.364, 37.253, 4.777, 330.7, 94.98, 86.15),
        (("169.7056 V", "80 mA", "47 µF", "60 Hz"),
         157.317, 12.388, 22.028, 1.525, 1207.8, 254.77, 241.89),
    ],
)  # fmt: skip
def test_r8_r9_ideal_source(  # noqa: PLR0913  (a row of the table)
    takes: tuple[str, str, str, str],
    least: float,
    ripple: float,
    start: float,
    end: float,
    peak: float,
    line: float,
    capacitor: float,
) -> None:
    """Facts 1.3: valley, ripple, angles and currents of three lamps, to 0.05 %."""
    found = reservoir(*takes)
    names = ("V_min_x", "V_r_x", "theta_s", "theta_e", "I_pk_x", "I_rms_x", "I_C_rms_x")
    shown = [found[f"cb.{each}"].nominal for each in names]
    expected = [least, ripple, start, end, peak, line, capacitor]
    assert shown == pytest.approx(expected, rel=5e-4)
    assert all(each.agrees for each in found.record.crosschecks)
    assert found.record.applied[0].verdict == "within"


def test_beyond_half_of_the_crest() -> None:
    """With 2.2 µF the textbook ripple is 56 % of the crest: outside, and the record says so."""
    found = reservoir("325.2691 V", "40 mA", "2.2 µF", "50 Hz")
    assert found["cb.V_min_x"].nominal == pytest.approx(200.976, rel=5e-4)
    assert found.record.applied[0].verdict == "outside"


@pytest.mark.parametrize("microfarads", [2.5, 3, 5, 10, 30, 100, 1000])
def test_textbook_is_on_the_safe_side(microfarads: float) -> None:
    """Within the limits of validity ripple and peak current of the textbook are never too small."""
    found = reservoir("325.2691 V", "40 mA", f"{microfarads} µF", "50 Hz")
    assert found.record.applied[0].verdict == "within"
    assert [each.agrees for each in found.record.crosschecks] == [True, True, True]
