"""Interval arithmetic on arrays, rounded outward.

An interval array has shape (2, ..., n): row 0 holds the lower ends, row 1 the upper ends.
Every result contains each value that the operation takes where it is defined; a root, power or
logarithm that is defined nowhere gives the whole line. No end is NaN, no lower end is +inf, no
upper end -inf. Exact zeros are not rounded: a product with an exact zero is zero, and a sum that
is zero in floating point is zero in truth. (A product too small for a float counts as zero.)
"""

from collections.abc import Callable, Mapping
from fractions import Fraction
from typing import Final

import numpy as np

from calcdoc.analysis.points import BoolArray, FloatArray
from calcdoc.analysis.tape import Op

_OUT: Final = {n: np.array([-np.inf, np.inf]).reshape((2,) + (1,) * (n - 1)) for n in (1, 2, 3)}
LIBRARY_ULP: Final = 4
"""Units in the last place by which a library function (exp, sin, pow) may be wrong."""


def outward(interval: FloatArray, ulps: int = 1) -> FloatArray:
    """Widen in place by ``ulps`` floating-point steps on both sides; zeros stay."""
    inexact = interval != 0.0
    for _ in range(ulps):
        np.nextafter(interval, _OUT[interval.ndim], out=interval, where=inexact)
    return interval


def whole(like: FloatArray) -> FloatArray:
    """The whole line in every column."""
    return np.broadcast_to(_OUT[like.ndim], like.shape).copy()


def straddles(a: FloatArray) -> BoolArray:
    """Where zero lies strictly inside."""
    inside: BoolArray = (a[0] < 0.0) & (a[1] > 0.0)
    return inside


def _hull(corners: FloatArray) -> FloatArray:
    """Least and greatest over the first two axes; a corner that is NaN stands for no value.

    All four are NaN only for zero times, or over, an end that is not a value: that is zero.
    """
    flat = corners.reshape((4, *corners.shape[2:]))
    out = np.empty((2, *flat.shape[1:]))
    np.fmin.reduce(flat, axis=0, out=out[0])
    np.fmax.reduce(flat, axis=0, out=out[1])
    np.copyto(out, 0.0, where=np.isnan(out))
    return outward(out)


def add(a: FloatArray, b: FloatArray) -> FloatArray:
    """Sum."""
    return outward(a + b)


def neg(a: FloatArray) -> FloatArray:
    """Opposite."""
    return -a[::-1]


def sub(a: FloatArray, b: FloatArray) -> FloatArray:
    """Difference."""
    return outward(a - b[::-1])


def mul(a: FloatArray, b: FloatArray) -> FloatArray:
    """Product."""
    return _hull(a[:, None] * b[None, :])


def div(a: FloatArray, b: FloatArray) -> FloatArray:
    """Quotient: the whole line where zero is inside ``b``, a half line where it is an end.

    A dividend that is exactly zero gives zero.
    """
    # A zero end is approached from inside: the sign of the floating-point zero says so.
    ends = np.where(b == 0.0, np.array([0.0, -0.0]).reshape(_OUT[b.ndim].shape), b)
    out = _hull(a[:, None] / ends[None, :])
    pole = straddles(b) & ((a[0] != 0.0) | (a[1] != 0.0))
    if pole.any():
        np.copyto(out, _OUT[out.ndim], where=pole)
    return out


def power(a: FloatArray, exponent: Fraction) -> FloatArray:
    """Rational power; a fractional exponent takes the part of ``a`` that is not negative."""
    if exponent == 0:
        return np.ones_like(a)
    if exponent == 1:
        return a
    if exponent.denominator != 1:
        return _fractional(a, exponent)
    if exponent < 0:
        return div(np.ones_like(a), power(a, -exponent))
    ends = a * a if exponent == 2 else np.power(a, float(exponent))  # noqa: PLR2004
    if exponent.numerator % 2 == 0:
        ends = np.stack((np.where(straddles(a), 0.0, ends.min(axis=0)), ends.max(axis=0)))
    return outward(ends, 1 if exponent == 2 else LIBRARY_ULP)  # noqa: PLR2004


def _fractional(a: FloatArray, exponent: Fraction) -> FloatArray:
    """Power with a fractional exponent."""
    if exponent == Fraction(1, 2):
        return sqrt(a)
    ends = np.power(np.maximum(a, 0.0), float(exponent))
    out = outward(ends if exponent > 0 else ends[::-1].copy(), LIBRARY_ULP)
    np.copyto(out, _OUT[a.ndim], where=a[1] < 0.0)
    return out


def sqrt(a: FloatArray) -> FloatArray:
    """Square root of the part that is not negative."""
    out = outward(np.sqrt(np.maximum(a, 0.0)))
    np.copyto(out, _OUT[a.ndim], where=a[1] < 0.0)
    return out


