"""The rule of a `cases` block, and the names of cases where they are listed."""

import re
import unicodedata
from typing import Final

from calcdoc.problems import Finding, Mistake, error
from calcdoc.text.cells import basis, columns, plain, used
from calcdoc.text.formula import LONGEST, formula
from calcdoc.text.given import MAKEUP_WORD, Given, Style, given
from calcdoc.text.makeup import with_makeup
from calcdoc.text.names import CLAUSE_WORDS, SYMBOL
from calcdoc.text.nodes import Node
from calcdoc.text.passage import Passage
from calcdoc.text.scan import Scanner, not_yet, shown
from calcdoc.text.statements import CaseStatement, Change, Label, Scope

NORMAL: Final = "normal"
"""The case in which nothing is changed."""
CLAUSE_STARTS: Final = ("by", "at", "in", "with", "for", "when")
"""Words that begin a clause of a criterion, and so end what stands before them."""
CASE_COLUMNS: Final = ("case", "description", "basis")
_MOST_CHANGES: Final = 100
_KIND: Final = re.compile(r"(mode|fault)(?![^ \n:])")
_NAME: Final = re.compile(r"[^:]*")
_COLON: Final = re.compile(r":")
_EQUALS: Final = re.compile(r"=(?!=)")
_BRACKET: Final = re.compile(r"\[")
_JOINT: Final = re.compile(rf"(;|\band\b(?=[ \n]+{SYMBOL.pattern}[ \n]*=(?!=)))")
_QUOTE: Final = re.compile(r'"')
_SEPARATES: Final = re.compile(r'[,|{"]')
_MARK: Final = re.compile(r'"[^"]*"|[(),\[\]]')
_COMMA: Final = re.compile(r",")
_EVERY: Final = re.compile(r"every(?![^ \n,])")
_EVERY_WHAT: Final = re.compile(r"(case|fault)(?![^ \n,])")
_MODE: Final = re.compile(r"modes?\b")
_WORD: Final = re.compile(r"\s*([^\s,]+)")
_VALUE: Final = re.compile(r"[+-]?[ \n]*[0-9]")
_BAND: Final = re.compile(r"±|\+/-|\.\.")
_MEANT: Final = re.compile(r"±|\+/-|\.\.|\b(as|bias|each)\b")
"""What only a value with a band can hold."""
_APART: Final = re.compile(r"[+-][ \n]")


def case(statement: Passage) -> CaseStatement:
    """``("mode" | "fault") NAME ":" change ("," change)* | description | basis``"""
    first, description, source = columns(statement, CASE_COLUMNS)
    _check_length(first)
    scanner = Scanner(first)
    kind = scanner.take(_KIND)
    if kind is None:
        scanner.refuse("`mode` or `fault` and a name, as in mode dim: I_2 = 0 mA")
    name = _defined_name(scanner)
    changes = tuple(_change(each) for each in _pieces(first, scanner.at))
    text = " ".join(first.text.split())
    return CaseStatement(
        kind[1], name, changes, plain(description), basis(source), text, first.whole
    )


def _check_length(passage: Passage) -> None:
    if len(passage.text) > LONGEST:
        raise Mistake(
            error(
                "formula-size",
                "the statement is too long",
                passage.span(0, 1),
                help=f"keep a statement under {LONGEST} characters",
            )
        )


# --- names -------------------------------------------------------------------------------------


def named(text: str) -> str:
    """The one spelling of a case's name: blanks collapsed, accents composed."""
    return unicodedata.normalize("NFC", " ".join(text.split()))


def _defined_name(scanner: Scanner) -> Label:
    """``NAME ":"``; a name is words without ``: , | { "`` and without a clause word."""
    scanner.blanks()
    text, start = scanner.passage.text, scanner.at
    end = scanner.match(_NAME).end()
    if end == len(text) or not text[start:end].strip():
        scanner.at = text.find("=", start) if end > start and "=" in text[start:] else end
        scanner.refuse("a name and `:`, as in mode dim: I_2 = 0 mA")
    scanner.at = end + 1
    cell = scanner.passage.part(start, end)
    if found := _SEPARATES.search(cell.text):
        _refuse(
            cell, found, f"the name of a case holds no {shown(found.group())}",
            "use words and blanks; the name ends at the colon",
        )  # fmt: skip
    words = list(re.finditer(r"\S+", cell.text))
    for word in words:
        if word.group() in CLAUSE_WORDS:
            _refuse(
                cell, word, f"{shown(word.group())} is a word of the language",
                "say it in other words, so that the name can stand in a list of cases",
            )  # fmt: skip
    name = named(cell.text)
    if name == NORMAL:
        _refuse(
            cell, words[0], "`normal` is the case in which nothing is changed",
            "give this case another name",
        )  # fmt: skip
    if words[0].group() == "every":
        _refuse(
            cell, words[0], "`every` asks for every case or every fault",
            "begin the name with another word",
        )  # fmt: skip
    return Label(name, cell.whole)


def _refuse(cell: Passage, found: re.Match[str], message: str, advice: str) -> None:
    raise Mistake(error("case-form", message, cell.span(*found.span()), help=advice))


