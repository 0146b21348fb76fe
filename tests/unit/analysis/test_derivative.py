"""Derivatives as instructions against differences, and through roots."""

from collections.abc import Callable
from fractions import Fraction

import numpy as np
import pytest

from calcdoc.analysis.derivative import derivative
from calcdoc.analysis.points import evaluate_points
from calcdoc.analysis.tape import Op
from tests.helpers.tapes import Term, choose, inputs, number
from tests.unit.analysis.rooted import root


def slope(term: Term, by: Term, *point: float) -> float:
    """Value of the derivative at a point."""
    at = derivative(term.builder, term.at, by.at)
    assert at is not None
    return float(evaluate_points(term.builder.tape(), np.array(point)[:, None])[at, 0])


def difference(term: Term, column: int, *point: float) -> float:
    """Central difference of fourth order."""
    h = 1e-3
    points = np.repeat(np.array(point)[:, None], 4, axis=1)
    points[column] += h * np.array([-2.0, -1.0, 1.0, 2.0])
    values = evaluate_points(term.builder.tape(), points)[term.at]
    return float(values @ np.array([1.0, -8.0, 8.0, -1.0])) / (12.0 * h)


@pytest.mark.parametrize(
    "formula",
    [
        lambda x, y: x + y * x - y,
        lambda x, y: (x * y) / (x + y * 3.0),
        lambda x, y: -x.power(3) + x.power(Fraction(1, 2)) * y + x.power(-2) + x.power(1),
        lambda x, y: x.then(Op.POW, y * x),
        lambda x, y: (x + y).then(Op.SQRT) * x.then(Op.LN) + x.then(Op.LOG10),
        lambda x, y: (x * y).then(Op.EXP) + x.then(Op.SIN) * (x * 2.0).then(Op.COS),
        lambda x, y: (x * y).then(Op.TAN) + x.then(Op.ATAN),
        lambda x, y: (x * 0.5).then(Op.ASIN) - (x * y).then(Op.ACOS),
        lambda x, y: (x - 2.0).then(Op.ABS) + (x - 0.1).then(Op.ABS) * y,
        lambda x, y: x.then(Op.MIN, y * 4.0) + (x * x).then(Op.MAX, y) + y.then(Op.MAX, x * 0.1),
        lambda x, y: choose(x < y, x * x, x * y * 3.0) + x.then(Op.FLOOR) * x,
        lambda x, y: root(lambda u, x, y: u.power(3) + u * y - x, 0.0, 5.0, x, y),
        lambda x, y: root(
            lambda u, x: root(lambda w, u, x: w.power(3) + w - u * x, 0, 9, u, x) + u - 3.0, 0, 9, x
        ) * y,
    ],
)  # fmt: skip
def test_derivative_is_the_limit_of_differences(formula: Callable[[Term, Term], Term]) -> None:
    """Every operation has the slope that differences show."""
    x, y = inputs(2)
    term = formula(x, y)
    assert slope(term, x, 0.7, 0.4) == pytest.approx(difference(term, 0, 0.7, 0.4), rel=1e-8)


def test_no_dependence_no_derivative() -> None:
    """What does not use an input has no derivative by it, and a floor has none at all."""
    x, y = inputs(2)
    assert derivative(x.builder, (x * x).at, y.at) is None
    assert derivative(x.builder, x.then(Op.FLOOR).at, x.at) is None
    assert derivative(x.builder, number(x, 3).at, x.at) is None
    assert slope(x, x, 1.0, 1.0) == 1.0
