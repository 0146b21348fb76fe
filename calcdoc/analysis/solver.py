"""Find a zero of a function in a bracket, for many columns at once.

Inverse quadratic interpolation where it can be trusted, else halving (Chandrupatla's rule), until
the bracket is one or two floating-point steps wide. Each column is worked on by itself: its result
does not depend on which others are there.
"""

from collections.abc import Callable
from typing import Final

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]

Function = Callable[[FloatArray, IntArray], FloatArray]
"""Values at points x of some columns: (x, columns), shape (k,) each."""

PATIENCE: Final = 60
"""Steps after which the numbers between the ends are halved in count, not in distance."""
MOST_STEPS: Final = PATIENCE + 70
TINIEST: Final = 5e-324
_LEAST: Final = np.iinfo(np.int64).min


def solve(
    function: Function, low: FloatArray, high: FloatArray, at_low: FloatArray, at_high: FloatArray
) -> FloatArray:
    """A zero in each bracket.

    Args:
        function: What is to be zero.
        low: Lower ends, shape (n,), below ``high``.
        high: Upper ends.
        at_low: Values at the lower ends.
        at_high: Values at the upper ends.

    Returns:
        Shape (n,): a point with the value zero, or the one next to a change of sign with the
        smaller value. NaN where the values at both ends have the same sign, or where a value on
        the way cannot be computed.
    """
    found = np.where(at_low == 0.0, low, np.where(at_high == 0.0, high, np.nan))
    with np.errstate(all="ignore"):
        columns = np.flatnonzero(np.isnan(found) & (np.sign(at_low) * np.sign(at_high) < 0.0))
        new, f_new = high[columns], at_high[columns]
        other, f_other = low[columns], at_low[columns]
        old, f_old = other, f_other
        share = np.full(len(columns), 0.5)
        for step in range(MOST_STEPS):
            if not columns.size:
                break
            x = new + share * (other - new) if step < PATIENCE else _between(new, other)
            f = function(x, columns)
            stays = np.sign(f) == np.sign(f_new)
            old, f_old = np.where(stays, new, other), np.where(stays, f_new, f_other)
            other, f_other = np.where(stays, other, new), np.where(stays, f_other, f_new)
            new, f_new = x, f
            nearer = np.abs(f_new) <= np.abs(f_other)
            best = np.where(nearer, new, other)
            least = np.spacing(np.maximum(np.abs(best), TINIEST)) / np.abs(other - new)
            done = (least > 0.5) | (f_new == 0.0)  # noqa: PLR2004 - no number is left between
            lost = np.isnan(f)
            found[columns] = np.where(lost, np.nan, best)
            share = _share(new, other, old, f_new, f_other, f_old)
            share = np.clip(share, least, 1.0 - least)
            if (ended := done | lost).any():
                keep = ~ended
                columns, share = columns[keep], share[keep]
                new, other, old = new[keep], other[keep], old[keep]
                f_new, f_other, f_old = f_new[keep], f_other[keep], f_old[keep]
    return found


def _share(  # noqa: PLR0913
    new: FloatArray,
    other: FloatArray,
    old: FloatArray,
    f_new: FloatArray,
    f_other: FloatArray,
    f_old: FloatArray,
) -> FloatArray:
    """How far to go from ``new`` to ``other``: interpolated where that is safe, else one half."""
    xi = (new - other) / (old - other)
    phi = (f_new - f_other) / (f_old - f_other)
    safe = (phi * phi < xi) & ((1.0 - phi) ** 2 < 1.0 - xi)
    share = f_new / (f_other - f_new) * (f_old / (f_other - f_old)) + (
        (old - new) / (other - new) * (f_new / (f_old - f_new)) * (f_other / (f_old - f_other))
    )
    return np.where(safe & np.isfinite(share), share, 0.5)


def _between(a: FloatArray, b: FloatArray) -> FloatArray:
    """The number with as many floating-point numbers to ``a`` as to ``b``."""
    first, second = _rank(a), _rank(b)
    middle = (first >> 1) + (second >> 1) + (first & second & 1)
    bits = np.where(middle < 0, _LEAST - middle, middle)
    between: FloatArray = bits.view(np.float64)
    return between


def _rank(a: FloatArray) -> NDArray[np.int64]:
    """Integers in the order of the numbers, one apart for neighbours."""
    bits = (a + 0.0).view(np.int64)
    return np.where(bits < 0, _LEAST - bits, bits)
