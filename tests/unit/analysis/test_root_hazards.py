"""What goes wrong with a root: at the ends of its bracket, in its residual, or beside it."""

from fractions import Fraction

import numpy as np
import pytest

from calcdoc.analysis.hazards import Hazard, hazards
from calcdoc.analysis.tape import Implicit, Op
from tests.helpers.tapes import Term, choose, inputs, number
from tests.unit.analysis.rooted import root, settled

Range = tuple[float, float, float]


def found(term: Term, *ranges: Range) -> tuple[Hazard, ...]:
    """Hazards of a term; ranges are (least, nominal, greatest)."""
    low, nominal, high = np.array(ranges).T
    return hazards(term.builder.tape(), [term.at], low, nominal, high)


def diode(x: Term, v: Term, r: Term) -> Term:
    """Current through a resistor less current through a diode."""
    return (v - x) / r - ((x / 0.05).then(Op.EXP) - 1.0) * 1e-9


def test_a_root_over_the_whole_box() -> None:
    """A diode behind a resistor is solved everywhere."""
    v, r = inputs(2)
    assert found(root(diode, 0, 5, v, r), (4.0, 5.0, 5.0), (90.0, 100.0, 110.0)) == ()


def test_no_change_of_sign_at_nominal() -> None:
    """Both ends are reported with the nominal point."""
    (y,) = inputs(1)
    term = root(lambda x, y: x * x - y, 0, 2, y)
    (hazard,) = found(term, (3.0, 5.0, 6.0))
    assert (hazard.kind, hazard.instruction) == ("no sign change in the bracket", term.at)
    assert hazard.point.tolist() == [5.0]
    assert hazard.ends is not None
    assert (hazard.ends.low, hazard.ends.high) == (-5.0, -1.0)
    assert np.isnan(hazard.value)


def test_no_change_of_sign_at_one_corner_alone() -> None:
    """Of 2^4 corners one has no root; it is found, and just inside it there is none to report."""
    ys = inputs(4)
    term = root(lambda x, a, b, c, d: x - a * b + c * d, 0, 10, *ys)
    narrow: Range = (1.0, 2.0, 3.0)
    (hazard,) = found(term, (1.0, 2.0, 3.5), narrow, (1.0, 1.0, 2.0), (0.2, 0.4, 0.4))
    assert hazard.kind == "no sign change in the bracket"
    assert hazard.point.tolist() == [3.5, 3.0, 1.0, 0.2]
    assert found(term, (1.0, 2.0, 3.4), narrow, (1.0, 1.0, 2.0), (0.2, 0.4, 0.4)) == ()


def test_no_change_of_sign_inside_the_box() -> None:
    """The highest end lies inside the range of an input: a search finds it."""
    (y,) = inputs(1)
    term = root(lambda x, y: x - y * (number(y, 1) - y) * 4.0, 0, Fraction(9, 10), y)
    (hazard,) = found(term, (0.2, 0.3, 0.8))
    assert hazard.point[0] == pytest.approx(0.5, abs=0.17)
    assert hazard.ends is not None
    assert hazard.ends.low < 0.0
    assert hazard.ends.high < 0.0
    assert found(term, (0.2, 0.3, 0.34)) == ()


def test_both_ends_turn_their_sign_together() -> None:
    """A residual that turns as a whole, through zero at no point of the box, keeps its root."""
    (y,) = inputs(1)
    term = root(lambda x, y: choose(y < 0.0, number(x, 1) - x, x - 1.0), 0, 3, y)
    assert found(term, (-1.0, 0.5, 1.0)) == ()


def test_arguments_that_move_together() -> None:
    """A - a is zero whatever a is: the ends of the bracket do not lose their signs."""
    (a,) = inputs(1)
    term = root(lambda x, p, q: x - 1.0 + p - q, 0, 2, a, a * 1.0)
    assert found(term, (-50.0, 1.0, 50.0)) == ()


def test_a_root_in_a_branch_not_taken() -> None:
    """if(y > 0, root of x^2 = y, 0) needs a root only where y is positive."""
    (y,) = inputs(1)
    own = root(lambda x, y: x * x - y, 0, 2, y)
    term = choose(number(y, 0) < y, own, 0.0)
    assert found(term, (-1.0, 1.0, 3.0)) == ()
    (hazard,) = found(term, (-1.0, 1.0, 5.0))
    assert hazard.kind == "no sign change in the bracket"
    assert hazard.point[0] > 4.0


