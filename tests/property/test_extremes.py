"""Law: an extreme is never inside what a dense grid of the box reaches, and exact means exact."""

from collections.abc import Callable
from fractions import Fraction

import numpy as np
import pytest
from numpy.random import Generator

from calcdoc.analysis.extremes import Extreme, Proof, Question, extremes
from calcdoc.analysis.points import FloatArray, evaluate_points
from calcdoc.analysis.tape import Op
from tests.helpers.tapes import Term, choose, inputs, number

N_MODELS = 200
N_SAMPLES = 4000


def positive(a: Term) -> Term:
    """A term that is at least 0.2 whatever ``a`` is."""
    return a.power(2) + 0.2


def bounded(a: Term) -> Term:
    """A term within -0.9 .. 0.9 whatever ``a`` is."""
    return a.then(Op.SIN) * 0.9


MAKERS: tuple[Callable[[Term, Term, Term], Term], ...] = (
    lambda a, b, c: a + b - c,
    lambda a, b, c: a * b + c,
    lambda a, b, _c: a * (number(a, 1) - b),
    lambda a, b, c: a / positive(b) - c,
    lambda a, b, _c: a / (positive(a) + positive(b)),
    lambda a, _b, _c: -a.power(3),
    lambda a, b, _c: positive(a).power(Fraction(-3, 2)) + b,
    lambda a, b, _c: positive(a).power(-2) * b,
    lambda a, b, _c: positive(a).then(Op.POW, bounded(b)),
    lambda a, b, _c: positive(a).then(Op.SQRT) - b,
    lambda a, _b, _c: bounded(a).then(Op.EXP) - a,
    lambda a, b, _c: positive(a).then(Op.LN) * b,
    lambda a, _b, _c: positive(a).then(Op.LOG10),
    lambda a, b, _c: a.then(Op.SIN) + b.then(Op.COS),
    lambda a, b, _c: bounded(a).then(Op.TAN) + b,
    lambda a, b, _c: bounded(a).then(Op.ASIN) * bounded(b).then(Op.ACOS),
    lambda a, b, _c: a.then(Op.ATAN) - b,
    lambda a, b, _c: (a - b).then(Op.ABS),
    lambda a, b, c: a.then(Op.MIN, b) + c,
    lambda a, b, c: a.then(Op.MAX, b * c),
    lambda a, b, _c: (a * 3.0).then(Op.FLOOR) * b,
    lambda a, _b, _c: (a * 2.0).then(Op.CEIL) - a,
    lambda a, b, c: choose(a < b, c, a * b),
    lambda a, b, c: choose((a <= 0.5).then(Op.AND, b < 0.7), a + c, b),
    lambda a, b, c: choose((a < 0.2).then(Op.OR, (b < c).then(Op.NOT)), a, c * c),
)


def model(random: Generator) -> tuple[Term, int]:
    """A formula of two to seven random steps over one to six inputs."""
    n_inputs = int(random.integers(1, 7))
    terms = list(inputs(n_inputs))
    for _ in range(int(random.integers(2, 8))):
        picked = [terms[int(at)] for at in random.integers(0, len(terms), 3)]
        terms.append(MAKERS[int(random.integers(len(MAKERS)))](*picked))
    return terms[-1], n_inputs


def grid(random: Generator, low: FloatArray, high: FloatArray) -> FloatArray:
    """Points of a box: corners, a regular grid and random points; shape (n_inputs, n)."""
    n_inputs = len(low)
    per_side = {1: 4001, 2: 63, 3: 16, 4: 9, 5: 6, 6: 5}[n_inputs]
    share = np.meshgrid(*[np.linspace(0.0, 1.0, per_side)] * n_inputs)
    regular = np.stack([axis.ravel() for axis in share])
    drawn = random.random((n_inputs, N_SAMPLES))
    every = np.concatenate((regular, drawn), axis=1)
    return np.clip(low[:, None] + every * (high - low)[:, None], low[:, None], high[:, None])


def check(term: Term, answer: Extreme, sign: float, values: FloatArray) -> None:
    """Compare one answer with all values on the grid."""
    tape = term.builder.tape()
    at_point = evaluate_points(tape, answer.point[:, None])[term.at, 0]
    assert answer.value == at_point
    best = float((sign * values).max())
    size = max(abs(best), float(np.ptp(values)), 1e-300)
    assert sign * answer.bound >= best - 1e-14 * size, "the bound is broken"
    assert sign * answer.bound >= sign * answer.value
    if answer.proof is Proof.EXACT:
        assert answer.bound == answer.value
        assert sign * answer.value >= best - 1e-14 * size, "exact, yet the grid has better"
    elif answer.proof is Proof.BOUNDED:
        assert sign * (answer.bound - answer.value) <= 1.01e-9 * size
    else:
        assert sign * answer.value >= best - 1e-3 * size, "the search missed what a grid finds"


@pytest.mark.property
@pytest.mark.parametrize("seed", range(N_MODELS))
def test_extremes_enclose_a_grid(seed: int) -> None:
    """Least and greatest are attained and no point of a dense grid is beyond their bound."""
    random = np.random.default_rng(seed)
    term, n_inputs = model(random)
    nominal = random.uniform(-1.0, 1.5, n_inputs)
    width = random.choice([0.01, 0.1, 0.5, 1.5], n_inputs)
    low, high = nominal - width, nominal + width * random.uniform(0.0, 1.0, n_inputs)
    tape = term.builder.tape()
    values = evaluate_points(tape, grid(random, low, high))[term.at]
    assert np.isfinite(values).all()
    questions = [Question(term.at, side, low, nominal, high) for side in (False, True)]
    for side, answer in zip((False, True), extremes(tape, questions), strict=True):
        check(term, answer, 1.0 if side else -1.0, values)
