"""The derivative of an instruction as further instructions: exact, by the chain rule.

At a kink (``abs``, ``min``, ``max``, a condition) it is the derivative of the side that is taken;
jumps of ``floor``, ``ceil`` and conditions have no part in it.
"""

from collections.abc import Callable, Mapping
from fractions import Fraction
from math import log
from typing import Final

from calcdoc.analysis.tape import Implicit, Instruction, Op, TapeBuilder, needed

Derivative = int | None
"""Instruction of a derivative; None for zero everywhere."""


def derivative(builder: TapeBuilder, target: int, by: int) -> Derivative:
    """Add the derivative of one instruction by another that it uses, an input or a root.

    Args:
        builder: Holds both; the indices so far stay.
        target: What is differentiated.
        by: What it is differentiated by; all that it does not use stands still.
    """
    moves: dict[int, Derivative] = {by: _number(builder, 1)}
    tape = builder.tape()
    for at in needed(tape, (target,)):
        if at not in moves:
            step = tape.instructions[at]
            args = [moves[arg] for arg in step.args]
            still = all(move is None for move in args)
            moves[at] = None if still else _chain(builder, at, step, args)
    return moves.get(target)


def root_slope(builder: TapeBuilder, at: int, place: int) -> Derivative:
    """Add dx/dy = -(dr/dy)/(dr/dx) of a root by its argument at ``place``."""
    step = builder.tape().instructions[at]
    assert isinstance(step.value, Implicit)
    inner = TapeBuilder.on(step.value.tape)
    top, bottom = (
        derivative(inner, step.value.residual, inner.add(Op.INPUT, value=column))
        for column in (place + 1, 0)
    )
    if top is None or bottom is None:
        return None
    new = builder.include(inner.tape(), (top, bottom), (at, *step.args))
    return builder.add(Op.NEG, builder.add(Op.DIV, new[top], new[bottom]))


def loop_slope(builder: TapeBuilder, at: int) -> int:
    """Add the loop gain dg/dx at a quantity that settles at x = g(x)."""
    step = builder.tape().instructions[at]
    assert isinstance(step.value, Implicit)
    assert step.value.loop is not None
    inner = TapeBuilder.on(step.value.tape)
    gain = derivative(inner, step.value.loop, inner.add(Op.INPUT, value=0))
    if gain is None:
        return _number(builder, 0)
    return builder.include(inner.tape(), (gain,), (at, *step.args))[gain]


def _number(builder: TapeBuilder, value: Fraction | float) -> int:
    exact = Fraction(value) if isinstance(value, int) else value
    return builder.add(Op.CONST, value=exact)


def _chain(builder: TapeBuilder, at: int, step: Instruction, moves: list[Derivative]) -> Derivative:
    """Sum of slope times move over the arguments of an instruction."""
    if step.op in _CHOICES:
        return _CHOICES[step.op](builder, step.args, moves)
    total: Derivative = None
    for place, move in enumerate(moves):
        if move is not None:
            slope = local_slope(builder, at, step, place)
            if slope is not None:
                part = _times(builder, slope, move)
                total = part if total is None else builder.add(Op.ADD, total, part)
    return total


def _times(builder: TapeBuilder, a: int, b: int) -> int:
    """Product, without factors of one."""
    one = _number(builder, 1)
    if a == one:
        return b
    return a if b == one else builder.add(Op.MUL, a, b)


def local_slope(builder: TapeBuilder, at: int, step: Instruction, place: int) -> Derivative:
    """Derivative of an instruction by its argument at ``place``."""
    if step.op is Op.ROOT:
        return root_slope(builder, at, place)
    if step.op is Op.POWER:
        assert isinstance(step.value, Fraction | int)
        exponent = Fraction(step.value)
        factor = _number(builder, exponent)
        if exponent == 1:
            return factor
        power = builder.add(Op.POWER, step.args[0], value=exponent - 1)
        return builder.add(Op.MUL, factor, power)
    rule = _SLOPES.get(step.op)
    return None if rule is None else rule(builder, at, step.args)[place]


