"""Laws of roots: an enclosure holds every root, and extremes through roots enclose a grid."""

from collections.abc import Callable
from fractions import Fraction

import numpy as np
import pytest
from numpy.random import Generator

from calcdoc.analysis.extremes import Question, extremes
from calcdoc.analysis.points import FloatArray, evaluate_points
from calcdoc.analysis.program import by_derivatives, by_structure
from calcdoc.analysis.sweep import Boxes, sweep
from calcdoc.analysis.tape import Op
from tests.helpers.tapes import Term, inputs, number
from tests.property.test_extremes import bounded, check, grid, positive
from tests.unit.analysis.rooted import root, settled

N_MODELS = 60
Maker = Callable[[Term, Term, Term], Term]

SMOOTH: tuple[Maker, ...] = (
    lambda a, b, c: a + b - c,
    lambda a, b, c: a * b + c,
    lambda a, b, _c: a * (number(a, 1) - b),
    lambda a, b, c: a / positive(b) - c,
    lambda a, b, _c: positive(a).power(Fraction(-3, 2)) + b,
    lambda a, b, _c: positive(a).then(Op.SQRT) - b,
    lambda a, _b, _c: bounded(a).then(Op.EXP) - a,
    lambda a, b, _c: positive(a).then(Op.LN) * b,
    lambda a, b, _c: a.then(Op.ATAN) - b,
    lambda a, b, _c: (a - b).then(Op.ABS),
    lambda a, b, c: a.then(Op.MIN, b) + c,
)


def _wild(x: Term, a: Term, b: Term) -> Term:
    """May have several roots: x is a wave of everything."""
    return x - bounded((x * 3.0 + a) * b)


def _cubic(x: Term, a: Term, b: Term) -> Term:
    """Rises everywhere, with arguments that enter twice."""
    return x.power(3) + x * positive(a) - b * bounded(a)


def _turning(x: Term, a: Term, b: Term) -> Term:
    """Falls and rises in the bracket, but for a = b = 0 not near its root."""
    return x.power(3) - x * 2.0 * bounded(a).power(2) - positive(b) - 2.0


def _diode(x: Term, a: Term, b: Term) -> Term:
    """A source behind a resistor at a diode."""
    return (bounded(a) + 3.0 - x) / positive(b) - ((x * 4.0).then(Op.EXP) - 1.0) * 0.01


def _nested(x: Term, a: Term, b: Term) -> Term:
    """The residual holds a root of its own."""
    own = root(lambda w, x, a: w.power(3) + w - bounded(x * a), -2, 2, x, a)
    return x + own * 0.5 - bounded(b)


ROOTS: tuple[Maker, ...] = (
    lambda a, b, _c: root(_wild, -2, 2, a, b),
    lambda a, b, _c: root(_cubic, -9, 9, a.then(Op.ATAN), b.then(Op.ATAN)),
    lambda a, b, _c: root(_turning, -1, 9, a, bounded(b)),
    lambda a, b, _c: root(_diode, 0, 5, a, b),
    lambda a, b, _c: root(_nested, -3, 3, a, b),
    lambda a, b, _c: settled(lambda t, a, b: bounded(t * 0.5 + a) * bounded(b), -1, 1, a, b),
)


def model(random: Generator) -> tuple[Term, Term, int]:
    """A formula of some random steps with one root among them, which is given too."""
    n_inputs = int(random.integers(1, 5))
    terms = list(inputs(n_inputs))

    def step(makers: tuple[Maker, ...]) -> Term:
        picked = [terms[int(at)] for at in random.integers(0, len(terms), 3)]
        terms.append(makers[int(random.integers(len(makers)))](*picked))
        return terms[-1]

    for _ in range(int(random.integers(0, 3))):
        step(SMOOTH)
    own = step(ROOTS)
    for _ in range(int(random.integers(0, 3))):
        step(SMOOTH)
    return terms[-1], own, n_inputs


def box(random: Generator, n_inputs: int) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Least, nominal and greatest of the inputs."""
    nominal = random.uniform(-1.0, 1.5, n_inputs)
    width = random.choice([0.01, 0.1, 0.5, 1.5], n_inputs)
    return nominal - width, nominal, nominal + width * random.uniform(0.0, 1.0, n_inputs)


@pytest.mark.property
@pytest.mark.parametrize("seed", range(N_MODELS))
def test_extremes_through_roots_enclose_a_grid(seed: int) -> None:
    """Attained, proven as claimed, and no point of a dense grid is beyond the bound."""
    random = np.random.default_rng(seed)
    term, _, n_inputs = model(random)
    low, nominal, high = box(random, n_inputs)
    tape = term.builder.tape()
    values = evaluate_points(tape, grid(random, low, high))[term.at]
    assert np.isfinite(values).all()
    questions = [Question(term.at, side, low, nominal, high) for side in (False, True)]
    for side, answer in zip((False, True), extremes(tape, questions), strict=True):
        check(term, answer, 1.0 if side else -1.0, values)


@pytest.mark.property
@pytest.mark.parametrize("seed", range(N_MODELS))
def test_an_enclosure_holds_every_root(seed: int) -> None:
    """Twenty boxes of all sizes, thin ones too: every root drawn inside lies in the enclosure."""
    random = np.random.default_rng(1000 + seed)
    _, own, n_inputs = model(random)
    tape = own.builder.tape()
    centre = random.uniform(-1.5, 1.5, (n_inputs, 20))
    width = random.choice([0.0, 1e-12, 1e-3, 0.1, 1.0], (n_inputs, 20))
    low, high = centre - width, centre + width
    slots = np.repeat(np.arange(n_inputs)[:, None], 20, axis=1)
    drawn = random.uniform(low, high, (300, n_inputs, 20))
    drawn[:2] = low, high
    points = drawn.transpose(1, 0, 2).reshape(n_inputs, -1)
    roots = evaluate_points(tape, points)[own.at].reshape(300, 20)
    for program in (by_structure(tape, (own.at,)), by_derivatives(tape, (own.at,))):
        swept = sweep(program, Boxes(low, high, slots))
        least, most = swept.values[program.row[own.at]]
        assert (roots >= least).all()
        assert (roots <= most).all()


@pytest.mark.property
@pytest.mark.parametrize("seed", range(N_MODELS))
def test_slopes_hold_every_quotient(seed: int) -> None:
    """Between any two points along one input a root moves within its interval slope."""
    random = np.random.default_rng(2000 + seed)
    _, own, n_inputs = model(random)
    tape = own.builder.tape()
    low, _, high = box(random, n_inputs)
    program = by_structure(tape, (own.at,))
    slots = np.arange(n_inputs)[:, None]
    move = sweep(program, Boxes(low[:, None], high[:, None], slots)).moves[program.row[own.at]]
    assert move is not None
    for column in range(n_inputs):
        first = random.uniform(low[:, None], high[:, None], (n_inputs, 300))
        second = first.copy()
        second[column] = random.uniform(low[column], high[column], 300)
        run = second[column] - first[column]
        rise = np.subtract(*(evaluate_points(tape, each)[own.at] for each in (second, first)))
        slack = 1e-12 / np.abs(run)
        assert (rise / run >= move[0, column, 0] - slack).all()
        assert (rise / run <= move[1, column, 0] + slack).all()
