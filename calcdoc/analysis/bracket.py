"""What a record says about a root: residual, ends of the bracket, other roots, loop gain."""

from typing import Final

import numpy as np

from calcdoc.analysis.derivative import loop_slope
from calcdoc.analysis.extremes import Extreme, Question, extremes
from calcdoc.analysis.points import (
    BoolArray,
    FloatArray,
    compile_steps,
    residual_size,
    run,
    solved,
)
from calcdoc.analysis.program import plain
from calcdoc.analysis.solver import solve
from calcdoc.analysis.tape import Implicit, Op, Tape, TapeBuilder
from calcdoc.frozen import Frozen

N_SAMPLES: Final = 65
"""Points of the bracket at which the sign of the residual is looked at."""


class Ends(Frozen, frozen=True):
    """A residual at the ends of its bracket."""

    low: float
    high: float


def ends(tape: Tape, instruction: int, point: FloatArray) -> Ends:
    """Values of the residual of a root at both ends of its bracket.

    Args:
        tape: The formulas.
        instruction: The root.
        point: Inputs, shape (n_inputs,).
    """
    implicit, known = _known(tape, instruction, point[:, None])
    low, high = _along(implicit, known, np.array([0.0, 1.0]))[:, 0]
    return Ends(float(low), float(high))


def residuals(tape: Tape, instruction: int, points: FloatArray) -> FloatArray:
    """What is left of the residual at a root.

    Returns:
        Shape (n_columns,): a share of the largest term, or of the residual at the ends of the
        bracket where that is larger; zero where the root is exact, NaN where there is none.
    """
    implicit, known = _known(tape, instruction, points)
    steps = compile_steps(implicit.tape)
    values = run(steps, np.vstack((solved(implicit, steps, known), known)))
    at_ends = _along(implicit, known, np.array([0.0, 1.0]))
    size = residual_size(implicit, values, at_ends[0], at_ends[1])
    left = values[implicit.residual]
    with np.errstate(all="ignore"):
        shares: FloatArray = np.where(left == 0.0, 0.0, left / size)
    return shares


def several(tape: Tape, instruction: int, points: FloatArray) -> BoolArray:
    """Whether the residual is seen to be zero more than once in the bracket, for each column."""
    implicit, known = _known(tape, instruction, points)
    signs = np.sign(_along(implicit, known, np.linspace(0.0, 1.0, N_SAMPLES)))
    zeros = signs == 0.0
    fresh = zeros & ~np.vstack((np.zeros_like(zeros[:1]), zeros[:-1]))
    changes = signs[:-1] * signs[1:] < 0.0
    more: BoolArray = fresh.sum(axis=0) + changes.sum(axis=0) > 1
    return more


def jumps(tape: Tape, instruction: int, points: FloatArray) -> BoolArray:
    """Whether the residual changes sign in the bracket without being zero, for each column."""
    implicit, known = _known(tape, instruction, points)
    first, last = np.sign(_along(implicit, known, np.array([0.0, 1.0])))
    root = solved(implicit, compile_steps(implicit.tape), known)
    jumping: BoolArray = (first * last <= 0.0) & np.isnan(root)
    return jumping


def all_roots(tape: Tape, instruction: int, point: FloatArray) -> FloatArray:
    """The roots that are seen in the bracket at a point (n_inputs,), ascending."""
    implicit, known = _known(tape, instruction, point[:, None])
    share = np.linspace(0.0, 1.0, N_SAMPLES)
    values = _along(implicit, known, share)[:, 0]
    x = _bracket(implicit, share)
    steps, row = compile_steps(implicit.tape), implicit.residual
    found = solve(
        lambda x, _columns: run(steps, np.vstack((x, np.repeat(known, len(x), axis=1))))[row],
        x[:-1], x[1:], values[:-1], values[1:],
    )  # fmt: skip
    seen: FloatArray = np.unique(found[np.isfinite(found)])
    return seen


def loop_gain(tape: Tape, instruction: int, points: FloatArray) -> FloatArray:
    """The gain dg/dx of a quantity that settles at x = g(x); shape (n_columns,).

    With a gain of one or more it runs away: what it changes comes back larger.
    """
    builder = TapeBuilder.on(tape)
    gain = loop_slope(builder, instruction)
    part = plain(builder.tape(), (gain,))
    gains: FloatArray = part.evaluate(points)[part.row[gain]]
    return gains


def greatest_gain(
    tape: Tape, instruction: int, low: FloatArray, nominal: FloatArray, high: FloatArray
) -> Extreme:
    """The greatest size of the loop gain over a box, shape (n_inputs,) each."""
    builder = TapeBuilder.on(tape)
    size = builder.add(Op.ABS, loop_slope(builder, instruction))
    (answer,) = extremes(builder.tape(), [Question(size, True, low, nominal, high)])
    return answer


def _known(tape: Tape, instruction: int, points: FloatArray) -> tuple[Implicit, FloatArray]:
    """The implicit of a root, and its arguments (n_args, n_columns) at some points."""
    step = tape.instructions[instruction]
    assert isinstance(step.value, Implicit)
    part = plain(tape, step.args)
    return step.value, part.evaluate(points)[[part.row[arg] for arg in step.args]]


def _bracket(implicit: Implicit, share: FloatArray) -> FloatArray:
    """Points of the bracket; its ends exactly."""
    low, high = float(implicit.low), float(implicit.high)
    return np.where(share == 1.0, high, low + share * (high - low))


def _along(implicit: Implicit, known: FloatArray, share: FloatArray) -> FloatArray:
    """The residual at shares of the bracket, shape (n_shares, n_columns)."""
    n_columns = known.shape[1]
    x = np.repeat(_bracket(implicit, share), n_columns)
    inputs = np.vstack((x, np.tile(known, len(share))))
    values: FloatArray = run(compile_steps(implicit.tape), inputs)[implicit.residual]
    return values.reshape(len(share), n_columns)
