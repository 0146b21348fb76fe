"""Edges of the steady state: what is zero, never, huge, scalar, or not a number."""

import re
from dataclasses import fields
from typing import Final

import numpy as np
import pytest

from calcdoc.methods.solvers.bridge import BridgeSteadyState, bridge_steady_state
from calcdoc.methods.solvers.given import COLUMNS, Reason

LAMP: Final[dict[str, float]] = {
    "V_s": 230.0,
    "f_s": 50.0,
    "R_s": 10.0,
    "V_D": 0.8,
    "C": 10e-6,
    "I_set": 0.04,
    "V_knee": 230.0,
    "R_string": 400.0,
    "V_drop": 6.0,
}
PEAK: Final = 230.0 * 2**0.5


def lamp(**changed: object) -> BridgeSteadyState:
    """The lamp with some quantities changed."""
    given: dict[str, object] = {**LAMP, **changed}
    return bridge_steady_state(**given)  # type: ignore[arg-type]


def close(first: BridgeSteadyState, second: BridgeSteadyState, share: float) -> None:
    """All results are equal to a share; currents and powers to that share of the largest."""
    for each in fields(BridgeSteadyState):
        one, other = getattr(first, each.name), getattr(second, each.name)
        assert one == pytest.approx(other, rel=share, abs=share, nan_ok=True), each.name


def test_numbers_are_one_point() -> None:
    """Plain numbers give arrays of one point, the harmonics a column of 20."""
    done = lamp()
    for each in fields(BridgeSteadyState):
        shape = (20, 1) if each.name == "I_h" else (1,)
        assert getattr(done, each.name).shape == shape, each.name
    assert done.reason.tolist() == [Reason.NONE]


def test_columns_are_solved_as_if_alone() -> None:
    """Broadcast arrays of all kinds of circuits give, column by column, what each alone gives."""
    given = {
        "C": np.array([10e-6, 0.0, 1e-6, 10e-6, 0.0, 10e-6]),
        "R_s": np.array([10.0, 10.0, 10.0, 0.0, 0.0, 10.0]),
        "V_knee": np.array([230.0, 230.0, 230.0, 230.0, 230.0, 400.0]),
    }
    together = lamp(**given)
    for at in range(6):
        alone = lamp(**{name: each[at] for name, each in given.items()})
        for each in fields(BridgeSteadyState):
            found, expected = getattr(together, each.name), getattr(alone, each.name)
            assert found[..., at] == pytest.approx(expected[..., 0], rel=1e-9, nan_ok=True)


def test_more_points_than_a_chunk() -> None:
    """Points beyond the first chunk are solved like those in it, in their order."""
    line = np.resize([207.0, 230.0, 253.0], COLUMNS + 5)
    done = lamp(V_s=line)
    few = lamp(V_s=line[:3])
    assert done.V_min == pytest.approx(np.resize(few.V_min, COLUMNS + 5), rel=1e-12)
    last = few.I_h[:, np.arange(COLUMNS, COLUMNS + 5) % 3]
    assert done.I_h[:, -5:] == pytest.approx(last, rel=1e-9)


def test_no_points() -> None:
    """An empty column gives empty results."""
    assert lamp(V_s=np.array([])).I_h.shape == (20, 0)


@pytest.mark.parametrize(
    ("given", "message"),
    [
        ({"V_s": np.ones((2, 2))}, "one axis of operating points at most, found the shape (2, 2)"),
        (
            {"V_s": np.ones(2), "C": np.ones(3)},
            (
                "the quantities do not have a common shape: V_s (2,), f_s (), R_s (), V_D (), "
                "C (3,), I_set (), V_knee (), R_string (), V_drop ()"
            ),
        ),
    ],
)
def test_shapes_that_do_not_fit(given: dict[str, object], message: str) -> None:
    """Two axes, and lengths that differ, are refused with the shapes."""
    with pytest.raises(ValueError, match=f"^{re.escape(message)}$"):
        lamp(**given)


@pytest.mark.parametrize("name", list(LAMP))
@pytest.mark.parametrize(
    ("value", "reason"),
    [
        (np.nan, Reason.NOT_FINITE),
        (np.inf, Reason.NOT_FINITE),
        (-np.inf, Reason.NOT_FINITE),
        (-1e-9, Reason.OUT_OF_RANGE),
    ],
)
def test_hostile_values(name: str, value: float, reason: Reason) -> None:
    """What is not finite or below zero gives NaN and its reason, and only in its column."""
    done = lamp(**{name: np.array([LAMP[name], value])})
    assert done.reason.tolist() == [Reason.NONE, reason]
    assert done.reaches.tolist() == [True, False]
    for each in fields(BridgeSteadyState):
        if each.name not in ("reason", "reaches"):
            nan = np.isnan(getattr(done, each.name))
            assert not nan[..., 0].any(), each.name
            assert nan[..., 1].all(), each.name


@pytest.mark.parametrize("name", ["V_s", "f_s"])
def test_no_supply(name: str) -> None:
    """A supply or frequency of zero is out of range; other quantities may be zero."""
    assert lamp(**{name: 0.0}).reason.tolist() == [Reason.OUT_OF_RANGE]
    for other in set(LAMP) - {"V_s", "f_s", "I_set"}:
        assert lamp(**{other: 0.0}).reason.tolist() == [Reason.NONE], other


@pytest.mark.parametrize(
    "extreme",
    [
        {"V_s": 1e300},
        {"I_set": 1e300, "R_string": 0.0},
        {"C": 1e300},
        {"f_s": 1e-300},
        {"R_s": 1e300},
    ],
)
def test_beyond_the_range_of_numbers(extreme: dict[str, float]) -> None:
    """Finite but absurd values give either a balanced result or NaN with its reason."""
    done = lamp(**extreme)
    if done.reason[0] == Reason.NOT_BALANCED:
        assert np.isnan(done.P_in[0])
        assert np.isnan(done.I_h).all()
    else:
        assert abs(done.balance[0]) <= 1e-6


