"""The window of line voltage: from full regulation up to the regulator's rating.

Valley and crest of the reservoir rise with the line voltage, so each bound is one crossing, found
by false position inside a bracket on the steady half period alone.
"""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import ArrayLike

from calcdoc.methods.solvers.circuit import Circuit, FloatArray, IntArray, circuit
from calcdoc.methods.solvers.given import COLUMNS, Reason, columns, refused
from calcdoc.methods.solvers.steady import steady

MOST_ROUNDS: Final = 200
HALVING: Final = 5
"""Every so many rounds the bracket is halved, whatever false position says: this always ends."""
CLOSE: Final = 1e-10
"""A bound is found when the level there, or the bound, is known to this share of the bound."""

Level = Callable[[Circuit], FloatArray]


@dataclass(frozen=True, slots=True)
class OperatingWindow:
    """Line voltages in volts rms, shape (n,); NaN where there is none, with its reason."""

    V_s_regulates: FloatArray
    """Above it the string is regulated over the whole half period; below, it loses regulation."""
    V_s_reaches: FloatArray
    """Above it the set current is reached at some phase; below, never."""
    V_s_rated: FloatArray
    """Above it the greatest regulator voltage passes its rating."""
    reason_regulates: IntArray
    reason_reaches: IntArray
    reason_rated: IntArray


def operating_window(  # noqa: PLR0913  (the quantities that make a circuit)
    f_s: ArrayLike,
    R_s: ArrayLike,
    V_D: ArrayLike,
    C: ArrayLike,
    I_set: ArrayLike,
    V_knee: ArrayLike,
    R_string: ArrayLike,
    V_drop: ArrayLike,
    V_rated: ArrayLike,
    V_s_most: ArrayLike = 1000.0,
) -> OperatingWindow:
    """The bounds of line voltage of many circuits.

    Args:
        f_s: Line frequency in hertz; this and the others as in
            :func:`.bridge.bridge_steady_state`.
        R_s: Source and series resistance in ohms.
        V_D: Forward voltage of each diode.
        C: Reservoir capacitance in farads.
        I_set: Current the regulator holds, in amperes.
        V_knee: Voltage at which the string begins to conduct.
        R_string: Slope of the string in ohms.
        V_drop: Voltage the regulator needs.
        V_rated: Rating of the voltage across the regulator, which is the reservoir voltage less
            V_knee and R_string times the current.
        V_s_most: Greatest line voltage looked at, volts rms.

    Returns:
        The bounds, each with a :class:`.Reason`: ``NO_CURRENT`` where I_set is zero,
        ``NEVER_REGULATED`` without a reservoir, ``ALWAYS_PASSED`` where the rating is not above
        the dropout, ``NOT_REACHED`` where V_s_most is not enough.

    Raises:
        ValueError: If the quantities have no common shape of one axis.
    """
    given = columns(
        f_s=f_s,
        R_s=R_s,
        V_D=V_D,
        C=C,
        I_set=I_set,
        V_knee=V_knee,
        R_string=R_string,
        V_drop=V_drop,
        V_rated=V_rated,
        V_s_most=V_s_most,
    )
    reason = refused(given, ("f_s", "V_s_most"))
    reason = np.where((reason == Reason.NONE) & (given["I_set"] == 0.0), Reason.NO_CURRENT, reason)
    ok = reason == Reason.NONE
    regulates = np.where(ok & (given["C"] == 0.0), Reason.NEVER_REGULATED, reason)
    passed = ok & (given["V_rated"] <= given["V_drop"])
    rated = np.where(passed, Reason.ALWAYS_PASSED, reason)
    above = given["V_rated"] - given["V_drop"]
    none = np.zeros_like(above)
    with np.errstate(all="ignore"):
        return OperatingWindow(
            V_s_regulates=_bound(given, regulates, none, lambda point: steady(point).y_valley),
            V_s_reaches=_bound(given, reached := reason.copy(), none, _crest),
            V_s_rated=_bound(given, rated, above, _crest),
            reason_regulates=regulates,
            reason_reaches=reached,
            reason_rated=rated,
        )


def _crest(point: Circuit) -> FloatArray:
    return steady(point).y_crest


def _bound(
    given: dict[str, FloatArray], reason: IntArray, above: FloatArray, level: Level
) -> FloatArray:
    """Line voltages at which a level is this far above R_string·I_set, shape (n,).

    ``reason`` says which columns to look at, and is told which bounds are not reached.
    """
    found = np.full(len(reason), np.nan)
    rows = np.flatnonzero(reason == Reason.NONE)
    for begin in range(0, len(rows), COLUMNS):
        some = rows[begin : begin + COLUMNS]
        found[some] = _crossing({n: each[some] for n, each in given.items()}, above[some], level)
    reason[(reason == Reason.NONE) & np.isnan(found)] = Reason.NOT_REACHED
    return found


def _crossing(given: dict[str, FloatArray], above: FloatArray, level: Level) -> FloatArray:
    """False position: an end that stays is given less weight, by Anderson and Björck's rule."""
    names = ("f_s", "R_s", "V_D", "C", "I_set", "V_knee", "R_string", "V_drop")
    needs = given["V_knee"] + given["V_drop"] + 2.0 * given["V_D"] + above
    low = (needs + given["R_string"] * given["I_set"]) / np.sqrt(2.0)
    high = given["V_s_most"].copy()

    def excess(V_s: FloatArray, rows: IntArray) -> FloatArray:
        point = circuit(V_s, *(given[name][rows] for name in names))
        difference: FloatArray = level(point) - point.regulates - above[rows]
        return difference

    found: FloatArray = np.full_like(low, np.nan)
    rows = np.flatnonzero((low > 0.0) & (low < high))
    low, high = low[rows], high[rows]
    below, over = excess(low, rows), excess(high, rows)
    side = np.zeros_like(low)
    keep = over >= 0.0
    for turn in range(1, MOST_ROUNDS):
        rows, side = rows[keep], side[keep]
        low, high, below, over = low[keep], high[keep], below[keep], over[keep]
        if not len(rows):
            break
        straight = high - over * (high - low) / (over - below)
        inside = (straight > low) & (straight < high) & (turn % HALVING > 0)
        tried = np.where(inside, straight, 0.5 * (low + high))
        at = excess(tried, rows)
        up = at < 0.0
        again = np.where(up, -1.0, 1.0) == side
        weight = 1.0 - at / np.where(up, below, over)
        weight = np.where(again, np.where(weight > 0.0, weight, 0.5), 1.0)
        over = np.where(up, weight * over, at)
        below = np.where(up, at, weight * below)
        low, high = np.where(up, tried, low), np.where(up, high, tried)
        side = np.where(up, -1.0, 1.0)
        done = (high - low <= CLOSE * high) | (np.abs(at) <= CLOSE * high)
        found[rows[done]] = tried[done]
        keep = ~done
    return found
