"""Linear relations with several unknowns: elimination, each step named."""

from collections.abc import Mapping, Sequence
from itertools import product as pairs
from typing import Final

from calcdoc.model.symbolic.affine import Row, row
from calcdoc.model.symbolic.build import divide, multiply, negate, subtract
from calcdoc.model.symbolic.grouping import ONE, is_plain, name, plain, split_sign
from calcdoc.model.symbolic.isolate import isolate
from calcdoc.model.symbolic.outcome import LARGEST, Failure, Outcome, Roots, Solution, Step
from calcdoc.model.symbolic.simplify import simplified
from calcdoc.model.symbolic.trees import (
    Relation,
    mentions,
    readable,
    replaced,
    spellings,
    words,
)
from calcdoc.model.symbolic.verify import is_zero
from calcdoc.text.nodes import Node

_UNKNOWNS_MOST: Final = 8


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
    formulas: dict[str, Node] = {}
    originals = {
        id(one): each for one, each in zip(rows, relations, strict=True) if one is not None
    }
    for _ in keys:
        if (empty := next((r for r in waiting if not r.coefficients), None)) is not None:
            return _said_twice(empty, [r.relation for r in rows if r is not None])
        pivot, key = _pivot(waiting, keys)
        waiting.remove(pivot)
        pivots.append((key, pivot))
        if waiting:
            formula = formulas[key] = _first_formula(pivot, key, originals, shown)
            steps.append(Step(f"from {pivot.relation}", name(shown[key]), formula))
        waiting = [_reduced(each, key, pivot, steps, shown) for each in waiting]
        if not all(readable(each, LARGEST) for r in waiting for each in r.coefficients.values()):
            return Failure("too large", "the formulas that solve them are too long to read")
    return _back(pivots, formulas, steps, shown)


def _said_twice(empty: Row, labels: Sequence[str]) -> Failure:
    """A relation of which elimination leaves nothing but known quantities."""
    others = ", ".join(each for each in labels if each != empty.relation)
    if is_zero(empty.rest):
        message = f"{empty.relation} says nothing that {others} does not say"
        return Failure("dependent", message, tuple(labels))
    message = f"{empty.relation} contradicts {others} unless {words(empty.rest)} is zero"
    return Failure("contradiction", message, tuple(labels))


def _pivot(rows: Sequence[Row], keys: Sequence[str]) -> tuple[Row, str]:
    """The row and the unknown that are easiest to solve: alone, coefficient ±1, few others."""

    def effort(choice: tuple[Row, str]) -> tuple[bool, bool, bool, int]:
        each, key = choice
        coefficient = each.coefficients[key]
        return (
            len(each.coefficients) > 1,
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
    direct = is_plain(coefficient, 1) or len(pivot.coefficients) == 1
    factor = "" if direct else f" and multiply by {words(coefficient)}"
    said = f"put {shown[key]} into {each.relation}{factor}"
    steps.append(Step(said, after.shown(shown), after.rest))
    return after


def _first_formula(
    pivot: Row, key: str, originals: Mapping[int, Relation], shown: Mapping[str, str]
) -> Node:
    """What a row says about an unknown, in the author's order where the relation is untouched."""
    if (relation := originals.get(id(pivot))) is not None:
        found = isolate(relation[1], relation[2], key)
        if found is not None and len(found) == 1:
            return found[0].tree
    return _solved(pivot, key, shown)


def _back(
    pivots: Sequence[tuple[str, Row]],
    formulas: Mapping[str, Node],
    steps: list[Step],
    shown: Mapping[str, str],
) -> Outcome:
    """Put in what is known, from the last unknown back to the first."""
    found: dict[str, Solution] = {}
    known: dict[str, Node] = {}
    for key, pivot in reversed(pivots):
        formula = formulas.get(key) or _solved(pivot, key, shown)
        tree = simplified(replaced(formula, known))
        if not readable(tree, LARGEST):
            return Failure("too large", f"the formula of {shown[key]} is too long to read", (key,))
        used = [shown[other] for other in known if mentions(formula, other)]
        said = f"divide both sides by {words(pivot.coefficients[key])}"
        if used:
            said = f"put in {', '.join(used)}"
        if not any((s.left, s.right) == (name(shown[key]), tree) for s in steps):
            steps.append(Step(said, name(shown[key]), tree))
        known[key] = tree
        found[key] = Solution(key, tree, tuple(steps), "linear")
    return Roots((tuple(found[key] for key in shown),))
