"""How much an operation moves when its arguments move: interval slopes of one instruction.

A slope encloses every quotient (f(x) - f(y)) / (x - y) with x and y in the box, so it holds for
kinks and jumps too: a floor rises with a slope in [0, inf], an undecided ``if`` may jump either
way. Where an operation is undefined for a part of the box its slope is the whole line, so that
no sign is ever concluded across a pole. A slope of exactly [0, 0] means that nothing moves.

Tangents have shape (2, n_slots, n_columns): the slope with respect to the input of each slot.
None stands for all zero.
"""

from collections.abc import Callable, Mapping
from fractions import Fraction
from math import log
from typing import Final

import numpy as np

from calcdoc.analysis import intervals as iv
from calcdoc.analysis.points import BoolArray, FloatArray
from calcdoc.analysis.tape import Instruction, Op

Tangent = FloatArray | None
_LN10: Final = iv.outward(np.full((2, 1), log(10.0)))


def _one(a: FloatArray) -> FloatArray:
    return np.ones_like(a)


def _kink(a: FloatArray) -> FloatArray:
    """Slope of the absolute value."""
    return np.stack((np.where(a[0] >= 0.0, 1.0, -1.0), np.where(a[1] <= 0.0, -1.0, 1.0)))


def _step(value: FloatArray) -> FloatArray:
    """Slope of floor and ceil: nothing while the value is one integer."""
    return np.stack((np.zeros_like(value[0]), np.where(value[0] == value[1], 0.0, np.inf)))


def _arc(a: FloatArray) -> FloatArray:
    """1/sqrt(1 - a^2)."""
    inside = np.clip(a, -1.0, 1.0)
    return iv.div(_one(a), iv.sqrt(iv.sub(_one(a), iv.power(inside, Fraction(2)))))


def _bell(a: FloatArray) -> FloatArray:
    """1/(1 + a^2)."""
    return iv.div(_one(a), iv.add(_one(a), iv.power(a, Fraction(2))))


# Slope of each function of one argument, from the argument and the value.
_SLOPES: Final[Mapping[Op, Callable[[FloatArray, FloatArray], FloatArray]]] = {
    Op.SQRT: lambda a, value: iv.div(np.full_like(a, 0.5), value),
    Op.EXP: lambda _a, value: value,
    Op.LN: lambda a, _value: iv.div(_one(a), np.maximum(a, 0.0)),
    Op.LOG10: lambda a, _value: iv.div(_one(a), iv.mul(np.maximum(a, 0.0), _LN10)),
    Op.SIN: lambda a, _value: iv.cos(a),
    Op.COS: lambda a, _value: iv.neg(iv.sin(a)),
    Op.TAN: lambda a, value: iv.add(_one(a), iv.power(value, Fraction(2))),
    Op.ASIN: lambda a, _value: _arc(a),
    Op.ACOS: lambda a, _value: iv.neg(_arc(a)),
    Op.ATAN: lambda a, _value: _bell(a),
    Op.ABS: lambda a, _value: _kink(a),
    Op.FLOOR: lambda _a, value: _step(value),
    Op.CEIL: lambda _a, value: _step(value),
}


def undefined(step: Instruction, a: FloatArray) -> BoolArray:
    """Where a function of one argument is undefined, or has a pole, inside the argument ``a``."""
    gap: BoolArray = np.zeros(a.shape[1:], dtype=bool)
    if step.op in (Op.SQRT, Op.LN, Op.LOG10):
        gap = a[0] < 0.0
    elif step.op in (Op.ASIN, Op.ACOS):
        gap = (a[0] < -1.0) | (a[1] > 1.0)
    elif step.op is Op.TAN:
        gap = iv.contains_turn(a, np.pi / 2, np.pi)
    elif step.op is Op.POWER:
        assert isinstance(step.value, Fraction | int)
        if Fraction(step.value).denominator != 1:
            gap = a[0] < 0.0
        elif step.value < 0:
            gap = iv.straddles(a)
    return gap


def tangent(
    step: Instruction, args: tuple[FloatArray, ...], moves: tuple[Tangent, ...], value: FloatArray
) -> Tangent:
    """Tangent of one instruction.

    Args:
        step: The instruction; not an input or a constant.
        args: Its arguments as intervals (2, n_columns).
        moves: Their tangents.
        value: Its value as an interval (2, n_columns).
    """
    if all(move is None for move in moves):
        return None
    if (rule := _RULES.get(step.op)) is not None:
        return rule(args, moves, value)
    (a,), (move,) = args, moves
    assert move is not None
    if step.op is Op.POWER:
        assert isinstance(step.value, Fraction | int)
        slope = _power_slope(a, Fraction(step.value))
    else:
        slope = _SLOPES[step.op](a, value)
    if (gap := undefined(step, a)).any():
        slope = np.where(gap, iv.whole(slope), slope)
    return iv.mul(slope[:, None], move)


