"""Branch and bound for many hard questions at once: the boxes of all are columns of one sweep."""

from collections.abc import Sequence
from typing import Final

import numpy as np

from calcdoc.analysis.hunt import Hunt
from calcdoc.analysis.pattern import SMALLEST_REACH, Pattern
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import Program
from calcdoc.analysis.sweep import Boxes, sweep

COLUMNS: Final = 256
"""Boxes in one sweep: enough to hide the cost of a call, few enough to stay best first."""
CROWD: Final = 64
"""Hunts that run together; more would sweep much that each one does not need."""
POLISH_STEPS: Final = 48


def search(program: Program, hunts: Sequence[Hunt]) -> None:
    """Run all hunts to their end; they are changed in place."""
    for first in range(0, len(hunts), CROWD):
        _run(program, hunts[first : first + CROWD])
    open_ends = [hunt for hunt in hunts if hunt.top > hunt.best and hunt.goal == np.inf]
    for first in range(0, len(open_ends), CROWD):
        polish(program, open_ends[first : first + CROWD], POLISH_STEPS)


def _run(program: Program, hunts: Sequence[Hunt]) -> None:
    """Run some hunts to their end, together."""
    part, targets = program, frozenset[int]()
    rounds = 0
    while active := [hunt for hunt in hunts if not hunt.done]:
        rounds += 1
        if targets != (now := frozenset(hunt.target for hunt in active)):
            part, targets = program.part(now), now
        _advance(part, active)
        if rounds == 3:  # noqa: PLR2004 - easy questions are over by now
            polish(part, active, POLISH_STEPS // 4)


def _advance(program: Program, hunts: Sequence[Hunt]) -> None:
    """One round: sweep the most promising boxes of every hunt, evaluate points, settle."""
    share = max(1, COLUMNS // len(hunts))
    taken = [hunt.take(share) for hunt in hunts]
    swept = sweep(program, _columns(hunts, taken))
    trials, first = [], 0
    for hunt, (low, high) in zip(hunts, taken, strict=True):
        here = slice(first, first + low.shape[1])
        row = program.row[hunt.target]
        move = swept.moves[row]
        slopes = np.zeros((2, *low.shape)) if move is None else move[:, : len(low), here]
        trials.append(hunt.learn(low, high, swept.values[row][:, here], slopes))
        first = here.stop
    values = _evaluate(program, hunts, [trial.candidates for trial in trials])
    for hunt, trial, signed in zip(hunts, trials, values, strict=True):
        hunt.settle(trial, signed)


def _evaluate(
    program: Program, hunts: Sequence[Hunt], points: Sequence[FloatArray]
) -> list[FloatArray]:
    """Signed values of each hunt at its points (n_free, c); -inf where not computable."""
    columns = [_full(hunt, point) for hunt, point in zip(hunts, points, strict=True)]
    values = program.evaluate(np.concatenate(columns, axis=1))
    signed, first = [], 0
    for hunt, point in zip(hunts, points, strict=True):
        own = values[program.row[hunt.target], first : first + point.shape[1]]
        signed.append(np.where(np.isfinite(own), hunt.sign * own, -np.inf))
        first += point.shape[1]
    return signed


def _full(hunt: Hunt, free: FloatArray) -> FloatArray:
    """Columns (n_inputs, c) from values of the free inputs (n_free, c)."""
    columns = np.repeat(hunt.base[:, None], free.shape[1], axis=1)
    columns[hunt.free] = free
    return columns


def _columns(hunts: Sequence[Hunt], taken: Sequence[tuple[FloatArray, FloatArray]]) -> Boxes:
    """Boxes of all hunts side by side; each column has the free inputs of its hunt as slots."""
    lows, highs = [], []
    n_slots = max(len(hunt.free) for hunt in hunts)
    slots = np.full((n_slots, sum(low.shape[1] for low, _ in taken)), -1, dtype=np.intp)
    first = 0
    for hunt, (low, high) in zip(hunts, taken, strict=True):
        lows.append(_full(hunt, low))
        highs.append(_full(hunt, high))
        slots[: len(hunt.free), first : first + low.shape[1]] = hunt.free[:, None]
        first += low.shape[1]
    return Boxes(np.concatenate(lows, axis=1), np.concatenate(highs, axis=1), slots)


def polish(program: Program, hunts: Sequence[Hunt], n_steps: int) -> None:
    """Improve the best points by steps along each input and along all best steps together.

    With enough steps an attained value is right to about 1e-12 of its size even where the boxes
    are not small yet. The pattern of steps shrinks when nothing is better.
    """
    if not hunts:
        return
    part = program.part({hunt.target for hunt in hunts})
    active = [Pattern(hunt) for hunt in hunts if np.isfinite(hunt.best)]
    for _ in range(n_steps):
        active = [pattern for pattern in active if pattern.reach > SMALLEST_REACH]
        if not active:
            break
        points = [pattern.points() for pattern in active]
        values = _evaluate(part, [pattern.hunt for pattern in active], points)
        for pattern, own, signed in zip(active, points, values, strict=True):
            pattern.move(own, signed)
