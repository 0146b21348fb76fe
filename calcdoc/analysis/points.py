"""Evaluate a tape at points: every column of the inputs is one point, all columns in one pass."""

from collections.abc import Callable, Mapping, Sequence
from fractions import Fraction
from typing import Final

import numpy as np
from numpy.typing import NDArray

from calcdoc.analysis.solver import FloatArray, IntArray, solve
from calcdoc.analysis.tape import Implicit, Instruction, Op, Tape, needed

__all__ = [
    "BoolArray",
    "FloatArray",
    "IntArray",
    "Step",
    "compile_steps",
    "evaluate_points",
    "residual_size",
    "run",
    "solved",
]

BoolArray = NDArray[np.bool_]

ONE: Final[Mapping[Op, Callable[..., FloatArray]]] = {
    Op.NEG: np.negative,
    Op.SQRT: np.sqrt,
    Op.EXP: np.exp,
    Op.LN: np.log,
    Op.LOG10: np.log10,
    Op.SIN: np.sin,
    Op.COS: np.cos,
    Op.TAN: np.tan,
    Op.ASIN: np.arcsin,
    Op.ACOS: np.arccos,
    Op.ATAN: np.arctan,
    Op.ABS: np.abs,
    Op.FLOOR: np.floor,
    Op.CEIL: np.ceil,
}
TWO: Final[Mapping[Op, Callable[..., FloatArray]]] = {
    Op.ADD: np.add,
    Op.SUB: np.subtract,
    Op.MUL: np.multiply,
    Op.DIV: np.divide,
    Op.POW: np.power,
    Op.MIN: np.minimum,
    Op.MAX: np.maximum,
    Op.LT: np.less,
    Op.LE: np.less_equal,
    Op.AND: np.minimum,
    Op.OR: np.maximum,
}

JUMP: Final = 1e-6
"""A residual that stays this large, as a share of its terms, jumps over zero: there is no root."""


Step = Callable[[FloatArray, FloatArray, FloatArray], object]
"""Computes one row from the rows before it and the inputs: (values, inputs, out)."""


def evaluate_points(tape: Tape, inputs: FloatArray) -> FloatArray:
    """Evaluate the tape on all columns at once.

    Args:
        tape: The formulas, in coherent SI.
        inputs: Shape (n_inputs, n_columns), each column one point.

    Returns:
        Shape (n_instructions, n_columns); a condition is 0.0 or 1.0; what cannot be computed is
        not finite. An ``if`` takes its branch alone, so what the other branch yields never
        matters.
    """
    return run(compile_steps(tape), inputs)


def run(steps: Sequence[Step], inputs: FloatArray) -> FloatArray:
    """Evaluate compiled steps; shapes as in :func:`evaluate_points`."""
    values = np.empty((len(steps), inputs.shape[1]))
    with np.errstate(all="ignore"):
        for step, out in zip(steps, values, strict=True):
            step(values, inputs, out)
    return values


def compile_steps(tape: Tape) -> tuple[Step, ...]:
    """One function for each instruction, so that a pass looks nothing up."""
    return tuple(_step(instruction) for instruction in tape.instructions)


def _step(instruction: Instruction) -> Step:
    op, args, value = instruction.op, instruction.args, instruction.value
    if (two := TWO.get(op)) is not None:
        a, b = args
        return lambda values, _inputs, out: two(values[a], values[b], out=out)
    if (one := ONE.get(op)) is not None:
        (a,) = args
        return lambda values, _inputs, out: one(values[a], out=out)
    if op is Op.IF:
        return lambda values, _inputs, out: _choose(values, args, out)
    if op is Op.NOT:
        return lambda values, _inputs, out: np.subtract(1.0, values[args[0]], out=out)
    if isinstance(value, Implicit):
        return _root(value, args)
    assert value is not None
    if op is Op.INPUT:
        row = int(value)
        return lambda _values, inputs, out: np.copyto(out, inputs[row])
    if op is Op.CONST:
        number = float(value)
        return lambda _values, _inputs, out: out.fill(number)
    assert op is Op.POWER
    return _power(args[0], Fraction(value))


def _choose(values: FloatArray, args: tuple[int, ...], out: FloatArray) -> None:
    condition, if_true, if_false = args
    np.copyto(out, np.where(values[condition] != 0.0, values[if_true], values[if_false]))


def _power(a: int, exponent: Fraction) -> Step:
    """Raise to a rational exponent; the common ones as products and roots, which round better."""
    if exponent == 2:  # noqa: PLR2004
        return lambda values, _inputs, out: np.multiply(values[a], values[a], out=out)
    if exponent == -1:
        return lambda values, _inputs, out: np.divide(1.0, values[a], out=out)
    if exponent == Fraction(1, 2):
        return lambda values, _inputs, out: np.sqrt(values[a], out=out)
    power = float(exponent)
    return lambda values, _inputs, out: np.power(values[a], power, out=out)


def _root(implicit: Implicit, args: tuple[int, ...]) -> Step:
    """Solve for the unknown of all columns together."""
    steps = compile_steps(implicit.tape)
    index = list(args)
    return lambda values, _inputs, out: np.copyto(out, solved(implicit, steps, values[index]))


def solved(implicit: Implicit, steps: Sequence[Step], known: FloatArray) -> FloatArray:
    """The unknown for arguments (n_args, n_columns); NaN where no root is found.

    ``steps`` are those of the residual's tape.
    """
    n_columns = known.shape[1]
    row = implicit.residual
    low, high = (np.full(n_columns, float(end)) for end in (implicit.low, implicit.high))
    ends = run(steps, np.vstack((np.concatenate((low, high)), np.tile(known, 2))))[row]
    at_low, at_high = ends[:n_columns], ends[n_columns:]
    found = solve(
        lambda x, columns: run(steps, np.vstack((x, known[:, columns])))[row],
        low, high, at_low, at_high,
    )  # fmt: skip
    values = run(steps, np.vstack((found, known)))
    size = residual_size(implicit, values, at_low, at_high)
    return np.where(np.abs(values[row]) > JUMP * size, np.nan, found)


def residual_size(
    implicit: Implicit, values: FloatArray, at_low: FloatArray, at_high: FloatArray
) -> FloatArray:
    """What a residual is small against: its terms at the root, its values at the ends."""
    size = largest_term(implicit.tape, implicit.residual, values)
    return np.fmax(size, np.fmax(_finite(at_low), _finite(at_high)))


def _finite(values: FloatArray) -> FloatArray:
    """Sizes, without those that have no end."""
    return np.where(np.isfinite(values), np.abs(values), 0.0)


def largest_term(tape: Tape, at: int, values: FloatArray) -> FloatArray:
    """Size of the largest term that makes up an instruction: what a difference is small against.

    Args:
        tape: The formulas.
        at: The instruction.
        values: All values of the tape, shape (n_instructions, n_columns).

    Returns:
        Shape (n_columns,).
    """
    sizes: dict[int, FloatArray] = {}
    for each in needed(tape, (at,)):
        step = tape.instructions[each]
        terms = [sizes[arg] for arg in step.args]
        if step.op in (Op.ADD, Op.SUB, Op.NEG, Op.ABS):
            sizes[each] = np.maximum.reduce(terms)
        elif step.op is Op.MUL:
            sizes[each] = terms[0] * terms[1]
        elif step.op is Op.POWER and isinstance(step.value, Fraction | int) and step.value > 0:
            sizes[each] = np.power(terms[0], float(step.value))
        else:
            sizes[each] = np.abs(values[each])
    return sizes[at]