def scope(scanner: Scanner) -> Scope:
    """``"in" ("every case" | "every fault" | NAME ("," NAME)*)``, behind ``in``."""
    scanner.blanks()
    start = scanner.at
    if scanner.take(_EVERY):
        what = scanner.take(_EVERY_WHAT)
        if what is None:
            scanner.refuse(
                "`case` or `fault` after `every`",
                advice="without `in` a criterion counts in normal and in every mode"
                if scanner.look(_MODE)
                else "",
            )
        if scanner.look(_COMMA):
            raise Mistake(_alone(scanner, start))
        return Scope(what[1], (), scanner.span(start, scanner.at))
    names = case_names(scanner, "the name of a case, `normal`, `every case` or `every fault`")
    return Scope("", names, scanner.span(start, scanner.at))


def _alone(scanner: Scanner, start: int) -> Finding:
    return error(
        "case-form",
        "`every case` and `every fault` stand alone",
        scanner.span(start, scanner.at),
        help="name single cases, or leave the names out",
    )


def case_names(scanner: Scanner, wanted: str) -> tuple[Label, ...]:
    """``NAME ("," NAME)*``, up to a clause word or the end."""
    found = [_listed_name(scanner, wanted)]
    while scanner.take(_COMMA):
        found.append(_listed_name(scanner, "the name of a further case"))
    return tuple(found)


def _listed_name(scanner: Scanner, wanted: str) -> Label:
    words: list[re.Match[str]] = []
    if found := scanner.take(_EVERY):
        raise Mistake(_alone(scanner, found.start()))
    while (word := scanner.look(_WORD)) and word[1] not in CLAUSE_STARTS:
        if word[1] in CLAUSE_WORDS:
            raise Mistake(
                error(
                    "case-form",
                    f"{shown(word[1])} stands in no name of a case",
                    scanner.span(*word.span(1)),
                    help="separate the names of cases by commas",
                )
            )
        words.append(word)
        scanner.at = word.end()
    if not words:
        scanner.refuse(wanted)
    name = named(" ".join(word[1] for word in words))
    return Label(name, scanner.span(words[0].start(1), words[-1].end(1)))


# --- changes -----------------------------------------------------------------------------------


def _pieces(passage: Passage, start: int) -> list[Passage]:
    """What stands between the commas outside of parentheses and quotes."""
    found, depth, text = [], 0, passage.text
    for mark in _MARK.finditer(text, start):
        at = mark.start()
        if mark.group() in "([":
            depth += 1
        elif mark.group() in ")]":
            depth -= 1
        elif mark.group() == "," and depth <= 0 and not _between_digits(text, at):
            found.append(passage.part(start, at))
            start = mark.end()
    found.append(passage.part(start, len(text)))
    if len(found) > _MOST_CHANGES:
        raise Mistake(
            error(
                "case-form",
                f"a case changes at most {_MOST_CHANGES} quantities",
                found[_MOST_CHANGES].whole,
                help="derive them from fewer quantities that the case changes",
            )
        )
    return found


def _between_digits(text: str, at: int) -> bool:
    """A comma that was meant as a decimal marker; its number says so."""
    return text[at - 1 : at].isdecimal() and text[at + 1 : at + 2].isdecimal()


def _change(piece: Passage) -> Change:
    """``SYMBOL "=" (given | sum)``; a number with its unit and band is a value."""
    scanner = Scanner(piece)
    if found := _JOINT.search(piece.text):
        raise Mistake(
            error(
                "case-form",
                f"{shown(found[1])} stands between changes, which are separated by commas",
                piece.span(*found.span(1)),
                help="write them as in I_2 = 0 mA, n_LED = n_LED - 1",
            )
        )
    symbol = used(scanner, "a symbol and what it becomes, as in n_LED = n_LED - 1")
    if scanner.look(_BRACKET):
        scanner.refuse("`=` (the unit of a value stands after its number)")
    scanner.expect(_EQUALS, "`=`")
    if scanner.look(_QUOTE):
        raise Mistake(not_yet("a text value", scanner.span(scanner.at, scanner.at + 1)))
    value = _given(piece, scanner.at)
    tree = None if value else _formula(scanner)
    return Change(symbol, value, tree, " ".join(piece.text.split()))


def _given(piece: Passage, at: int) -> Given | None:
    """The value that is all of the right side; None for a formula."""
    scanner = Scanner(piece, at)
    if not scanner.look(_VALUE):
        return None
    try:
        value = with_makeup(scanner, given(scanner))
    except Mistake:
        if _MEANT.search(piece.text, at):
            raise
        return None
    if not scanner.ended:
        if value.style in (Style.FIXED, Style.UNEQUAL) and value.makeup is None:
            return None
        scanner.refuse("a tolerance or the end of the change")
    if value.style is Style.UNEQUAL and _APART.search(piece.text, at):
        raise Mistake(
            error(
                "tolerance",
                "this can be read as a value with its tolerance and as a sum",
                value.span,
                help="write a tolerance as in -20 % +50 %, a sum in parentheses",
            )
        )
    return value


def _formula(scanner: Scanner) -> Node:
    tree = formula(scanner)
    if found := scanner.look(_BAND) or scanner.look(MAKEUP_WORD):
        raise Mistake(
            error(
                "tolerance",
                "a formula has no tolerance of its own",
                scanner.span(*found.span()),
                help="it takes over the bands of what it names; a band stands after a value",
            )
        )
    if not scanner.ended:
        scanner.refuse("an operator, a comma or the end of the case")
    return tree
