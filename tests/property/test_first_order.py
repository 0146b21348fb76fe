"""Law: first order is that of the `uncertainties` package, on smooth formulas of any shape."""

from math import isfinite, sqrt
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from uncertainties import ufloat, umath  # type: ignore[import-untyped]

from calcdoc.analysis.gradient import gradient
from calcdoc.analysis.parts import Part
from calcdoc.analysis.root_sum_square import root_sum_square
from calcdoc.analysis.tape import Op
from tests.helpers.tapes import Term, inputs

N_INPUTS = 4
Pair = tuple[Term, Any]


def _sum(a: Pair, b: Pair) -> Pair:
    return a[0] + b[0], a[1] + b[1]


def _difference(a: Pair, b: Pair) -> Pair:
    return a[0] - b[0], a[1] - b[1]


def _product(a: Pair, b: Pair) -> Pair:
    return a[0] * b[0], a[1] * b[1]


def _quotient(a: Pair, b: Pair) -> Pair:
    return a[0] / (b[0] * b[0] + 0.5), a[1] / (b[1] * b[1] + 0.5)


def _root(a: Pair, _b: Pair) -> Pair:
    return (a[0] * a[0] + 0.3).then(Op.SQRT), umath.sqrt(a[1] * a[1] + 0.3)


def _wave(a: Pair, b: Pair) -> Pair:
    return a[0].then(Op.SIN) + b[0].then(Op.COS), umath.sin(a[1]) + umath.cos(b[1])


def _exponential(a: Pair, _b: Pair) -> Pair:
    return a[0].then(Op.ATAN).then(Op.EXP), umath.exp(umath.atan(a[1]))


def _logarithm(a: Pair, b: Pair) -> Pair:
    return (a[0] * a[0] + 1.0).then(Op.LN) - b[0], umath.log(a[1] * a[1] + 1.0) - b[1]


STEPS = (_sum, _difference, _product, _quotient, _root, _wave, _exponential, _logarithm)
NUMBERS = st.floats(-2, 2).map(lambda number: round(number, 3))


@pytest.mark.property
@given(
    nominal=st.lists(NUMBERS, min_size=N_INPUTS, max_size=N_INPUTS),
    limits=st.lists(st.floats(0.001, 0.3), min_size=N_INPUTS, max_size=N_INPUTS),
    steps=st.lists(
        st.tuples(st.sampled_from(STEPS), st.integers(0, 99), st.integers(0, 99)),
        min_size=1,
        max_size=8,
    ),
)
def test_first_order(nominal: list[float], limits: list[float], steps: list[Any]) -> None:
    """Slopes and combined spread agree with the other package to rounding."""
    values = [ufloat(at, limit) for at, limit in zip(nominal, limits, strict=True)]
    pairs: list[Pair] = list(zip(inputs(N_INPUTS), values, strict=True))
    for step, one, other in steps:
        pairs.append(step(pairs[one % len(pairs)], pairs[other % len(pairs)]))
    term, expected = pairs[-1]
    tape, base = term.builder.tape(), np.array(nominal)
    if not isfinite(expected.n) or abs(expected.n) > 1e100:
        return
    slopes = gradient(tape, [term.at], base)[0]
    known = [expected.derivatives.get(each, 0.0) for each in values]
    size = max(1e-300, *map(abs, known))
    assert slopes == pytest.approx(known, rel=1e-9, abs=1e-11 * max(size, 1.0))
    parts = [
        Part(f"x{n}", f"x{n}", n, at, at - limit, at + limit, 0.0, 0.0, "normal", 1.0, 1, 0.0)
        for n, (at, limit) in enumerate(zip(nominal, limits, strict=True))
    ]
    made = root_sum_square(tape, [term.at], parts, base, -float("inf"))
    rounding = 1e-11 * (1.0 + abs(expected.n))
    assert made.spread == pytest.approx(expected.s, rel=1e-9, abs=rounding)
    by_hand = sqrt(sum((s * part.deviation) ** 2 for s, part in zip(slopes, parts, strict=True)))
    assert by_hand == pytest.approx(expected.s, rel=1e-9, abs=rounding)
