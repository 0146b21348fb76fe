"""Evaluation of a tape at points."""

from fractions import Fraction

import numpy as np
import pytest

from calcdoc.analysis.points import evaluate_points
from calcdoc.analysis.tape import Op
from tests.helpers.tapes import Term, choose, inputs, number


def at(term: Term, *point: float) -> float:
    """Value of a term at one point."""
    return float(evaluate_points(term.builder.tape(), np.array(point)[:, None])[term.at, 0])


def test_every_column_is_a_point() -> None:
    """Two columns give two results."""
    (x, y) = inputs(2)
    total = x + y
    values = evaluate_points(total.builder.tape(), np.array([[1.0, 2.0], [10.0, 20.0]]))
    assert values[total.at].tolist() == [11.0, 22.0]


@pytest.mark.parametrize(
    ("op", "argument", "value"),
    [
        (Op.SQRT, 2.25, 1.5),
        (Op.EXP, 0.0, 1.0),
        (Op.LN, 1.0, 0.0),
        (Op.LOG10, 1000.0, 3.0),
        (Op.SIN, 0.0, 0.0),
        (Op.COS, 0.0, 1.0),
        (Op.TAN, 0.0, 0.0),
        (Op.ASIN, 1.0, np.pi / 2),
        (Op.ACOS, 1.0, 0.0),
        (Op.ATAN, 1.0, np.pi / 4),
        (Op.ABS, -3.0, 3.0),
        (Op.FLOOR, -1.5, -2.0),
        (Op.CEIL, -1.5, -1.0),
        (Op.NEG, 4.0, -4.0),
    ],
)
def test_functions_of_one_argument(op: Op, argument: float, value: float) -> None:
    """Each function has its textbook value."""
    (x,) = inputs(1)
    assert at(x.then(op), argument) == pytest.approx(value, rel=1e-15)


@pytest.mark.parametrize(
    ("exponent", "base", "value"),
    [
        (2, -3.0, 9.0),
        (3, -2.0, -8.0),
        (-1, 4.0, 0.25),
        (-2, -2.0, 0.25),
        (0, 5.0, 1.0),
        (Fraction(1, 2), 9.0, 3.0),
        (Fraction(3, 2), 4.0, 8.0),
    ],
)
def test_powers(exponent: Fraction | int, base: float, value: float) -> None:
    """Rational powers are right for bases of either sign."""
    (x,) = inputs(1)
    assert at(x.power(exponent), base) == pytest.approx(value, rel=1e-15)


def test_a_branch_not_taken_never_matters() -> None:
    """``if(x > 0, 1/x, 5)`` at zero is 5, although 1/x is infinite there."""
    (x,) = inputs(1)
    term = choose(number(x, 0) < x, number(x, 1) / x, 5.0)
    assert at(term, 0.0) == 5.0
    assert at(term, 4.0) == 0.25


def test_conditions_are_zero_and_one() -> None:
    """``and``, ``or`` and ``not`` of comparisons follow logic."""
    (x,) = inputs(1)
    low, high = x < 1.0, number(x, 3) <= x
    assert [at(low.then(Op.OR, high), v) for v in (0.0, 1.0, 3.0)] == [1.0, 0.0, 1.0]
    assert [at(low.then(Op.AND, high.then(Op.NOT)), v) for v in (0.0, 1.0)] == [1.0, 0.0]


def test_what_cannot_be_computed_is_not_finite() -> None:
    """The root of a negative is NaN and no warning is raised."""
    (x,) = inputs(1)
    assert np.isnan(at(x.then(Op.SQRT), -1.0))
    assert np.isnan(at(x.power(Fraction(1, 3)), -1.0))
