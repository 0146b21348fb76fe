"""Least and greatest values of quantities over boxes of inputs, with the points that give them.

Most questions are settled by one pass: where the slope to an input keeps its sign over the whole
box, that input stands at an end. The rest goes to branch and bound (:mod:`..search`), bounded in
work, so that a hard question ends with a value that was attained and a bound that is proven.
Both are values of the tape as computed in floating point: right to rounding, about 1e-15.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from enum import Enum
from typing import Final

import numpy as np

from calcdoc.analysis.hunt import Hunt
from calcdoc.analysis.points import BoolArray, FloatArray, IntArray, evaluate_points, needed
from calcdoc.analysis.search import search
from calcdoc.analysis.sweep import Boxes, Dependence, sweep
from calcdoc.analysis.tape import Tape
from calcdoc.analysis.vanish import dependence

CHUNK: Final = 128
"""Questions evaluated in one pass; more would compute much that each one does not need."""
CELLS: Final = 8192
"""Boxes times slots in the first sweep."""
GAP: Final = 1e-9
"""Largest relative gap between bound and attained value of a bounded result."""


class Proof(Enum):
    """How sure an extreme is."""

    EXACT = "exact"  # attained, and nothing in the box is beyond it
    BOUNDED = "bounded"  # attained, and nothing is beyond it by more than 1e-9 of its size
    SEARCHED = "searched"  # attained; a bound is proven, but the two are apart


@dataclass(frozen=True, slots=True)
class Question:
    """What is asked: one end of one instruction's range over one box."""

    target: int
    greatest: bool
    low: FloatArray
    """Shape (n_inputs,), in coherent SI; low <= nominal <= high."""
    nominal: FloatArray
    high: FloatArray


@dataclass(frozen=True, slots=True)
class Extreme:
    """The answer to one question."""

    value: float
    """Attained at ``point``; NaN where nothing in the box could be computed."""
    bound: float
    """Proven: nothing in the box is beyond it. Equal to ``value`` when exact."""
    point: FloatArray
    """Shape (n_inputs,); inputs without effect stand at nominal."""
    matters: BoolArray
    """Shape (n_inputs,): inputs that have width and effect."""
    interior: BoolArray
    """Shape (n_inputs,): inputs that matter and stand strictly inside their range."""
    proof: Proof


@dataclass(frozen=True, slots=True)
class _Start:
    """What the first sweep found about a question."""

    point: FloatArray
    """Settled inputs at their end, all others at nominal."""
    matters: BoolArray
    open: IntArray
    """Inputs whose slope may have either sign."""


def extremes(tape: Tape, questions: Sequence[Question]) -> tuple[Extreme, ...]:
    """Answer all questions, in their order.

    The same question gets the same answer whatever else is asked, except that the work is shared.
    """
    if not questions:
        return ()
    order = needed(tape, {question.target for question in questions})
    depends = Dependence.of(tape, order, dependence(tape, order))
    starts = _first_sweep(tape, order, depends, questions)
    hunts = {
        at: _hunt(tape, questions[at], start) for at, start in enumerate(starts) if start.open.size
    }
    search(tape, depends, list(hunts.values()))
    points = [
        start.point if at not in hunts else _found(hunts[at]) for at, start in enumerate(starts)
    ]
    values = _attained(tape, questions, points)
    return tuple(
        _answer(*row, hunts.get(at))
        for at, row in enumerate(zip(questions, starts, points, values, strict=True))
    )


