"""The periodic state with a series resistance: a fixed point over one half period.

The reservoir voltage at one zero crossing of the mains decides the one at the next. Two courses
never cross and never move apart, so the map rises with a slope between 0 and 1; and since line and
string current do not jump where one linear circuit follows another, that slope is exactly
exp(−Σ Δθ/T) over the pieces. Newton's rule with it settles in a few rounds, inside the bracket of
zero and the peak offered.
"""

from dataclasses import fields
from typing import Final

import numpy as np

from calcdoc.methods.solvers.blocking import discharge, meets
from calcdoc.methods.solvers.circuit import CREST, Circuit, FloatArray
from calcdoc.methods.solvers.conducting import Conduction, conduction
from calcdoc.methods.solvers.curves import CLOSE, LOOSE

MOST_ROUNDS: Final = 100
LOOSE_ROUNDS: Final = 1
NEARLY: Final = 1e-3
"""Rounds with loosely searched events end after so many, or when all steps are below this share
of the peak offered."""
REPEATS: Final = 2e-15
"""A change over half a period below this share of the mains is rounding: with a very large
reservoir the map's slope is nearly 1, and no step would be small enough."""
SETTLED: Final = 1e-12
"""A Newton step below this share of the peak offered is the last."""


def half_period(
    circuit: Circuit, begin: FloatArray, near: Conduction | None, close: float
) -> tuple[Conduction, FloatArray, FloatArray]:
    """Follow half a period from one zero crossing to the next.

    Args:
        circuit: Operating points with a reservoir and a series resistance.
        begin: Voltage above V_0 at the zero crossing, shape (n,).
        near: The conduction from voltages nearby, to begin the searches at.
        close: How closely to find events.

    Returns:
        The conduction, the voltage at the next zero crossing, and −ln of the map's slope.
    """
    start = meets(circuit, begin, None if near is None else near.start, close)
    before = discharge(circuit, begin, start)
    course = conduction(circuit, start, np.maximum(circuit.offered(start), 0.0), near, close)
    after = discharge(circuit, course.y_end, np.pi - course.end)
    slope = course.enters - course.leaves + course.end - course.drops
    reach = circuit.susceptance * circuit.source
    damping = (course.end - course.start) / reach + slope / (circuit.susceptance * circuit.string)
    return course, after.end, before.damping + damping + after.damping


def steady_conduction(circuit: Circuit) -> Conduction:
    """The conduction that comes back half a period later.

    The first guess is a reservoir charged to the peak offered. Events are searched loosely until
    the voltage is nearly settled, from where they were the round before.

    Args:
        circuit: Operating points with a reservoir, a series resistance and a string that conducts.

    Returns:
        The events; NaN where it does not settle, which the caller reports.
    """
    peak = circuit.amplitude - circuit.offset
    found = Conduction(*(np.full_like(peak, np.nan) for _ in fields(Conduction)))
    rest, low, high = np.arange(len(peak)), np.zeros_like(peak), peak
    begin = discharge(circuit, peak, np.full_like(peak, CREST)).end
    near, close = None, LOOSE
    for turn in range(MOST_ROUNDS):
        near, after, damping = half_period(circuit, begin, near, close)
        change = after - begin
        if close == CLOSE:
            low, high = np.where(change > 0.0, begin, low), np.where(change > 0.0, high, begin)
        moved = begin + change / -np.expm1(-damping)
        inside = (moved >= low) & (moved <= high)
        step = np.where(inside, np.abs(moved - begin), peak)
        moved = np.where(inside, moved, 0.5 * (low + high))
        if close == LOOSE:
            close = CLOSE if turn >= LOOSE_ROUNDS or (step <= NEARLY * peak).all() else LOOSE
            begin = moved
            continue
        repeats = np.abs(change) <= REPEATS * circuit.amplitude
        done = (step <= SETTLED * peak) | repeats | (high - low <= REPEATS * peak)
        found.put(rest[done], near.take(done))
        if done.all():
            break
        keep = ~done
        rest, begin, low, high = rest[keep], moved[keep], low[keep], high[keep]
        peak, circuit, near = peak[keep], circuit.take(keep), near.take(keep)
    return found