@pytest.mark.parametrize("y", [3.0, 2.0])
def test_several_roots(y: float) -> None:
    """(x - 1)(x - 2)(x - y) has three roots, also where two fall together."""
    (p,) = inputs(1)
    term = root(lambda x, p: (x - 1.0) * (x - 2.0) * (x - p), 0, 4, p)
    (hazard,) = found(term, (y, y, y))
    assert hazard.kind == "several roots in the bracket"


def test_several_roots_at_an_extreme_alone() -> None:
    """x^3 - y*x has one root at nominal, y = -1, and three at the greatest y."""
    (p,) = inputs(1)
    term = root(lambda x, p: x.power(3) - p * x + 0.1, -2, 2, p)
    (hazard,) = found(term, (-1.0, -1.0, 3.0))
    assert hazard.kind == "several roots in the bracket"
    assert hazard.point.tolist() == [3.0]


def test_a_jump_is_no_root() -> None:
    """floor(x) - 2.5 changes sign and is nowhere zero."""
    (y,) = inputs(1)
    (hazard,) = found(root(lambda x, y: x.then(Op.FLOOR) - y, 0, 4, y), (2.5, 2.5, 2.5))
    assert hazard.kind == "jump over zero in the bracket"


def test_division_by_zero_in_the_residual() -> None:
    """The instruction in the residual is named, with the input at which it happens."""
    v, r = inputs(2)
    term = root(diode, 0, 5, v, r)
    (hazard,) = found(term, (4.0, 5.0, 5.0), (-90.0, 100.0, 110.0))
    assert (hazard.kind, hazard.instruction) == ("division by zero", term.at)
    (inner,) = hazard.inner
    value = term.builder.tape().instructions[term.at].value
    assert isinstance(value, Implicit)
    assert value.tape.instructions[inner].op is Op.DIV
    assert hazard.point.tolist() == [5.0, 0.0]


def test_a_negative_root_in_the_bracket_alone() -> None:
    """sqrt(x - y) cannot be computed in the lower part of the bracket: the unknown is named."""
    (y,) = inputs(1)
    (hazard,) = found(root(lambda x, y: (x - y).then(Op.SQRT) - 0.5, 0, 4, y), (1.0, 1.0, 1.0))
    assert (hazard.kind, hazard.unknown) == ("square root of a negative", (0.0,))


def test_overflow_in_the_bracket() -> None:
    """exp(x/0.001) is too large at the upper end."""
    (y,) = inputs(1)
    (hazard,) = found(root(lambda x, y: (x * 1000.0).then(Op.EXP) - y, 0, 4, y), (2.0, 2.0, 2.0))
    assert hazard.kind == "overflow"
    assert hazard.inner


def test_arguments_that_cannot_meet() -> None:
    """1/(p + q) with p = y and q = 1 - y divides by one: no hazard from wide ranges."""
    (y,) = inputs(1)
    term = root(lambda x, p, q: x - number(x, 1) / (p + q), 0, 4, y, number(y, 1) - y)
    assert found(term, (-5.0, 0.0, 5.0)) == ()


def test_nested_roots_name_their_way() -> None:
    """A root in a residual that loses its sign is reported by the outer one, with its place."""
    (y,) = inputs(1)

    def outer(u: Term, y: Term) -> Term:
        return root(lambda w, u, y: w.power(3) + w - u * y, 0, 10, u, y) + u - 3.0

    term = root(outer, 0, 5, y)
    assert found(term, (1.0, 2.0, 3.0)) == ()
    (hazard,) = found(term, (1.0, 2.0, 300.0))
    assert (hazard.kind, hazard.instruction) == ("no sign change in the bracket", term.at)
    assert len(hazard.inner) == len(hazard.unknown) == 1
    assert hazard.unknown[0] * hazard.point[0] > 1010.0


def test_what_follows_from_a_lost_root_is_left_out() -> None:
    """Only the root is named, not the logarithm of it."""
    (y,) = inputs(1)
    own = root(lambda x, y: x * x - y, 0, 2, y)
    (hazard,) = found(own.then(Op.LN), (3.0, 5.0, 6.0))
    assert hazard.instruction == own.at


def test_a_settled_loop_that_runs_away_has_no_root() -> None:
    """Power that grows by 2 % for each kelvin at 60 K/W has no balance: both ends lie above."""
    (p,) = inputs(1)
    term = settled(lambda t, p: p * 60.0 * (t * 0.02).then(Op.EXP) + 25.0, -40, 150, p)
    assert found(term, (0.1, 0.1, 0.1)) == ()
    (hazard,) = found(term, (0.1, 0.1, 1.0))
    assert hazard.kind == "no sign change in the bracket"
