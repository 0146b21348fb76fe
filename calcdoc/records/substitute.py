"""A formula with values in place of its symbols, as text that can be read again."""

from collections.abc import Callable

from calcdoc.text.formula import parse_text
from calcdoc.text.nodes import (
    Binary,
    Call,
    Comparison,
    Element,
    Group,
    Logic,
    Name,
    Negate,
    Node,
    Not,
    Number,
    Quantity,
    Text,
)
from calcdoc.text.unparse import unparse

ValueOf = Callable[[Name | Element], str | None]
"""A symbol or element to the text of its value; None to keep the name (a constant, a series)."""


def substituted(node: Node, value_of: ValueOf) -> str:
    """The text of a formula with values; values that would read wrongly stand in parentheses."""
    return unparse(_with_values(node, value_of))


def _with_values(node: Node, value_of: ValueOf) -> Node:
    match node:
        case Name() | Element():
            return _value(node, value_of(node))
        case Group(inner):
            # A symbol's value brings its own parentheses when it needs them.
            return Group(_without_group(_with_values(inner, value_of)), node.span)
        case Negate(operand):
            return Negate(_with_values(operand, value_of), node.span)
        case Binary(op, left, right):
            base = _with_values(left, value_of)
            if op == "^" and isinstance(base, Quantity):
                base = Group(base, base.span)
            return Binary(op, base, _with_values(right, value_of), node.span, node.op_span)
        case Call(function, arguments):
            inner_ones = tuple(_without_group(_with_values(a, value_of)) for a in arguments)
            return Call(function, inner_ones, node.span, node.name_span)
        case Comparison(operands, operators):
            sides = tuple(_without_group(_with_values(each, value_of)) for each in operands)
            return Comparison(sides, operators, node.span)
        case Logic(word, left, right):
            return Logic(
                word, _with_values(left, value_of), _with_values(right, value_of), node.span
            )
        case Not(operand):
            return Not(_with_values(operand, value_of), node.span)
        case Number() | Quantity() | Text():
            return node


def _value(name: Name | Element, text: str | None) -> Node:
    if text is None:
        return name
    tree = parse_text(text)
    return Group(tree, name.span) if isinstance(tree, Negate) else tree


def _without_group(node: Node) -> Node:
    """A negative value needs no parentheses where commas or signs of comparison stand around it."""
    if isinstance(node, Group) and isinstance(node.inner, Negate):
        inner = node.inner.operand
        if isinstance(inner, Number | Quantity):
            return node.inner
    return node