def pow_(a: FloatArray, b: FloatArray) -> FloatArray:
    """Power of a positive base: it is monotone in the base and in the exponent."""
    base = np.maximum(a, 0.0)
    out = outward(_hull(np.power(base[:, None], b[None, :])), LIBRARY_ULP)
    np.copyto(out, _OUT[a.ndim], where=a[1] < 0.0)
    return out


def _log(function: Callable[..., FloatArray], a: FloatArray) -> FloatArray:
    """Logarithm of the positive part."""
    out = outward(function(np.maximum(a, 0.0)), LIBRARY_ULP)
    np.copyto(out, _OUT[a.ndim], where=a[1] <= 0.0)
    return out


def contains_turn(a: FloatArray, phase: float, period: float) -> BoolArray:
    """Where ``a`` contains ``phase`` plus a multiple of ``period``, or may do so by rounding."""
    slack = 1e-12 * (1.0 + np.abs(a).max(axis=0))
    first = np.ceil((a[0] - slack - phase) / period)
    inside: BoolArray = ~(first * period + phase > a[1] + slack)
    return inside


def cos(a: FloatArray) -> FloatArray:
    """Cosine."""
    return _wave(np.cos(a), contains_turn(a, 0.0, 2 * np.pi), contains_turn(a, np.pi, 2 * np.pi))


def sin(a: FloatArray) -> FloatArray:
    """Sine."""
    top = contains_turn(a, np.pi / 2, 2 * np.pi)
    return _wave(np.sin(a), top, contains_turn(a, -np.pi / 2, 2 * np.pi))


def _wave(ends: FloatArray, top: BoolArray, bottom: BoolArray) -> FloatArray:
    """Range of a wave from its values at both ends and whether it turns between them."""
    out = outward(np.stack((ends.min(axis=0), ends.max(axis=0))), LIBRARY_ULP)
    out[0] = np.where(bottom | ~(out[0] >= -1.0), -1.0, out[0])
    out[1] = np.where(top | ~(out[1] <= 1.0), 1.0, out[1])
    return out


def tan(a: FloatArray) -> FloatArray:
    """Tangent; the whole line where a pole may lie inside."""
    out = outward(np.tan(a), LIBRARY_ULP)
    np.copyto(out, _OUT[a.ndim], where=contains_turn(a, np.pi / 2, np.pi) | ~(out[0] <= out[1]))
    return out


def abs_(a: FloatArray) -> FloatArray:
    """Absolute value."""
    size = np.abs(a)
    return np.stack((np.where(straddles(a), 0.0, size.min(axis=0)), size.max(axis=0)))


def less(a: FloatArray, b: FloatArray) -> FloatArray:
    """Whether a < b: (1, 1) surely, (0, 0) surely not, (0, 1) undecided."""
    return np.stack((a[1] < b[0], a[0] < b[1])).astype(np.float64)


def less_equal(a: FloatArray, b: FloatArray) -> FloatArray:
    """Whether a <= b, as :func:`less`."""
    return np.stack((a[1] <= b[0], a[0] <= b[1])).astype(np.float64)


def choose(condition: FloatArray, if_true: FloatArray, if_false: FloatArray) -> FloatArray:
    """The branch taken, or the hull of both where the condition is undecided."""
    surely, possibly = condition[0] != 0.0, condition[1] != 0.0
    hull = np.stack((np.minimum(if_true[0], if_false[0]), np.maximum(if_true[1], if_false[1])))
    return np.where(surely, if_true, np.where(possibly, hull, if_false))


ONE: Final[Mapping[Op, Callable[[FloatArray], FloatArray]]] = {
    Op.NEG: neg,
    Op.SQRT: sqrt,
    Op.EXP: lambda a: np.maximum(outward(np.exp(a), LIBRARY_ULP), 0.0),
    Op.LN: lambda a: _log(np.log, a),
    Op.LOG10: lambda a: _log(np.log10, a),
    Op.SIN: sin,
    Op.COS: cos,
    Op.TAN: tan,
    Op.ASIN: lambda a: outward(np.arcsin(np.clip(a, -1.0, 1.0)), LIBRARY_ULP),
    Op.ACOS: lambda a: outward(np.arccos(np.clip(a[::-1], -1.0, 1.0)), LIBRARY_ULP),
    Op.ATAN: lambda a: outward(np.arctan(a), LIBRARY_ULP),
    Op.ABS: abs_,
    Op.FLOOR: np.floor,
    Op.CEIL: np.ceil,
    Op.NOT: lambda a: 1.0 - a[::-1],
}
TWO: Final[Mapping[Op, Callable[[FloatArray, FloatArray], FloatArray]]] = {
    Op.ADD: add,
    Op.SUB: sub,
    Op.MUL: mul,
    Op.DIV: div,
    Op.POW: pow_,
    Op.MIN: np.minimum,
    Op.MAX: np.maximum,
    Op.LT: less,
    Op.LE: less_equal,
    Op.AND: np.minimum,
    Op.OR: np.maximum,
}
