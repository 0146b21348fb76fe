"""Roots on a tape: values, enclosures, slopes, and what a record says about them."""

from fractions import Fraction
from math import exp, log, pi

import numpy as np
import pytest
from scipy.optimize import brentq, fixed_point

from calcdoc.analysis.bracket import (
    all_roots,
    greatest_gain,
    jumps,
    loop_gain,
    residuals,
    several,
)
from calcdoc.analysis.bracket import (
    ends as bracket_ends,
)
from calcdoc.analysis.extremes import Proof
from calcdoc.analysis.program import by_derivatives
from calcdoc.analysis.sweep import Boxes, sweep
from calcdoc.analysis.tape import Op
from calcdoc.analysis.vanish import dependence
from tests.helpers.tapes import Term, choose, ends, inputs, number
from tests.unit.analysis.rooted import at, root, settled


def cubic(x: Term, y: Term) -> Term:
    """x^3 + x - y, which rises everywhere."""
    return x.power(3) + x - y


def diode(x: Term, v: Term, r: Term) -> Term:
    """Current through a resistor less current through a diode."""
    return (v - x) / r - ((x / 0.05).then(Op.EXP) - 1.0) * 1e-9


def board(t: Term, p: Term, r: Term) -> Term:
    """Temperature of a board whose dissipation rises by 0.4 % for each kelvin."""
    return p * r * (number(t, 1) + (t - 25.0) * 0.004) + 25.0


def test_every_column_has_its_root() -> None:
    """x^3 + x = y is solved for all columns at once, exactly where it can be."""
    (y,) = inputs(1)
    assert at(root(cubic, 0, 10, y), [0.0, 2.0, 10.0, 1010.0]).tolist() == [0.0, 1.0, 2.0, 10.0]


def test_no_root_is_not_a_number() -> None:
    """Without a change of sign a column is NaN and the others are not."""
    (y,) = inputs(1)
    assert np.isnan(at(root(cubic, 0, 1, y), [1.0, 3.0, -1.0])).tolist() == [False, True, True]


def test_a_jump_is_not_a_number() -> None:
    """Poles and steps change the sign of a residual without a root."""
    (y,) = inputs(1)
    assert np.isnan(at(root(lambda x, y: number(x, 1) / (x - y), 0, 3, y), 1.0)).all()
    assert np.isnan(at(root(lambda x, y: x.then(Op.FLOOR) - y, 0, 3, y), 1.5)).all()
    steep = root(lambda x, y: ((x - y) * 1e6).then(Op.ATAN), 0, 3, y)
    assert at(steep, 1.5)[0] == pytest.approx(1.5, rel=1e-15)


def test_diodes_of_scipy() -> None:
    """The voltage at a diode behind a resistor is that of brentq."""
    v, r = inputs(2)
    random = np.random.default_rng(3)
    volts, ohms = random.uniform(1.0, 9.0, 50), random.uniform(10.0, 1e4, 50)
    found = at(root(diode, 0, 10, v, r), volts.tolist(), ohms.tolist())
    for value, volt, ohm in zip(found, volts, ohms, strict=True):
        other = brentq(
            lambda x, u=volt, o=ohm: (u - x) / o - (exp(x / 0.05) - 1.0) * 1e-9, 0.0, volt,
            xtol=1e-15, rtol=1e-15,
        )  # fmt: skip
        assert value == pytest.approx(other, rel=1e-13)


def test_fixed_points_of_scipy() -> None:
    """Settled temperatures are the fixed points that scipy finds by iteration."""
    p, r = inputs(2)
    random = np.random.default_rng(4)
    power, kelvin = random.uniform(0.5, 3.0, 50), random.uniform(1.0, 50.0, 50)
    found = at(settled(board, -40, 500, p, r), power.tolist(), kelvin.tolist())
    for value, watt, per_watt in zip(found, power, kelvin, strict=True):
        other = fixed_point(
            lambda t, w=watt, k=per_watt: w * k * (1.0 + (t - 25.0) * 0.004) + 25.0,
            25.0,
            xtol=1e-13,
        )
        assert value == pytest.approx(float(other), rel=1e-11)


def test_equal_roots_are_stored_once() -> None:
    """The same residual, bracket and arguments give one instruction; another bracket another."""
    (y,) = inputs(1)
    first, second = root(cubic, 0, 10, y), root(cubic, Fraction(0), 10.0, y)
    assert first.at == second.at
    assert root(cubic, 0, 9, y).at != first.at


def test_a_root_without_arguments() -> None:
    """Cos x = x has one root whatever the inputs are, in points, boxes and hazards."""
    (y,) = inputs(1)
    term = root(lambda x, _y: x.then(Op.COS) - x, 0, 1, y)
    least, most = ends(term + y * 0.0, (1.0, 2.0, 3.0))
    assert least.value == most.value == pytest.approx(0.7390851332151607, rel=1e-15)
    assert not most.matters.any()


