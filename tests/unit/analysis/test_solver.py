"""The solver against scipy's, and what it promises about every column."""

from collections.abc import Callable

import numpy as np
import pytest
from numpy.random import Generator
from scipy.optimize import brentq

from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.solver import IntArray, solve

Family = Callable[[FloatArray, FloatArray, FloatArray], FloatArray]
N_PROBLEMS = 60

FAMILIES: tuple[tuple[Family, float, float], ...] = (
    (lambda x, a, b: x**3 + a * x - b, -9.0, 9.0),
    (lambda x, a, b: np.cos(a * x) - b * x, 0.0, 3.0),
    (lambda x, a, b: (5.0 * b - x) / a - 1e-9 * np.exp(x / 0.05), 0.0, 20.0),
    (lambda x, a, b: np.log(x) * a - b, 1e-9, 1e9),
    (lambda x, a, b: np.tanh(a * (x - b)), -50.0, 50.0),
    (lambda x, a, b: (x - a) ** 5 * b, -3.0, 9.0),
    (lambda x, a, b: a * np.sqrt(x) - b / (1.0 + x), 0.0, 1e4),
    (lambda x, a, b: x / (a + x) - 0.3 * b, 0.0, 1e6),
    (lambda x, a, b: x - a * 1e-20 * b, -1.0, 1.0),
    (lambda x, a, b: np.sign(x - a) * np.abs(x - a) ** 0.3 * b, -2.0, 9.0),
)


def solved(
    function: Callable[[FloatArray, IntArray], FloatArray], low: FloatArray, high: FloatArray
) -> FloatArray:
    """Zeros of a function of x and columns."""
    every = np.arange(len(low))
    with np.errstate(all="ignore"):
        return solve(function, low, high, function(low, every), function(high, every))


def drawn(random: Generator) -> tuple[FloatArray, FloatArray]:
    """Two parameters for each problem of a family."""
    a, b = random.uniform(0.3, 2.0, (2, N_PROBLEMS))
    return a, b


@pytest.mark.parametrize("family", range(len(FAMILIES)))
def test_roots_of_scipy(family: int) -> None:
    """On 600 problems of ten families the zero is that of brentq, or the function is smaller."""
    function, low, high = FAMILIES[family]
    a, b = drawn(np.random.default_rng(family))
    ends = np.full(N_PROBLEMS, low), np.full(N_PROBLEMS, high)
    found = solved(lambda x, columns: function(x, a[columns], b[columns]), *ends)
    for x, p, q in zip(found, a, b, strict=True):
        other = brentq(
            lambda x, p=p, q=q: float(function(np.array([x]), p, q)[0]),
            low, high, xtol=1e-300, rtol=8.9e-16, maxiter=5000,
        )  # fmt: skip
        left, other_left = (abs(float(function(np.array([at]), p, q)[0])) for at in (x, other))
        assert x == pytest.approx(other, rel=4e-15) or left <= other_left


def test_a_change_of_sign_is_within_two_steps() -> None:
    """The function has another sign, or is zero, two floating-point steps from what is found."""
    function, low, high = FAMILIES[2]
    a, b = drawn(np.random.default_rng(1))
    found = solved(
        lambda x, columns: function(x, a[columns], b[columns]),
        np.full(N_PROBLEMS, low), np.full(N_PROBLEMS, high),
    )  # fmt: skip
    around = found + np.spacing(found) * np.arange(-2, 3)[:, None]
    signs = np.sign(function(around, a, b))
    assert (signs.min(axis=0) <= 0.0).all()
    assert (signs.max(axis=0) >= 0.0).all()


@pytest.mark.parametrize("family", range(len(FAMILIES)))
def test_a_column_is_on_its_own(family: int) -> None:
    """Alone, turned round and among others a column gives the same number to the last digit."""
    function, low, high = FAMILIES[family]
    a, b = drawn(np.random.default_rng(100 + family))

    def several(which: IntArray) -> FloatArray:
        return solved(
            lambda x, columns: function(x, a[which[columns]], b[which[columns]]),
            np.full(len(which), low), np.full(len(which), high),
        )  # fmt: skip

    every = np.arange(N_PROBLEMS)
    together = several(every)
    assert several(every[::-1])[::-1].tolist() == together.tolist()
    assert [float(several(every[k : k + 1])[0]) for k in every] == together.tolist()


def test_ends_count() -> None:
    """A zero at an end is found exactly; equal signs at both ends give NaN."""
    low, high = np.array([1.0, -2.0, 2.0]), np.array([4.0, 1.0, 3.0])
    found = solved(lambda x, _columns: x - 1.0, low, high)
    assert found[:2].tolist() == [1.0, 1.0]
    assert np.isnan(found[2])


def test_what_cannot_be_computed_on_the_way() -> None:
    """A value that is not a number ends that column alone."""
    low, high = np.full(2, -1.0), np.array([4.0, 6.0])
    hole = np.array([1.5, np.inf])
    found = solved(
        lambda x, columns: np.where(x == hole[columns], np.nan, x - 2.0), low, high
    )  # fmt: skip
    assert np.isnan(found[0]) or found[0] == 2.0
    assert found[1] == 2.0
    found = solved(lambda x, _columns: np.where(np.abs(x - 2.0) < 1.0, np.nan, x - 2.0), low, high)
    assert np.isnan(found).all()


def test_infinite_ends_have_signs() -> None:
    """ln(x) - 1 from zero on is solved although it is infinite at zero."""
    found = solved(lambda x, _columns: np.log(x) - 1.0, np.zeros(1), np.full(1, 10.0))
    assert found[0] == pytest.approx(np.e, rel=1e-15)


def test_steps_are_bounded() -> None:
    """A function made to be hard, a step at the smallest number, ends in a bounded time."""
    count = 0

    def step(x: FloatArray, _columns: IntArray) -> FloatArray:
        nonlocal count
        count += 1
        return np.where(x > 5e-324, 1.0, -1e-300)

    found = solved(step, np.full(1, -1e300), np.full(1, 1.7e308))
    assert 0.0 <= found[0] <= 1e-323
    assert count < 135
