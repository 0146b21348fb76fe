"""Evaluate a tape at points: every column of the inputs is one point, all columns in one pass."""

from collections.abc import Callable, Mapping, Sequence
from fractions import Fraction
from typing import Final

import numpy as np
from numpy.typing import NDArray

from calcdoc.analysis.tape import Instruction, Op, Tape

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]
IntArray = NDArray[np.intp]

_ONE: Final[Mapping[Op, Callable[..., FloatArray]]] = {
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
_TWO: Final[Mapping[Op, Callable[..., FloatArray]]] = {
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
    if (two := _TWO.get(op)) is not None:
        a, b = args
        return lambda values, _inputs, out: two(values[a], values[b], out=out)
    if (one := _ONE.get(op)) is not None:
        (a,) = args
        return lambda values, _inputs, out: one(values[a], out=out)
    if op is Op.IF:
        return lambda values, _inputs, out: _choose(values, args, out)
    if op is Op.NOT:
        return lambda values, _inputs, out: np.subtract(1.0, values[args[0]], out=out)
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
