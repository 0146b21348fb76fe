"""Parentheses, signs and numbers of formula trees.

``unparse`` adds no parentheses, so a tree carries a ``Group`` wherever precedence asks for one;
``binary`` puts them. For every tree made here from trees that a parser made, reading its text gives
it back.
"""

from fractions import Fraction
from typing import Final

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
)
from calcdoc.units import known_word

NOWHERE: Final = Span("", 0, 0)
ZERO: Final = Number("0", NOWHERE)
ONE: Final = Number("1", NOWHERE)
CONDITION, SUM, PRODUCT, SIGN, POWER, ATOM = range(6)
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


def call(function: str, *arguments: Node) -> Call:
    """A function of arguments."""
    return Call(function, tuple(bare(each) for each in arguments), NOWHERE, NOWHERE)
