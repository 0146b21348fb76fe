"""One namespace for a whole document: symbols and ids, each defined once, all known."""

from collections.abc import Collection, Iterable, Iterator, Mapping
from typing import Final

from calcdoc.frozen import Frozen
from calcdoc.model.constants import CONSTANTS
from calcdoc.model.methods import METHOD, out_of_sight
from calcdoc.problems import Finding, Place, error
from calcdoc.text.document import Document
from calcdoc.text.given import Given
from calcdoc.text.names import fold, nearest, taken_as
from calcdoc.text.nodes import Name, Node, Quantity, UnitText, names, walk
from calcdoc.text.scan import shown
from calcdoc.text.statements import (
    AnyOf,
    CaseStatement,
    CrosscheckStatement,
    Definition,
    FigureStatement,
    GivenStatement,
    HazardStatement,
    Index,
    Inequality,
    Label,
    Measurement,
    PointValue,
    RelationStatement,
    RestateStatement,
    SensitivityStatement,
    SentenceStatement,
    SettleStatement,
    SolvedStatement,
    Statement,
    Uncalculated,
)
from calcdoc.text.unparse import unit_text
from calcdoc.units import known_word

Valued = GivenStatement | Definition | SolvedStatement
MEASURED: Final = "measured value"
"""What the symbol of a measurement is; formulas rest on the design alone."""


class Namespace(Frozen, frozen=True):
    """Every name of a document with the statement that defines it, by key."""

    quantities: Mapping[str, Valued]
    labels: Mapping[str, Label]
    """Symbols and ids alike."""
    ids: Mapping[str, str]
    """Key of an id to what it is the id of: ``relation``, ``criterion``, ..."""

    def spelled(self) -> list[str]:
        """Every symbol as typed where it is defined."""
        return [self.labels[key].name for key in self.quantities]


def collect(document: Document) -> tuple[Namespace, list[Finding]]:
    """Every symbol and id, and what is defined twice or takes a reserved word."""
    quantities: dict[str, Valued] = {}
    labels: dict[str, Label] = {}
    ids: dict[str, str] = {}
    findings: list[Finding] = []
    methods = ((None, each.name, METHOD) for each in document.applied)
    for statement, label, what in (*methods, *_labels(document.statements)):
        taken = taken_as(label.name)
        first = labels.get(label.key)
        if taken:
            findings.append(
                error(
                    "reserved-word",
                    f"{shown(label.name)} is {taken}",
                    label.span,
                    help="give it a subscript or another name",
                )
            )
        elif first:
            findings.append(
                error(
                    "defined-twice",
                    f"{shown(label.name)} is defined twice",
                    label.span,
                    related=(Place(first.span, "first here"),),
                    help=_advice(what),
                )
            )
        else:
            labels[label.key] = label
            if isinstance(statement, Valued) and what == "symbol":
                quantities[label.key] = statement
            else:
                ids[label.key] = what
    return Namespace(quantities, labels, ids), findings


def _labels(statements: Iterable[Statement]) -> Iterator[tuple[Statement, Label, str]]:
    """Every name a statement defines, and what it is."""
    for each in statements:
        match each:
            case GivenStatement():
                if each.id:
                    yield each, each.id, "assumption"
                yield each, each.symbol, "symbol"
            case Definition():
                yield each, each.symbol, "symbol"
            case SolvedStatement():
                for unknown in each.unknowns:
                    yield each, unknown.symbol, "symbol"
            case RelationStatement():
                yield each, each.name, "relation"
            case SentenceStatement():
                yield each, each.id, "assumption"
            case CrosscheckStatement():
                yield each, each.id, "cross-check"
            case Inequality() | Uncalculated() | AnyOf():
                yield each, each.id, "criterion"
            case Measurement():
                yield each, each.id, "cross-check"
                yield each, each.symbol, MEASURED
            case _:
                pass


def _advice(what: str) -> str:
    if what in ("symbol", MEASURED):
        return "give one of them another subscript, or remove it"
    return (
        "symbols and the ids of criteria and assumptions share one set of names; choose another id"
    )


