"""Restates a formula in chosen quantities: the quantities between are put in."""

from collections.abc import Mapping
from collections.abc import Set as AbstractSet

from calcdoc.frozen import Frozen
from calcdoc.model.symbolic.outcome import LARGEST, Failure
from calcdoc.model.symbolic.trees import readable, replaced, size
from calcdoc.text.names import CONSTANTS, fold
from calcdoc.text.nodes import Element, Node, names

_CONSTANTS = frozenset(fold(each) for each in CONSTANTS)


class Blocked(Frozen, frozen=True):
    """The first quantity in the author's order that cannot be eliminated."""

    key: str
    circle: bool = False
    """It has a formula, but one that leads back to itself."""


class _Stopped(Exception):
    def __init__(self, answer: Blocked | Failure) -> None:
        super().__init__()
        self.answer = answer


def eliminate(
    tree: Node,
    definitions: Mapping[str, Node],
    keep: AbstractSet[str],
    *,
    most: int = LARGEST,
) -> Node | Blocked | Failure:
    """Replace quantities by their formulas until only ``keep`` and constants are left.

    Nothing is simplified: each formula stands as its author wrote it.

    Args:
        tree: The formula to restate.
        definitions: Formula of each quantity that has one, by key.
        keep: Keys that stay, whether they have a formula or not.
        most: Nodes of the largest result.

    Returns:
        The formula; what is in the way; or a failure of kind ``too large``.
    """
    closed: dict[str, Node] = {}
    try:
        return _closed(tree, definitions, keep, closed, (), most)
    except _Stopped as stopped:
        return stopped.answer


def _closed(  # noqa: PLR0913  (one recursion, its memo and its limit)
    tree: Node,
    definitions: Mapping[str, Node],
    keep: AbstractSet[str],
    closed: dict[str, Node],
    path: tuple[str, ...],
    most: int,
) -> Node:
    trees: dict[str, Node] = {}
    for each in names(tree):
        key = fold(each.name)
        if key in keep or key in trees or key in _CONSTANTS:
            continue
        if isinstance(each, Element) or key not in definitions:
            raise _Stopped(Blocked(key))
        if key in path:
            raise _Stopped(Blocked(key, circle=True))
        if key not in closed:
            inner = (*path, key)
            closed[key] = _closed(definitions[key], definitions, keep, closed, inner, most)
        trees[key] = closed[key]
    n_nodes = size(tree)
    n_nodes += sum(size(trees[k]) for e in names(tree) if (k := fold(e.name)) in trees)
    whole = (
        tree if n_nodes > 4 * most else replaced(tree, trees)
    )  # never build what is far too large
    if n_nodes > 4 * most or not readable(whole, most):
        message = f"the formula has more than {most} parts"
        raise _Stopped(Failure("too large", message, path[:1]))
    return whole
