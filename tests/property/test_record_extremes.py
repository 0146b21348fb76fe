"""Law: nothing inside the bands of a real design is beyond the extremes its record states."""

from functools import cache
from pathlib import Path

import numpy as np
import pytest

from calcdoc.pipeline import evaluate, read, record
from calcdoc.records.record import Record
from calcdoc.text.names import fold
from tests.helpers.independent import CLOSED, QUICK, given

N_DRAWS = 1000
CLOSE = 1e-9
every_design = pytest.mark.parametrize("path", CLOSED, ids=lambda path: path.stem)
pytestmark = pytest.mark.property


@cache
def demo(path: Path) -> Record:
    """The record of a demo."""
    return record(evaluate(read(path)))


def drawn(made: Record, seed: int) -> dict[str, np.ndarray]:
    """Every quantity for random inputs inside their bands; a third of them at an end."""
    random = np.random.default_rng(seed)
    inputs = {}
    for each in given(made):
        low, high = QUICK.quantity(each.least_text), QUICK.quantity(each.greatest_text)
        share = np.clip(random.uniform(-0.25, 1.25, N_DRAWS), 0.0, 1.0)
        inputs[fold(each.symbol)] = np.clip(low + share * (high - low), low, high)
    return QUICK.lines(made, inputs)


@every_design
@pytest.mark.parametrize("seed", range(3))
def test_no_draw_is_beyond_the_stated_extremes(path: Path, seed: int) -> None:
    """A thousand random inputs inside the bands stay between least and greatest of each line."""
    made = demo(path)
    known = drawn(made, seed)
    moved = 0
    for each in made.quantities:
        assert isinstance(each.least, float)
        assert isinstance(each.greatest, float)
        values = QUICK.in_unit(known[fold(each.symbol)], each.unit)
        hair = CLOSE * max(abs(each.least), abs(each.greatest))
        assert values.min() >= each.least - hair, each.symbol
        assert values.max() <= each.greatest + hair, each.symbol
        moved += bool(np.ptp(values) > hair)
    assert moved >= 30, "the draws must move the lines, or nothing was tried"


@every_design
def test_no_draw_fails_a_criterion_that_passes(path: Path) -> None:
    """Where a criterion passes over all bands, every one of a thousand draws holds it."""
    made = demo(path)
    known = drawn(made, 0)
    tried = 0
    for each in made.criteria:
        if each.verdict != "pass" or each.method != "extremes":
            continue
        left, right = QUICK.sides(each.text, known)
        low, high = (left, right) if each.relation == "<=" else (right, left)
        assert np.all(low <= high + CLOSE * np.abs(high)), each.id
        tried += 1
    assert tried >= 5


@every_design
def test_stated_combination_gives_the_stated_extreme(path: Path) -> None:
    """The inputs a record names for an extreme give that extreme when they are put in."""
    made = demo(path)
    for each in made.quantities:
        if not each.formula:
            continue
        for stated, combination in ((each.least, each.at_least), (each.greatest, each.at_greatest)):
            found = QUICK.in_unit(QUICK.at(made, combination)[fold(each.symbol)], each.unit)
            assert found == pytest.approx(stated, rel=CLOSE), each.symbol
