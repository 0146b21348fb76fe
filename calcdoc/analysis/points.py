"""Evaluate a tape at points: every column of the inputs is one point, all columns in one pass."""

from collections.abc import Callable, Iterable, Mapping
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


def needed(tape: Tape, targets: Iterable[int]) -> tuple[int, ...]:
    """Indices of the instructions that the targets use, themselves included, ascending."""
    seen: set[int] = set()
    stack = list(targets)
    while stack:
        at = stack.pop()
        if at not in seen:
            seen.add(at)
            stack.extend(tape.instructions[at].args)
    return tuple(sorted(seen))


def evaluate_points(
    tape: Tape, inputs: FloatArray, order: Iterable[int] | None = None
) -> FloatArray:
    """Evaluate the tape on all columns at once.

    Args:
        tape: The formulas, in coherent SI.
        inputs: Shape (n_inputs, n_columns), each column one point.
        order: Instructions to compute, ascending and closed under arguments; None for all.

    Returns:
        Shape (n_instructions, n_columns); a condition is 0.0 or 1.0; what cannot be computed is
        not finite, and a row outside ``order`` is NaN. An ``if`` takes its branch alone, so what
        the other branch yields never matters.
    """
    values = np.full((len(tape.instructions), inputs.shape[1]), np.nan)
    with np.errstate(all="ignore"):
        for at in range(len(tape.instructions)) if order is None else order:
            _compute(tape.instructions[at], inputs, values, values[at])
    return values


def _compute(step: Instruction, inputs: FloatArray, values: FloatArray, out: FloatArray) -> None:
    """Compute one instruction on all columns into ``out``."""
    if (two := _TWO.get(step.op)) is not None:
        two(values[step.args[0]], values[step.args[1]], out=out)
    elif (one := _ONE.get(step.op)) is not None:
        one(values[step.args[0]], out=out)
    elif step.op is Op.CONST:
        assert step.value is not None
        out[:] = float(step.value)
    elif step.op is Op.INPUT:
        assert isinstance(step.value, int)
        out[:] = inputs[step.value]
    elif step.op is Op.POWER:
        assert isinstance(step.value, Fraction | int)
        _power(values[step.args[0]], step.value, out)
    elif step.op is Op.NOT:
        np.subtract(1.0, values[step.args[0]], out=out)
    else:
        condition, if_true, if_false = step.args
        out[:] = np.where(values[condition] != 0.0, values[if_true], values[if_false])


def _power(base: FloatArray, exponent: Fraction | int, out: FloatArray) -> None:
    """Raise to a rational exponent; the common ones as products and roots, which round better."""
    if exponent == 2:  # noqa: PLR2004
        np.multiply(base, base, out=out)
    elif exponent == -1:
        np.divide(1.0, base, out=out)
    elif exponent == Fraction(1, 2):
        np.sqrt(base, out=out)
    else:
        np.power(base, float(exponent), out=out)