Args = tuple[int, ...]
Rule = Callable[[TapeBuilder, int, Args], tuple[int, ...]]


def _quotient(builder: TapeBuilder, at: int, args: Args) -> tuple[int, ...]:
    by_top = builder.add(Op.POWER, args[1], value=Fraction(-1))
    by_bottom = builder.add(Op.NEG, builder.add(Op.DIV, at, args[1]))
    return by_top, by_bottom


def _general_power(builder: TapeBuilder, at: int, args: Args) -> tuple[int, ...]:
    base, exponent = args
    less = builder.add(Op.SUB, exponent, _number(builder, 1))
    by_base = builder.add(Op.MUL, exponent, builder.add(Op.POW, base, less))
    return by_base, builder.add(Op.MUL, at, builder.add(Op.LN, base))


def _over(builder: TapeBuilder, bottom: int) -> tuple[int, ...]:
    return (builder.add(Op.POWER, bottom, value=Fraction(-1)),)


def _square(builder: TapeBuilder, a: int) -> int:
    return builder.add(Op.POWER, a, value=Fraction(2))


def _arc(builder: TapeBuilder, a: int) -> int:
    """1/sqrt(1 - a^2)."""
    rest = builder.add(Op.SUB, _number(builder, 1), _square(builder, a))
    return builder.add(Op.POWER, rest, value=Fraction(-1, 2))


_SLOPES: Final[Mapping[Op, Rule]] = {
    Op.ADD: lambda b, _at, _args: (_number(b, 1),) * 2,
    Op.SUB: lambda b, _at, _args: (_number(b, 1), _number(b, -1)),
    Op.MUL: lambda _b, _at, args: (args[1], args[0]),
    Op.DIV: _quotient,
    Op.NEG: lambda b, _at, _args: (_number(b, -1),),
    Op.POW: _general_power,
    Op.SQRT: lambda b, at, _args: _over(b, b.add(Op.MUL, _number(b, 2), at)),
    Op.EXP: lambda _b, at, _args: (at,),
    Op.LN: lambda b, _at, args: _over(b, args[0]),
    Op.LOG10: lambda b, _at, args: _over(b, b.add(Op.MUL, args[0], _number(b, log(10.0)))),
    Op.SIN: lambda b, _at, args: (b.add(Op.COS, args[0]),),
    Op.COS: lambda b, _at, args: (b.add(Op.NEG, b.add(Op.SIN, args[0])),),
    Op.TAN: lambda b, at, _args: (b.add(Op.ADD, _number(b, 1), _square(b, at)),),
    Op.ASIN: lambda b, _at, args: (_arc(b, args[0]),),
    Op.ACOS: lambda b, _at, args: (b.add(Op.NEG, _arc(b, args[0])),),
    Op.ATAN: lambda b, _at, args: _over(b, b.add(Op.ADD, _number(b, 1), _square(b, args[0]))),
}
"""Slope to each argument; operations that are not here stand still between their jumps."""


def _either(builder: TapeBuilder, condition: int, yes: Derivative, no: Derivative) -> Derivative:
    """One of two derivatives."""
    if yes is None and no is None:
        return None
    zero = _number(builder, 0)
    return builder.add(Op.IF, condition, zero if yes is None else yes, zero if no is None else no)


def _absolute(builder: TapeBuilder, args: Args, moves: list[Derivative]) -> Derivative:
    (a,), (move,) = args, moves
    assert move is not None
    negative = builder.add(Op.LT, a, _number(builder, 0))
    return builder.add(Op.IF, negative, builder.add(Op.NEG, move), move)


_CHOICES: Final[Mapping[Op, Callable[[TapeBuilder, Args, list[Derivative]], Derivative]]] = {
    Op.ABS: _absolute,
    Op.MIN: lambda b, args, moves: _either(b, b.add(Op.LE, args[0], args[1]), *moves),
    Op.MAX: lambda b, args, moves: _either(b, b.add(Op.LE, args[1], args[0]), *moves),
    Op.IF: lambda b, args, moves: _either(b, args[0], moves[1], moves[2]),
}
