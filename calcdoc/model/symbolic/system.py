"""Two or more unknowns from as many relations: elimination, else substitution."""

from collections.abc import Mapping, Sequence
from itertools import product as pairs
from typing import Final

from calcdoc.model.symbolic.affine import Row, row
from calcdoc.model.symbolic.build import (
    ONE,
    divide,
    is_plain,
    multiply,
    name,
    negate,
    plain,
    split_sign,
    subtract,
)
from calcdoc.model.symbolic.outcome import LARGEST, Failure, Outcome, Roots, Solution, Step
from calcdoc.model.symbolic.simplify import simplified
from calcdoc.model.symbolic.single import single
from calcdoc.model.symbolic.trees import mentions, readable, replaced, size, spelling, words
from calcdoc.model.symbolic.verify import is_identity, is_zero
from calcdoc.text.nodes import Node

Relation = tuple[str, Node, Node]
_TRIES: Final = 6
_UNKNOWNS_MOST: Final = 8


def spellings(relations: Sequence[Relation], keys: Sequence[str]) -> dict[str, str]:
    """Each unknown as its author first typed it."""
    sides = tuple(side for _, left, right in relations for side in (left, right))
    return {key: spelling(sides, key) for key in keys}


def eliminated(relations: Sequence[Relation], keys: Sequence[str]) -> Outcome | None:
    """Solve linear relations by elimination; None when they are not linear together."""
    rows = [row(each, keys) for each in relations]
    if len(keys) > _UNKNOWNS_MOST:
        return None
    waiting = [each for each in rows if each is not None]
    if len(waiting) < len(rows):
        return None
    shown = spellings(relations, keys)
    steps: list[Step] = []
    pivots: list[tuple[str, Row]] = []
    for _ in keys:
        if (empty := next((r for r in waiting if not r.coefficients), None)) is not None:
            return _said_twice(empty, [r.relation for r in rows if r is not None])
        pivot, key = _pivot(waiting, keys)
        waiting.remove(pivot)
        pivots.append((key, pivot))
        if waiting:
            steps.append(
                Step(f"from {pivot.relation}", name(shown[key]), _solved(pivot, key, shown))
            )
        waiting = [_reduced(each, key, pivot, steps, shown) for each in waiting]
        if not all(readable(each, LARGEST) for r in waiting for each in r.coefficients.values()):
            return Failure("too large", "the formulas that solve them are too long to read")
    return _back(pivots, keys, steps, shown)


def _said_twice(empty: Row, labels: Sequence[str]) -> Failure:
    """A relation of which elimination leaves nothing but known quantities."""
    others = ", ".join(each for each in labels if each != empty.relation)
    if is_zero(empty.rest):
        message = f"{empty.relation} says nothing that {others} does not say"
        return Failure("dependent", message, tuple(labels))
    message = f"{empty.relation} contradicts {others} unless {words(empty.rest)} is zero"
    return Failure("contradiction", message, tuple(labels))


def _pivot(rows: Sequence[Row], keys: Sequence[str]) -> tuple[Row, str]:
    """The row and the unknown that are easiest to solve: coefficient ±1, then few unknowns."""

    def effort(choice: tuple[Row, str]) -> tuple[bool, bool, int]:
        each, key = choice
        coefficient = each.coefficients[key]
        return (
            not is_plain(split_sign(coefficient)[1], 1),
            plain(coefficient) is None,
            len(each.coefficients),
        )

    choices = ((each, key) for key, each in pairs(keys, rows) if key in each.coefficients)
    return min(choices, key=effort)


def _solved(pivot: Row, key: str, shown: Mapping[str, str]) -> Node:
    """A row solved for one of its unknowns, the others on the right side."""
    coefficient, rest = pivot.coefficients[key], pivot.rest
    for other, each in pivot.coefficients.items():
        if other != key:
            rest = subtract(rest, multiply(each, name(shown[other])))
    return simplified(divide(rest, coefficient))


def _reduced(each: Row, key: str, pivot: Row, steps: list[Step], shown: Mapping[str, str]) -> Row:
    """A row after an unknown is put in; the step is noted."""
    if key not in each.coefficients:
        return each
    if split_sign(pivot.coefficients[key])[0]:
        pivot = pivot.scaled(negate(ONE))
    coefficient = pivot.coefficients[key]
    after = each.without(key, pivot)
    factor = "" if is_plain(coefficient, 1) else f" and multiply by {words(coefficient)}"
    said = f"put {shown[key]} into {each.relation}{factor}"
    steps.append(Step(said, after.shown(shown), after.rest))
    return after


def _back(
    pivots: Sequence[tuple[str, Row]],
    keys: Sequence[str],
    steps: list[Step],
    shown: Mapping[str, str],
) -> Outcome:
    """Put in what is known, from the last unknown back to the first."""
    found: dict[str, Solution] = {}
    known: dict[str, Node] = {}
    for key, pivot in reversed(pivots):
        formula = _solved(pivot, key, shown)
        tree = simplified(replaced(formula, known))
        used = [shown[other] for other in known if mentions(formula, other)]
        said = f"put in {', '.join(used)}" if used else f"solve {pivot.relation} for {shown[key]}"
        if not readable(tree, LARGEST):
            return Failure("too large", f"the formula of {shown[key]} is too long to read", (key,))
        if used or steps[-1].right != tree:
            steps.append(Step(said, name(shown[key]), tree))
        known[key] = tree
        found[key] = Solution(key, tree, tuple(steps), "linear")
    return Roots((tuple(found[key] for key in keys),))


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