def test_string_that_never_conducts() -> None:
    """The reservoir stands at the peak, nothing flows, and what has no value is NaN and says so."""
    done = lamp(V_knee=PEAK - 1.6 - 6.0)
    assert done.reason.tolist() == [Reason.NO_CURRENT]
    assert done.V_max == done.V_min == done.V_mean == pytest.approx(PEAK - 1.6)
    for name in ("I_s_rms", "I_s_peak", "I_string_max", "P_in", "S_in", "balance", "ripple"):
        assert getattr(done, name)[0] == 0.0, name
    for name in ("power_factor", "THD", "theta_start", "theta_end", "percent_flicker"):
        assert np.isnan(getattr(done, name)[0]), name
    assert not done.reaches[0]
    assert lamp(V_knee=PEAK - 1.6 - 6.0 - 0.01).reason.tolist() == [Reason.NONE]


def test_no_set_current() -> None:
    """A regulator at zero leaves the reservoir at the peak, with and without series resistance."""
    for R_s in (0.0, 10.0):
        done = lamp(I_set=0.0, R_s=R_s)
        assert done.V_min[0] == pytest.approx(PEAK - 1.6)
        assert done.reason.tolist() == [Reason.NO_CURRENT]


def test_mains_below_two_diodes() -> None:
    """A mains below two diode drops charges nothing."""
    assert lamp(V_s=1.0).V_max[0] == 0.0
    assert lamp(V_s=1.0, C=0.0).V_max[0] == 0.0


def test_resistance_towards_zero() -> None:
    """A series resistance of a microhm gives what an ideal source gives."""
    for C in (10e-6, 1e-6):
        close(lamp(R_s=1e-6, C=C), lamp(R_s=0.0, C=C), 1e-4)


def test_reservoir_towards_zero() -> None:
    """A picofarad gives the currents and powers of no reservoir; its voltage rests at V_0."""
    for R_s in (0.0, 10.0):
        tiny, none = lamp(C=1e-12, R_s=R_s), lamp(C=0.0, R_s=R_s)
        for name in (
            "I_s_rms",
            "P_in",
            "P_string",
            "P_reg",
            "I_string_mean",
            "THD",
            "flicker_index",
        ):
            assert getattr(tiny, name) == pytest.approx(getattr(none, name), rel=1e-5), name
        assert tiny.V_min[0] == pytest.approx(236.0)
        assert none.V_min[0] == 0.0


def test_string_slope_towards_zero() -> None:
    """No slope is the limit of small slopes, where the regulator drops out too."""
    for R_s, C in ((0.0, 1e-6), (10.0, 1e-6), (10.0, 0.0), (0.0, 0.0)):
        steep = lamp(R_string=1e-3, R_s=R_s, C=C)
        close(lamp(R_string=0.0, R_s=R_s, C=C), steep, 1e-5)


def test_huge_reservoir() -> None:
    """With 10 F there is no ripple to speak of and the balances still close."""
    done = lamp(C=10.0)
    assert done.ripple[0] < 1e-3
    assert done.V_mean[0] == pytest.approx(done.V_max[0], rel=1e-6)
    assert abs(done.balance[0]) < 1e-6
    assert 2 * done.I_D_mean[0] == pytest.approx(0.04, rel=1e-6)


def test_regulation_lost_in_the_valley() -> None:
    """With 1 µF the current falls below its set value in the valley, with 10 µF it never does."""
    large, small = lamp(), lamp(C=1e-6)
    assert large.percent_flicker[0] == large.flicker_index[0] == 0.0
    assert small.reaches[0]
    assert small.I_string_max[0] == 0.04
    assert 0.0 < small.I_string_min[0] < 0.04
    assert small.I_string_min[0] == pytest.approx((small.V_min[0] - 236.0) / 400.0)
    assert not lamp(V_knee=310.0).reaches[0]


def test_without_a_reservoir_in_closed_form() -> None:
    """Direct drive: angles, mean current and flicker index from the arcsines of its levels."""
    done = lamp(C=0.0, R_string=0.0, R_s=0.0)
    on = np.arcsin((236.0 + 1.6) / PEAK)
    lit = (np.pi - 2 * on) / np.pi
    assert done.theta_start[0] == pytest.approx(on)
    assert done.conduction_angle[0] == pytest.approx(np.pi - 2 * on)
    assert done.I_string_mean[0] == pytest.approx(0.04 * lit, rel=1e-6)
    assert done.I_s_rms[0] == pytest.approx(0.04 * lit**0.5, rel=1e-6)
    assert done.flicker_index[0] == pytest.approx(1 - lit, rel=1e-6)
    assert done.percent_flicker[0] == pytest.approx(100.0)
    orders = np.arange(1, 40, 2)
    square = 2**1.5 / np.pi * 0.04 * np.abs(np.cos(orders * on)) / orders
    assert done.I_h[:, 0] == pytest.approx(square, abs=1e-7)


def test_empty_segments_count_for_nothing() -> None:
    """A steep string that stays regulated adds no rounding of its slope to the ripple current."""
    for R_s in (0.0, 1.0):
        done = lamp(R_string=0.0, V_knee=0.0, V_drop=2.0, C=556.7e-6, I_set=1.0, R_s=R_s)
        assert done.percent_flicker[0] == 0.0
        expected = np.sqrt(done.I_s_rms[0] ** 2 - 1.0)
        assert done.I_C_rms[0] == pytest.approx(expected, rel=1e-9)
