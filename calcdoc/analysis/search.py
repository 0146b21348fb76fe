"""Branch and bound for many hard questions at once: the boxes of all are columns of one sweep."""

from collections.abc import Sequence
from typing import Final

import numpy as np

from calcdoc.analysis.hunt import Hunt, Trial
from calcdoc.analysis.points import FloatArray, evaluate_points, needed
from calcdoc.analysis.sweep import Boxes, Dependence, sweep
from calcdoc.analysis.tape import Tape

COLUMNS: Final = 128
"""Boxes in one sweep: enough to hide the cost of a call, few enough to stay best first."""
POLISH_STEPS: Final = 48


def search(tape: Tape, depends: Dependence, hunts: Sequence[Hunt]) -> None:
    """Run all hunts to their end; they are changed in place."""
    rounds = 0
    while active := [hunt for hunt in hunts if not hunt.done]:
        crowd = active[:COLUMNS]
        order = needed(tape, {hunt.target for hunt in crowd})
        _advance(tape, order, depends, crowd)
        rounds += 1
        if rounds == 3:  # noqa: PLR2004 - easy questions are over by now
            for hunt in crowd:
                polish(tape, hunt)
    for hunt in hunts:
        if hunt.top > hunt.best and hunt.goal == np.inf:
            polish(tape, hunt)


def _advance(
    tape: Tape, order: Sequence[int], depends: Dependence, hunts: Sequence[Hunt]
) -> None:
    """One round: sweep the most promising boxes of every hunt, evaluate points, settle."""
    share = max(1, COLUMNS // len(hunts))
    taken = [hunt.take(share) for hunt in hunts]
    swept = sweep(tape, order, _columns(hunts, taken), depends)
    trials, first = [], 0
    for hunt, (low, high) in zip(hunts, taken, strict=True):
        here = slice(first, first + low.shape[1])
        move = swept.moves[hunt.target]
        slopes = np.zeros((2, *low.shape)) if move is None else move[:, : len(low), here]
        trials.append(hunt.learn(low, high, swept.values[hunt.target][:, here], slopes))
        first = here.stop
    _settle(tape, order, hunts, trials)


def _settle(
    tape: Tape, order: Sequence[int], hunts: Sequence[Hunt], trials: Sequence[Trial]
) -> None:
    """Evaluate the candidates of all trials in one pass and hand out the values."""
    points = [_full(hunt, trial.candidates) for hunt, trial in zip(hunts, trials, strict=True)]
    values = evaluate_points(tape, np.concatenate(points, axis=1), order)
    first = 0
    for hunt, trial in zip(hunts, trials, strict=True):
        end = first + trial.candidates.shape[1]
        hunt.settle(trial, values[hunt.target, first:end])
        first = end


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


def polish(tape: Tape, hunt: Hunt) -> None:
    """Improve the best point by steps along each input and along all their best steps together.

    Afterwards an attained value is right to about 1e-12 of its size even where the boxes are not
    small yet. The steps are a pattern that shrinks when nothing is better.
    """
    order = needed(tape, (hunt.target,))
    low, high = hunt.box
    pattern = np.array([-1.0, -0.5, -0.25, 0.25, 0.5, 1.0])
    n_free, reach = len(hunt.free), 0.25
    combined = hunt.at
    for _ in range(POLISH_STEPS):
        steps = np.repeat(hunt.at[:, None], n_free * len(pattern) + 1, axis=1)
        for row in range(n_free):
            mine = slice(row * len(pattern), (row + 1) * len(pattern))
            steps[row, mine] += pattern * (reach * hunt.width[row])
        steps[:, -1] = combined
        steps = np.clip(steps, low[:, None], high[:, None])
        values = evaluate_points(tape, _full(hunt, steps), order)[hunt.target]
        signed = np.where(np.isfinite(values), hunt.sign * values, -np.inf)
        here = signed[:-1].reshape(n_free, len(pattern))
        choice = here.argmax(axis=1)
        better = here.max(axis=1) > hunt.best
        step = np.where(better, pattern[choice] * (reach * hunt.width), 0.0)
        combined = np.clip(hunt.at + step, low, high)
        if not hunt.offer(steps, signed):
            reach *= 0.25
            if reach < 1e-15:  # noqa: PLR2004 - no float is left between
                break
