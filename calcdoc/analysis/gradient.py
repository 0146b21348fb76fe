"""Slopes of a few instructions to all inputs at one point: exact, by the chain rule backwards."""

from collections.abc import Sequence

import numpy as np

from calcdoc.analysis.derivative import local_slope
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.tape import Instruction, Op, Tape, TapeBuilder


def gradient(tape: Tape, targets: Sequence[int], point: FloatArray) -> FloatArray:
    """Partial derivatives of some instructions by all inputs.

    Args:
        tape: The formulas.
        targets: Some of its instructions.
        point: Inputs, shape (n_inputs,).

    Returns:
        Shape (n_targets, n_inputs). At a kink the derivative of the side that is taken; not finite
        where there is none.
    """
    part = plain(tape, targets)
    tape, rows = part.tape, [part.row[target] for target in targets]
    order = range(len(tape.instructions))
    builder = TapeBuilder.on(tape)
    slopes = {
        at: [local_slope(builder, at, step, place) for place in range(len(step.args))]
        for at in order
        if (step := tape.instructions[at]).op not in _CHOICES
    }
    wanted = {each for places in slopes.values() for each in places if each is not None}
    program = plain(builder.tape(), {*order, *wanted})
    values = program.evaluate(point[:, None])[:, 0]
    number = {at: float(values[row]) for at, row in program.row.items()}
    local = {
        at: _taken(step, number)
        if (step := tape.instructions[at]).op in _CHOICES
        else [0.0 if each is None else number[each] for each in slopes[at]]
        for at in order
    }
    return np.stack([_backwards(tape, order, row, local) for row in rows])


_CHOICES = (Op.ABS, Op.MIN, Op.MAX, Op.IF)


def _taken(step: Instruction, number: dict[int, float]) -> list[float]:
    """Slopes of an operation that passes one argument on."""
    first = number[step.args[0]]
    if step.op is Op.ABS:
        return [-1.0 if first < 0.0 else 1.0]
    if step.op is Op.IF:
        return [0.0, 1.0, 0.0] if first != 0.0 else [0.0, 0.0, 1.0]
    second = number[step.args[1]]
    takes_first = first <= second if step.op is Op.MIN else first >= second
    return [1.0, 0.0] if takes_first else [0.0, 1.0]


def _backwards(
    tape: Tape, order: Sequence[int], target: int, local: dict[int, list[float]]
) -> FloatArray:
    """How much the target moves with each input, from the target back to the inputs."""
    found = np.zeros(tape.n_inputs)
    moves = dict.fromkeys(order, 0.0)
    moves[target] = 1.0
    for at in reversed(order):
        step, move = tape.instructions[at], moves[at]
        if move == 0.0:
            continue
        if step.op is Op.INPUT:
            assert isinstance(step.value, int)
            found[step.value] += move
        for arg, by in zip(step.args, local[at], strict=True):
            if by != 0.0:
                moves[arg] += move * by
    return found
