"""Questions about formula trees: where a symbol stands, how large they are, and replacing."""

from collections.abc import Callable, Iterator, Mapping, Sequence
from typing import Final

from calcdoc.model.symbolic.grouping import NOWHERE, SIGN, SUM, bare, binary, fit
from calcdoc.text.names import fold
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
    children,
    names,
    walk,
)
from calcdoc.text.unparse import unparse

Relation = tuple[str, Node, Node]
"""Name, left side, right side."""
_TALLEST: Final = 100
_DEEPEST: Final = 50


def count(node: Node, key: str) -> int:
    """How often a symbol stands in a tree; a series counts by its name."""
    return sum(fold(each.name) == key for each in names(node))


def mentions(node: Node, key: str) -> bool:
    """Whether a symbol stands in a tree."""
    return any(fold(each.name) == key for each in names(node))


def spelling(nodes: Iterator[Node] | tuple[Node, ...], key: str) -> str:
    """A symbol as the author first typed it in these trees, or its key."""
    found = (each.name for node in nodes for each in names(node) if fold(each.name) == key)
    return next(found, key)


def spellings(relations: Sequence[Relation], keys: Sequence[str]) -> dict[str, str]:
    """Each unknown as its author first typed it."""
    sides = tuple(side for _, left, right in relations for side in (left, right))
    return {key: spelling(sides, key) for key in keys}


def words(node: Node) -> str:
    """A tree as it stands in a sentence."""
    return unparse(bare(node))


def size(node: Node) -> int:
    """Number of nodes."""
    return sum(1 for _ in walk(node))


def readable(node: Node, most: int) -> bool:
    """Whether a tree has at most ``most`` nodes and can be read back by the parser."""
    waiting = [(node, 1, 0)]
    seen = 0
    while waiting:
        each, height, depth = waiting.pop()
        seen += 1
        if seen > most or height > _TALLEST or depth > _DEEPEST:
            return False
        nests = not isinstance(each, Binary) or each.op == "^"
        waiting.extend((child, height + 1, depth + nests) for child in children(each))
    return True


def replaced(node: Node, trees: Mapping[str, Node]) -> Node:
    """A tree with symbols replaced by trees, in parentheses where they need them.

    What does not mention them stays as the author wrote it, and nothing is simplified.
    """

    def leaf(name: Name) -> Node:
        return trees.get(fold(name.name), name)

    return _mapped(node, leaf)


def _mapped(node: Node, leaf: Callable[[Name], Node]) -> Node:
    if isinstance(node, Name):
        return leaf(node)
    before = children(node)
    after = tuple(_mapped(each, leaf) for each in before)
    if all(new is old for new, old in zip(after, before, strict=True)):
        return node
    return _with(node, after)


def _with(node: Node, parts: tuple[Node, ...]) -> Node:
    """A node with other operands, in parentheses where they need them."""
    match node:
        case Group():
            return Group(bare(parts[0]), NOWHERE)
        case Negate():
            return Negate(fit(parts[0], SIGN), NOWHERE)
        case Binary(op):
            return binary(op, *parts)
        case Call(function):
            return Call(function, tuple(bare(each) for each in parts), NOWHERE, NOWHERE)
        case Element(series):
            return Element(series, fit(parts[0], SUM), NOWHERE)
        case Comparison(_, operators):
            return Comparison(tuple(fit(each, SUM) for each in parts), operators, NOWHERE)
        case Logic(word):
            return Logic(word, parts[0], parts[1], NOWHERE)
        case Not():
            return Not(parts[0], NOWHERE)
        case _:
            raise AssertionError(node)
