"""Direct drive with one or two regulators."""

import numpy as np
import pytest

from calcdoc.methods.solvers.bridge import bridge_steady_state
from calcdoc.methods.solvers.direct import bridge_direct
from calcdoc.methods.solvers.given import Reason

CIRCUIT = (230.0, 50.0, 10.0, 0.8)
STRING = (230.0, 300.0, 5.0)


def test_currents_add() -> None:
    """Two regulators are one at the sum of their currents; each dissipates by its share."""
    done = bridge_direct(*CIRCUIT, [0.03, 0.04], *STRING, I_set_2=[0.01, 0.0])
    one = bridge_steady_state(*CIRCUIT, 0.0, 0.04, *STRING)
    assert done.whole.P_in == pytest.approx(np.repeat(one.P_in, 2))
    assert done.P_reg_1 == pytest.approx(one.P_reg[0] * np.array([0.75, 1.0]))
    assert done.P_reg_2 == pytest.approx(one.P_reg[0] * np.array([0.25, 0.0]))
    assert done.I_mean_1 + done.I_mean_2 == pytest.approx(done.whole.I_string_mean)


def test_pulses_at_twice_the_line() -> None:
    """Without a reservoir the light goes out between the pulses."""
    done = bridge_direct(*CIRCUIT, 0.04, *STRING).whole
    assert done.percent_flicker[0] == 100.0
    assert done.I_C_rms[0] == done.V_min[0] == 0.0
    assert done.displacement_factor[0] == pytest.approx(1.0)


def test_both_off_and_refused() -> None:
    """Both at zero draw nothing; a current below zero is refused though the sum is above."""
    off = bridge_direct(*CIRCUIT, 0.0, *STRING)
    assert off.whole.reason.tolist() == [Reason.NO_CURRENT]
    assert off.P_reg_1[0] == off.P_reg_2[0] == 0.0
    refused = bridge_direct(*CIRCUIT, [0.04, np.nan], *STRING, I_set_2=-0.01)
    assert refused.whole.reason.tolist() == [Reason.OUT_OF_RANGE, Reason.NOT_FINITE]
    assert np.isnan(refused.P_reg_2).all()
