"""What light modulation needs of the string current, taken as proportional to the light.

    percent flicker = 100·(i_max − i_min)/(i_max + i_min)
    flicker index   = area above the mean / whole area, over half a mains period

Definitions: CIE e-ILV term 39 and IEV 845-22-094 (seen, see the facts of the methods).
"""

import numpy as np

from calcdoc.methods.solvers.circuit import FloatArray
from calcdoc.methods.solvers.curves import START, between, lowered, rising_root, straddles, value
from calcdoc.methods.solvers.segments import REGULATED, Steady


def percent_flicker(least: FloatArray, greatest: FloatArray) -> FloatArray:
    """Percent flicker of a current between two extremes, shape (n,); NaN without current."""
    both = greatest + least
    share: FloatArray = np.divide(
        greatest - least, both, out=np.full_like(both, np.nan), where=both > 0.0
    )
    return 100.0 * share


def flicker_index(steady: Steady, mean: FloatArray) -> FloatArray:
    """Flicker index of the string current with a known mean, shape (n,); NaN without current.

    Between the events the current only rises or only falls, once the segment with the valley is
    cut there; so it passes its mean once in a piece at most.
    """
    above = _held(steady, mean)
    for segment, low, high in (
        (
            1,
            steady.string[START, 1],
            np.clip(steady.valley, steady.string[START, 1], steady.end[1]),
        ),
        (1, np.clip(steady.valley, steady.string[START, 1], steady.end[1]), steady.end[1]),
        (3, steady.string[START, 3], steady.end[3]),
        (5, steady.string[START, 5], steady.end[5]),
    ):
        above += _area_above(steady.string[:, segment], low, high, mean)
    share: FloatArray = np.divide(
        above, np.pi * mean, out=np.full_like(mean, np.nan), where=mean > 0.0
    )
    return share


def _held(steady: Steady, mean: FloatArray) -> FloatArray:
    """The area above the mean while the regulator holds its current."""
    held = lowered(steady.string[:, REGULATED], mean)
    lengths = steady.end[REGULATED] - held[START]
    area: FloatArray = np.sum(np.maximum(held[0], 0.0) * lengths, axis=0)
    return area


def _area_above(
    current: FloatArray, low: FloatArray, high: FloatArray, mean: FloatArray
) -> FloatArray:
    """The area of monotone curves (7, n) above a level, between two phases."""
    excess = lowered(current, mean)
    first, last = value(excess, low), value(excess, high)
    crosses = np.flatnonzero(straddles(first, last) & (high > low))
    low, high = low.copy(), high.copy()
    rises = last[crosses] > first[crosses]
    some = excess[:, crosses] * np.where(rises, 1.0, -1.0)[None, :]
    some[START:] = excess[START:, crosses]
    begin, stop = low[crosses], high[crosses]
    crossing = rising_root(some, begin, stop, 0.5 * (begin + stop))
    low[crosses] = np.where(rises, crossing, begin)
    high[crosses] = np.where(rises, stop, crossing)
    until = between(excess, low, high)
    lit = (np.maximum(first, last) > 0.0) & (high > low)
    area: FloatArray = np.where(lit, until, 0.0)
    return area