def unknown_names(document: Document, space: Namespace) -> list[Finding]:
    """Names that are used but nowhere defined, with the nearest one that is."""
    findings = []
    for statement in document.statements:
        own = {label.key for _, label, what in _labels((statement,)) if what == "symbol"}
        running = {each.name.key for each in (running_index(statement),) if each}
        for label in _used(statement):
            known = label.key in space.quantities or label.key in CONSTANTS
            hidden = out_of_sight(label, document)
            if hidden:
                findings.append(hidden)
            elif not known and label.key not in running and not document.is_broken(label.key):
                findings.append(_unknown(label, space, own))
        findings += _unknown_relations(statement, space, document.broken)
    return findings


def running_index(statement: Statement) -> Index | None:
    """The running index of a series or of a criterion for each element."""
    if isinstance(statement, Definition):
        return statement.index
    return statement.clauses.index if isinstance(statement, Inequality) else None


def shadowed(document: Document, space: Namespace) -> list[Finding]:
    """Running indices that are also symbols, so that a formula could mean either."""
    return [
        error(
            "series-form",
            f"the running index {shown(index.name.name)} is also a symbol of this design",
            index.name.span,
            related=(Place(space.labels[index.name.key].span, "the symbol"),),
            help="give the index another name",
        )
        for statement in document.statements
        if (index := running_index(statement)) and index.name.key in space.labels
    ]


def _unknown_relations(
    statement: Statement, space: Namespace, broken: Collection[str]
) -> Iterator[Finding]:
    if not isinstance(statement, SolvedStatement):
        return
    relations = [key for key, what in space.ids.items() if what == "relation"]
    for label in statement.relations:
        if label.key not in relations and label.key not in broken:
            near = nearest(label.name, [space.labels[key].name for key in relations])
            yield error(
                "unknown-symbol",
                f"there is no relation {shown(label.name)}",
                label.span,
                help=f"did you mean {near}?"
                if near
                else f"state it: relation {label.name}: left = right",
            )


def _unknown(label: Label, space: Namespace, own: set[str]) -> Finding:
    """What to say of an unknown name; ``own`` is what its line defines, which is no advice."""
    if space.ids.get(label.key) == MEASURED:
        return error(
            "unknown-symbol",
            f"{shown(label.name)} is a measured value, it cannot be used in formulas",
            label.span,
            help="a design is calculated from its inputs; state the value there if it is one",
        )
    if space.ids.get(label.key) == METHOD:
        return error(
            "unknown-symbol",
            f"{shown(label.name)} is a method, not a quantity",
            label.span,
            help=f"use what it gives, as in {label.name}.V",
        )
    if label.key in space.labels:
        return error(
            "unknown-symbol",
            f"{shown(label.name)} is an id, not a quantity",
            label.span,
            help="use the symbol it speaks of",
        )
    known = [each for each in (*space.spelled(), *CONSTANTS) if fold(each) not in own]
    near = nearest(label.name, known)
    advice = f"did you mean {near}?" if near else "define it in inputs, conditions or derive"
    if known_word(label.name) and not near:
        advice = "a unit is joined to its number or unit without blanks, as in 1 V/A; " + advice
    return error(
        "unknown-symbol", f"there is no symbol {shown(label.name)}", label.span, help=advice
    )


def _used(statement: Statement) -> Iterator[Label]:
    """Every name a statement uses, where it stands."""
    for tree in trees(statement):
        for name in names(tree):
            yield Label(name.name, name.span)
    for given in _givens(statement):
        yield from _counts(given)
    match statement:
        case HazardStatement():
            yield from statement.symbols
        case CaseStatement():
            yield from (change.symbol for change in statement.changes)
        case Inequality() | Measurement():
            yield from (point.symbol for point in _points(statement))
        case SettleStatement():
            yield statement.symbol
        case RestateStatement():
            yield from (statement.symbol, *statement.terms)
        case SensitivityStatement():
            yield from (statement.symbol, *statement.inputs)
        case FigureStatement():
            yield from (each for each in (statement.symbol, statement.against) if each)
        case _:
            pass


