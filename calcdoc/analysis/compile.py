"""From the checked model to one tape in coherent SI units."""

from collections.abc import Mapping
from fractions import Fraction
from typing import Final

import numpy as np

from calcdoc.analysis.box import Box
from calcdoc.analysis.formulas import is_constant
from calcdoc.analysis.looking_up import LookedUp
from calcdoc.analysis.tape import Op, Tape
from calcdoc.analysis.working import Working
from calcdoc.frozen import Frozen
from calcdoc.model.model import Compared, Discharge, Judged, Model, Pictured, Root
from calcdoc.text.nodes import Binary, Group, Name, Negate, Node

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


class Sides(Frozen, frozen=True):
    """Both sides of a relation as instructions, and the terms they are sums of."""

    left: int
    right: int
    terms: tuple[int, ...]


class Compiled(Frozen, frozen=True):
    """A tape with the way back to the names."""

    tape: Tape
    columns: Mapping[str, int]
    """Key of a given quantity that varies, or that an operating point sets, to its column."""
    variables: Mapping[str, int]
    """Key of every quantity that is no series to its instruction."""
    series: Mapping[str, Mapping[int, int]]
    """Key of every series to the instructions of its elements."""
    box: Box
    """The band as declared."""
    sides: tuple[tuple[Side, ...], ...]
    """For every calculated criterion its limits, for every element."""
    checks: tuple[Check, ...]
    discharges: tuple[int | None, ...]
    """For every stored charge the instruction of its time to a safe voltage, in seconds."""
    chosen: Mapping[str, Root]
    """Key of every solved quantity to the root that was left."""
    roots: Mapping[str, int]
    """Key of every quantity found numerically to its instruction."""
    relations: Mapping[str, Sides]
    """Key of every solved or settled quantity to the sides of its relation, put together."""
    looked: tuple[LookedUp, ...]
    """Every look-up of a table."""
    origins: Mapping[int, Node]
    """Instruction to the piece of formula it came from first."""
    inside: Mapping[int, Mapping[int, Node]]
    """The same for the residual of every root, by the instruction of the root."""
    figures: tuple[Against | None, ...] = ()
    """For every figure its limit; None where it has none."""


def compile_model(model: Model) -> Compiled:
    """Put every quantity, criterion, cross-check and discharge of a model on one tape.

    Raises:
        Mistake: when a solved quantity has several roots over the band, or none.
    """
    columns = _columns(model)
    low, nominal, high = np.array([_si(model, key) for key in columns]).reshape(-1, 3).T
    working = Working(model, columns, Box(low, nominal, high))
    for key in model.order:
        working.variable(model.variables[key])
    judged = [each for each in model.criteria if isinstance(each, Judged)]
    sides = tuple(_criterion(working, each) for each in judged)
    checks = tuple(_crosscheck(working, each) for each in model.crosschecks)
    discharges = tuple(_discharge(working, each) for each in model.discharges)
    relations = _relations(working, model)
    figures = tuple(_against(working, each) for each in model.figures)
    moving = {each.key: each.column for each in working.looked if each.column is not None}
    return Compiled(
        tape=working.builder.tape(),
        columns={**columns, **moving},
        variables=working.variables,
        series=working.series,
        box=working.box,
        sides=sides,
        checks=checks,
        discharges=discharges,
        chosen=working.chosen,
        roots=working.roots,
        relations=relations,
        looked=tuple(working.looked),
        origins=working.origins,
        inside=working.inside,
        figures=figures,
    )


def _columns(model: Model) -> dict[str, int]:
    """A column for every given quantity that varies, or that a point or an axis sets."""
    set_by_points = {each.statement.against.key for each in model.figures if each.statement.against}
    set_by_points |= {
        point.symbol.key
        for each in model.criteria
        if isinstance(each, Judged)
        for point in each.statement.clauses.at
    }
    keys = [
        key
        for key, variable in model.variables.items()
        if variable.given and (variable.given.varies or key in set_by_points)
    ]
    return {key: at for at, key in enumerate(keys)}


def _si(model: Model, key: str) -> tuple[float, float, float]:
    given = model.variables[key].given
    assert given is not None
    return given.si


def _relations(working: Working, model: Model) -> dict[str, Sides]:
    """Both sides of what each solved quantity was solved from, with the solutions in place."""
    sides = {}
    for key, variable in model.variables.items():
        if variable.implicit is not None:
            pair = (variable.implicit.left, variable.implicit.right)
        elif variable.solved is not None:
            at = variable.solved.unknowns.index(key)
            statement = model.relations[variable.solved.relations[at]].statement
            pair = (statement.left, statement.right)
        else:
            continue
        left, right = (working.node(side) for side in pair)
        terms = tuple(working.node(term) for side in pair for term in _terms(side))
        sides[key] = Sides(left, right, terms)
    return sides


def _terms(node: Node) -> list[Node]:
    """What a side is a sum of."""
    match node:
        case Group(inner) | Negate(inner):
            return _terms(inner)
        case Binary("+" | "-", left, right):
            return [*_terms(left), *_terms(right)]
        case _:
            return [node]


def _criterion(working: Working, judged: Judged) -> tuple[Side, ...]:
    """The limits of a criterion, for every element when it is judged over a series."""
    working.owner = judged.statement.id.key
    index = judged.statement.clauses.index
    if index is None:
        return _limits(working, judged, None)
    found: list[Side] = []
    for element in index.values:
        working.running, working.element = {index.name.key: element}, element
        found += _limits(working, judged, element)
    working.running, working.element = {}, None
    return tuple(found)


def _limits(working: Working, judged: Judged, element: int | None) -> tuple[Side, ...]:
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
    return tuple(_side(working, judged, *each, element) for each in pairs)


def _side(  # noqa: PLR0913  (a comparison and where it stands)
    working: Working, judged: Judged, value: Node, limit: Node, relation: str, element: int | None
) -> Side:
    value_at, limit_at = working.node(value), working.node(limit)
    pair = (limit_at, value_at) if relation[0] == "<" else (value_at, limit_at)
    slack = working.builder.add(Op.SUB, *pair)
    working.origins.setdefault(slack, value)
    requirement = _less_margin(working, judged, slack, limit_at)
    return Side(value_at, limit_at, requirement, relation, value, limit, element)


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


def _crosscheck(working: Working, compared: Compared) -> Check:
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


def _against(working: Working, pictured: Pictured) -> Against | None:
    symbol, limit = pictured.statement.symbol, pictured.statement.limit
    if symbol is None or limit is None:
        return None
    working.owner = symbol.key
    at = working.node(limit)
    difference = working.builder.add(Op.SUB, working.variables[symbol.key], at)
    working.origins.setdefault(difference, limit)
    return Against(at, difference)


def _discharge(working: Working, discharge: Discharge) -> int | None:
    """Seconds until a stored charge is down to a safe voltage; None without a bleed."""
    if discharge.resistance is None:
        return None
    add, variables = working.builder.add, working.variables
    safe = working.constant(SAFE_VOLTAGE)
    start = add(Op.MAX, add(Op.ABS, variables[discharge.voltage]), safe)
    constant = add(Op.MUL, variables[discharge.resistance], variables[discharge.capacitance])
    time = add(Op.MUL, constant, add(Op.LN, add(Op.DIV, start, safe)))
    store = discharge.statement.symbols[0]
    for at in (constant, time):
        working.origins.setdefault(at, Name(store.name, store.span))
    return time
