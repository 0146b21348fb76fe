"""What undoes a power or a function, in words and as a formula."""

from collections.abc import Callable
from fractions import Fraction
from typing import Final

from calcdoc.frozen import Frozen
from calcdoc.model.constant import constant_value
from calcdoc.model.symbolic.build import (
    divide,
    multiply,
    negate,
    number,
    power,
    root,
    subtract,
    total,
)
from calcdoc.model.symbolic.grouping import ONE, bare, call, is_plain, name
from calcdoc.model.symbolic.trees import mentions, words
from calcdoc.text.nodes import Binary, Call, Node

_PRINCIPAL: Final = ", principal branch"


class Move(Frozen, frozen=True):
    """One thing done to both sides, and the sides after it."""

    words: str
    left: Node
    right: Node


def undo_power(left: Binary, right: Node, key: str) -> list[Move]:
    """Undo ``base^exponent``, the unknown in either; an even power has two roots."""
    if mentions(left.right, key):
        return _undo_exponent(left, right)
    value = constant_value(left.right)
    if value is None:
        inverse = divide(ONE, left.right)
        return [_raised(left.left, right, inverse, words(inverse))]
    if value == 0 or (value < 0 and is_plain(right, 0)):
        return []
    if value == -1:
        return [Move("take the reciprocal of both sides", left.left, divide(ONE, right))]
    even = value.denominator == 1 and value.numerator % 2 == 0
    inverse = number(1 / value)
    shown = words(inverse)
    if value == Fraction(1, 2):
        return [Move("square both sides", left.left, power(right, 2))]
    if value == 2:  # noqa: PLR2004
        move = Move("take the square root of both sides", left.left, root(right))
    else:
        move = _raised(left.left, right, inverse, shown)
    return _both_signs(move) if even else [move]


def _raised(base: Node, right: Node, exponent: Node, shown: str) -> Move:
    return Move(f"raise both sides to the power {shown}", base, power(right, exponent))


def _both_signs(move: Move) -> list[Move]:
    """A move and the same with the opposite right side, unless that is zero."""
    if is_plain(move.right, 0):
        return [move]
    other = Move(f"{move.words}, with the minus sign", move.left, negate(move.right))
    return [move, other]


def _undo_exponent(left: Binary, right: Node) -> list[Move]:
    base, exponent = left.left, left.right
    if is_plain(base, 1):
        return []
    if constant_value(base) == 10:  # noqa: PLR2004
        said = "take the logarithm to base 10 of both sides"
        return [Move(said, exponent, call("log10", right))]
    logarithm = multiply(exponent, call("ln", base))
    return [Move("take the natural logarithm of both sides", logarithm, call("ln", right))]


def undo_call(left: Call, right: Node) -> list[Move]:
    """Undo a function; none when it has no inverse, or more than one argument."""
    if left.function == "sum":
        return [Move("write out the sum", total(left.arguments), right)]
    if left.function == "rss":
        squares = total(power(each, 2) for each in left.arguments)
        return [Move("write out the root sum square", call("sqrt", squares), right)]
    argument = bare(left.arguments[0])
    return [
        Move(said, argument, inverse(right)) for said, inverse in _INVERSES.get(left.function, ())
    ]


Inverse = tuple[str, Callable[[Node], Node]]
_INVERSES: Final[dict[str, tuple[Inverse, ...]]] = {
    "sqrt": (("square both sides", lambda r: power(r, 2)),),
    "exp": (("take the natural logarithm of both sides", lambda r: call("ln", r)),),
    "ln": (("take the exponential of both sides", lambda r: call("exp", r)),),
    "log10": (("raise 10 to the power of both sides", lambda r: power(number(10), r)),),
    "sin": (
        (f"take the arc sine of both sides{_PRINCIPAL}", lambda r: call("asin", r)),
        (
            "take the arc sine of both sides, other branch",
            lambda r: subtract(name("pi"), call("asin", r)),
        ),
    ),
    "cos": (
        (f"take the arc cosine of both sides{_PRINCIPAL}", lambda r: call("acos", r)),
        ("take the arc cosine of both sides, other branch", lambda r: negate(call("acos", r))),
    ),
    "tan": ((f"take the arc tangent of both sides{_PRINCIPAL}", lambda r: call("atan", r)),),
    "asin": (("take the sine of both sides", lambda r: call("sin", r)),),
    "acos": (("take the cosine of both sides", lambda r: call("cos", r)),),
    "atan": (("take the tangent of both sides", lambda r: call("tan", r)),),
    "abs": (
        ("take away the absolute value, positive argument", lambda r: r),
        ("take away the absolute value, negative argument", negate),
    ),
}
"""Function to what undoes it, branch by branch."""