def _power_slope(a: FloatArray, exponent: Fraction) -> FloatArray:
    """p*a^(p - 1)."""
    factor = float(exponent)
    around = np.full((2, 1), factor)
    if Fraction(factor) != exponent:
        iv.outward(around)
    return iv.mul(around, iv.power(a, exponent - 1))


Args = tuple[FloatArray, ...]
Moves = tuple[Tangent, ...]


def _sum(a: Tangent, b: Tangent) -> Tangent:
    if a is None:
        return b
    return a if b is None else iv.add(a, b)


def _times(factor: FloatArray, move: Tangent) -> Tangent:
    return None if move is None else iv.mul(factor[:, None], move)


def _negated(move: Tangent) -> Tangent:
    return None if move is None else iv.neg(move)


def _quotient(args: Args, moves: Moves, value: FloatArray) -> Tangent:
    """(da - v*db)/b, which is the whole line across a pole."""
    top = _sum(moves[0], _negated(_times(value, moves[1])))
    assert top is not None
    return iv.div(top, args[1][:, None])


def _general_power(args: Args, moves: Moves, value: FloatArray) -> Tangent:
    """b*a^(b - 1)*da + a^b*ln(a)*db."""
    base, exponent = args
    by_base = iv.mul(exponent, iv.pow_(base, iv.sub(exponent, np.ones_like(exponent))))
    by_exponent = iv.mul(value, iv.ONE[Op.LN](base))
    if (gap := base[0] < 0.0).any():
        by_base = np.where(gap, iv.whole(by_base), by_base)
        by_exponent = np.where(gap, iv.whole(by_exponent), by_exponent)
    return _sum(_times(by_base, moves[0]), _times(by_exponent, moves[1]))


def _dense(move: Tangent, like: FloatArray) -> FloatArray:
    return np.zeros_like(like) if move is None else move


def _blend(a: Tangent, b: Tangent, only_a: BoolArray, only_b: BoolArray) -> Tangent:
    """Tangent of whichever of two is taken; the hull where that is undecided."""
    some = a if a is not None else b
    if some is None:
        return None
    a, b = _dense(a, some), _dense(b, some)
    hull = np.stack((np.minimum(a[0], b[0]), np.maximum(a[1], b[1])))
    return np.where(only_a, a, np.where(only_b, b, hull))


def _least(args: Args, moves: Moves, _value: FloatArray) -> Tangent:
    a, b = args
    return _blend(moves[0], moves[1], a[1] <= b[0], b[1] <= a[0])


def _greatest(args: Args, moves: Moves, _value: FloatArray) -> Tangent:
    a, b = args
    return _blend(moves[0], moves[1], a[0] >= b[1], b[0] >= a[1])


def _condition(_args: Args, moves: Moves, value: FloatArray) -> Tangent:
    """An undecided condition may jump with every input that moves one of its arguments."""
    out: FloatArray | None = None
    for move in moves:
        if move is not None:
            jump = ((move[0] != 0.0) | (move[1] != 0.0)) & (value[0] != value[1])
            here = np.where(jump, np.inf, 0.0)
            out = here if out is None else np.maximum(out, here)
    return None if out is None else np.stack((-out, out))


def _branch(args: Args, moves: Moves, _value: FloatArray) -> Tangent:
    """Either branch, and a jump with every input that may change the condition."""
    taken = _blend(moves[1], moves[2], args[0][0] != 0.0, args[0][1] == 0.0)
    return _sum(taken, moves[0])


_RULES: Final[Mapping[Op, Callable[[Args, Moves, FloatArray], Tangent]]] = {
    Op.ADD: lambda _args, moves, _value: _sum(*moves),
    Op.SUB: lambda _args, moves, _value: _sum(moves[0], _negated(moves[1])),
    Op.MUL: lambda args, moves, _value: _sum(_times(args[1], moves[0]), _times(args[0], moves[1])),
    Op.NEG: lambda _args, moves, _value: _negated(moves[0]),
    Op.DIV: _quotient,
    Op.POW: _general_power,
    Op.MIN: _least,
    Op.MAX: _greatest,
    Op.IF: _branch,
    Op.LT: _condition,
    Op.LE: _condition,
    Op.AND: _condition,
    Op.OR: _condition,
    Op.NOT: _condition,
}
