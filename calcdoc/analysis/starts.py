"""The first sweep: most questions are settled by the signs of their slopes over the whole box."""

from collections.abc import Mapping, Sequence
from typing import Final

import numpy as np

from calcdoc.analysis.points import BoolArray, FloatArray, IntArray
from calcdoc.analysis.program import Program
from calcdoc.analysis.questions import Question
from calcdoc.analysis.slopes import Tangent
from calcdoc.analysis.sweep import Boxes, sweep
from calcdoc.frozen import Frozen

CELLS: Final = 16384
"""Boxes times slots in one sweep."""
CHUNK: Final = 256
"""Questions with boxes of their own in one sweep."""


class Start(Frozen, frozen=True):
    """What the first sweep found about a question."""

    point: FloatArray
    """Settled inputs at their end, all others at nominal."""
    matters: BoolArray
    open: IntArray
    """Inputs whose slope may have either sign."""


def first_sweep(program: Program, questions: Sequence[Question]) -> list[Start]:
    """Sweep every distinct box once and read off the slopes of all targets."""
    groups: dict[tuple[bytes, bytes], list[int]] = {}
    for at, question in enumerate(questions):
        groups.setdefault((question.low.tobytes(), question.high.tobytes()), []).append(at)
    columns = list(groups.values())
    boxes = [questions[column[0]] for column in columns]
    moving = [np.flatnonzero(box.low < box.high) for box in boxes]
    size = max(1, CELLS // max(1, *(len(inputs) for inputs in moving)))
    starts: dict[int, Start] = {}
    for first in range(0, len(columns), size):
        here = slice(first, first + size)
        moves = _sweep(program, boxes[here], moving[here])
        for column, (asked, inputs) in enumerate(zip(columns[here], moving[here], strict=True)):
            for at in asked:
                move = moves[program.row[questions[at].target]]
                slopes = None if move is None else move[:, : len(inputs), column]
                starts[at] = _start(questions[at], inputs, slopes)
    return [starts[at] for at in range(len(questions))]


def settle_more(
    program: Program, questions: Mapping[int, Question], starts: dict[int, Start]
) -> None:
    """Sweep again what is still open, with the settled inputs at their ends; changes ``starts``.

    A smaller box has narrower slopes, so that more signs show; ends when none does.
    """
    doubtful = sorted(questions, key=lambda at: questions[at].target)
    for first in range(0, len(doubtful), CHUNK):
        some = [at for at in doubtful[first : first + CHUNK] if starts[at].open.size]
        part = program.part({questions[at].target for at in some})
        while some:
            narrowed = [_narrowed(questions[at], starts[at]) for at in some]
            progress = []
            for at, new in zip(some, first_sweep(part, narrowed), strict=True):
                old = starts[at]
                matters = old.matters.copy()
                matters[old.open] = new.matters[old.open]
                starts[at] = Start(new.point, matters, new.open)
                if 0 < len(new.open) < len(old.open):
                    progress.append(at)
            some = progress


def _narrowed(question: Question, start: Start) -> Question:
    """The part of the box in which the extreme lies: settled inputs stand still."""
    low, high = start.point.copy(), start.point.copy()
    low[start.open] = question.low[start.open]
    high[start.open] = question.high[start.open]
    return Question(question.target, question.greatest, low, start.point, high)


def _sweep(
    program: Program, boxes: Sequence[Question], moving: Sequence[IntArray]
) -> list[Tangent]:
    """Tangents of all rows over some boxes, with the moving inputs of each as its slots."""
    slots = np.full((max(len(inputs) for inputs in moving), len(boxes)), -1, dtype=np.intp)
    for column, inputs in enumerate(moving):
        slots[: len(inputs), column] = inputs
    low = np.stack([box.low for box in boxes], axis=1)
    high = np.stack([box.high for box in boxes], axis=1)
    return sweep(program, Boxes(low, high, slots)).moves


def _start(question: Question, inputs: IntArray, slopes: FloatArray | None) -> Start:
    """Put inputs with a known sign to the right end."""
    point = question.nominal.copy()
    matters = np.zeros(len(point), dtype=bool)
    if slopes is None:
        return Start(point, matters, inputs[:0])
    rises, falls = slopes[0] >= 0.0, slopes[1] <= 0.0
    effect = ~(rises & falls)
    matters[inputs[effect]] = True
    up, down = inputs[rises & effect], inputs[falls & effect]
    if not question.greatest:
        up, down = down, up
    point[up], point[down] = question.high[up], question.low[down]
    return Start(point, matters, inputs[~rises & ~falls])
