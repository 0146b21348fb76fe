"""What every voltage and current is between two events: one form, its value, slope and root.

In a linear circuit fed by a sinusoid, between two events,

    f(θ) = c + r·x + s·sin θ + k·cos θ + d·exp(−x/T),        x = θ − start.

A curve is an array of shape (7, n): the rows c, r, s, k, d, start and T (radians), one column for
each operating point. What a root is to rounding is decided here and nowhere else.
"""

from typing import Final

import numpy as np

from calcdoc.methods.solvers.circuit import BoolArray, FloatArray, IntArray

CONST, RAMP, SIN, COS, DECAY, START, REACH = range(7)
TERMS: Final = 5
"""Rows that are coefficients; the other two are the start and the reach T of the decay."""

CLOSE: Final = 1e-8
"""A Newton step below this times √T (T no more than a radian) is the last: what it leaves is about
its square over T, which is the rounding of a phase."""
LOOSE: Final = 1e-3
"""The same where only the way to a fixed point is wanted: each round then improves its roots by
about one Newton step, while the fixed point does the same."""
ROUNDING: Final = 1e-15
PLAIN_STEPS: Final = 5
MOST_STEPS: Final = 200
"""More than bisection needs for any interval of phases."""


def curve(start: FloatArray, reach: FloatArray | float = 1.0, **terms: FloatArray) -> FloatArray:
    """Put a curve together from the terms that are not zero; names in small letters."""
    made = np.zeros((7, len(start)))
    made[START] = start
    made[REACH] = reach
    for name, row in (
        ("const", CONST),
        ("ramp", RAMP),
        ("sin", SIN),
        ("cos", COS),
        ("decay", DECAY),
    ):
        if name in terms:
            made[row] = terms[name]
    return made


def value(of: FloatArray, phase: FloatArray) -> FloatArray:
    """The value of curves (7, ...) at phases (...)."""
    along = phase - of[START]
    found: FloatArray = of[CONST] + of[RAMP] * along + of[SIN] * np.sin(phase)
    found += of[COS] * np.cos(phase)
    found += of[DECAY] * np.exp(-along / of[REACH])
    return found


def derivative(of: FloatArray) -> FloatArray:
    """The curves of the slopes over θ."""
    made = of.copy()
    made[CONST] = of[RAMP]
    made[RAMP] = 0.0
    made[SIN] = -of[COS]
    made[COS] = of[SIN]
    made[DECAY] = -of[DECAY] / of[REACH]
    return made


def lowered(of: FloatArray, level: FloatArray) -> FloatArray:
    """The curves less a constant."""
    made = of.copy()
    made[CONST] -= level
    return made


def between(of: FloatArray, low: FloatArray, high: FloatArray) -> FloatArray:
    """The integrals of curves (7, ...) between two phases (...) of their own."""
    length, middle = high - low, 0.5 * (low + high)
    found: FloatArray = length * (of[CONST] + of[RAMP] * (middle - of[START]))
    chord = 2.0 * np.sin(0.5 * length)
    found += chord * (of[SIN] * np.sin(middle) + of[COS] * np.cos(middle))
    left = of[DECAY] * np.exp(-(low - of[START]) / of[REACH])
    found -= left * of[REACH] * np.expm1(-length / of[REACH])
    return found


def _value_and_slope(of: FloatArray, phase: FloatArray) -> tuple[FloatArray, FloatArray]:
    along = phase - of[START]
    sin, cos = np.sin(phase), np.cos(phase)
    decay = of[DECAY] * np.exp(-along / of[REACH])
    found = of[CONST] + of[RAMP] * along + of[SIN] * sin + of[COS] * cos + decay
    slope = of[RAMP] + of[SIN] * cos - of[COS] * sin - decay / of[REACH]
    return found, slope


