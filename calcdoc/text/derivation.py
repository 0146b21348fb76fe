"""The rules of a `derive` block: definitions, series, relations and what is made of them."""

import re
from collections.abc import Callable, Mapping
from typing import Final, NoReturn

from calcdoc.problems import Finding, Mistake, error
from calcdoc.source import Span
from calcdoc.text import literal
from calcdoc.text.cells import basis, columns, label, labelled, plain, used
from calcdoc.text.formula import formula
from calcdoc.text.given import Given, Style, given
from calcdoc.text.names import LETTER
from calcdoc.text.nodes import UnitText
from calcdoc.text.passage import Passage
from calcdoc.text.scan import Scanner
from calcdoc.text.statements import (
    Basis,
    Definition,
    Index,
    Label,
    RelationStatement,
    RestateStatement,
    SensitivityStatement,
    SettleStatement,
    SolvedStatement,
    Statement,
    Unknown,
)

_EQUALS: Final = re.compile(r"=(?!=)")
_BRACKET: Final = re.compile(r"\[")
_BRACKET_END: Final = re.compile(r"\]")
_COMMA: Final = re.compile(r",")
_VERB: Final = re.compile(rf"(relation|settle|restate|sensitivity)[ \n]+(?=[{LETTER}])")
_FROM: Final = re.compile(r"from\b")
_WHERE: Final = re.compile(r"where\b")
_WITHIN: Final = re.compile(r"within\b")
_IN: Final = re.compile(r"in\b")
_OF: Final = re.compile(r"of\b")
_TO: Final = re.compile(r"to\b")
_FOR: Final = re.compile(r"for\b")
_WHOLE: Final = re.compile(r"[0-9]{1,6}")
_RANGE: Final = re.compile(r"\.\.")
_PARITY: Final = re.compile(r"(odd|even)\b")
MOST_ELEMENTS: Final = 500
"""Elements of a series."""
DERIVE_COLUMNS: Final = ("statement", "description", "basis")


def derivation(statement: Passage) -> Statement:
    """``verb ... | definition | unknowns "from" relations``, then description and basis."""
    first, description, source = columns(statement, DERIVE_COLUMNS)
    scanner = Scanner(first)
    said = (plain(description), basis(source))
    if verb := scanner.take(_VERB):
        found = _VERBS[verb[1]](scanner, *said)
    else:
        found = _definition_or_solved(scanner, *said)
    if not scanner.ended:
        ends = "formula" if isinstance(found, Definition) else "statement"
        scanner.refuse(f"an operator or the end of the {ends}")
    return found


def _definition_or_solved(scanner: Scanner, description: str, source: Basis) -> Statement:
    symbol = label(scanner, "a symbol, as in V_pk [V] = sqrt(2)*V_line")
    text = scanner.passage.text
    running = _running_index(scanner) if text[scanner.at : scanner.at + 1] == "[" else None
    unit = literal.bracketed_unit(scanner) if scanner.look(_BRACKET) else None
    if running is None and (scanner.look(_FROM) or scanner.look(_COMMA)):
        return _solved(scanner, _unknown(symbol, unit), description, source)
    scanner.expect(_EQUALS, "`=`" if unit else "`=` or a unit in brackets")
    tree = formula(scanner)
    if running is None and (found := scanner.look(_FOR)):
        raise Mistake(_unnamed_index(symbol, scanner.span(*found.span())))
    index = index_set(scanner, running) if running else None
    return Definition(
        symbol,
        literal.resolve(unit) if unit else None,
        unit,
        tree,
        description,
        source,
        scanner.passage.whole,
        index,
    )


def _running_index(scanner: Scanner) -> Label:
    """``SYMBOL "[" NAME "]"`` of a series; a unit stands after a blank."""
    opened = scanner.expect(_BRACKET, "`[`")
    name = label(scanner, "the name of the running index, as in X[n] (a unit stands after a blank)")
    scanner.expect(_BRACKET_END, "`]` after the running index", opened=opened)
    return name


def _unnamed_index(symbol: Label, span: Span) -> Finding:
    name = symbol.name
    return error(
        "series-form",
        "a series names its running index",
        span,
        help=f"write {name}[n] = ... for n in 1..9",
    )


def index_set(scanner: Scanner, running: Label | None) -> Index:
    """``"for" NAME "in" whole ".." whole ["odd" | "even"]``"""
    scanner.expect(_FOR, "`for` and the running index, as in for n in 3..39 odd")
    name = label(scanner, "the name of the running index")
    if running and running.name != name.name:
        raise Mistake(
            error(
                "series-form",
                f"the running index is `{running.name}` before and `{name.name}` here",
                name.span,
                help="write the same name twice",
            )
        )
    scanner.expect(_IN, "`in`")
    scanner.blanks()
    begin = scanner.at
    first = _whole(scanner)
    scanner.expect(_RANGE, "`..`")
    last = _whole(scanner)
    parity = scanner.take(_PARITY)
    span = scanner.span(begin, scanner.at)
    text = " ".join(scanner.passage.text[begin : scanner.at].split())
    values = [n for n in range(first, last + 1) if parity is None or n % 2 == (parity[1] == "odd")]
    if not values or len(values) > MOST_ELEMENTS:
        message = (
            "this set is empty" if not values else f"a series has at most {MOST_ELEMENTS} elements"
        )
        raise Mistake(error("series-form", message, span, help="write the least first: 3..39 odd"))
    return Index(name, tuple(values), text)


