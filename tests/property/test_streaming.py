"""Law: a stream computes what the tape computes, whichever columns move and whatever is folded."""

import numpy as np
import pytest

from calcdoc.analysis.buffers import Pool, Source
from calcdoc.analysis.points import FloatArray, evaluate_points
from calcdoc.analysis.streaming import stream
from tests.helpers.tapes import Term, inputs
from tests.property import test_extremes, test_roots

N_MODELS = 150
SIZE = 257


def check(term: Term, n_inputs: int, random: np.random.Generator, worst: float) -> int:
    """Run some chunks through one stream and compare; returns how many columns moved."""
    tape = term.builder.tape()
    base = random.uniform(-1.0, 1.5, n_inputs)
    moving = np.flatnonzero(random.random(n_inputs) < 0.7)
    sources = {
        int(at): Source(np.zeros(SIZE), *((1.0, 0.0) if at % 2 else (0.4, base[at])))
        for at in moving
    }
    bound = stream(tape, [term.at], base, sources, Pool(SIZE))
    for _ in range(3):
        points = np.repeat(base[:, None], SIZE, axis=1)
        for at, source in sources.items():
            source.values[:] = random.uniform(-1.0, 1.0, SIZE)
            points[at] = source.values * source.scale + source.offset
        with np.errstate(all="ignore"):
            bound.run()
        expected = evaluate_points(tape, points)[term.at]
        found: FloatArray = np.broadcast_to(bound.values[term.at], SIZE)
        size = np.maximum(np.abs(expected), float(np.nanmax(np.abs(expected), initial=0.0)))
        same = (np.abs(found - expected) <= worst * size) | (np.isnan(found) & np.isnan(expected))
        assert same.all(), (found[~same][:3], expected[~same][:3])
    return len(bound.reads)


@pytest.mark.property
@pytest.mark.parametrize("seed", range(N_MODELS))
def test_streams_compute_the_tape(seed: int) -> None:
    """The same formulas in the same order: the same numbers."""
    random = np.random.default_rng(seed)
    check(*test_extremes.model(random), random, 0.0)


@pytest.mark.property
@pytest.mark.parametrize("which", range(1, len(test_roots.ROOTS)))
@pytest.mark.parametrize("seed", range(8))
def test_streams_find_the_roots(which: int, seed: int) -> None:
    """Newton's rule from the base ends at the root the solver finds, also through loops."""
    random = np.random.default_rng(seed)
    a, b, c = inputs(3)
    own = test_roots.ROOTS[which](a * 0.7, b, c)
    assert check(own * c + own, 3, random, 1e-11) <= 3
