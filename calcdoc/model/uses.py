"""Which quantities each quantity rests on, and loops that are settled opened."""

from collections.abc import Mapping

from calcdoc.frozen import Frozen
from calcdoc.model.circles import in_order
from calcdoc.model.namespace import Namespace, direct_uses
from calcdoc.problems import Finding, error
from calcdoc.text.names import fold
from calcdoc.text.scan import shown
from calcdoc.text.statements import (
    Definition,
    GivenStatement,
    RelationStatement,
    SettleStatement,
    SolvedStatement,
)

Uses = dict[str, tuple[str, ...]]


class Rests(Frozen, frozen=True):
    """What rests on what: the order of computation, and the inside of settled loops."""

    uses: Mapping[str, tuple[str, ...]]
    """For every key the keys it rests on; a settled one rests on what its loop needs."""
    order: tuple[str, ...]
    inner: Mapping[str, tuple[str, ...]]
    """Key of a settled quantity to the keys computed anew at every trial, in order."""


def find_uses(
    space: Namespace,
    relations: Mapping[str, RelationStatement],
    settled: Mapping[str, SettleStatement],
) -> tuple[Rests, list[Finding]]:
    """The order of computation, and what stands in the way of one."""
    direct = {key: _direct(key, space, relations) for key in space.quantities}
    uses, inner, findings = dict(direct), {}, []
    for key, statement in settled.items():
        if key not in direct:
            continue
        loop = _loop(key, direct)
        if loop is None:
            findings.append(_no_loop(statement))
            continue
        clash = next((each for each in loop if each in settled), None)
        if clash is not None:
            findings.append(_two_settled(statement, settled[clash]))
        members, more = in_order(
            {each: tuple(u for u in direct[each] if u in loop) for each in loop}, space.labels
        )
        findings += more
        needed = (used for each in (*members, key) for used in direct[each])
        uses[key] = tuple(dict.fromkeys(u for u in needed if u != key and u not in loop))
        inner[key] = members
    order, circles = in_order(uses, space.labels)
    return Rests(uses, order, inner), findings + circles


def _direct(
    key: str, space: Namespace, relations: Mapping[str, RelationStatement]
) -> tuple[str, ...]:
    statement = space.quantities[key]
    match statement:
        case GivenStatement():
            return ()
        case Definition():
            running = {statement.index.name.key} if statement.index else set()
            return direct_uses((statement.formula,), space, running)
        case SolvedStatement():
            trees = [
                tree
                for name in statement.relations
                if name.key in relations
                for tree in (relations[name.key].left, relations[name.key].right)
            ]
            if statement.where is not None:
                trees.append(statement.where)
            own = {unknown.symbol.key for unknown in statement.unknowns}
            return tuple(each for each in direct_uses(trees, space) if each not in own)


def _loop(start: str, uses: Mapping[str, tuple[str, ...]]) -> frozenset[str] | None:
    """The other keys on circles through ``start``; None when it is on none."""
    reached = _reach(start, uses)
    if start not in reached:
        return None
    used_by: dict[str, list[str]] = {}
    for key, used in uses.items():
        for each in used:
            used_by.setdefault(each, []).append(key)
    back = _reach(start, {key: tuple(users) for key, users in used_by.items()})
    return frozenset((reached & back) - {start})


def _reach(start: str, edges: Mapping[str, tuple[str, ...]]) -> set[str]:
    found: set[str] = set()
    waiting = list(edges.get(start, ()))
    while waiting:
        key = waiting.pop()
        if key not in found:
            found.add(key)
            waiting.extend(edges.get(key, ()))
    return found


def _no_loop(statement: SettleStatement) -> Finding:
    return error(
        "settle",
        f"{shown(statement.symbol.name)} does not depend on itself, so there is nothing to settle",
        statement.symbol.span,
        help="remove the line, or check which quantity closes the circle",
    )


def _two_settled(statement: SettleStatement, other: SettleStatement) -> Finding:
    return error(
        "settle",
        f"{shown(other.symbol.name)} is settled in the same circle as"
        f" {shown(statement.symbol.name)}",
        other.symbol.span,
        help="settle one quantity of a circle; the others follow from it",
    )


def settled_keys(statements: tuple[SettleStatement, ...]) -> dict[str, SettleStatement]:
    """Settle statements by the key of their symbol."""
    return {fold(each.symbol.name): each for each in statements}
