"""Ripple and conduction of a capacitor-input rectifier, solved numerically as design texts.

Sources: facts 1.1 (exact forms; for constant current seen at hobby-electronics.info, for a
resistive load our change of span), 1.2 case C and R6 (seen there), 1.3 and R7 to R9 (computed for
the ideal model, no published values).
"""

import pytest

from tests.helpers.design import Worked, worked


def constant_current(line: str, frequency: str, capacitor: str, current: str) -> Worked:
    """Bridge, ideal source, constant current: charge balance and the line's cosine."""
    return worked(
        inputs=f"V_line = {line}\nf = {frequency}\nC = {capacitor}\nI = {current}",
        derive=(
            "V_pk [V] = sqrt(2)*V_line\n"
            "θ_e [deg] = asin(I/(2*pi*f*C*V_pk))\n"
            "relation refill: V_pk*cos(θ_c)"
            " = V_pk*cos(θ_e) - I*(pi - θ_c - θ_e)/(2*pi*f*C)\n"
            "θ_c [deg] from refill within 2 .. 88 deg\n"
            "V_min [V] = V_pk*cos(θ_c)\n"
            "ΔV [V] = V_pk - V_min\n"
            "I_pk [mA] = 2*pi*f*C*V_pk*sin(θ_c) + I\n"
            "ΔV_0 [V] = I/(2*f*C)"
        ),
        crosschecks="K1: ΔV_0 not below ΔV",
    )


@pytest.mark.parametrize(
    ("circuit", "v_min", "ripple", "start", "end", "peak"),
    [
        (("230 V", "50 Hz", "10 µF", "40 mA"), 291.382, 33.887, 26.386, 2.243, 494.1),
        (("230 V", "50 Hz", "4.7 µF", "40 mA"), 258.905, 66.364, 37.253, 4.777, 330.7),
        (("230 V", "50 Hz", "2.2 µF", "40 mA"), 200.976, 124.293, 51.839, 10.249, 216.8),
        (("120 V", "60 Hz", "47 µF", "80 mA"), 157.317, 12.388, 22.028, 1.525, 1207.8),
    ],
)
def test_lamp_cases(  # noqa: PLR0913  (a row of the table)
    circuit: tuple[str, str, str, str],
    v_min: float,
    ripple: float,
    start: float,
    end: float,
    peak: float,
) -> None:
    """Facts 1.3 and R8, computed for the ideal model: valley, ripple, angles and peak current."""
    done = constant_current(*circuit)
    assert done["V_min"].nominal == pytest.approx(v_min, rel=5e-4)
    assert done["ΔV"].nominal == pytest.approx(ripple, rel=5e-4)
    assert done["θ_c"].nominal == pytest.approx(start, rel=5e-4)
    assert done["θ_e"].nominal == pytest.approx(end, rel=5e-4)
    assert done["I_pk"].nominal == pytest.approx(peak, rel=5e-4)
    assert done["θ_c"].kind == "solved"
    assert done.record.crosschecks[0].agrees


def test_r6_capacitance_for_a_ripple() -> None:
    """R6, seen at hobby-electronics.info: 20 V peak, 50 Hz, 2 V ripple need 4.3 mF/A."""
    done = worked(
        inputs="V_p = 20 V\nf = 50 Hz\nV_r = 2 V\nI = 1 A",
        derive=(
            "T_2 [ms] = acos(-(V_p - V_r)/V_p)/(2*pi*f)\n"
            "relation charge: C*V_r = I*T_2\n"
            "C [mF] from charge"
        ),
    )
    assert done["T_2"].nominal == pytest.approx(8.5643, abs=5e-5)
    assert done["C"].nominal == pytest.approx(4.3, abs=0.05)
    assert done["C"].nominal == pytest.approx(4.2822, abs=5e-5)
    assert done["C"].steps == ("divide both sides by V_r: C = I*T_2/V_r",)


def test_r7_half_wave_with_a_resistor() -> None:
    """R7, formula seen, value computed: 100 V, 60 Hz, 10 kΩ, 83.333 µF ripple by 1.918 V."""
    done = worked(
        inputs="V_p = 100 V\nf = 60 Hz\nR = 10 kΩ\nC = 83.333 µF",
        derive=(
            "x = 2*pi*f*R*C\n"
            "a = atan(1/x)\n"
            "relation decay: cos(a)*exp(-(2*pi - acos(1 - r) - a)/x) = 1 - r\n"
            "r from decay within 0.001 .. 0.5\n"
            "V_r [V] = r*V_p"
        ),
    )
    assert done["V_r"].nominal == pytest.approx(1.918, abs=0.001)