def _whole(scanner: Scanner) -> int:
    found = scanner.take(_WHOLE)
    if found is None:
        scanner.refuse("a whole number")
    return int(found.group())


def _unknown(symbol: Label, unit: UnitText | None) -> Unknown:
    return Unknown(symbol, literal.resolve(unit) if unit else None, unit)


def _solved(scanner: Scanner, first: Unknown, description: str, source: Basis) -> SolvedStatement:
    """``unknown ("," unknown)* "from" NAME ("," NAME)* ["where" condition] ["within" bracket]``"""
    unknowns = [first]
    while scanner.take(_COMMA):
        symbol = label(scanner, "a further unknown")
        unit = literal.bracketed_unit(scanner) if scanner.look(_BRACKET) else None
        unknowns.append(_unknown(symbol, unit))
    scanner.expect(_FROM, "`from` and the name of a relation")
    relations = _labels(scanner, "the name of a relation")
    where = formula(scanner, conditions=True) if scanner.take(_WHERE) else None
    bracket = _bracket(scanner) if scanner.take(_WITHIN) else None
    return SolvedStatement(
        tuple(unknowns), relations, where, bracket, description, source, scanner.passage.whole
    )


def _labels(scanner: Scanner, what: str) -> tuple[Label, ...]:
    found = [label(scanner, what)]
    while scanner.take(_COMMA):
        found.append(label(scanner, what))
    return tuple(found)


def _used(scanner: Scanner, what: str) -> tuple[Label, ...]:
    found = [used(scanner, what)]
    while scanner.take(_COMMA):
        found.append(used(scanner, what))
    return tuple(found)


def _bracket(scanner: Scanner) -> Given:
    value = given(scanner)
    if value.style is not Style.RANGE or not value.varies:
        raise Mistake(
            error(
                "bracket",
                "a bracket has two values",
                value.span,
                help="write within a .. b, the least first",
            )
        )
    return value


def _relation(scanner: Scanner, description: str, source: Basis) -> RelationStatement:
    """``"relation" NAME ":" sum "=" sum``"""
    rest = scanner.passage.part(scanner.at, len(scanner.passage.text))
    name, inner = labelled(rest, "the name of the relation and a colon, as in relation charge:")
    left = formula(inner)
    inner.expect(_EQUALS, "`=` (a relation is an equation)")
    right = formula(inner)
    if not inner.ended:
        inner.refuse("an operator or the end of the relation")
    scanner.at = len(scanner.passage.text)
    return RelationStatement(name, left, right, description, source, scanner.passage.whole)


def _settle(scanner: Scanner, description: str, source: Basis) -> SettleStatement:
    """``"settle" SYMBOL "within" bracket``"""
    symbol = label(scanner, "the symbol that depends on itself")
    scanner.expect(_WITHIN, "`within` and a bracket, as in within -40 °C .. 200 °C")
    bracket = _bracket(scanner)
    return SettleStatement(symbol, bracket, description, source, scanner.passage.whole)


def _restate(scanner: Scanner, description: str, source: Basis) -> RestateStatement:
    """``"restate" SYMBOL "in" SYMBOL ("," SYMBOL)*``"""
    _no_basis(source, scanner)
    symbol = used(scanner, "the symbol to restate")
    scanner.expect(_IN, "`in` and the quantities to keep")
    terms = _used(scanner, "a quantity to keep")
    return RestateStatement(symbol, terms, description, scanner.passage.whole)


def _sensitivity(scanner: Scanner, description: str, source: Basis) -> SensitivityStatement:
    """``"sensitivity" "of" SYMBOL "to" SYMBOL ("," SYMBOL)*``"""
    _no_basis(source, scanner)
    scanner.expect(_OF, "`of` and a symbol")
    symbol = used(scanner, "the symbol whose sensitivity is asked")
    scanner.expect(_TO, "`to` and the quantities it depends on")
    inputs = _used(scanner, "a quantity it depends on")
    return SensitivityStatement(symbol, inputs, description, scanner.passage.whole)


def _no_basis(source: Basis, scanner: Scanner) -> None:
    if source.text:
        refuse_basis(scanner)


def refuse_basis(scanner: Scanner) -> NoReturn:
    """A line that follows from others has no source of its own."""
    raise Mistake(
        error(
            "columns",
            "this statement follows from others and has no basis of its own",
            scanner.passage.whole,
            help="leave the third column out",
        )
    )


_VERBS: Final[Mapping[str, Callable[[Scanner, str, Basis], Statement]]] = {
    "relation": _relation,
    "settle": _settle,
    "restate": _restate,
    "sensitivity": _sensitivity,
}
