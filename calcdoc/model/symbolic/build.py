"""Makes formula trees that print as what they mean.

``unparse`` adds no parentheses, so a tree carries a ``Group`` wherever precedence asks for one.
``binary`` puts them; the other constructors also drop what says nothing (0 +, 1 *, - -) and keep
the order of what they are given. For every tree made here from trees that a parser made, reading
its text gives it back.
"""

from collections.abc import Iterable
from fractions import Fraction
from math import isqrt
from typing import Final

from calcdoc.model.constant import constant_value
from calcdoc.source import Span
from calcdoc.text.nodes import (
    Binary,
    Call,
    Comparison,
    Group,
    Logic,
    Name,
    Negate,
    Node,
    Not,
    Number,
    Quantity,
    walk,
)
from calcdoc.units import known_word

NOWHERE: Final = Span("", 0, 0)
ZERO: Final = Number("0", NOWHERE)
ONE: Final = Number("1", NOWHERE)
CONDITION, SUM, PRODUCT, SIGN, POWER, ATOM = range(6)
_DECIMALS_MOST: Final = 12
_BITS_MOST: Final = 180
_LEVELS: Final = {"+": SUM, "-": SUM, "*": PRODUCT, "/": PRODUCT, "^": POWER}


def level(node: Node) -> int:
    """How tightly a node binds as it prints."""
    match node:
        case Logic() | Not() | Comparison():
            return CONDITION
        case Binary(op):
            return _LEVELS[op]
        case Negate():
            return SIGN
        case _:
            return ATOM


def bare(node: Node) -> Node:
    """What stands inside the outermost parentheses."""
    while isinstance(node, Group):
        node = node.inner
    return node


def fit(node: Node, needed: int) -> Node:
    """The node with exactly the parentheses that a place of this level asks for."""
    inner = bare(node)
    if level(inner) >= needed:
        return inner
    return node if isinstance(node, Group) and node.inner is inner else Group(inner, NOWHERE)


def name(text: str) -> Name:
    """A symbol."""
    return Name(text, NOWHERE)


def binary(op: str, left: Node, right: Node) -> Binary:
    """``left op right`` as it stands, with the parentheses it needs."""
    here = _LEVELS[op]
    if op == "^":
        left, right = fit(left, ATOM), fit(right, SIGN)
        if isinstance(left, Quantity):  # 2 V^2 is 2 square volts
            left = Group(left, NOWHERE)
    else:
        left, right = fit(left, here), fit(right, here + 1)
        if split_sign(right)[0]:
            right = Group(bare(right), NOWHERE)
    if op == "/" and _ends_in_quantity(left) and _begins_as_unit(right):
        left = Group(left, NOWHERE)  # 1 s/m is a unit, (1 s)/m divides by the symbol m
    return Binary(op, left, right, NOWHERE, NOWHERE)


def _ends_in_quantity(node: Node) -> bool:
    while isinstance(node, Binary | Negate):
        node = node.right if isinstance(node, Binary) else node.operand
    return isinstance(node, Quantity)


def _begins_as_unit(node: Node) -> bool:
    while isinstance(node, Binary):
        node = node.left
    return isinstance(node, Name) and known_word(node.name)


def plain(node: Node) -> Fraction | None:
    """The value of a number, a negative number or a fraction of numbers; else None."""
    match bare(node):
        case Number(digits):
            return Fraction(digits)
        case Negate(operand):
            value = plain(operand)
            return None if value is None else -value
        case Binary("/", Number(above), Number(below)) if Fraction(below):
            return Fraction(above) / Fraction(below)
        case _:
            return None


def is_plain(node: Node, value: int) -> bool:
    """Whether a node is this number as it stands."""
    return plain(node) == value


def number(value: Fraction | int, *, decimal: bool = False) -> Node:
    """A number as a tree; with ``decimal`` 0.25, otherwise 1/4."""
    value = Fraction(value)
    if value < 0:
        return negate(number(-value, decimal=decimal))
    if value.denominator == 1:
        return Number(str(value.numerator), NOWHERE)
    if decimal:
        for places in range(1, _DECIMALS_MOST + 1):
            scaled = value * 10**places
            if scaled.denominator == 1:
                digits = str(scaled.numerator).rjust(places + 1, "0")
                return Number(f"{digits[:-places]}.{digits[-places:]}", NOWHERE)
    above, below = str(value.numerator), str(value.denominator)
    return binary("/", Number(above, NOWHERE), Number(below, NOWHERE))


def writable(value: Fraction) -> bool:
    """Whether a number is short enough to be written in a formula."""
    return max(value.numerator.bit_length(), value.denominator.bit_length()) <= _BITS_MOST


def split_sign(node: Node) -> tuple[bool, Node]:
    """Whether a term begins with a minus sign, and the term without it."""
    match node:
        case Negate(operand):
            negative, rest = split_sign(operand)
            return not negative, rest
        case Group(inner) if level(inner) >= PRODUCT or isinstance(inner, Group):
            negative, rest = split_sign(inner)
            return (True, rest) if negative else (False, node)
        case Binary("*" | "/" as op, left, right):
            negative, rest = split_sign(left)
            return (True, binary(op, rest, right)) if negative else (False, node)
        case _:
            return False, node


def negate(node: Node) -> Node:
    """The opposite; a difference is turned round."""
    negative, body = split_sign(node)
    if negative or is_plain(body, 0):
        return body
    match bare(body):
        case Binary("*" | "/" as op, left, right):
            return binary(op, negate(left), right)
        case Binary("-", left, right):
            return subtract(right, left)
        case inner:
            return Negate(fit(inner, SIGN), NOWHERE)


