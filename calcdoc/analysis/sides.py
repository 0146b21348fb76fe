"""Criteria, cross-checks, measurements and discharges as instructions of the tape."""

from collections.abc import Iterator
from fractions import Fraction
from typing import Final

from calcdoc.analysis.formulas import is_constant
from calcdoc.analysis.tape import Op
from calcdoc.analysis.working import Working
from calcdoc.frozen import Frozen
from calcdoc.model.model import Compared, Discharge, Judged, Measured, Pictured
from calcdoc.text.nodes import Binary, Name, Node

SAFE_VOLTAGE: Final = Fraction(60)
"""Volts a stored charge may keep: 60 V d.c., the residual voltage of IEC 60204-1 (6.2.4)."""


class Side(Frozen, frozen=True):
    """One limit of a criterion, as instructions of the tape."""

    value: int
    limit: int
    requirement: int
    """Limit less value, counted so that it must not be negative, less the margin asked for."""
    relation: str
    """Between value and limit, value first."""
    value_tree: Node
    limit_tree: Node
    element: int | None
    """The element of the series it is about, for a criterion over a series."""
    when: int | None = None
    """The condition under which the limit counts."""
    target: int = 0
    """What is to be least: the requirement; where its condition is false, the ceiling."""
    ceiling: int | None = None
    """The column of a value that no requirement reaches, for a criterion with a condition."""


class Check(Frozen, frozen=True):
    """A cross-check as instructions: its sides, and what must not be negative."""

    first: int
    second: int
    difference: int
    """First less second; as a share of the second where a share is allowed."""
    share: Binary | None
    """That share as a formula: the origin of its instruction; the author does not write it."""


class Against(Frozen, frozen=True):
    """The limit of a figure as instructions."""

    limit: int
    difference: int
    """What is drawn less the limit."""


def criterion_sides(working: Working, judged: Judged) -> tuple[Side, ...]:
    """The limits of a criterion, for every element when it is judged over a series."""
    working.owner = judged.statement.id.key
    index = judged.statement.clauses.index
    if index is None:
        return tuple(_limits(working, judged, None))
    found: list[Side] = []
    for element in index.values:
        working.running, working.element = {index.name.key: element}, element
        found += _limits(working, judged, element)
    working.running, working.element = {}, None
    return tuple(found)


def _limits(working: Working, judged: Judged, element: int | None) -> Iterator[Side]:
    """The one limit, or the lower one before the upper one."""
    trees, operators = judged.statement.operands, judged.statement.operators
    pairs: tuple[tuple[Node, Node, str], ...]
    if len(trees) == 3:  # noqa: PLR2004  (two limits)
        low, value, high = trees
        pairs = ((value, low, _turned(operators[0])), (value, high, operators[1]))
    else:
        left, right = trees
        turned = is_constant(left) and not is_constant(right)
        pairs = ((right, left, _turned(operators[0])) if turned else (left, right, operators[0]),)
    for value, limit, relation in pairs:
        yield _side(working, judged, value, limit, relation, element)


def _side(  # noqa: PLR0913  (a comparison and where it stands)
    working: Working, judged: Judged, value: Node, limit: Node, relation: str, element: int | None
) -> Side:
    value_at, limit_at = working.node(value), working.node(limit)
    pair = (limit_at, value_at) if relation[0] == "<" else (value_at, limit_at)
    slack = working.builder.add(Op.SUB, *pair)
    working.origins.setdefault(slack, value)
    requirement = _less_margin(working, judged, slack, limit_at)
    when, target, ceiling = _conditioned(working, judged, requirement)
    return Side(
        value_at, limit_at, requirement, relation, value, limit, element, when, target, ceiling
    )


def _conditioned(
    working: Working, judged: Judged, requirement: int
) -> tuple[int | None, int, int | None]:
    """The requirement where its condition is true, else a value that is set above all of them."""
    if judged.statement.clauses.when is None:
        return None, requirement, None
    when = working.node(judged.statement.clauses.when)
    column = working.new_column(0.0, 0.0, 0.0)
    ceiling = working.builder.add(Op.INPUT, value=column)
    target = working.builder.add(Op.IF, when, requirement, ceiling)
    working.origins.setdefault(target, working.origins[requirement])
    return when, target, column


def _less_margin(working: Working, judged: Judged, slack: int, limit: int) -> int:
    margin = judged.statement.clauses.margin
    if margin is None:
        return slack
    add = working.builder.add
    asked = working.constant(margin.value.nominal * margin.value.unit.factor)
    if margin.is_share:
        asked = add(Op.MUL, asked, add(Op.ABS, limit))
    less = add(Op.SUB, slack, asked)
    for at in (asked, less):
        working.origins.setdefault(at, working.origins[slack])
    return less


def _turned(operator: str) -> str:
    """The same comparison read from the other side."""
    return operator.replace("<", "\0").replace(">", "<").replace("\0", ">")


def crosscheck_sides(working: Working, compared: Compared) -> Check:
    """Both sides of a cross-check and their difference."""
    statement = compared.statement
    working.owner = statement.id.key
    first, second = working.node(statement.first), working.node(statement.second)
    difference = working.builder.add(Op.SUB, first, second)
    working.origins.setdefault(difference, statement.first)
    if statement.allowed is None:
        return Check(first, second, difference, None)
    size = working.builder.add(Op.ABS, second)
    difference = working.builder.add(Op.DIV, difference, size)
    span = statement.first.span.to(statement.second.span)
    share = Binary("/", statement.first, statement.second, span, span)
    working.origins.setdefault(difference, share)
    return Check(first, second, difference, share)


def measured_against(working: Working, measured: Measured) -> int:
    """What a measured value is compared with."""
    working.owner = measured.statement.id.key
    return working.node(measured.statement.second)


def figure_limit(working: Working, pictured: Pictured) -> Against | None:
    """The limit that a figure draws; None where it has none."""
    symbol, limit = pictured.statement.symbol, pictured.statement.limit
    if symbol is None or limit is None:
        return None
    working.owner = symbol.key
    at = working.node(limit)
    difference = working.builder.add(Op.SUB, working.variables[symbol.key], at)
    working.origins.setdefault(difference, limit)
    return Against(at, difference)


def discharge_time(working: Working, discharge: Discharge, resistance: str) -> int:
    """Seconds until a stored charge is down to a safe voltage."""
    add, variables = working.builder.add, working.variables
    safe = working.constant(SAFE_VOLTAGE)
    start = add(Op.MAX, add(Op.ABS, variables[discharge.voltage]), safe)
    constant = add(Op.MUL, variables[resistance], variables[discharge.capacitance])
    time = add(Op.MUL, constant, add(Op.LN, add(Op.DIV, start, safe)))
    store = discharge.statement.symbols[0]
    for at in (constant, time):
        working.origins.setdefault(at, Name(store.name, store.span))
    return time
