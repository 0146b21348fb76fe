"""Interval arithmetic: every result contains what its operation can give."""

from collections.abc import Callable, Iterator
from fractions import Fraction

import numpy as np
import pytest

from calcdoc.analysis import intervals as iv
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.tape import Op


@pytest.fixture(autouse=True)
def _no_warnings() -> Iterator[None]:
    """A sweep silences NumPy, since infinite ends are meant; so do these tests."""
    with np.errstate(all="ignore"):
        yield


def interval(low: float, high: float) -> FloatArray:
    """One column."""
    return np.array([[low], [high]])


def ends(a: FloatArray) -> tuple[float, float]:
    """Both ends of the only column."""
    return float(a[0, 0]), float(a[1, 0])


def test_rounding_is_outward_but_zeros_stay() -> None:
    """0.1 + 0.2 is widened; 0 * x is exactly zero and x^2 over 0..1 begins at zero."""
    low, high = ends(iv.add(interval(0.1, 0.1), interval(0.2, 0.2)))
    assert low < Fraction(1, 10) + Fraction(2, 10) < high
    assert ends(iv.mul(interval(0.0, 0.0), interval(-3.0, np.inf))) == (0.0, 0.0)
    assert ends(iv.power(interval(0.0, 1.0), Fraction(2)))[0] == 0.0


@pytest.mark.parametrize(
    ("divisor", "expected"),
    [
        ((-1.0, 1.0), (-np.inf, np.inf)),
        ((0.0, 2.0), (0.5, np.inf)),
        ((-2.0, 0.0), (-np.inf, -0.5)),
        ((0.0, 0.0), (-np.inf, np.inf)),
    ],
)
def test_division_by_an_interval_with_zero(
    divisor: tuple[float, float], expected: tuple[float, float]
) -> None:
    """Zero inside gives the whole line, zero as an end gives a half line."""
    assert ends(iv.div(interval(1.0, 2.0), interval(*divisor))) == pytest.approx(expected)


def test_zero_over_an_interval_with_zero_is_zero() -> None:
    """A slope of exactly zero stays zero across a pole."""
    assert ends(iv.div(interval(0.0, 0.0), interval(-1.0, 1.0))) == (0.0, 0.0)


@pytest.mark.parametrize(
    ("exponent", "base", "expected"),
    [
        (2, (-3.0, 2.0), (0.0, 9.0)),
        (3, (-2.0, 1.0), (-8.0, 1.0)),
        (-2, (-2.0, 1.0), (0.25, np.inf)),
        (-1, (-2.0, 1.0), (-np.inf, np.inf)),
        (-1, (2.0, 4.0), (0.25, 0.5)),
        (Fraction(1, 2), (-1.0, 4.0), (0.0, 2.0)),
        (Fraction(-1, 2), (0.0, 4.0), (0.5, np.inf)),
        (Fraction(2, 3), (-2.0, -1.0), (-np.inf, np.inf)),
    ],
)
def test_powers(
    exponent: Fraction | int, base: tuple[float, float], expected: tuple[float, float]
) -> None:
    """Even powers fold at zero, negative ones have a pole, fractional ones need a base >= 0."""
    assert ends(iv.power(interval(*base), Fraction(exponent))) == pytest.approx(expected)


@pytest.mark.parametrize(
    ("function", "a", "expected"),
    [
        (iv.sin, (0.0, 3.0), (0.0, 1.0)),
        (iv.sin, (4.0, 5.0), (-1.0, np.sin(4.0))),
        (iv.cos, (-1.0, 1.0), (np.cos(1.0), 1.0)),
        (iv.cos, (0.0, 7.0), (-1.0, 1.0)),
        (iv.tan, (1.0, 2.0), (-np.inf, np.inf)),
        (iv.tan, (2.0, 4.0), (np.tan(2.0), np.tan(4.0))),
        (iv.abs_, (-3.0, 2.0), (0.0, 3.0)),
    ],
)
def test_waves_and_folds(
    function: Callable[[FloatArray], FloatArray],
    a: tuple[float, float],
    expected: tuple[float, float],
) -> None:
    """Turning points inside are seen, and none that are outside."""
    assert ends(function(interval(*a))) == pytest.approx(expected, abs=1e-14)


ONE = [op for op in iv.ONE if op is not Op.NOT]


@pytest.mark.parametrize("op", ONE, ids=[op.name for op in ONE])
def test_functions_enclose_their_values(op: Op) -> None:
    """No value at 200 random points of 200 random intervals lies outside."""
    random = np.random.default_rng(7)
    a = np.sort(random.normal(0.0, 2.0, (2, 200)), axis=0)
    with np.errstate(all="ignore"):
        box = iv.ONE[op](a)
        inside = a[0] + (a[1] - a[0]) * random.random((200, 200))
        scalar: dict[Op, Callable[..., FloatArray]] = {
            Op.NEG: np.negative, Op.SQRT: np.sqrt, Op.EXP: np.exp, Op.LN: np.log,
            Op.LOG10: np.log10, Op.SIN: np.sin, Op.COS: np.cos, Op.TAN: np.tan,
            Op.ASIN: np.arcsin, Op.ACOS: np.arccos, Op.ATAN: np.arctan, Op.ABS: np.abs,
            Op.FLOOR: np.floor, Op.CEIL: np.ceil,
        }  # fmt: skip
        values = scalar[op](inside)
    known = np.isfinite(values)
    assert known.any()
    assert not (known & ((values < box[0]) | (values > box[1]))).any()


@pytest.mark.parametrize("op", [Op.ADD, Op.SUB, Op.MUL, Op.DIV, Op.POW, Op.MIN, Op.MAX])
def test_pairs_enclose_their_values(op: Op) -> None:
    """No value at 200 random points of 200 random pairs of intervals lies outside."""
    random = np.random.default_rng(11)
    a, b = np.sort(random.normal(0.0, 2.0, (2, 2, 200)), axis=1)
    scalar: dict[Op, Callable[..., FloatArray]] = {
        Op.ADD: np.add, Op.SUB: np.subtract, Op.MUL: np.multiply, Op.DIV: np.divide,
        Op.POW: np.power, Op.MIN: np.minimum, Op.MAX: np.maximum,
    }  # fmt: skip
    with np.errstate(all="ignore"):
        box = iv.TWO[op](a, b)
        x, y = (each[0] + (each[1] - each[0]) * random.random((200, 200)) for each in (a, b))
        values = scalar[op](np.abs(x) if op is Op.POW else x, y)
        if op is Op.POW:
            box = iv.TWO[op](iv.abs_(a), b)
    assert not (np.isfinite(values) & ((values < box[0]) | (values > box[1]))).any()


def test_conditions_may_be_undecided() -> None:
    """Comparisons are sure, surely not, or undecided; ``if`` takes the hull when undecided."""
    a, b, c = interval(0.0, 1.0), interval(1.5, 2.0), interval(0.5, 3.0)
    assert [ends(iv.less(*pair)) for pair in ((a, b), (b, a), (a, c))] == [(1, 1), (0, 0), (0, 1)]
    assert ends(iv.less_equal(a, interval(1.0, 2.0))) == (1, 1)
    assert ends(iv.choose(interval(0.0, 1.0), a, b)) == (0.0, 2.0)
    assert ends(iv.choose(interval(1.0, 1.0), a, b)) == (0.0, 1.0)
