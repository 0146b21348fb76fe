"""Line numbers and who uses whom: what the lines of a record call each other."""

from collections.abc import Iterator, Mapping
from typing import TypeGuard

from calcdoc.frozen import Frozen
from calcdoc.model.model import Compared, Judged, Measured, Model
from calcdoc.text import prose
from calcdoc.text.statements import (
    AnyOf,
    CaseStatement,
    CrosscheckStatement,
    Definition,
    GivenStatement,
    Inequality,
    Measurement,
    RelationStatement,
    RestateStatement,
    SensitivityStatement,
    SentenceStatement,
    SolvedStatement,
    Statement,
    Uncalculated,
)

Numbered = (
    GivenStatement
    | Definition
    | SolvedStatement
    | RelationStatement
    | RestateStatement
    | SensitivityStatement
    | CaseStatement
    | CrosscheckStatement
    | Measurement
    | SentenceStatement
    | Inequality
    | Uncalculated
    | AnyOf
)


class Naming(Frozen, frozen=True):
    """Numbers of lines and sections, and the uses of every quantity."""

    lines: Mapping[str, str]
    """Key of a symbol or id to its line number, as in ``3.4``."""
    sections: Mapping[int, str]
    """Identity of a heading to its number; unnumbered headings are not in it."""
    section_level: int
    """The level of heading that opens a section."""
    used_by: Mapping[str, tuple[str, ...]]
    """Key of a quantity to the symbols and ids that use it, in the author's order."""
    figures: Mapping[int, int] = {}
    """Place of a figure in the text to its number."""


def name_lines(model: Model, body: tuple[prose.Block, ...]) -> Naming:
    """Number sections and lines in the author's order, and collect uses."""
    level = section_level(body)
    lines: dict[str, str] = {}
    sections: dict[int, str] = {}
    section, line = 0, 0
    for each in _in_order(body):
        if isinstance(each, prose.Heading):
            if each.level == level:
                section, line = section + 1, 0
                sections[id(each)] = str(section)
            continue
        for key in keys_of(each):
            line += 1
            lines[key] = f"{section}.{line}" if level else str(line)
    return Naming(lines, sections, level, _uses(model), _figures(model))


def section_level(body: tuple[prose.Block, ...]) -> int:
    """The highest level of heading in the body; 0 when there is none."""
    return min((each.level for each in body if isinstance(each, prose.Heading)), default=0)


def _in_order(blocks: tuple[prose.Block, ...]) -> Iterator[prose.Heading | Numbered]:
    for block in blocks:
        match block:
            case prose.Heading():
                yield block
            case prose.Statements(_, statements):
                yield from (each for each in statements if is_numbered(each))
            case prose.Items(_, items):
                for item in items:
                    yield from _in_order(item)
            case prose.Quote(inner):
                yield from _in_order(inner)
            case prose.Method(_, inner):  # its headings open no section
                yield from (e for e in _in_order(inner) if not isinstance(e, prose.Heading))
            case _:
                pass


def is_numbered(statement: Statement) -> TypeGuard[Numbered]:
    """Whether a statement has a line of its own in the record."""
    return isinstance(statement, Numbered)


def keys_of(statement: Numbered) -> tuple[str, ...]:
    """What the lines of a statement are known by: symbols, a name, an id, else their place."""
    match statement:
        case GivenStatement() | Definition():
            return (statement.symbol.key,)
        case SolvedStatement():
            return tuple(each.symbol.key for each in statement.unknowns)
        case RelationStatement():
            return (statement.name.key,)
        case RestateStatement() | SensitivityStatement():
            return (f"line at {statement.span.start} of {statement.symbol.key}",)
        case CaseStatement():
            return (case_key(statement.name.name),)
        case _:
            return (statement.id.key,)


def case_key(name: str) -> str:
    """What the line of a case is known by; cases have names apart from symbols and ids."""
    return f"case {name}"


def _figures(model: Model) -> dict[int, int]:
    starts = (each.statement.span.start for each in model.figures)
    return {start: number for number, start in enumerate(starts, 1)}


def _uses(model: Model) -> dict[str, tuple[str, ...]]:
    uses: dict[str, list[str]] = {key: [] for key in model.variables}
    for variable in model.variables.values():
        for key in variable.depends_on:
            uses[key].append(variable.symbol)
    for judged in (*model.criteria, *model.crosschecks, *model.measurements):
        if isinstance(judged, Judged | Compared | Measured):
            for key in judged.depends_on:
                uses[key].append(judged.statement.id.name)
    return {key: tuple(names) for key, names in uses.items()}


def rests_on(model: Model, naming: Naming, key: str) -> tuple[str, ...]:
    """Line numbers of quantities and ids of criteria that depend on one, through all steps."""
    reached = {key}
    for other in model.order:
        if any(used in reached for used in model.variables[other].depends_on):
            reached.add(other)
    reached.discard(key)
    lines = [naming.lines[each] for each in model.variables if each in reached]
    reached.add(key)
    ids = [
        each.statement.id.name
        for each in (*model.criteria, *model.crosschecks, *model.measurements)
        if isinstance(each, Judged | Compared | Measured) and reached.intersection(each.depends_on)
    ]
    return (*lines, *ids)
