"""The formula tree: what the author wrote, in the author's order and digits.

Two trees are equal when they say the same; places do not take part in the comparison.
"""

from collections.abc import Iterator

from calcdoc.frozen import Piece
from calcdoc.source import Span


class UnitWord(Piece, frozen=True, eq=False):
    """One word of a unit with its exponent, as in ``m^2``; ``joint`` is how it is joined on."""

    word: str
    exponent: int
    joint: str
    """``""`` for the first word, else ``"·"`` or ``"/"``."""
    span: Span


class UnitText(Piece, frozen=True, eq=False):
    """A unit as written: words joined by ``·`` or ``/``, read from left to right."""

    words: tuple[UnitWord, ...]
    span: Span


class Number(Piece, frozen=True, eq=False):
    """A number without unit, in the author's digits."""

    digits: str
    span: Span


class Quantity(Piece, frozen=True, eq=False):
    """A number with its unit, as in ``6.8 µF``."""

    digits: str
    unit: UnitText
    span: Span


class Name(Piece, frozen=True, eq=False):
    """A symbol or a constant."""

    name: str
    span: Span


class Element(Piece, frozen=True, eq=False):
    """An element of a series, as in ``I_h[3]``."""

    name: str
    index: "Node"
    span: Span


class Text(Piece, frozen=True, eq=False):
    """A text value in double quotes."""

    value: str
    span: Span


class Negate(Piece, frozen=True, eq=False):
    """A minus sign before an operand."""

    operand: "Node"
    span: Span


class Binary(Piece, frozen=True, eq=False):
    """``left op right`` with op one of ``+ - * / ^``."""

    op: str
    left: "Node"
    right: "Node"
    span: Span
    op_span: Span


class Group(Piece, frozen=True, eq=False):
    """An expression in the author's parentheses."""

    inner: "Node"
    span: Span


class Call(Piece, frozen=True, eq=False):
    """A function applied to arguments; the first of ``if`` is a condition."""

    function: str
    arguments: tuple["Node", ...]
    span: Span
    name_span: Span


class Comparison(Piece, frozen=True, eq=False):
    """``a <= b`` or ``a <= b <= c``: one more operand than operators."""

    operands: tuple["Node", ...]
    operators: tuple[str, ...]
    span: Span


class Logic(Piece, frozen=True, eq=False):
    """``left and right`` or ``left or right``."""

    word: str
    left: "Node"
    right: "Node"
    span: Span


class Not(Piece, frozen=True, eq=False):
    """``not condition``."""

    operand: "Node"
    span: Span


Node = (
    Number
    | Quantity
    | Name
    | Element
    | Text
    | Negate
    | Binary
    | Group
    | Call
    | Comparison
    | Logic
    | Not
)


def children(node: Node) -> tuple[Node, ...]:
    """The operands of a node, in the author's order."""
    match node:
        case Negate(operand) | Not(operand):
            return (operand,)
        case Binary(_, left, right) | Logic(_, left, right):
            return (left, right)
        case Group(inner):
            return (inner,)
        case Call(_, arguments):
            return arguments
        case Comparison(operands):
            return operands
        case Element(_, index):
            return (index,)
        case _:
            return ()


def walk(node: Node) -> Iterator[Node]:
    """A node and everything below it, the author's order, without recursion."""
    waiting = [node]
    while waiting:
        node = waiting.pop()
        yield node
        waiting.extend(reversed(children(node)))


def names(node: Node) -> Iterator[Name | Element]:
    """Every symbol a formula mentions, in order, with repetitions."""
    for each in walk(node):
        if isinstance(each, Name | Element):
            yield each
