"""Arithmetic of the trade: common practice, no published source."""

import pytest

from tests.helpers.design import worked


def test_line_peak() -> None:
    """Common practice, no published source: a 230 V line peaks at 325 V."""
    assert worked(inputs="V = 230 V", derive="V_pk [V] = sqrt(2)*V")["V_pk"].result == "325.3 V"


def test_power_from_the_peak() -> None:
    """Common practice, no published source: 12 W drawn at 325 V is about 37 mA."""
    done = worked(inputs="P = 12 W\nV = 325 V", derive="I [mA] = P/V")
    assert done["I"].nominal == pytest.approx(37, abs=0.5)


def test_ripple_by_charge_balance() -> None:
    """Common practice, no published source: 37.5 mA for 8 ms out of 8.2 µF is about 36 V."""
    done = worked(inputs="I = 37.5 mA\nt = 8 ms\nC = 8.2 µF", derive="ΔV [V] = I*t/C")
    assert done["ΔV"].nominal == pytest.approx(36, abs=1)
    assert done["ΔV"].units_carried == "mA·ms/µF = V"


def test_share_of_a_series_regulator() -> None:
    """Common practice, no published source: 325 V less 40 V leaves 87 to 88 %; 40 V is 1.5 W."""
    done = worked(
        inputs="V = 325 V\nV_reg = 40 V\nI = 37.5 mA",
        derive="η [%] = (V - V_reg)/V\nP_reg [W] = V_reg*I",
    )
    assert done["η"].nominal == pytest.approx(87.5, abs=0.5)
    assert done["P_reg"].result == "1.500 W"


def test_efficacy() -> None:
    """Common practice, no published source: 1150 lm from 12 W is about 95 lm/W."""
    done = worked(inputs="Φ = 1150 lm\nP = 12 W", derive="η [lm/W] = Φ/P")
    assert done["η"].nominal == pytest.approx(95, abs=1)