def test_a_root_is_exact_where_it_is_monotone() -> None:
    """Corners are found by one sweep, with the proof."""
    v, r = inputs(2)
    term = root(diode, 0, 5, v, r)
    least, most = ends(term, (4.0, 5.0, 5.0), (90.0, 100.0, 110.0))
    assert (least.point.tolist(), most.point.tolist()) == ([4.0, 110.0], [5.0, 90.0])
    assert least.proof is most.proof is Proof.EXACT
    assert most.value == at(term, 5.0, 90.0)[0]


def test_a_root_among_other_formulas() -> None:
    """The current at the diode, (v - x)/r, is exact although v and r come twice."""
    v, r = inputs(2)
    current = (v - root(diode, 0, 5, v, r)) / r
    least, most = ends(current, (4.0, 5.0, 5.0), (90.0, 100.0, 110.0))
    assert least.proof is most.proof is Proof.EXACT
    assert (least.point.tolist(), most.point.tolist()) == ([4.0, 110.0], [5.0, 90.0])


def test_a_root_that_turns() -> None:
    """X = 4*y*(1 - y) is greatest at y = 0.5, inside its range."""
    (y,) = inputs(1)
    term = root(lambda x, y: x - y * (number(y, 1) - y) * 4.0, -1, 2, y)
    _, most = ends(term, (0.2, 0.3, 0.7))
    assert most.value == pytest.approx(1.0, rel=1e-12)
    assert most.bound >= 1.0
    assert most.interior[0]


def test_a_bracket_far_too_wide() -> None:
    """X + 2*sin(x) = y turns back and forth in -1e3 .. 1e3, yet near its root it does not."""
    (y,) = inputs(1)
    term = root(lambda x, y: x * x * x - x * 3.0 - y, -1000, 1000, y)
    least, most = ends(term, (4.0, 5.0, 6.0))
    assert least.proof is most.proof is Proof.EXACT
    assert most.value == pytest.approx(brentq(lambda x: x**3 - 3 * x - 6, 0, 9, xtol=1e-15))


def test_jumps_between_roots_are_searched() -> None:
    """Where a root may jump to another nothing is called exact, and the bound holds both."""
    (y,) = inputs(1)
    term = root(lambda x, y: x.power(3) - x - y, -2, 2, y)
    least, most = ends(term, (-0.3, 0.0, 0.3))
    values = at(term, np.linspace(-0.3, 0.3, 4001).tolist())
    assert np.abs(np.diff(values)).max() > 0.5
    assert least.bound <= values.min()
    assert most.bound >= values.max()
    assert most.value >= values.max() * (1.0 - 1e-6)


def test_an_input_that_cancels() -> None:
    """The root of x + a - a = y does not depend on a."""
    a, y = inputs(2)
    term = root(lambda x, a, y: x + a - a - y + x * 0.5, -10, 10, a, y)
    _, most = ends(term, (1.0, 2.0, 3.0), (1.0, 2.0, 3.0))
    assert most.matters.tolist() == [False, True]
    assert most.value == 2.0


def test_the_difference_of_a_root_and_itself_vanishes() -> None:
    """Equal roots of equal arguments cancel; roots of different brackets do not."""
    (y,) = inputs(1)
    same = root(cubic, 0, 10, y) - root(cubic, 0, 10, y * 1.0)
    near = root(cubic, 0, 10, y) - root(cubic, 0, 9, y)
    depends = dependence(y.builder.tape())
    assert not depends[same.at, 0]
    assert depends[near.at, 0]


def test_a_product_that_looks_constant() -> None:
    """x*y is 1 at one root of (x*y - 1)(x*y - 2) and 2 at the other: it does not vanish."""
    (y,) = inputs(1)
    term = root(lambda x, y: (x * y - 1.0) * (x * y - 2.0) * (x - 9.0), 0, 10, y) * y
    assert dependence(y.builder.tape())[term.at, 0]


def test_nested_roots() -> None:
    """A root whose residual holds a root is solved, enclosed and exact."""
    (y,) = inputs(1)

    def outer(u: Term, y: Term) -> Term:
        return root(lambda w, u, y: w.power(3) + w - u * y, 0, 10, u, y) + u - 3.0

    term = root(outer, 0, 5, y)
    assert at(term, 1.0)[0] == 2.0  # w = 1: 1 + 1 = 2*1, and 1 + 2 = 3
    least, most = ends(term, (1.0, 2.0, 3.0))
    assert (least.point[0], most.point[0]) == (3.0, 1.0)
    assert least.proof is most.proof is Proof.EXACT


def test_an_enclosure_is_tight() -> None:
    """At a point the enclosure of a well-posed root is a few floating-point steps wide."""
    v, r = inputs(2)
    term = root(diode, 0, 5, v, r)
    program = by_derivatives(term.builder.tape(), (term.at,))
    point = np.array([[5.0], [100.0]])
    swept = sweep(program, Boxes(point, point, np.zeros((0, 1), dtype=np.intp)))
    low, high = swept.values[program.row[term.at]][:, 0]
    value = at(term, 5.0, 100.0)[0]
    assert low <= value <= high
    assert high - low < 100 * np.spacing(value)


