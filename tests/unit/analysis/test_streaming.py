"""Streams: what stands still is folded, buffers are used again, roots take the short way."""

from typing import NoReturn

import numpy as np
import pytest

from calcdoc.analysis import newton
from calcdoc.analysis.buffers import Pool, Source, Stream
from calcdoc.analysis.points import FloatArray, evaluate_points
from calcdoc.analysis.streaming import stream
from calcdoc.analysis.tape import Op
from tests.helpers.tapes import Term, choose, inputs
from tests.unit.analysis.rooted import root

SIZE = 100


def source(low: float = 1.0, high: float = 2.0) -> Source:
    """Values between two ends."""
    return Source(np.linspace(low, high, SIZE))


def bound(term: Term, base: list[float], moving: dict[int, Source], pool: Pool) -> Stream:
    """A stream of one target."""
    return stream(term.builder.tape(), [term.at], np.array(base), moving, pool)


def filled(made: Stream, term: Term) -> FloatArray:
    """The values of a target that moves."""
    values = made.values[term.at]
    assert not isinstance(values, float)
    return values


def test_what_stands_still_is_a_number() -> None:
    """Of exp(a)*b + x only the sum is left when x moves alone, and nothing when nothing does."""
    a, b, x = inputs(3)
    term = a.then(Op.EXP) * b + x
    moving = {2: source()}
    made = bound(term, [0.0, 3.0, 0.0], moving, Pool(SIZE))
    assert len(made.calls) == 1
    made.run()
    assert filled(made, term).tolist() == (moving[2].values + 3.0).tolist()
    still = bound(term, [0.0, 3.0, 0.5], {}, Pool(SIZE))
    assert (still.calls, still.values[term.at], still.reads) == ((), 3.5, set())


def test_a_decided_branch_is_followed_alone() -> None:
    """`if` with a condition that stands still computes one branch and reads its columns alone."""
    a, x, y = inputs(3)
    term = choose(a < 1.0, x.then(Op.EXP), y.then(Op.LN))
    made = bound(term, [0.0, 1.0, 1.0], {1: source(), 2: source()}, Pool(SIZE))
    assert (len(made.calls), made.reads) == (1, {1})


def test_only_what_is_read_is_told() -> None:
    """A moving column that no target needs is not among those read."""
    x, y = inputs(2)
    made = bound(x + 1.0, [1.0, 1.0], {0: source(), 1: source()}, Pool(SIZE))
    assert made.reads == {0}
    assert y.at == 1


def test_buffers_are_used_again() -> None:
    """A chain of fifty operations needs one buffer, a second stream no more for its way."""
    (x,) = inputs(1)
    term = x
    for _ in range(25):
        term = (term + 0.5).then(Op.SQRT)
    pool = Pool(SIZE)
    first, second = (bound(term, [1.0], {0: source(*ends)}, pool) for ends in ((1, 2), (3, 4)))
    assert pool.free == []
    for made, ends in ((first, (1, 2)), (second, (3, 4))):
        made.run()
        expected = evaluate_points(term.builder.tape(), source(*ends).values[None])[term.at]
        assert filled(made, term).tolist() == expected.tolist()


def test_offset_and_scale() -> None:
    """A column is offset + scale * values."""
    (x,) = inputs(1)
    moving = {0: Source(np.linspace(0, 1, SIZE), 2.0, -1.0)}
    made = bound(x * 3.0, [0.0], moving, Pool(SIZE))
    made.run()
    assert filled(made, x * 3.0) == pytest.approx(np.linspace(-3, 3, SIZE))


def test_a_smooth_root_takes_the_short_way(monkeypatch: pytest.MonkeyPatch) -> None:
    """Newton's rule is enough where the residual is smooth: the slow solver is not asked."""

    def never(*_: object) -> NoReturn:
        raise AssertionError("asked")

    monkeypatch.setattr(newton, "solved", never)
    (a,) = inputs(1)
    term = root(lambda x, a: x.power(3) + x - a, 0, 9, a)
    moving = {0: source(1.0, 10.0)}
    made = bound(term, [5.0], moving, Pool(SIZE))
    made.run()
    x = filled(made, term)
    assert x**3 + x == pytest.approx(moving[0].values, rel=1e-14)


def test_a_point_without_a_root_is_no_number() -> None:
    """Where the residual keeps its sign in the bracket nothing is found, elsewhere all is."""
    (a,) = inputs(1)
    term = root(lambda x, a: x.power(2) - a, 0, 2, a)
    moving = {0: source(-1.0, 3.0)}
    made = bound(term, [1.0], moving, Pool(SIZE))
    with np.errstate(all="ignore"):
        made.run()
    values = filled(made, term)
    outside = moving[0].values < 0
    assert 0 < outside.sum() < SIZE
    assert np.isnan(values[outside]).all()
    assert values[~outside] == pytest.approx(np.sqrt(moving[0].values[~outside]), rel=1e-12)


def test_a_jump_is_no_root() -> None:
    """A residual that jumps over zero has no root, though its sign changes."""
    (a,) = inputs(1)
    term = root(lambda x, a: choose(x < a, -(x + 1.0), x + 1.0), 0, 2, a)
    made = bound(term, [1.0], {0: source(0.5, 1.5)}, Pool(SIZE))
    with np.errstate(all="ignore"):
        made.run()
    assert np.isnan(filled(made, term)).all()
