"""Sums, products and powers that drop what says nothing and keep the order they are given.

``0 +``, ``1 *`` and double signs go, fractions of fractions become one, numbers are computed
exactly. Parentheses stand where precedence asks for them (see ``grouping``).
"""

from collections.abc import Iterable
from fractions import Fraction
from math import isqrt
from typing import Final

from calcdoc.model.constant import constant_value
from calcdoc.model.symbolic.grouping import (
    NOWHERE,
    ONE,
    SIGN,
    ZERO,
    bare,
    binary,
    call,
    fit,
    is_plain,
    plain,
    split_sign,
)
from calcdoc.text.nodes import (
    Binary,
    Call,
    Negate,
    Node,
    Number,
    walk,
)

_DECIMALS_MOST: Final = 12
_BITS_MOST: Final = 180


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


def terms(node: Node) -> list[tuple[bool, Node]]:
    """The terms of a sum, each with whether it is subtracted; parentheses are one term."""
    if isinstance(node, Binary) and node.op in "+-":
        negative, term = split_sign(node.right)
        return [*terms(node.left), (negative != (node.op == "-"), term)]
    return [split_sign(node)]


def positive_first(node: Node) -> Node:
    """A sum that does not begin with a minus sign if that can be helped: ``a - b``, not ``-b + a``.

    For sums of our own making alone: the author's keep their order.
    """
    found = terms(bare(node))
    if not found[0][0] or all(negative for negative, _ in found):
        return node
    return total(negate(each) if minus else each for minus, each in sorted(found, key=_is_minus))


def _is_minus(term: tuple[bool, Node]) -> bool:
    return term[0]
