"""One function for each kind of statement; a block word names the rule of its lines."""

import re
from collections.abc import Callable, Mapping
from typing import Final

from calcdoc.problems import Mistake, error
from calcdoc.text.cases import case
from calcdoc.text.cells import basis, columns, label, labelled, plain, state, used
from calcdoc.text.crosschecks import crosscheck
from calcdoc.text.derivation import derivation
from calcdoc.text.given import given
from calcdoc.text.makeup import with_makeup
from calcdoc.text.names import SYMBOL
from calcdoc.text.passage import Passage
from calcdoc.text.scan import Scanner, not_yet
from calcdoc.text.statements import (
    Basis,
    GivenStatement,
    HazardStatement,
    Kind,
    Label,
    ReferenceStatement,
    SentenceStatement,
    Statement,
)

_EQUALS: Final = re.compile(r"=(?!=)")
_BRACKET: Final = re.compile(r"\[")
_COLON: Final = re.compile(r"\s*:")
_UNIT_EQUALS: Final = re.compile(r"\s*(?:\[[^\]]*\])?\s*=")
_AT: Final = re.compile(r"at\b")
_THROUGH: Final = re.compile(r"through\b")
_HAZARD: Final = re.compile(r"(supply|stored|not isolated)(?=\s|$)")

GIVEN_COLUMNS: Final = ("statement", "description", "basis")


def condition(statement: Passage) -> Statement:
    """``SYMBOL = given | description | basis``"""
    return _given_statement(Kind.CONDITION, statement)


def input_(statement: Passage) -> Statement:
    """``SYMBOL = given | description | basis``"""
    return _given_statement(Kind.INPUT, statement)


def _given_statement(kind: Kind, statement: Passage) -> GivenStatement:
    first, description, source = columns(statement, GIVEN_COLUMNS)
    scanner = Scanner(first)
    return _given(kind, scanner, None, description, basis(source), "")


def _given(  # noqa: PLR0913  (the parts of a statement)
    kind: Kind, scanner: Scanner, name: Label | None, description: Passage, source: Basis, mark: str
) -> GivenStatement:
    begin = scanner.at
    symbol = label(scanner, "a symbol, as in V_line = 230 V ± 10 %")
    if scanner.look(_BRACKET):
        scanner.refuse("`=` (the unit of a given value stands after its number)")
    if scanner.look(_COLON):
        scanner.refuse("`=`", advice=f"write {symbol.name} = and the value behind it")
    scanner.expect(_EQUALS, "`=`")
    if scanner.look(re.compile('"')):
        raise Mistake(not_yet("a text value", scanner.span(scanner.at, scanner.at + 1)))
    value = with_makeup(scanner, given(scanner))
    if kind is Kind.CONDITION and value.makeup is not None:
        raise Mistake(
            error(
                "tolerance",
                "a condition is not random, so it has a band alone",
                value.span,
                help="the design must hold at all of it; state parts in inputs",
            )
        )
    if not scanner.ended:
        scanner.refuse("a tolerance or the end of the statement (a given value is no formula)")
    text = " ".join(scanner.passage.text[begin:].split())
    return GivenStatement(
        kind, symbol, value, plain(description), source, name, mark, text, scanner.passage.whole
    )


def assumption(statement: Passage) -> Statement:
    """``[ID ":"] SYMBOL = given | description | state basis`` or ``ID ":" sentence | ...``"""
    first, description, last = columns(statement, GIVEN_COLUMNS)
    scanner, name = Scanner(first), None
    if _symbol_and(_COLON, first.text, 0):
        name, scanner = labelled(first, "an id, as in A1:")
    is_quantity = _symbol_and(_UNIT_EQUALS, first.text, scanner.at)
    if name is None and not is_quantity:
        scanner.refuse("an id and a colon, or a symbol and `=`, as in A1: R_th = 60 K/W ± 15 %")
    mark, rest = state(last)
    if is_quantity:
        return _given(Kind.ASSUMPTION, scanner, name, description, basis(rest), mark)
    assert name is not None
    text = plain(first.part(scanner.at, len(first.text)))
    if not text:
        scanner.refuse("the assumption as a sentence or as a symbol with its value")
    return SentenceStatement(name, text, plain(description), basis(rest), mark, first.whole)


def _symbol_and(rest: re.Pattern[str], text: str, at: int) -> bool:
    """Whether a symbol stands here, and the rest behind it."""
    symbol = SYMBOL.match(text, at)
    return symbol is not None and rest.match(text, symbol.end()) is not None


def hazard(statement: Passage) -> Statement:
    """``"supply" SYMBOL | "stored" SYMBOL "at" SYMBOL ["through" SYMBOL] | "not isolated"``"""
    first, _ = columns(statement, ("statement", "description"))
    scanner = Scanner(first)
    found = scanner.take(_HAZARD)
    if found is None:
        scanner.refuse("`supply V`, `stored C at V through R` or `not isolated`")
    symbols: list[Label] = []
    if found[1] != "not isolated":
        symbols.append(used(scanner, "a symbol"))
    if found[1] == "stored":
        scanner.expect(_AT, "`at` and the voltage")
        symbols.append(used(scanner, "the symbol of the voltage"))
        if scanner.take(_THROUGH):
            symbols.append(used(scanner, "the symbol of the bleed resistor"))
    if not scanner.ended:
        scanner.refuse("the end of the statement")
    return HazardStatement(found[1], tuple(symbols), plain(first), first.whole)


def reference(statement: Passage) -> Statement:
    """``KEY | title | edition or issue, date | where held``"""
    key, title, edition, held = columns(statement, ("key", "title", "edition", "where held"))
    if not key.text or not title.text:
        raise Mistake(
            error(
                "columns",
                "a reference has a key and a title",
                statement.whole,
                help="write KEY | title | edition or issue, date | where held",
            )
        )
    if found := re.search(r"[\[\],]", key.text):
        raise Mistake(
            error(
                "columns",
                "the key of a reference holds no bracket and no comma",
                key.span(*found.span()),
                help="they separate it where it is cited",
            )
        )
    return ReferenceStatement(plain(key), plain(title), plain(edition), plain(held), key.whole)


RULES: Final[Mapping[str, Callable[[Passage], Statement]]] = {
    "conditions": condition,
    "inputs": input_,
    "assumptions": assumption,
    "derive": derivation,
    "crosschecks": crosscheck,
    "cases": case,
    "hazards": hazard,
    "references": reference,
}
"""The rule of a block's lines; ``criteria`` has a file of its own."""