def _first_sweep(
    tape: Tape, order: Sequence[int], depends: Dependence, questions: Sequence[Question]
) -> list[_Start]:
    """Sweep every distinct box once and read off the slopes of all targets."""
    columns: dict[tuple[bytes, bytes], list[int]] = {}
    for at, question in enumerate(questions):
        columns.setdefault((question.low.tobytes(), question.high.tobytes()), []).append(at)
    groups = list(columns.values())
    moving = [
        np.flatnonzero(questions[group[0]].low < questions[group[0]].high) for group in groups
    ]
    n_slots = max(len(inputs) for inputs in moving)
    size = max(1, CELLS // max(1, n_slots))
    starts: dict[int, _Start] = {}
    for first in range(0, len(groups), size):
        part = groups[first : first + size]
        slots = np.full((n_slots, len(part)), -1, dtype=np.intp)
        for column, inputs in enumerate(moving[first : first + size]):
            slots[: len(inputs), column] = inputs
        low = np.stack([questions[group[0]].low for group in part], axis=1)
        high = np.stack([questions[group[0]].high for group in part], axis=1)
        swept = sweep(tape, order, Boxes(low, high, slots), depends)
        for column, group in enumerate(part):
            for at in group:
                move = swept.moves[questions[at].target]
                inputs = moving[first + column]
                slopes = None if move is None else move[:, : len(inputs), column]
                starts[at] = _start(questions[at], inputs, slopes)
    return [starts[at] for at in range(len(questions))]


def _start(question: Question, inputs: IntArray, slopes: FloatArray | None) -> _Start:
    """Put inputs with a known sign to the right end."""
    point = question.nominal.copy()
    matters = np.zeros(len(point), dtype=bool)
    if slopes is None:
        return _Start(point, matters, inputs[:0])
    rises, falls = slopes[0] >= 0.0, slopes[1] <= 0.0
    effect = ~(rises & falls)
    matters[inputs[effect]] = True
    up, down = inputs[rises & effect], inputs[falls & effect]
    if not question.greatest:
        up, down = down, up
    point[up], point[down] = question.high[up], question.low[down]
    return _Start(point, matters, inputs[~rises & ~falls])


def _hunt(tape: Tape, question: Question, start: _Start) -> Hunt:
    """Set out to search the open inputs of a question."""
    weight = len(needed(tape, (question.target,))) * (len(start.open) + 8)
    return Hunt(
        target=question.target,
        sign=1.0 if question.greatest else -1.0,
        free=start.open,
        base=start.point,
        low=question.low[start.open][:, None],
        high=question.high[start.open][:, None],
        bound=np.array([np.inf]),
        limit=int(np.clip(WORK // weight, 256, 8192)),
    )


WORK: Final = 1_500_000
"""Instructions times slots times boxes that one question may cost: some hundred ms."""


def _found(hunt: Hunt) -> FloatArray:
    """The best point (n_inputs,) of a hunt."""
    point = hunt.base.copy()
    point[hunt.free] = hunt.at
    return point


def _attained(
    tape: Tape, questions: Sequence[Question], points: Sequence[FloatArray]
) -> list[float]:
    """Value of each question's target at its point, in chunks that need like parts of the tape."""
    by_target = sorted(range(len(questions)), key=lambda at: questions[at].target)
    values = [np.nan] * len(questions)
    for first in range(0, len(by_target), CHUNK):
        part = by_target[first : first + CHUNK]
        order = needed(tape, {questions[at].target for at in part})
        computed = evaluate_points(tape, np.stack([points[at] for at in part], axis=1), order)
        for column, at in enumerate(part):
            values[at] = float(computed[questions[at].target, column])
    return values


def _answer(
    question: Question, start: _Start, point: FloatArray, value: float, hunt: Hunt | None
) -> Extreme:
    """Say what was found and how sure it is."""
    matters = start.matters
    inside = matters & (point > question.low) & (point < question.high)
    sign = 1.0 if question.greatest else -1.0
    if not np.isfinite(value):
        return Extreme(np.nan, sign * np.inf, point, matters, inside, Proof.SEARCHED)
    if hunt is None or hunt.top <= hunt.best:
        return Extreme(value, value, point, matters, inside, Proof.EXACT)
    bound = hunt.sign * hunt.top
    proof = Proof.BOUNDED if hunt.top - hunt.best <= hunt.tolerance else Proof.SEARCHED
    return Extreme(value, bound, point, matters, inside, proof)
