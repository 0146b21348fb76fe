"""Textbook peak rectifiers, written as design texts.

Sources: A. S. Sedra and K. C. Smith, "Microelectronic Circuits", peak-rectifier section: worked
example with half wave (facts R1, R2; from memory, the number of the example differs by edition) and
the exercise with a bridge (R3, R4: values seen in a published solution, which rounds the load
current to 0.154 A and so gives 1283 µF; R5: answers from memory).
"""

import pytest

from tests.helpers.design import Worked, worked


@pytest.fixture(scope="module")
def half_wave() -> Worked:
    """Half wave: 100 V peak, 60 Hz, 10 kΩ, 2 V of ripple."""
    return worked(
        inputs="V_p = 100 V\nf = 60 Hz\nR = 10 kΩ\nV_r = 2 V",
        derive=(
            "I_L [mA] = V_p/R\n"
            "C [µF] = V_p/(V_r*f*R)\n"
            "θ_c = sqrt(2*V_r/V_p)\n"
            "i_Dav [mA] = I_L*(1 + pi*sqrt(2*V_p/V_r))\n"
            "i_Dmax [mA] = I_L*(1 + 2*pi*sqrt(2*V_p/V_r))"
        ),
    )


@pytest.fixture(scope="module")
def bridge() -> Worked:
    """Bridge: 12 V rms, 60 Hz, 0.8 V a diode, 100 Ω, 1 V of ripple."""
    return worked(
        inputs="V_s = 12 V\nf = 60 Hz\nV_D = 0.8 V\nR = 100 Ω\nV_r = 1 V",
        derive=(
            "V_p [V] = sqrt(2)*V_s - 2*V_D\n"
            "V_dc [V] = V_p - V_r/2\n"
            "C [µF] = V_p/(2*V_r*f*R)\n"
            "I_L [A] = V_dc/R\n"
            "θ_c [deg] = sqrt(2*V_r/V_p)\n"
            "i_Dav [A] = I_L*(1 + pi*sqrt(V_p/(2*V_r)))\n"
            "i_Dmax [A] = I_L*(1 + 2*pi*sqrt(V_p/(2*V_r)))\n"
            "PIV [V] = V_p + V_D"
        ),
    )


def test_r1_capacitance(half_wave: Worked) -> None:
    """R1, from memory: 83.3 µF."""
    assert half_wave["C"].nominal == pytest.approx(83.3, abs=0.1)


def test_r1_conduction(half_wave: Worked) -> None:
    """R1, from memory: conduction over 0.2 rad."""
    assert half_wave["θ_c"].nominal == pytest.approx(0.2, abs=1e-9)


def test_r2_diode_currents(half_wave: Worked) -> None:
    """R2, from memory: 324 mA on average while it conducts, 638 mA at the peak."""
    assert half_wave["i_Dav"].nominal == pytest.approx(324, abs=1)
    assert half_wave["i_Dmax"].nominal == pytest.approx(638, abs=1)


def test_r3_capacitance(bridge: Worked) -> None:
    """R3, seen in a published solution: 1281 µF (the solution rounds to 1283 µF)."""
    assert bridge["C"].nominal == pytest.approx(1281, abs=3)


def test_r4_voltages(bridge: Worked) -> None:
    """R4, seen in the same solution: 15.37 V at the peak, 14.87 V on average."""
    assert bridge["V_p"].nominal == pytest.approx(15.370, abs=0.001)
    assert bridge["V_dc"].nominal == pytest.approx(14.87, abs=0.01)


def test_r5_conduction_and_currents(bridge: Worked) -> None:
    """R5, from memory: 0.36 rad or 20.7°, 1.45 A on average, 2.74 A at the peak, PIV 16.2 V."""
    assert bridge["θ_c"].nominal == pytest.approx(20.7, abs=0.3)
    assert bridge["i_Dav"].nominal == pytest.approx(1.45, abs=0.01)
    assert bridge["i_Dmax"].nominal == pytest.approx(2.74, abs=0.01)
    assert bridge["PIV"].nominal == pytest.approx(16.2, abs=0.05)
