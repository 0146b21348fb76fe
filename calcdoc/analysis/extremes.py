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
from calcdoc.analysis.points import BoolArray, FloatArray, IntArray
from calcdoc.analysis.program import Program, needed, program
from calcdoc.analysis.search import search
from calcdoc.analysis.sweep import Boxes, sweep
from calcdoc.analysis.tape import Tape

CHUNK: Final = 128
"""Questions evaluated in one pass; more would compute much that each one does not need."""
CELLS: Final = 8192
"""Boxes times slots in the first sweep."""
WORK: Final = 1_500_000
"""Instructions times slots times boxes that one hard question may cost: some hundred ms."""
WORK_OF_ALL: Final = 12_000_000
"""The same for all hard questions together."""
LEAST_BOXES: Final = 96
MOST_BOXES: Final = 8192


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
    """Attained at ``point``. When the range runs to infinity it is the value at nominal, or some
    finite value; NaN where nothing was found that can be computed."""
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


def extremes(
    tape: Tape, questions: Sequence[Question], goals: Sequence[float] | None = None
) -> tuple[Extreme, ...]:
    """Answer all questions, in their order.

    Args:
        tape: The formulas, in coherent SI.
        questions: What to find; the work that a hard one may cost is shared by all.
        goals: For each question a value at which a search may stop early: it was attained, or it
            is proven to be out of reach. None to search to the end.
    """
    if not questions:
        return ()
    whole = program(tape, {question.target for question in questions})
    starts = _first_sweep(whole, questions)
    hard = [at for at, start in enumerate(starts) if start.open.size]
    hunts = {at: _hunt(whole, questions[at], starts[at], len(hard)) for at in hard}
    for at, hunt in hunts.items():
        if goals is not None:
            hunt.goal = hunt.sign * goals[at]
    search(whole, list(hunts.values()))
    points = [
        start.point if at not in hunts else _found(hunts[at]) for at, start in enumerate(starts)
    ]
    values = _attained(whole, questions, points)
    lost = [at for at, value in enumerate(values) if not np.isfinite(value)]
    for at in lost:
        points[at] = questions[at].nominal
    for at, value in zip(
        lost,
        _attained(whole, [questions[at] for at in lost], [points[at] for at in lost]),
        strict=True,
    ):
        values[at] = value
    return tuple(
        _unbounded(*row) if at in lost else _answer(*row, hunts.get(at))
        for at, row in enumerate(zip(questions, starts, points, values, strict=True))
    )


def _first_sweep(whole: Program, questions: Sequence[Question]) -> list[_Start]:
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
        swept = sweep(whole, Boxes(low, high, slots))
        for column, group in enumerate(part):
            for at in group:
                move = swept.moves[whole.row[questions[at].target]]
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


def _hunt(whole: Program, question: Question, start: _Start, n_hard: int) -> Hunt:
    """Set out to search the open inputs of a question that is one of ``n_hard``."""
    weight = len(needed(whole.tape, (whole.row[question.target],))) * (len(start.open) + 8)
    work = min(WORK, WORK_OF_ALL // n_hard)
    return Hunt(
        target=question.target,
        sign=1.0 if question.greatest else -1.0,
        free=start.open,
        base=start.point,
        low=question.low[start.open][:, None],
        high=question.high[start.open][:, None],
        bound=np.array([np.inf]),
        limit=int(np.clip(work // weight, LEAST_BOXES, MOST_BOXES)),
    )


def _found(hunt: Hunt) -> FloatArray:
    """The best point (n_inputs,) of a hunt."""
    point = hunt.base.copy()
    point[hunt.free] = hunt.at
    return point


def _attained(
    whole: Program, questions: Sequence[Question], points: Sequence[FloatArray]
) -> list[float]:
    """Value of each question's target at its point, in chunks that need like parts of the tape."""
    by_target = sorted(range(len(questions)), key=lambda at: questions[at].target)
    values = [np.nan] * len(questions)
    for first in range(0, len(by_target), CHUNK):
        some = by_target[first : first + CHUNK]
        part = whole.part({questions[at].target for at in some})
        computed = part.evaluate(np.stack([points[at] for at in some], axis=1))
        for column, at in enumerate(some):
            values[at] = float(computed[part.row[questions[at].target], column])
    return values


def _unbounded(question: Question, start: _Start, point: FloatArray, value: float) -> Extreme:
    """Nothing finite was found at the extreme: fall back to nominal."""
    bound = np.inf if question.greatest else -np.inf
    inside = start.matters & (point > question.low) & (point < question.high)
    known = value if np.isfinite(value) else np.nan
    return Extreme(known, bound, point, start.matters, inside, Proof.SEARCHED)


def _answer(
    question: Question, start: _Start, point: FloatArray, value: float, hunt: Hunt | None
) -> Extreme:
    """Say what was found and how sure it is."""
    matters = start.matters
    inside = matters & (point > question.low) & (point < question.high)
    if hunt is None or hunt.top <= hunt.best:
        return Extreme(value, value, point, matters, inside, Proof.EXACT)
    bound = hunt.sign * hunt.top
    proof = Proof.BOUNDED if hunt.top - hunt.best <= hunt.tolerance else Proof.SEARCHED
    return Extreme(value, bound, point, matters, inside, proof)
