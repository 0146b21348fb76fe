"""The periodic state with a series resistance: a fixed point over one half period.

The reservoir voltage at one zero crossing of the mains decides the one at the next. Two courses
never cross and never move apart, so the map rises with a slope between 0 and 1; and since line and
string current do not jump where one linear circuit follows another, that slope is exactly
exp(−Σ Δθ/T) over the pieces. Newton's rule with it settles in a few rounds, inside the bracket of
zero and the peak offered.
"""

from typing import Final

import numpy as np

from calcdoc.methods.solvers.blocking import discharge, meets
from calcdoc.methods.solvers.circuit import CREST, Circuit, FloatArray
from calcdoc.methods.solvers.conducting import Conduction, conduction

MOST_ROUNDS: Final = 100
SETTLED: Final = 1e-12
"""A Newton step below this share of the peak offered is the last."""


def half_period(
    circuit: Circuit, begin: FloatArray, near: Conduction | None = None
) -> tuple[Conduction, FloatArray, FloatArray]:
    """Follow half a period from one zero crossing to the next.

    Args:
        circuit: Operating points with a reservoir and a series resistance.
        begin: Voltage above V_0 at the zero crossing, shape (n,).
        near: The conduction from voltages nearby, to begin the searches at.

    Returns:
        The conduction, the voltage at the next zero crossing, and −ln of the map's slope.
    """
    start = meets(circuit, begin, None if near is None else near.start)
    before = discharge(circuit, begin, start)
    course = conduction(circuit, start, np.maximum(circuit.offered(start), 0.0), near)
    after = discharge(circuit, course.y_end, np.pi - course.end)
    slope = course.enters - course.leaves + course.end - course.drops
    reach = circuit.susceptance * circuit.source
    damping = (course.end - course.start) / reach + slope / (circuit.susceptance * circuit.string)
    return course, after.end, before.damping + damping + after.damping


def steady_begin(circuit: Circuit) -> FloatArray:
    """The voltage above V_0 at a zero crossing that comes back half a period later, shape (n,).

    NaN where it does not settle, which the caller reports.
    """
    peak = circuit.amplitude - circuit.offset
    found = np.full_like(peak, np.nan)
    rest, low, high = np.arange(len(peak)), np.zeros_like(peak), peak
    begin, near = discharge(circuit, peak, np.full_like(peak, CREST)).end, None
    for _ in range(MOST_ROUNDS):
        course, after, damping = half_period(circuit, begin, near)
        change = after - begin
        low, high = np.where(change > 0.0, begin, low), np.where(change > 0.0, high, begin)
        step = change / -np.expm1(-damping)
        moved = begin + step
        inside = (moved >= low) & (moved <= high)
        moved = np.where(inside, moved, 0.5 * (low + high))
        done = (inside & (np.abs(step) <= SETTLED * peak)) | (high - low <= 1e-15 * peak)
        found[rest[done]] = moved[done]
        if done.all():
            break
        keep = ~done
        rest, begin, low, high = rest[keep], moved[keep], low[keep], high[keep]
        peak, circuit, near = peak[keep], circuit.take(keep), course.take(keep)
    return found