def _points(statement: Inequality | Measurement) -> tuple[PointValue, ...]:
    return statement.clauses.at if isinstance(statement, Inequality) else statement.at


def _counts(given: Given) -> Iterator[Label]:
    """The symbol that says how many like parts there are."""
    like = given.parts.like
    if like and isinstance(like.count, Name):
        yield Label(like.count.name, like.count.span)


def trees(statement: Statement) -> tuple[Node, ...]:
    """The formulas of a statement."""
    match statement:
        case Definition():
            return (statement.formula,)
        case Inequality():
            when = statement.clauses.when
            return statement.operands if when is None else (*statement.operands, when)
        case CaseStatement():
            return tuple(each.formula for each in statement.changes if each.formula is not None)
        case Measurement():
            return (statement.second,)
        case RelationStatement():
            return (statement.left, statement.right)
        case SolvedStatement():
            return (statement.where,) if statement.where is not None else ()
        case CrosscheckStatement():
            return (statement.first, statement.second)
        case FigureStatement():
            return (statement.limit,) if statement.limit is not None else ()
        case _:
            return ()


def two_readings(document: Document, space: Namespace) -> list[Finding]:
    """Units whose joined word is also a symbol: ``1 s/m`` with a symbol m."""
    findings = []
    for statement in document.statements:
        for digits, unit in _units(statement):
            if unit.span.path != document.source.path:
                continue  # a sheet sees no symbols of a design
            for at, word in enumerate(unit.words[1:], 1):
                label = space.labels.get(fold(word.word))
                if label is None or fold(word.word) not in space.quantities:
                    continue
                findings.append(
                    error(
                        "two-readings",
                        f"{shown(word.word)} is a unit here and a symbol of this design",
                        word.span,
                        related=(Place(label.span, "the symbol"),),
                        help=_one_reading(digits, unit, at),
                    )
                )
    return findings


def _one_reading(digits: str, unit: UnitText, at: int) -> str:
    """How to say which reading of a joined word is meant."""
    word, before = unit.words[at], unit_text(UnitText(unit.words[:at], unit.span))
    if not digits:
        return "a given value is no formula, so give the symbol another name"
    symbol = word.word if word.exponent == 1 else f"{word.word}^{word.exponent}"
    return (
        f"for the symbol write ({digits} {before}){'/' if word.joint == '/' else '*'}{symbol};"
        " for the unit give the symbol another name"
    )


def _units(statement: Statement) -> Iterator[tuple[str, UnitText]]:
    """Units of a statement with the number before them, empty where no formula can stand."""
    for tree in trees(statement):
        for node in walk(tree):
            if isinstance(node, Quantity):
                yield node.digits, node.unit
    for each in _givens(statement):
        for unit in each.units:
            yield "", unit


def _givens(statement: Statement) -> tuple[Given, ...]:
    """The values with a band of a statement, where no formula can stand."""
    match statement:
        case GivenStatement():
            return (statement.given,)
        case SolvedStatement(bracket=bracket) | SettleStatement(bracket=bracket):
            return (bracket,) if bracket else ()
        case CaseStatement():
            return tuple(each.given for each in statement.changes if each.given is not None)
        case Inequality():
            margin = (statement.clauses.margin.value,) if statement.clauses.margin else ()
            return (*(point.given for point in _points(statement)), *margin)
        case Measurement():
            return (statement.given, *(point.given for point in _points(statement)))
        case FigureStatement():
            return tuple(each for each in (statement.low, statement.high) if each is not None)
        case _:
            return ()


def direct_uses(
    trees_: Iterable[Node], space: Namespace, running: Collection[str] = ()
) -> tuple[str, ...]:
    """Keys of the quantities that formulas mention, in order, each once."""
    keys = (fold(name.name) for tree in trees_ for name in names(tree))
    return tuple(dict.fromkeys(k for k in keys if k in space.quantities and k not in running))
