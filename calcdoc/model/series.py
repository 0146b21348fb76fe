"""Series: which elements an expression runs over, and which element an index means."""

from collections.abc import Mapping
from typing import Final

from calcdoc.model.constant import NOTHING_RUNS, Running, constant_value
from calcdoc.problems import Mistake, error
from calcdoc.text.names import fold
from calcdoc.text.nodes import Call, Element, Name, Node, children
from calcdoc.text.scan import shown

REDUCERS: Final = frozenset({"max", "min", "sum", "rss"})
"""Functions that make one value of a series."""
Sets = Mapping[str, tuple[int, ...]]
"""Key of every series to the indices it has."""


def over(node: Node, sets: Sets) -> tuple[int, ...]:
    """The indices an expression runs over because it names whole series; empty for one value.

    Raises:
        Mistake: when it names series with different indices.
    """
    found: tuple[int, ...] = ()
    for name, indices in _bare(node, sets):
        if found and indices != found:
            raise Mistake(
                error(
                    "series-form",
                    f"{shown(name.name)} has other indices than the series before it",
                    name.span,
                    help="take single elements, as in X[3]",
                )
            )
        found = indices
    return found


def _bare(node: Node, sets: Sets) -> list[tuple[Name, tuple[int, ...]]]:
    """Whole series named in an expression, outside of what reduces them to one value."""
    if isinstance(node, Name):
        indices = sets.get(fold(node.name), ())
        return [(node, indices)] if indices else []
    if isinstance(node, Call) and node.function in REDUCERS and len(node.arguments) == 1:
        over(node.arguments[0], sets)
        return []
    if isinstance(node, Element):
        return []
    return [each for child in children(node) for each in _bare(child, sets)]


def element(node: Element, sets: Sets, running: Running = NOTHING_RUNS) -> int:
    """The index of ``X[n]``, which must be one the series has.

    Raises:
        Mistake: when X is no series, or has no such element.
    """
    indices = sets.get(fold(node.name), ())
    if not indices:
        raise Mistake(
            error(
                "series-form",
                f"{shown(node.name)} is no series",
                node.span,
                help=f"a series is defined with an index: {node.name}[n] = ... for n in 1..9",
            )
        )
    value = constant_value(node.index, running)
    if value is None or value.denominator != 1:
        raise Mistake(
            error(
                "series-form",
                "an index is a whole number known from the text",
                node.index.span,
                help="write a number or the running index",
            )
        )
    if int(value) not in indices:
        raise Mistake(
            error(
                "series-index",
                f"{shown(node.name)} has no element {value}",
                node.span,
                help=f"it has {_listed(indices)}",
            )
        )
    return int(value)


def _listed(indices: tuple[int, ...]) -> str:
    few = 6
    shown_ones = [str(each) for each in indices]
    if len(shown_ones) > few:
        shown_ones = [*shown_ones[:3], "...", shown_ones[-1]]
    return ", ".join(shown_ones)
