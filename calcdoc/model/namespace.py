"""One namespace for a whole document: symbols and ids, each defined once, all known."""

from collections.abc import Iterable, Iterator, Mapping

from calcdoc.frozen import Frozen
from calcdoc.model.constants import CONSTANTS
from calcdoc.problems import Finding, Place, error
from calcdoc.text.document import Document
from calcdoc.text.given import Given
from calcdoc.text.names import fold, nearest, taken_as
from calcdoc.text.nodes import Name, Node, Quantity, UnitText, names, walk
from calcdoc.text.scan import shown
from calcdoc.text.statements import (
    Definition,
    GivenStatement,
    HazardStatement,
    Inequality,
    Label,
    SentenceStatement,
    Statement,
    Uncalculated,
)
from calcdoc.text.unparse import unit_text
from calcdoc.units import known_word

Valued = GivenStatement | Definition


class Namespace(Frozen, frozen=True):
    """Every name of a document with the statement that defines it, by key."""

    quantities: Mapping[str, Valued]
    labels: Mapping[str, Label]
    """Symbols and ids alike."""

    def spelled(self) -> list[str]:
        """Every symbol as typed where it is defined."""
        return [each.symbol.name for each in self.quantities.values()]


def collect(document: Document) -> tuple[Namespace, list[Finding]]:
    """Every symbol and id, and what is defined twice or takes a reserved word."""
    quantities: dict[str, Valued] = {}
    labels: dict[str, Label] = {}
    findings: list[Finding] = []
    for statement, label, what in _labels(document.statements):
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
            if what == "symbol" and isinstance(statement, GivenStatement | Definition):
                quantities[label.key] = statement
    return Namespace(quantities, labels), findings


def _labels(statements: Iterable[Statement]) -> Iterator[tuple[Statement, Label, str]]:
    for each in statements:
        if isinstance(each, GivenStatement):
            if each.id:
                yield each, each.id, "id"
            yield each, each.symbol, "symbol"
        elif isinstance(each, Definition):
            yield each, each.symbol, "symbol"
        elif isinstance(each, SentenceStatement | Inequality | Uncalculated):
            yield each, each.id, "id"


def _advice(what: str) -> str:
    if what == "symbol":
        return "give one of them another subscript, or remove it"
    return (
        "symbols and the ids of criteria and assumptions share one set of names; choose another id"
    )


def unknown_names(document: Document, space: Namespace) -> list[Finding]:
    """Names that are used but nowhere defined, with the nearest one that is."""
    findings = []
    for statement in document.statements:
        own = {statement.symbol.key} if isinstance(statement, Definition) else set()
        for label in _used(statement):
            if label.key in space.quantities or label.key in CONSTANTS:
                continue
            findings.append(_unknown(label, space, own))
    return findings


def _unknown(label: Label, space: Namespace, own: set[str]) -> Finding:
    """What to say of an unknown name; ``own`` is what its line defines, which is no advice."""
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
            if isinstance(name, Name):  # an element of a series is not available yet
                yield Label(name.name, name.span)
    if isinstance(statement, HazardStatement):
        yield from statement.symbols
    if isinstance(statement, Inequality):
        yield from (point.symbol for point in statement.clauses.at)


def trees(statement: Statement) -> tuple[Node, ...]:
    """The formulas of a statement."""
    if isinstance(statement, Definition):
        return (statement.formula,)
    return statement.operands if isinstance(statement, Inequality) else ()


def two_readings(document: Document, space: Namespace) -> list[Finding]:
    """Units whose joined word is also a symbol: ``1 s/m`` with a symbol m."""
    findings = []
    for statement in document.statements:
        for digits, unit in _units(statement):
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
    given: list[Given] = []
    if isinstance(statement, GivenStatement):
        given.append(statement.given)
    if isinstance(statement, Inequality):
        given += [point.given for point in statement.clauses.at]
        if statement.clauses.margin:
            given.append(statement.clauses.margin.value)
    for each in given:
        for unit in each.units:
            yield "", unit


def direct_uses(tree: Node, space: Namespace) -> tuple[str, ...]:
    """Keys of the quantities a formula mentions, in order, each once."""
    keys = (fold(name.name) for name in names(tree))
    return tuple(dict.fromkeys(key for key in keys if key in space.quantities))
