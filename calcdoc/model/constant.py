"""Values that stand in the text: exact, and found without any quantity."""

from collections.abc import Mapping
from fractions import Fraction
from typing import Final

from calcdoc.text import literal
from calcdoc.text.names import fold
from calcdoc.text.nodes import Binary, Group, Name, Negate, Node, Number, Quantity
from calcdoc.units import ONE

Running = Mapping[str, int]
"""The running index of a series, by key, and the value it has now."""
NOTHING_RUNS: Final[Running] = {}
_LARGEST_POWER: Final = 20
_LONGEST: Final = 64


def constant_value(node: Node, running: Running = NOTHING_RUNS) -> Fraction | None:
    """The exact value of an expression of plain numbers, or None; bounded in time."""
    match node:
        case Number(digits):
            return Fraction(digits)
        case Quantity(digits):
            unit = literal.resolve(node.unit)
            return Fraction(digits) * unit.factor if unit.dimension == ONE else None
        case Name(name):
            value = running.get(fold(name))
            return None if value is None else Fraction(value)
        case Group(inner):
            return constant_value(inner, running)
        case Negate(operand):
            value_ = constant_value(operand, running)
            return None if value_ is None else -value_
        case Binary(op, left, right):
            one, other = constant_value(left, running), constant_value(right, running)
            return None if one is None or other is None else _combined(op, one, other)
        case _:
            return None


def _combined(op: str, one: Fraction, other: Fraction) -> Fraction | None:
    match op:
        case "+":
            return one + other
        case "-":
            return one - other
        case "*":
            return one * other
        case "/":
            return one / other if other else None
        case _:
            small = other.denominator == 1 and abs(other) <= _LARGEST_POWER
            short = max(one.numerator.bit_length(), one.denominator.bit_length()) < _LONGEST
            return one ** int(other) if small and short and (one or other > 0) else None
