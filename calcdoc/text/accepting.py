"""Criteria about criteria: one of several routes is enough, and failures that are accepted."""

import re
from datetime import date
from typing import Final

from calcdoc.problems import Mistake, error
from calcdoc.text.cases import case_names
from calcdoc.text.cells import basis, columns, plain, used
from calcdoc.text.names import LETTER
from calcdoc.text.passage import Passage
from calcdoc.text.scan import Scanner
from calcdoc.text.statements import Acceptance, AnyOf, Basis, Label

ACCEPT: Final = re.compile(rf"accept[ \n]+(?=[{LETTER}])")
NEARLY_ACCEPT: Final = re.compile(rf"(accept[a-z]+)[ \n]+(?:of[ \n]+)?(?=[{LETTER}])")
ANY_OF: Final = re.compile(r"any[ \n]+of\b")
ACCEPT_COLUMNS: Final = ("accept", "reason", "basis")
_COMMA: Final = re.compile(r",")
_JOINT: Final = re.compile(r"(or|and)\b")
_IN: Final = re.compile(r"in\b")
_EVERY: Final = re.compile(r"every\b")
_UNTIL: Final = re.compile(r"(?:^|(?<=[ \n]))until\b[ \n]*")
_DATE: Final = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}")


def any_of(scanner: Scanner, name: Label, description: str, source: Basis) -> AnyOf:
    """``ID ":" "any of" ID ("," ID)+``, behind ``any of``."""
    members = [used(scanner, "the id of a criterion")]
    while scanner.take(_COMMA):
        members.append(used(scanner, "the id of a further criterion"))
    if scanner.look(_JOINT):
        scanner.refuse("`,` and a further criterion", advice="write any of H1, H2")
    if not scanner.ended:
        scanner.refuse("`,` and a further criterion, or the end of the criterion")
    if len(members) == 1:
        raise Mistake(
            error(
                "criterion-form",
                "`any of` chooses among two criteria or more",
                members[0].span,
                help="name the others after commas, as in any of H1, H2",
            )
        )
    text = "any of " + ", ".join(each.name for each in members)
    return AnyOf(name, tuple(members), text, description, source, scanner.passage.whole)


def acceptance(statement: Passage) -> Acceptance:
    """``"accept" ID ["in" NAME ("," NAME)*] | reason | basis "until" date``"""
    first, reason, source = columns(statement, ACCEPT_COLUMNS)
    scanner = Scanner(first)
    scanner.expect(ACCEPT, "`accept`")
    criterion = used(scanner, "the id of a criterion")
    cases: tuple[Label, ...] = ()
    if scanner.take(_IN):
        if scanner.look(_EVERY):
            scanner.refuse("the name of a case (for all of them leave `in` out)")
        cases = case_names(scanner, "the name of a case")
    if not cases and scanner.look(_COMMA):
        raise Mistake(
            error(
                "acceptance",
                "an acceptance is about one criterion",
                scanner.span(scanner.at, len(first.text)),
                help="write a line for each",
            )
        )
    if not scanner.ended:
        scanner.refuse("`in` and the names of cases, or the end of the column")
    if not reason.text:
        raise Mistake(
            error(
                "acceptance",
                "an acceptance has a reason",
                first.whole,
                help="write it in the second column: accept R3 | reason | [DEV-3] until 2027-06-30",
            )
        )
    rest, last = _until(source, first)
    text = " ".join(first.text.split())
    day = Label(last.text, last.whole)
    return Acceptance(
        criterion, cases, plain(reason), basis(rest), day.name, day.span, text, first.whole
    )


def _until(cell: Passage, first: Passage) -> tuple[Passage, Passage]:
    """The basis without its end, and the last day an acceptance holds."""
    *_, found = (None, *_UNTIL.finditer(cell.text))
    if found is None:
        raise Mistake(
            error(
                "acceptance",
                "an acceptance ends on a day",
                cell.whole if cell.text else first.whole,
                help="write until and the last day at the end of the basis: until 2027-06-30",
            )
        )
    day = cell.part(found.end(), len(cell.text))
    if _DATE.fullmatch(day.text) and not _exists(day.text):
        raise Mistake(
            error(
                "acceptance",
                f"there is no day {day.text}",
                day.whole,
                help="write a day of the calendar, as in until 2027-06-30",
            )
        )
    if not _DATE.fullmatch(day.text):
        raise Mistake(
            error(
                "acceptance",
                "the last day of an acceptance stands at the end, as a date",
                day.whole if day.text else cell.span(*found.span()),
                help="write it as until 2027-06-30",
            )
        )
    return cell.part(0, found.start()), day


def _exists(text: str) -> bool:
    try:
        date.fromisoformat(text)
    except ValueError:
        return False
    return True
