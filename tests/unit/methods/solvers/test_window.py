"""The window of line voltage, against the steady state at its bounds and beside them."""

from typing import Final

import numpy as np
import pytest

from calcdoc.methods.solvers.bridge import bridge_steady_state
from calcdoc.methods.solvers.given import Reason
from calcdoc.methods.solvers.window import operating_window

FREE: Final = (50.0, np.array([10.0, 0.0, 100.0]), 0.8, np.array([10e-6, 4.7e-6, 22e-6]), 0.04)
STRING: Final = (230.0, 300.0, 5.0)


def test_bounds_are_where_the_state_changes() -> None:
    """Just inside a bound the state is there, just outside it is not."""
    window = operating_window(*FREE, *STRING, 100.0)
    for share, regulated, reached, within in (
        (-1e-6, False, False, True),
        (1e-6, True, True, False),
    ):
        at = bridge_steady_state(window.V_s_regulates * (1 + share), *FREE, *STRING)
        assert ((at.percent_flicker == 0.0) == regulated).all()
        at = bridge_steady_state(window.V_s_reaches * (1 + share), *FREE, *STRING)
        assert (at.reaches == reached).all()
        at = bridge_steady_state(window.V_s_rated * (1 + share), *FREE, *STRING)
        assert ((at.V_max - 230.0 - 300.0 * 0.04 <= 100.0) == within).all()
    for reason in (window.reason_regulates, window.reason_reaches, window.reason_rated):
        assert (reason == Reason.NONE).all()


def test_ideal_source_in_closed_form() -> None:
    """Without series resistance the rating is passed at its voltage over √2."""
    window = operating_window(50.0, 0.0, 0.8, 10e-6, 0.04, *STRING, 100.0)
    assert window.V_s_rated[0] == pytest.approx((230.0 + 12.0 + 100.0 + 1.6) / 2**0.5)
    assert window.V_s_reaches[0] == pytest.approx((235.0 + 12.0 + 1.6) / 2**0.5)


@pytest.mark.parametrize(
    ("changed", "reasons"),
    [
        ({"C": 0.0}, (Reason.NEVER_REGULATED, Reason.NONE, Reason.NONE)),
        ({"I_set": 0.0}, (Reason.NO_CURRENT,) * 3),
        ({"V_rated": 5.0}, (Reason.NONE, Reason.NONE, Reason.ALWAYS_PASSED)),
        ({"V_rated": 5000.0}, (Reason.NONE, Reason.NONE, Reason.NOT_REACHED)),
        ({"V_s_most": 150.0}, (Reason.NOT_REACHED,) * 3),
        ({"C": 1e-9}, (Reason.NOT_REACHED, Reason.NONE, Reason.NONE)),
        ({"R_s": np.nan}, (Reason.NOT_FINITE,) * 3),
        ({"V_D": -0.1}, (Reason.OUT_OF_RANGE,) * 3),
    ],
)
def test_states_never_reached(changed: dict[str, float], reasons: tuple[Reason, ...]) -> None:
    """A bound that does not exist is NaN with its reason; one that does has none."""
    given = {
        "f_s": 50.0,
        "R_s": 10.0,
        "V_D": 0.8,
        "C": 10e-6,
        "I_set": 0.04,
        "V_knee": 230.0,
        "R_string": 300.0,
        "V_drop": 5.0,
        "V_rated": 100.0,
    }
    window = operating_window(**{**given, **changed})
    found = (window.reason_regulates[0], window.reason_reaches[0], window.reason_rated[0])
    assert found == reasons
    bounds = (window.V_s_regulates[0], window.V_s_reaches[0], window.V_s_rated[0])
    assert [bool(np.isnan(each)) for each in bounds] == [each != Reason.NONE for each in reasons]
