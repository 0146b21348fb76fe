"""What cannot be computed in a box, and what only looks like it."""

from collections.abc import Callable
from fractions import Fraction

import numpy as np
import pytest

from calcdoc.analysis.hazards import Hazard, hazards
from calcdoc.analysis.tape import Op
from tests.helpers.tapes import Term, choose, inputs, number

Range = tuple[float, float, float]


def found(term: Term, *ranges: Range) -> tuple[Hazard, ...]:
    """Hazards of a term; ranges are (least, nominal, greatest)."""
    low, nominal, high = np.array(ranges).T
    return hazards(term.builder.tape(), [term.at], low, nominal, high)


@pytest.mark.parametrize(
    ("formula", "box", "kind", "where"),
    [
        (lambda x: number(x, 1) / x, (-1.0, 0.5, 1.0), "division by zero", 0.0),
        (lambda x: number(x, 1) / x, (0.0, 0.5, 1.0), "division by zero", 0.0),
        (lambda x: number(x, 1) / x, (0.0, 0.0, 0.0), "division by zero", 0.0),
        (lambda x: x.power(-3), (-1.0, 0.5, 1.0), "division by zero", 0.0),
        (lambda x: (x - 0.5).power(-2), (0.0, 1.0, 1.3), "division by zero", 0.5),
        (lambda x: number(x, 1) / (x - 0.5).power(2), (0.1, 1.0, 1.3), "division by zero", 0.5),
        (lambda x: number(x, 1) / x.then(Op.LN), (0.5, 2.0, 3.0), "division by zero", 1.0),
        (lambda x: x.then(Op.SQRT), (-1.0, 0.5, 1.0), "square root of a negative", -1.0),
        (lambda x: x.power(Fraction(1, 2)), (-1.0, 0.5, 1.0), "square root of a negative", -1.0),
        (lambda x: x.power(Fraction(1, 3)), (-1.0, 0.5, 1.0), "power of a negative base", -1.0),
        (lambda x: x.then(Op.POW, x), (-1.0, 0.5, 1.0), "power of a negative base", -1.0),
        (lambda x: (x - x).then(Op.POW, x), (-1.0, 0.5, 1.0), "division by zero", -1.0),
        (lambda x: x.then(Op.LN), (0.0, 0.5, 1.0), "logarithm of zero or less", 0.0),
        (lambda x: x.then(Op.LOG10), (-2.0, 0.5, 1.0), "logarithm of zero or less", -2.0),
        (lambda x: x.then(Op.ASIN), (0.0, 0.5, 1.5), "arcsine outside -1..1", 1.5),
        (lambda x: x.then(Op.ACOS), (-1.5, 0.5, 1.0), "arcsine outside -1..1", -1.5),
        (lambda x: x.then(Op.TAN), (0.0, 0.5, 2.0), "tangent at a pole", np.pi / 2),
        (lambda x: x.then(Op.EXP), (0.0, 0.5, 1000.0), "overflow", 1000.0),
    ],
)
def test_each_kind(formula: Callable[[Term], Term], box: Range, kind: str, where: float) -> None:
    """Each kind of failure is found once, with the input at which it happens."""
    (x,) = inputs(1)
    (hazard,) = found(formula(x), box)
    assert hazard.kind == kind
    assert hazard.point[0] == pytest.approx(where, abs=1e-6)


@pytest.mark.parametrize(
    ("formula", "box"),
    [
        (lambda x: number(x, 1) / x, (0.1, 0.5, 1.0)),
        (lambda x: choose(number(x, 0) < x, number(x, 1) / x, 0.0), (-1.0, 0.0, 1.0)),
        (lambda x: choose(x <= 0.0, number(x, 0), x.then(Op.LN)), (-1.0, 0.5, 1.0)),
        (lambda x: choose(x < 0.5, number(x, 0), x.power(-1)), (-1.0, 0.7, 1.0)),
        (lambda x: (x * (number(x, 1) - x)).then(Op.SQRT), (0.1, 0.5, 0.9)),
        (lambda x: number(x, 1) / (x.power(2) - x + 0.3), (-1.0, 0.5, 2.0)),
        (lambda x: number(x, 1) / (x.then(Op.FLOOR) + 0.5), (-1.0, 0.5, 1.0)),
        (lambda x: number(x, 1) / (x + 1.0 - x), (-9.0, 0.5, 9.0)),
        (lambda x: x.then(Op.SIN).then(Op.ASIN), (-9.0, 0.5, 9.0)),
    ],
)
def test_what_can_be_computed(formula: Callable[[Term], Term], box: Range) -> None:
    """Guarded branches, jumps across zero and wide intervals are no hazards."""
    (x,) = inputs(1)
    assert found(formula(x), box) == ()


def test_only_the_culprit_is_named() -> None:
    """The root of 1/x fails because of 1/x alone."""
    (x,) = inputs(1)
    inner = number(x, 1) / x
    (hazard,) = found(inner.then(Op.SQRT) + inner.then(Op.LN), (-1.0, 0.5, 1.0))
    assert (hazard.instruction, hazard.argument) == (inner.at, x.at)


def test_two_culprits_in_tape_order() -> None:
    """Independent failures are both named, the first one first."""
    x, y = inputs(2)
    first, second = number(x, 1) / x, y.then(Op.LN)
    hits = found(second + first, (-1.0, 0.5, 1.0), (-1.0, 0.5, 1.0))
    assert [hit.instruction for hit in hits] == [first.at, second.at]


def test_nominal_is_named_first() -> None:
    """A failure at nominal is reported with the nominal point."""
    x, y = inputs(2)
    (hazard,) = found((x - y).then(Op.SQRT), (0.0, 1.0, 3.0), (0.0, 2.0, 3.0))
    assert hazard.point.tolist() == [1.0, 2.0]
    assert hazard.value == -1.0


def test_pole_within_a_guard() -> None:
    """if(y > 0.5, 1/(x - 1/3), 0) fails where y allows it, and nowhere when y cannot."""
    x, y = inputs(2)
    term = choose(number(x, 0.5) < y, number(x, 1) / (x - number(x, Fraction(1, 3))), 0.0)
    (hazard,) = found(term, (0.0, 1.0, 1.0), (0.0, 0.0, 1.0))
    assert hazard.point[0] == pytest.approx(1 / 3)
    assert hazard.point[1] > 0.5
    assert found(term, (0.0, 1.0, 1.0), (0.0, 0.0, 0.5)) == ()


def test_guard_that_lets_zero_through() -> None:
    """if(x >= 0, 1/x, 0) divides by zero at zero."""
    (x,) = inputs(1)
    (hazard,) = found(choose(number(x, 0) <= x, number(x, 1) / x, 0.0), (-1.0, 1.0, 2.0))
    assert hazard.point[0] == 0.0


@pytest.mark.parametrize(("op", "sure"), [(Op.AND, True), (Op.OR, False)])
def test_second_side_of_a_condition(op: Op, sure: bool) -> None:
    """``x > 0 and 1/x < 5`` is fine; the other way round divides by zero."""
    (x,) = inputs(1)
    allows = (number(x, 0) < x) if sure else (x <= 0.0)
    divides = number(x, 1) / x < 5.0
    box = (-1.0, 0.5, 1.0)
    assert found(choose(allows.then(op, divides), 1.0, 2.0), box) == ()
    (hazard,) = found(choose(divides.then(op, allows), 1.0, 2.0), box)
    assert hazard.kind == "division by zero"
