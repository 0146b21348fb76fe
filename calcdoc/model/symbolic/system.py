"""Several unknowns by substitution: isolate one, put it into the others, and so on."""

from collections.abc import Mapping, Sequence
from typing import Final

from calcdoc.model.symbolic.grouping import name
from calcdoc.model.symbolic.outcome import Failure, Outcome, Roots, Solution, Step
from calcdoc.model.symbolic.simplify import simplified
from calcdoc.model.symbolic.single import single
from calcdoc.model.symbolic.trees import (
    Relation,
    mentions,
    replaced,
    size,
    spellings,
)
from calcdoc.model.symbolic.verify import is_identity

_TRIES: Final = 6


def substituted(relations: Sequence[Relation], keys: Sequence[str]) -> Outcome | None:
    """Isolate one unknown in one relation, put it into the others, and so on.

    Returns:
        The roots; a failure that is certain (a contradiction, a dependence); None when no order
        of substitution ends well.
    """
    if len(keys) == 1:
        label, left, right = relations[0]
        found = single(label, left, right, keys[0])
        if isinstance(found, tuple):
            return Roots(tuple((each,) for each in found))
        return found
    last: Outcome | None = None
    for solutions, at in _candidates(relations, keys)[:_TRIES]:
        outcome = _with_one(relations, keys, solutions, at)
        if isinstance(outcome, Roots):
            return outcome
        last = last or outcome
    return last


def _candidates(
    relations: Sequence[Relation], keys: Sequence[str]
) -> list[tuple[tuple[Solution, ...], int]]:
    """What one relation says about one unknown; a single short answer comes first."""
    found = []
    for at, (label, left, right) in enumerate(relations):
        for key in keys:
            if not (mentions(left, key) or mentions(right, key)):
                continue
            answer = single(label, left, right, key)
            if isinstance(answer, tuple):
                found.append((answer, at))
    return sorted(found, key=lambda each: (len(each[0]), size(each[0][0].tree)))


def _with_one(
    relations: Sequence[Relation], keys: Sequence[str], solutions: tuple[Solution, ...], at: int
) -> Outcome | None:
    """The other unknowns once one of them is put into the other relations."""
    key = solutions[0].unknown
    others = [each for each in keys if each != key]
    combinations: list[tuple[Solution, ...]] = []
    failure: Failure | None = None
    for first in solutions:
        put = [
            (label, replaced(left, {key: first.tree}), replaced(right, {key: first.tree}))
            for n, (label, left, right) in enumerate(relations)
            if n != at
        ]
        if (stop := _settled_already(put, others)) is not None:
            failure = stop
            continue
        outcome = substituted(put, others)
        if isinstance(outcome, Failure):
            failure = outcome
        elif outcome is not None:
            shown = spellings(relations, keys)
            lead = _lead(relations[at][0], put, first, shown[key])
            combinations += [
                _joined(first, each, lead, keys, shown) for each in outcome.combinations
            ]
    return Roots(tuple(combinations)) if combinations else failure


def _settled_already(put: Sequence[Relation], others: Sequence[str]) -> Failure | None:
    """Whether a relation that is left has no unknown any more."""
    for label, left, right in put:
        if any(mentions(side, key) for side in (left, right) for key in others):
            continue
        equal = is_identity(left, right)
        if equal:
            return Failure(
                "dependent", f"{label} says nothing that the others do not say", (label,)
            )
        if equal is False:
            return Failure("contradiction", f"{label} contradicts the others", (label,))
    return None


def _lead(label: str, put: Sequence[Relation], first: Solution, shown: str) -> tuple[Step, ...]:
    """The steps before the others are solved."""
    own = tuple(Step(f"{label}: {each.words}", each.left, each.right) for each in first.steps)
    into = tuple(Step(f"put {shown} into {other}", left, right) for other, left, right in put)
    return own + into


def _joined(
    first: Solution,
    others: tuple[Solution, ...],
    lead: tuple[Step, ...],
    keys: Sequence[str],
    shown: Mapping[str, str],
) -> tuple[Solution, ...]:
    """One combination: the others after the lead, then the first with them put in."""
    known = {each.unknown: each.tree for each in others}
    tree = simplified(replaced(first.tree, known))
    steps = lead + tuple(dict.fromkeys(step for each in others for step in each.steps))
    used = ", ".join(shown[each.unknown] for each in others if mentions(first.tree, each.unknown))
    if used:
        steps = (*steps, Step(f"put in {used}", name(shown[first.unknown]), tree))
    found = {
        each.unknown: Solution(each.unknown, each.tree, lead + each.steps, "substituted")
        for each in others
    }
    found[first.unknown] = Solution(first.unknown, tree, steps, "substituted")
    return tuple(found[key] for key in keys)
