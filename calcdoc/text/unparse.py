"""From tree to text: the inverse of the parser, in the author's order and digits."""

from collections.abc import Callable

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
    UnitText,
)

Leaf = Callable[[Node], str | None]


def unit_text(unit: UnitText) -> str:
    """A unit as written."""
    shown = ""
    for word in unit.words:
        joint = "1/" if not shown and word.joint == "/" else word.joint
        power = "" if word.exponent == 1 else f"^{word.exponent}"
        shown += f"{joint}{word.word}{power}"
    return shown


def unparse(node: Node, leaf: Leaf = lambda _: None) -> str:
    """The text of a tree; ``leaf`` may give another text for a node (a value for a symbol)."""
    if (given := leaf(node)) is not None:
        return given
    match node:
        case Number(digits):
            return digits
        case Quantity(digits, unit):
            return f"{digits} {unit_text(unit)}"
        case Name(name):
            return name
        case Element(name, index):
            return f"{name}[{unparse(index, leaf)}]"
        case Text(value):
            return f'"{value}"'
        case Group(inner):
            return f"({unparse(inner, leaf)})"
        case Call(function, arguments):
            return f"{function}({', '.join(unparse(each, leaf) for each in arguments)})"
        case _:
            return _operation(node, leaf)


def _operation(node: Node, leaf: Leaf) -> str:
    match node:
        case Negate(operand):
            return f"-{unparse(operand, leaf)}"
        case Not(operand):
            return f"not {unparse(operand, leaf)}"
        case Logic(word, left, right):
            return f"{unparse(left, leaf)} {word} {unparse(right, leaf)}"
        case Comparison(operands, operators):
            rest = zip(operators, operands[1:], strict=True)
            return unparse(operands[0], leaf) + "".join(f" {o} {unparse(n, leaf)}" for o, n in rest)
        case Binary(op, left, right):
            wide = f" {op} " if op in "+-" else op
            return f"{unparse(left, leaf)}{wide}{unparse(right, leaf)}"
        case _:
            raise AssertionError(node)
