"""Light simplification that keeps the author's order: nothing is expanded or factored.

Zeros and ones go, signs are merged, like terms are added, plain numbers are multiplied exactly, and
what stands in numerator and denominator is cancelled. A sum or a product in which none of this
happens keeps its digits, its order and its parentheses. The result is equal to what was given
wherever that has a value.
"""

from collections.abc import Iterator
from fractions import Fraction
from typing import Final

from calcdoc.frozen import Frozen, replace
from calcdoc.model.symbolic.build import (
    add,
    divide,
    multiply,
    negate,
    number,
    power,
    product,
    root,
    subtract,
    writable,
)
from calcdoc.model.symbolic.grouping import ONE, ZERO, bare, call, is_plain, plain, split_sign
from calcdoc.text.nodes import Binary, Call, Group, Negate, Node, Number, walk
from calcdoc.text.unparse import unparse

_EXACT: Final = {"exp": (0, 1), "ln": (1, 0), "log10": (1, 0), "sin": (0, 0), "cos": (0, 1)}
"""Function, an argument, and its exact value there."""
_ALIKE: Final = frozenset({"min", "max", "sum", "rss"})
"""Functions whose arguments must be of one kind."""
_INTEGER_MOST: Final = 12


class _Product(Frozen, frozen=True):
    """A number times powers, each base once, in the order in which they first stand."""

    coefficient: Fraction
    powers: tuple[tuple[Node, Fraction], ...]
    below: tuple[tuple[Node, Fraction], ...]
    """The same powers in the order in which they first stand below the fraction bar."""
    decimal: bool
    changed: bool
    """Whether numbers were multiplied or powers merged."""


def simplified(node: Node) -> Node:
    """A formula as a reader would tidy it; equal wherever the given one has a value."""
    match node:
        case Group(inner):
            within = simplified(inner)
            return node if within is inner else within
        case Negate(operand):
            tidy = negate(simplified(operand))
            return node if tidy == node else tidy
        case Binary("+" | "-"):
            return _sum(node)
        case Binary("*" | "/"):
            return _as_product(node)
        case Binary("^"):
            return _power(node)
        case Call(function) if function != "lookup":
            return _call(node)
        case _:
            return node


def _rebuilt(node: Binary) -> Node:
    """A sum or product with its operands simplified, the node itself where nothing changed."""
    left, right = simplified(node.left), simplified(node.right)
    make = {"+": add, "-": subtract, "*": multiply, "/": divide}[node.op]
    tidy = make(left, right)
    return node if tidy == node else tidy


def _terms(node: Node, sign: int) -> Iterator[tuple[int, Node]]:
    """The terms of a sum with their signs, through parentheses."""
    match node:
        case Group(inner):
            yield from _terms(inner, sign)
        case Negate(operand):
            yield from _terms(operand, -sign)
        case Binary("+" | "-" as op, left, right):
            yield from _terms(left, sign)
            yield from _terms(right, sign if op == "+" else -sign)
        case _:
            negative, body = split_sign(node)
            yield (-sign if negative else sign), body


def _sum(node: Binary) -> Node:
    tidy = _rebuilt(node)
    if not (isinstance(tidy, Binary) and tidy.op in "+-"):
        return tidy
    merged: dict[object, tuple[Fraction, _Product, Node, int]] = {}
    for sign, term in _terms(tidy, 1):
        parts = _product_of(term)
        key = tuple(sorted((unparse(base), exponent) for base, exponent in parts.powers))
        before, first, _, times = merged.get(key, (Fraction(0), parts, term, 0))
        decimal = parts.decimal or first.decimal
        first = replace(first, decimal=decimal)
        merged[key] = (before + sign * parts.coefficient, first, term, times + 1)
    if all(times == 1 for *_, times in merged.values()):
        return tidy
    whole: Node = ZERO
    for coefficient, parts, term, times in merged.values():
        if times == 1:
            same = coefficient == parts.coefficient
            whole = add(whole, term) if same else subtract(whole, term)
        elif coefficient and writable(coefficient):
            whole = add(whole, _written(coefficient, parts))
        elif coefficient:
            return tidy
    return whole


def _as_product(node: Binary) -> Node:
    tidy = _rebuilt(node)
    if not (isinstance(tidy, Binary) and tidy.op in "*/"):
        return tidy
    parts = _product_of(tidy)
    if not parts.changed or not writable(parts.coefficient):
        return tidy
    return _written(parts.coefficient, parts)


