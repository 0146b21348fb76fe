"""One pass over the tape: ranges, slopes, and the cut where an input meets itself."""

from fractions import Fraction

import numpy as np
import pytest

from calcdoc.analysis.points import FloatArray, evaluate_points
from calcdoc.analysis.program import by_derivatives, by_structure
from calcdoc.analysis.sweep import Boxes, sweep
from calcdoc.analysis.tape import Op
from tests.helpers.tapes import Term, inputs, number


def swept(term: Term, low: FloatArray, high: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Range (2, n) and slopes (2, n_inputs, n) of a term over boxes (n_inputs, n)."""
    program = by_structure(term.builder.tape(), [term.at])
    slots = np.repeat(np.arange(len(low))[:, None], low.shape[1], axis=1)
    found = sweep(program, Boxes(low, high, slots))
    move = found.moves[program.row[term.at]]
    assert move is not None
    return found.values[program.row[term.at]], move


def formula() -> Term:
    """Something of everything that is smooth, over x and y above zero."""
    x, y = inputs(2)
    waves = x.then(Op.SIN) * y.then(Op.COS) + (x * 0.3).then(Op.TAN)
    powers = x.then(Op.POW, y) / (x + y).power(Fraction(3, 2)) - y.power(-2)
    logs = x.then(Op.LN) * y.then(Op.LOG10) + (-x).then(Op.EXP) - (x * y).then(Op.SQRT)
    arcs = (x * 0.2).then(Op.ASIN) - (y * 0.2).then(Op.ACOS) + (x / y).then(Op.ATAN)
    return waves + powers + logs * arcs


def test_slopes_contain_the_derivative() -> None:
    """In a hair-thin box the slopes agree with central differences, in a wide one enclose them."""
    term = formula()
    tape = term.builder.tape()
    random = np.random.default_rng(3)
    points = random.uniform(0.5, 3.0, (2, 50))
    step = 1e-6
    for width in (1e-9, 0.2):
        _, move = swept(term, points - width, points + width)
        for row in range(2):
            shift = np.zeros((2, 1))
            shift[row] = step
            ahead, behind = (evaluate_points(tape, points + s)[term.at] for s in (shift, -shift))
            slope = (ahead - behind) / (2 * step)
            assert (move[0, row] <= slope + 1e-6).all()
            assert (move[1, row] >= slope - 1e-6).all()
            if width == 1e-9:
                assert np.allclose(move[:, row], slope, atol=1e-5)


def test_ranges_contain_the_values() -> None:
    """Values at random points of 50 boxes lie in their ranges."""
    term = formula()
    random = np.random.default_rng(5)
    low = random.uniform(0.5, 2.5, (2, 50))
    high = low + random.uniform(0.0, 0.5, (2, 50))
    value, _ = swept(term, low, high)
    for _ in range(40):
        inside = low + (high - low) * random.random((2, 50))
        values = evaluate_points(term.builder.tape(), inside)[term.at]
        assert ((value[0] <= values) & (values <= value[1])).all()


def test_cut_where_an_input_meets_itself() -> None:
    """x/(x + 1) over 0.9..1.1 is cut from 0.43..0.58 to within 2 % of the true range."""
    (x,) = inputs(1)
    value, _ = swept(x / (x + 1.0), np.array([[0.9]]), np.array([[1.1]]))
    assert value[:, 0] == pytest.approx([0.9 / 1.9, 1.1 / 2.1], rel=0.02)
    assert value[0, 0] <= 0.9 / 1.9
    assert value[1, 0] >= 1.1 / 2.1


def test_what_does_not_move_has_no_slope() -> None:
    """With derivatives, x/x is thin and has no tangent; the rest of the tape keeps its own."""
    x, y = inputs(2)
    term = x / x * y
    program = by_derivatives(term.builder.tape(), [term.at])
    slots = np.array([[0], [1]])
    found = sweep(program, Boxes(np.array([[0.5], [1.0]]), np.array([[1.5], [2.0]]), slots))
    assert found.moves[program.row[(x / x).at]] is None
    move = found.moves[program.row[term.at]]
    assert move is not None
    assert move[:, 0, 0].tolist() == [0.0, 0.0]
    assert found.values[program.row[term.at]][:, 0] == pytest.approx([1.0, 2.0], rel=1e-14)


def test_constants_are_exact_or_enclosed() -> None:
    """1/2 is itself; 1/10 is enclosed, since no float is one tenth."""
    (x,) = inputs(1)
    half, tenth = number(x, 0.5), number(x, 0.1)
    program = by_structure(x.builder.tape(), [half.at, tenth.at])
    none = np.zeros((0, 1), dtype=np.intp)
    found = sweep(program, Boxes(np.zeros((1, 1)), np.ones((1, 1)), none))
    assert found.values[program.row[half.at]][:, 0].tolist() == [0.5, 0.5]
    low, high = found.values[program.row[tenth.at]][:, 0]
    assert low < Fraction(1, 10) < high
