"""Solves, differentiates and rearranges formulas, keeping the author's order and digits.

Formulas go in and come out as trees. Own steps come first, each named in words; only what they
cannot do goes to SymPy, in a process of its own.
"""

from collections.abc import Collection, Sequence

from calcdoc.model.symbolic.ask_sympy import SECONDS, ask_sympy
from calcdoc.model.symbolic.derivative import derivative
from calcdoc.model.symbolic.eliminate import Blocked, eliminate
from calcdoc.model.symbolic.elimination import eliminated
from calcdoc.model.symbolic.outcome import (
    Failure,
    How,
    Kind,
    Outcome,
    Roots,
    Solution,
    Step,
)
from calcdoc.model.symbolic.simplify import simplified
from calcdoc.model.symbolic.single import is_wrong
from calcdoc.model.symbolic.system import substituted
from calcdoc.model.symbolic.trees import Relation, mentions, spellings
from calcdoc.model.symbolic.verify import is_identity
from calcdoc.text.nodes import Node

__all__ = [
    "Blocked",
    "Failure",
    "How",
    "Kind",
    "Outcome",
    "Relation",
    "Roots",
    "Solution",
    "Step",
    "derivative",
    "eliminate",
    "is_identity",
    "mentions",
    "simplified",
    "solve",
]


def solve(
    relations: Sequence[tuple[str, Node, Node]],
    unknowns: Sequence[str],
    seconds: float = SECONDS,
) -> Outcome:
    """Solve relations for as many unknowns, in closed form.

    Args:
        relations: Name, left and right side of each.
        unknowns: Keys (folded names) of what is looked for; nothing else is eliminated.
        seconds: Wall time for the symbolic engine, when it has to be asked.

    Returns:
        All combinations of roots found, each with one solution per unknown in the order asked
        for. A root that certainly does not satisfy the relations is left out; one that does so
        for some values of the symbols alone is not, so the caller puts numbers back in.
    """
    labels = tuple(label for label, _, _ in relations)
    if len(relations) != len(unknowns) or len(set(unknowns)) != len(unknowns) or not unknowns:
        message = f"{_count(set(unknowns), 'unknown')} from {_count(relations, 'relation')}"
        return Failure("not solvable", message, labels)
    shown = spellings(relations, unknowns)
    for key in unknowns:
        if not any(mentions(side, key) for _, *sides in relations for side in sides):
            message = f"{shown[key]} does not stand in {', '.join(labels)}"
            return Failure("unknown not in relation", message, (key, *labels))
    own = eliminated(relations, unknowns) if len(unknowns) > 1 else None
    own = own or substituted(relations, unknowns)
    doubtful = ("too large", "not solvable") if len(unknowns) > 1 else ("too large",)
    if isinstance(own, Failure) and own.kind not in doubtful:
        return own
    if isinstance(own, Roots) and (checked := _checked(own, relations)).combinations:
        return checked
    asked = ask_sympy(relations, unknowns, seconds)
    return own if isinstance(own, Failure) and isinstance(asked, Failure) else asked


def _count(things: Collection[object], word: str) -> str:
    return f"{len(things)} {word}{'s' * (len(things) != 1)}"


def _checked(roots: Roots, relations: Sequence[Relation]) -> Roots:
    """The combinations that are not certainly wrong."""
    kept = []
    for combination in roots.combinations:
        trees = {each.unknown: each.tree for each in combination}
        if not any(is_wrong(left, right, trees) for _, left, right in relations):
            kept.append(combination)
    return Roots(tuple(kept))
