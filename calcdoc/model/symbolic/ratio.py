"""Formulas as a polynomial in one unknown over factors that contain it.

Coefficients are formulas without the unknown, kept as the author grouped them.
"""

from collections.abc import Callable, Iterable
from itertools import zip_longest
from typing import Final

from calcdoc.frozen import Frozen
from calcdoc.model.constant import constant_value
from calcdoc.model.symbolic.build import add, divide, multiply, negate, power
from calcdoc.model.symbolic.grouping import ONE, ZERO, bare, name
from calcdoc.model.symbolic.trees import mentions
from calcdoc.text.names import fold
from calcdoc.text.nodes import Binary, Call, Group, Name, Negate, Node

Poly = tuple[Node, ...]
"""Coefficients, that of the zeroth power first."""
_DEGREE_MOST: Final = 6


class Ratio(Frozen, frozen=True):
    """A polynomial over a product of factors; each factor contains the unknown."""

    top: Poly
    under: tuple[Node, ...]


def ratio(node: Node, key: str) -> Ratio | None:
    """A formula as a ratio, or None when it is none or its degree is too high."""
    if not mentions(node, key):
        return Ratio((bare(node),), ())
    match node:
        case Name(text) if fold(text) == key:
            return Ratio((ZERO, ONE), ())
        case Group(inner):
            return ratio(inner, key)
        case Negate(operand):
            return _scaled(ratio(operand, key), negate)
        case Binary("^", base, exponent):
            return _raised(base, exponent, key)
        case Binary(op, left, right):
            return _combined(op, left, right, key)
        case Call("sum", arguments):
            whole: Ratio | None = Ratio((ZERO,), ())
            for each in arguments:
                whole = _added(whole, ratio(each, key), key)
            return whole
        case _:
            return None


def _combined(op: str, left: Node, right: Node, key: str) -> Ratio | None:
    match op:
        case "+":
            return _added(ratio(left, key), ratio(right, key), key)
        case "-":
            return _added(ratio(left, key), _scaled(ratio(right, key), negate), key)
        case "*":
            return _times(ratio(left, key), ratio(right, key))
        case _ if not mentions(right, key):
            return _scaled(ratio(left, key), lambda each: divide(each, right))
        case _:
            return _times(ratio(left, key), _inverse(right, key))


def _scaled(one: Ratio | None, change: Callable[[Node], Node]) -> Ratio | None:
    return one and Ratio(tuple(change(each) for each in one.top), one.under)


def _raised(base: Node, exponent: Node, key: str) -> Ratio | None:
    value = constant_value(exponent)
    if value is None or value.denominator != 1 or abs(value) > _DEGREE_MOST:
        return None
    one = ratio(base, key) if value > 0 else _inverse(base, key)
    whole: Ratio | None = Ratio((ONE,), ())
    for _ in range(abs(value.numerator)):
        whole = _times(whole, one)
    return whole


def _inverse(node: Node, key: str) -> Ratio | None:
    """One over a formula."""
    node = bare(node)
    if not mentions(node, key):
        return Ratio((divide(ONE, node),), ())
    match node:
        case Binary("*", left, right):
            return _times(_inverse(left, key), _inverse(right, key))
        case Binary("/", left, right):
            return _times(_inverse(left, key), ratio(right, key))
        case Binary("^", base, exponent):
            return _raised(base, negate(exponent), key)
        case Negate(operand):
            return _scaled(_inverse(operand, key), negate)
    one = ratio(node, key)
    if one is None:
        return None
    if not one.under:
        return Ratio((ONE,), (node,))
    return Ratio(_product(one.under, key), (shown(one.top, name(key)),))


def _times(one: Ratio | None, other: Ratio | None) -> Ratio | None:
    if one is None or other is None:
        return None
    if len(one.top) + len(other.top) - 2 > _DEGREE_MOST:
        return None
    return Ratio(times(one.top, other.top), (*one.under, *other.under))


def times(one: Poly, other: Poly) -> Poly:
    """The product of two polynomials."""
    whole: list[Node] = [ZERO] * (len(one) + len(other) - 1)
    for i, a in enumerate(one):
        for j, b in enumerate(other):
            whole[i + j] = add(whole[i + j], multiply(a, b))
    return tuple(whole)


def _added(one: Ratio | None, other: Ratio | None, key: str) -> Ratio | None:
    if one is None or other is None:
        return None
    under = common(one.under, other.under)
    left, right = over(one, under, key), over(other, under, key)
    if max(len(left), len(right)) - 1 > _DEGREE_MOST:
        return None
    return Ratio(tuple(add(a, b) for a, b in zip_longest(left, right, fillvalue=ZERO)), under)


def common(one: tuple[Node, ...], other: tuple[Node, ...]) -> tuple[Node, ...]:
    """The least product that both products of factors divide."""
    return (*one, *_missing(other, one))


def _missing(wanted: tuple[Node, ...], there: tuple[Node, ...]) -> list[Node]:
    """The factors of one product that another has not."""
    left, missing = list(there), []
    for each in wanted:
        if each in left:
            left.remove(each)
        else:
            missing.append(each)
    return missing


def over(one: Ratio, under: tuple[Node, ...], key: str) -> Poly:
    """The numerator over a larger denominator."""
    return times(one.top, _product(_missing(under, one.under), key))


def _product(factors: Iterable[Node], key: str) -> Poly:
    whole: Poly = (ONE,)
    for each in factors:
        one = ratio(each, key)
        assert one is not None
        assert not one.under
        whole = times(whole, one.top)
    return whole


def denominator(under: tuple[Node, ...]) -> Node:
    """Factors as one product, equal ones as a power."""
    whole: Node = ONE
    for each in dict.fromkeys(under):
        whole = multiply(whole, power(each, under.count(each)))
    return whole


def shown(poly: Poly, unknown: Node) -> Node:
    """A polynomial as a sum, the highest power first."""
    whole: Node = ZERO
    for degree in reversed(range(len(poly))):
        whole = add(whole, multiply(poly[degree], power(unknown, degree)))
    return whole