def test_residuals() -> None:
    """What is left is a tiny share of the largest term, and nothing without a root."""
    v, r = inputs(2)
    term = root(diode, 0, 5, v, r)
    points = np.array([[5.0, 3.0, -1.0], [100.0, 50.0, 50.0]])
    left = residuals(term.builder.tape(), term.at, points)
    assert np.abs(left[:2]).max() < 1e-13
    assert np.isnan(left[2])


def test_ends_of_the_bracket() -> None:
    """The residual at both ends, as a message shows it."""
    (y,) = inputs(1)
    term = root(cubic, 0, 2, y)
    both = bracket_ends(term.builder.tape(), term.at, np.array([3.0]))
    assert (both.low, both.high) == (-3.0, 7.0)


def test_several_roots_are_seen() -> None:
    """Three roots are counted and listed, one is not several; a root at an end counts."""
    (y,) = inputs(1)
    term = root(lambda x, y: (x - 1.0) * (x - 2.0) * (x - y), 0, 4, y)
    tape = term.builder.tape()
    points = np.array([[3.0, 2.0, -1.0, 0.0]])
    assert several(tape, term.at, points).tolist() == [True, True, True, True]
    assert all_roots(tape, term.at, np.array([3.1])) == pytest.approx([1.0, 2.0, 3.1])
    single = root(cubic, 0, 10, y)
    tape = single.builder.tape()
    assert several(tape, single.at, np.array([[0.0, 2.0, 1010.0]])).tolist() == [False] * 3
    assert not jumps(tape, single.at, np.array([[2.0]])).any()


def test_loop_gain() -> None:
    """The gain of the board is p*r*0.004, exactly."""
    p, r = inputs(2)
    term = settled(board, -40, 500, p, r)
    points = np.array([[1.0, 2.0], [10.0, 50.0]])
    gain = loop_gain(term.builder.tape(), term.at, points)
    assert gain == pytest.approx([0.04, 0.4], rel=1e-15)


def test_gain_of_a_loop_that_curves() -> None:
    """Gain at the root of t = p*exp(t/50): t/50 there."""
    (p,) = inputs(1)
    term = settled(lambda t, p: p * (t / 50.0).then(Op.EXP), 0, 50, p)
    tape = term.builder.tape()
    points = np.array([[5.0, 10.0, 18.0]])
    assert loop_gain(tape, term.at, points) == pytest.approx(at(term, *points.tolist()) / 50.0)
    low, nominal, high = (np.array([each]) for each in (5.0, 10.0, 18.0))
    most = greatest_gain(tape, term.at, low, nominal, high)
    assert most.value == pytest.approx(at(term, 18.0)[0] / 50.0)
    assert most.point[0] == 18.0
    assert most.proof is Proof.EXACT
    assert most.value < 1.0


def test_a_gain_of_more_than_one_is_found() -> None:
    """A loop that falls steeply has a root and a size of the gain above one."""
    (p,) = inputs(1)
    term = settled(lambda t, p: number(t, 10) - p * t, 0, 10, p)
    low, nominal, high = (np.array([each]) for each in (0.5, 0.8, 1.5))
    most = greatest_gain(term.builder.tape(), term.at, low, nominal, high)
    assert (most.value, most.point[0], most.proof) == (1.5, 1.5, Proof.EXACT)


def test_gain_without_feedback_is_zero() -> None:
    """A loop that does not use its own value has no gain."""
    (p,) = inputs(1)
    term = settled(lambda _t, p: p * 2.0, 0, 10, p)
    assert loop_gain(term.builder.tape(), term.at, np.array([[1.0, 2.0]])).tolist() == [0.0, 0.0]


def test_conduction_angle() -> None:
    """The angle at which a rectifier with droop begins to conduct, as a root, against acos."""
    (droop,) = inputs(1)
    term = root(lambda angle, d: angle.then(Op.COS) - (number(d, 1) - d), 0, Fraction(3), droop)
    assert at(term, 0.2)[0] == pytest.approx(np.arccos(0.8), rel=1e-15)
    least, most = ends(term, (0.1, 0.2, 0.5))
    assert least.proof is most.proof is Proof.EXACT
    assert most.value == pytest.approx(pi / 3, rel=1e-15)


def test_a_root_in_a_branch() -> None:
    """if(y > 0, root of ln(x) = y, 1) takes the root where it is asked for."""
    (y,) = inputs(1)
    own = root(lambda x, y: x.then(Op.LN) - y, 1, 100, y)
    term = choose(number(y, 0) < y, own, 1.0)
    assert at(term, [-1.0, log(7.0)]).tolist() == pytest.approx([1.0, 7.0])


def test_a_root_that_is_lost_in_a_part_of_the_box() -> None:
    """The root of x^2 = y in 0 .. 2 ends at y = 4: the greatest that there is."""
    (y,) = inputs(1)
    term = root(lambda x, y: x * x - y, 0, 2, y)
    least, most = ends(term, (1.0, 2.0, 5.0))
    assert least.value == 1.0
    assert 1.999 < most.value <= 2.0 <= most.bound
    assert most.interior[0]
