"""Which inputs a formula really depends on."""

from collections.abc import Callable
from fractions import Fraction

import pytest

from calcdoc.analysis.tape import Op
from calcdoc.analysis.vanish import dependence
from tests.helpers.tapes import Term, choose, inputs, number


def depends(formula: Callable[[Term, Term], Term]) -> list[bool]:
    """What the formula of x and y is found to depend on."""
    term = formula(*inputs(2))
    found: list[bool] = dependence(term.builder.tape())[term.at].tolist()
    return found


@pytest.mark.parametrize(
    "formula",
    [
        lambda x, _y: x / x,
        lambda x, y: x / (x + y) + y / (x + y),
        lambda x, y: (x + y).power(2) - x.power(2) - y.power(2) - x * y * 2.0,
        lambda x, _y: x.then(Op.SIN).power(2) + x.then(Op.COS).power(2),
        lambda x, _y: x.then(Op.SQRT).power(2) - x,
        lambda x, _y: x.then(Op.LN) / number(x, 10).then(Op.LN) - x.then(Op.LOG10),
        lambda x, _y: x.then(Op.FLOOR) - x.then(Op.FLOOR),
        lambda x, _y: x * 0.1 - x / number(x, 10),
        lambda x, _y: x.power(Fraction(2, 3)) / x.power(Fraction(1, 3)).power(2),
    ],
)
def test_what_cancels_is_found(formula: Callable[[Term, Term], Term]) -> None:
    """Identities leave nothing to depend on."""
    assert depends(formula) == [False, False]


@pytest.mark.parametrize(
    "formula",
    [
        lambda x, _y: x.power(2).then(Op.SQRT) / x,
        lambda x, _y: x.power(2).power(Fraction(1, 2)) / x,
        lambda x, _y: x.power(2).then(Op.POW, 0.5) / x,
        lambda x, _y: x.then(Op.ABS) / x,
        lambda x, _y: x.then(Op.FLOOR),
        lambda x, _y: x.then(Op.CEIL) - x.then(Op.FLOOR),
        lambda x, _y: x.then(Op.MAX, 1.0) - x.then(Op.MIN, 1.0),
        lambda x, _y: choose(x < 0.0, 1.0, 2.0),
    ],
)
def test_what_jumps_never_counts_as_constant(formula: Callable[[Term, Term], Term]) -> None:
    """A step has slope zero nearly everywhere, yet depends on its argument."""
    assert depends(formula) == [True, False]


def test_one_of_two_may_cancel() -> None:
    """x*y/x depends on y alone."""
    assert depends(lambda x, y: x * y / x) == [False, True]