def rising_root(
    of: FloatArray,
    low: FloatArray,
    high: FloatArray,
    guess: FloatArray,
    close: float = CLOSE,
) -> FloatArray:
    """Where each curve turns from negative to positive between two phases, to rounding.

    A few steps of Newton's rule settle most columns; the rest is kept inside the bracket: a step
    that leaves it, or that is not half of the one before, is replaced by halving. Where the curve
    is positive from the beginning the
    result is ``low``, where it is negative to the end it is ``high``.

    Args:
        of: Curves, shape (7, n), each with one change of sign at most.
        low: Where to begin, shape (n,).
        high: Where to end, shape (n,), no less than ``low``.
        guess: First phase to try, shape (n,).
        close: The last Newton step, :data:`CLOSE` or :data:`LOOSE`.

    Returns:
        Phases in radians, shape (n,).
    """
    found = np.clip(guess, low, high)
    enough = np.maximum(close * np.sqrt(np.minimum(1.0, of[REACH])), ROUNDING)
    rest = _plain_newton(of, low, high, found, enough)
    if len(rest):
        some, first, last = of[:, rest], low[rest], high[rest]
        late, never = value(some, first) >= 0.0, value(some, last) < 0.0
        inside = ~(late | never)
        reached = found[rest][inside]
        found[rest] = np.where(late, first, last)
        some, first, last, rest = some[:, inside], first[inside], last[inside], rest[inside]
        found[rest] = _guarded_newton(some, first, last, reached, enough[rest])
    return found


def _plain_newton(
    of: FloatArray, low: FloatArray, high: FloatArray, found: FloatArray, enough: FloatArray
) -> IntArray:
    """Improve roots in place by Newton's rule; the columns that do not settle in a few steps.

    A bracket holds one root, so a step that is small and stays inside has found it.
    """
    rest, phase = np.arange(len(low)), found
    for _ in range(PLAIN_STEPS):
        at, slope = _value_and_slope(of, phase)
        moved = phase - at / slope
        phase = np.minimum(np.maximum(moved, low), high)
        done = np.abs(moved - found[rest]) <= enough
        done &= moved == phase
        found[rest] = phase
        keep = np.flatnonzero(~done)
        if 4 * len(keep) < 3 * len(done):
            rest, of, phase = rest[keep], of[:, keep], phase[keep]
            low, high, enough = low[keep], high[keep], enough[keep]
            done = np.zeros(len(rest), dtype=bool)
        if not len(rest):
            break
    return rest[~done] if len(rest) else rest


def _guarded_newton(
    of: FloatArray, low: FloatArray, high: FloatArray, phase: FloatArray, enough: FloatArray
) -> FloatArray:
    """Newton's rule that halves its bracket where a step leaves it or does not shrink."""
    found, rest = phase.copy(), np.arange(len(low))
    before = high - low
    for _ in range(MOST_STEPS):
        at, slope = _value_and_slope(of, phase)
        low, high = np.where(at < 0.0, phase, low), np.where(at < 0.0, high, phase)
        moved = phase - at / slope
        size = np.abs(moved - phase)
        trusted = (moved >= low) & (moved <= high) & (2.0 * size <= np.maximum(before, enough))
        before = np.where(trusted, size, 0.5 * (high - low))
        phase = np.where(trusted, moved, low + 0.5 * (high - low))
        done = (trusted & (size <= enough)) | (high - low <= ROUNDING * high)
        found[rest] = phase
        if done.all():
            break
        if 4 * np.count_nonzero(done) > len(done):
            keep = ~done
            rest, of, phase, before = rest[keep], of[:, keep], phase[keep], before[keep]
            low, high, enough = low[keep], high[keep], enough[keep]
    return found


def falling_root(
    of: FloatArray,
    low: FloatArray,
    high: FloatArray,
    guess: FloatArray,
    close: float = CLOSE,
) -> FloatArray:
    """Where each curve turns from positive to negative; otherwise as :func:`rising_root`."""
    turned = of.copy()
    turned[:TERMS] *= -1.0
    return rising_root(turned, low, high, guess, close)


def straddles(first: FloatArray, last: FloatArray) -> BoolArray:
    """Whether two values lie on either side of zero."""
    either: BoolArray = (first < 0.0) != (last < 0.0)
    return either
