"""Least and greatest values of quantities over boxes of inputs, with the points that give them.

Most questions are settled by one pass: where the slope to an input keeps its sign over the whole
box, that input stands at an end. The rest goes to branch and bound, bounded in work, so that a
hard question ends with a value that was attained and a bound that is proven. Both are values of
the tape as computed in floating point: right to rounding, about 1e-15.
"""

from collections.abc import Mapping, Sequence
from typing import Final

import numpy as np

from calcdoc.analysis.hunt import Hunt
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import Program, by_derivatives, by_structure
from calcdoc.analysis.questions import Extreme, Proof, Question
from calcdoc.analysis.search import search
from calcdoc.analysis.starts import Start, first_sweep, settle_more
from calcdoc.analysis.tape import Implicit, Tape, needed

__all__ = ["Extreme", "Proof", "Question", "extremes"]

CHUNK: Final = 128
"""Questions evaluated in one pass; more would compute much that each one does not need."""
WORK: Final = 1_500_000
"""Instructions times slots times boxes that one hard question may cost: some hundred ms."""
WORK_OF_ALL: Final = 8_000_000
"""The same for all hard questions together."""
LEAST_BOXES: Final = 32
MOST_BOXES: Final = 8192
ROOT_EFFORT: Final = 40
"""Passes through its residual that a root costs in a sweep."""


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
    whole = by_structure(tape, {question.target for question in questions})
    starts = dict(enumerate(first_sweep(whole, questions)))
    hunts: dict[int, Hunt] = {}
    if doubtful := [at for at, start in starts.items() if start.open.size]:
        part = by_derivatives(tape, {questions[at].target for at in doubtful})
        again = first_sweep(part, [questions[at] for at in doubtful])
        starts |= dict(zip(doubtful, again, strict=True))
        settle_more(part, {at: questions[at] for at in doubtful}, starts)
        hard = [at for at in doubtful if starts[at].open.size]
        hunts = {at: _hunt(part, questions[at], starts[at], len(hard)) for at in hard}
        if goals is not None:
            for at, hunt in hunts.items():
                hunt.goal = hunt.sign * goals[at]
        search(part, list(hunts.values()))
    return _answers(whole, questions, starts, hunts)


def _answers(
    whole: Program,
    questions: Sequence[Question],
    starts: Mapping[int, Start],
    hunts: Mapping[int, Hunt],
) -> tuple[Extreme, ...]:
    """Evaluate the points found; where nothing finite was found fall back to nominal."""
    points = [_found(hunts[at]) if at in hunts else starts[at].point for at in starts]
    values = _attained(whole, questions, points)
    lost = {at for at, value in enumerate(values) if not np.isfinite(value)}
    if lost:
        points = [questions[at].nominal if at in lost else points[at] for at in starts]
        values = _attained(whole, questions, points)
    return tuple(
        _unbounded(questions[at], starts[at], points[at], values[at])
        if at in lost
        else _answer(questions[at], starts[at], points[at], values[at], hunts.get(at))
        for at in starts
    )


def _hunt(part: Program, question: Question, start: Start, n_hard: int) -> Hunt:
    """Set out to search the open inputs of a question that is one of ``n_hard``."""
    weight = effort(part.tape, part.row[question.target]) * (len(start.open) + 8)
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


def effort(tape: Tape, target: int) -> int:
    """Instructions that a target costs; a root costs its residual many times."""
    return sum(
        ROOT_EFFORT * effort(step.value.tape, step.value.residual)
        if isinstance(step.value, Implicit)
        else 1
        for step in (tape.instructions[at] for at in needed(tape, (target,)))
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


def _unbounded(question: Question, start: Start, point: FloatArray, value: float) -> Extreme:
    """Nothing finite was found at the extreme: fall back to nominal."""
    bound = np.inf if question.greatest else -np.inf
    inside = start.matters & (point > question.low) & (point < question.high)
    known = value if np.isfinite(value) else np.nan
    return Extreme(known, bound, point, start.matters, inside, Proof.SEARCHED)


def _answer(
    question: Question, start: Start, point: FloatArray, value: float, hunt: Hunt | None
) -> Extreme:
    """Say what was found and how sure it is."""
    matters = start.matters
    inside = matters & (point > question.low) & (point < question.high)
    if hunt is None or hunt.top <= hunt.best:
        return Extreme(value, value, point, matters, inside, Proof.EXACT)
    bound = hunt.sign * hunt.top
    proof = Proof.BOUNDED if hunt.top - hunt.best <= hunt.tolerance else Proof.SEARCHED
    return Extreme(value, bound, point, matters, inside, proof)
