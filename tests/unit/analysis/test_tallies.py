"""Running moments and tails against NumPy on all values at once."""

import numpy as np
import pytest

from calcdoc.analysis.tallies import Moments, Tail


@pytest.mark.parametrize("size", [1, 7, 100, 5000])
@pytest.mark.parametrize(
    ("first", "last"), [(0, 0), (3, 40), (2400, 2600), (4990, 4999), (-5, 9999)]
)
def test_tail_holds_the_places_asked_for(size: int, first: int, last: int) -> None:
    """Whatever the chunks, a place holds what sorting everything puts there."""
    values = np.random.default_rng(1).normal(size=5000)
    values[:3] = [-np.inf, np.inf, np.inf]
    tail = Tail(5000, first, last)
    for begin in range(0, 5000, size):
        tail.add(values[begin : begin + size])
    ordered = np.sort(values)
    places = range(max(first, 0), min(last, 4999) + 1)
    assert [tail.at(place) for place in places] == ordered[list(places)].tolist()


def test_tail_keeps_the_smaller_end() -> None:
    """Of a quantile near either end only the values beyond it are kept."""
    assert (Tail(1000, 1, 5).kept, Tail(1000, 990, 995).kept) == (6, 10)


def test_tail_does_not_hold_on_to_a_chunk() -> None:
    """The array that was added may be filled anew."""
    tail, values = Tail(4, 0, 3), np.array([1.0, 2.0])
    tail.add(values)
    values[:] = [3.0, 4.0]
    tail.add(values)
    assert [tail.at(place) for place in range(4)] == [1, 2, 3, 4]


def test_moments_of_chunks_are_those_of_all() -> None:
    """Mean and deviation to rounding, far from zero too."""
    values = np.random.default_rng(2).normal(1e6, 1e-3, 10_001)
    moments = Moments()
    for some in np.array_split(values, 17):
        moments.add(some)
    moments.add(np.empty(0))
    assert moments.count == 10_001
    assert moments.mean == pytest.approx(values.mean(), rel=1e-15)
    assert moments.deviation == pytest.approx(values.std(ddof=1), rel=1e-6)


def test_moments_of_one_value() -> None:
    """One value has no spread."""
    moments = Moments()
    moments.add(np.array([3.0]))
    assert (moments.mean, moments.deviation) == (3.0, 0.0)