def _written(coefficient: Fraction, parts: _Product) -> Node:
    """A number times powers as a fraction: the number in front, the powers in their order."""
    above = [power(base, exponent) for base, exponent in parts.powers if exponent > 0]
    below = [power(base, -exponent) for base, exponent in parts.below if exponent < 0]
    front = number(abs(coefficient), decimal=parts.decimal)
    if isinstance(front, Number):
        above.insert(0, front)
    else:
        above.insert(0, number(abs(coefficient.numerator)))
        below.insert(0, number(coefficient.denominator))
    whole = divide(product(above), product(below))
    return negate(whole) if coefficient < 0 else whole


def _product_of(node: Node) -> _Product:
    """A term as a number times powers of distinct bases."""
    powers: dict[Node, Fraction] = {}
    under: dict[Node, None] = {}
    coefficient, n_numbers, n_powers, decimal = Fraction(1), 0, 0, False
    for base, exponent in _powers(node, Fraction(1)):
        value = plain(base)
        if value and exponent.denominator == 1:
            coefficient *= value**exponent.numerator
            n_numbers += 1
            decimal |= any(isinstance(n, Number) and not n.digits.isdigit() for n in walk(base))
        else:
            powers[base] = powers.get(base, Fraction(0)) + exponent
            if exponent < 0:
                under[base] = None
            n_powers += 1
    for base in [each for each in powers if plain(each)]:
        if powers[base].denominator == 1:  # sqrt(2)*sqrt(2)
            value = plain(base)
            assert value is not None
            coefficient *= value ** powers.pop(base).numerator
    changed = n_numbers > 1 or n_powers > len(powers)
    kept = tuple((base, exponent) for base, exponent in powers.items() if exponent)
    below = tuple((base, powers[base]) for base in under if powers.get(base))
    return _Product(coefficient, kept, below, decimal, changed)


def _powers(node: Node, exponent: Fraction) -> Iterator[tuple[Node, Fraction]]:
    """The factors of a term, each as a base with its exponent."""
    node = bare(node)
    whole = exponent.denominator == 1
    match node:
        case Binary("*" | "/" as op, left, right) if abs(exponent) == 1:
            yield from _powers(left, exponent)
            yield from _powers(right, exponent if op == "*" else -exponent)
        case Negate(operand) if abs(exponent) == 1:
            yield number(-1), Fraction(1)
            yield from _powers(operand, exponent)
        case Binary("^", base, raised) if whole and _small(plain(raised)):
            value = plain(raised)
            assert value is not None
            yield from _powers(base, exponent * value)
        case Call("sqrt", (argument,)) if whole:
            yield from _powers(argument, exponent / 2)
        case _:
            yield node, exponent


def _small(value: Fraction | None) -> bool:
    return value is not None and max(abs(value.numerator), value.denominator) <= _INTEGER_MOST


def _power(node: Binary) -> Node:
    base, exponent = simplified(node.left), simplified(node.right)
    value, raised = plain(base), plain(exponent)
    if value is not None and raised is not None and raised.denominator == 1 and _small(raised):
        if value or raised > 0:
            folded = value**raised.numerator
            decimal = any(isinstance(n, Number) and "." in n.digits for n in walk(base))
            if writable(folded):
                return number(folded, decimal=decimal)
        return node
    inner = bare(base)
    if isinstance(inner, Binary) and inner.op == "^" and raised is not None:
        first = plain(inner.right)
        if raised.denominator == 1 and first is not None:
            return power(inner.left, first * raised)
    tidy = power(base, exponent)
    return node if tidy == node else tidy


def _call(node: Call) -> Node:
    arguments = node.arguments
    if node.function == "if":
        chosen = (_of_a_kind(arguments[1]), _of_a_kind(arguments[2]))
        tidy = call("if", arguments[0], *chosen)
        return node if tidy == node else tidy
    keep = _of_a_kind if node.function in _ALIKE else simplified
    tidy = call(node.function, *(keep(each) for each in arguments))
    if node.function == "sqrt":
        rooted = root(tidy.arguments[0])
        return node if rooted == node else rooted
    exact = _EXACT.get(node.function)
    if exact and plain(tidy.arguments[0]) == exact[0]:
        return ONE if exact[1] else ZERO
    return node if tidy == node else tidy


def _of_a_kind(node: Node) -> Node:
    """An argument simplified, unless that leaves a zero that has lost its unit."""
    tidy = simplified(node)
    return node if is_plain(tidy, 0) and plain(node) is None else tidy