def add(left: Node, right: Node) -> Node:
    """``left + right``."""
    if is_plain(left, 0):
        return bare(right)
    if is_plain(right, 0):
        return bare(left)
    if (folded := _folded("+", left, right)) is not None:
        return folded
    negative, body = split_sign(right)
    if negative:
        return binary("-", left, body)
    match bare(body):
        case Binary("+", first, second):
            return add(add(left, first), second)
        case Binary("-", first, second):
            return subtract(add(left, first), second)
        case inner:
            return binary("+", left, inner)


def subtract(left: Node, right: Node) -> Node:
    """``left - right``."""
    if is_plain(left, 0):
        return negate(right)
    if is_plain(right, 0):
        return bare(left)
    if (folded := _folded("-", left, right)) is not None:
        return folded
    negative, body = split_sign(right)
    return add(left, body) if negative else binary("-", left, body)


def multiply(left: Node, right: Node) -> Node:
    """``left*right``; a sign goes in front, fractions become one fraction."""
    (one, left), (other, right) = split_sign(left), split_sign(right)
    product = _product(bare(left), bare(right))
    return negate(product) if one != other else product


def _product(left: Node, right: Node) -> Node:
    if is_plain(left, 0) or is_plain(right, 0):
        return ZERO
    if is_plain(left, 1) or is_plain(right, 1):
        return right if is_plain(left, 1) else left
    if (folded := _folded("*", left, right)) is not None:
        return folded
    match right:
        case Binary("/", above, below):
            return divide(multiply(left, above), below)
        case Binary("*", first, second):
            return multiply(multiply(left, first), second)
    if isinstance(left, Binary) and left.op == "/":
        return divide(multiply(left.left, right), left.right)
    return binary("*", left, right)


def divide(left: Node, right: Node) -> Node:
    """``left/right``; fractions in fractions become one, what stands in both parts goes."""
    (one, left), (other, right) = split_sign(left), split_sign(right)
    quotient = _quotient(bare(left), bare(right))
    return negate(quotient) if one != other else quotient


def _quotient(left: Node, right: Node) -> Node:
    if is_plain(left, 0):
        return ZERO
    if is_plain(right, 1):
        return left
    if (folded := _folded("/", left, right)) is not None:
        return folded
    match left, right:
        case _, Binary("/", above, below):
            return divide(multiply(left, below), above)
        case Binary("/", above, below), _:
            return divide(above, multiply(below, right))
    above_factors, below_factors = factors(left), factors(right)
    if not (common := [each for each in below_factors if each in above_factors]):
        return binary("/", left, right)
    for each in common:
        if each in above_factors:
            above_factors.remove(each)
            below_factors.remove(each)
    return divide(product(above_factors), product(below_factors))


def _folded(op: str, left: Node, right: Node) -> Node | None:
    """Two numbers as one, where it can be written exactly."""
    one, other = plain(left), plain(right)
    if one is None or other is None or (op == "/" and not other):
        return None
    value = {"+": one + other, "-": one - other, "*": one * other, "/": one / (other or 1)}[op]
    decimal = any(
        isinstance(n, Number) and not n.digits.isdigit() for e in (left, right) for n in walk(e)
    )
    return number(value, decimal=decimal) if writable(value) else None


def factors(node: Node) -> list[Node]:
    """The factors of a product, in order; anything else is its own only factor."""
    node = bare(node)
    if isinstance(node, Binary) and node.op == "*":
        return factors(node.left) + factors(node.right)
    return [node]


def product(nodes: Iterable[Node]) -> Node:
    """The product of nodes in order; 1 of none."""
    whole: Node = ONE
    for each in nodes:
        whole = multiply(whole, each)
    return whole


def total(nodes: Iterable[Node]) -> Node:
    """The sum of nodes in order; 0 of none."""
    whole: Node = ZERO
    for each in nodes:
        whole = add(whole, each)
    return whole


def power(base: Node, exponent: Node | Fraction | int) -> Node:
    """``base^exponent``; the powers 0, 1 and 1/2 are written as what they are."""
    if isinstance(exponent, Fraction | int):
        value: Fraction | None = Fraction(exponent)
        written = number(exponent)
    else:
        value = constant_value(exponent)
        written = exponent
    base = bare(base)
    if value == 0 or is_plain(base, 1):
        return ONE
    if value == 1:
        return base
    if value == Fraction(1, 2):
        return root(base)
    if value is not None and value.denominator == 1 and value.numerator % 2 == 0:
        base = bare(split_sign(base)[1])
    if value == 2 and isinstance(base, Call) and base.function == "sqrt":  # noqa: PLR2004
        return bare(base.arguments[0])
    return binary("^", base, written)


def root(node: Node) -> Node:
    """``sqrt(node)``; exact for the square of a fraction."""
    value = plain(node)
    if value is not None and value >= 0:
        above, below = isqrt(value.numerator), isqrt(value.denominator)
        if above**2 == value.numerator and below**2 == value.denominator:
            decimal = isinstance(inner := bare(node), Number) and "." in inner.digits
            return number(Fraction(above, below), decimal=decimal)
    return call("sqrt", node)


def call(function: str, *arguments: Node) -> Call:
    """A function of arguments."""
    return Call(function, tuple(bare(each) for each in arguments), NOWHERE, NOWHERE)
