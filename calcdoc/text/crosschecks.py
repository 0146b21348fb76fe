"""The rules of a `crosschecks` block: two independent ways to one quantity must agree."""

import re
from typing import Final

from calcdoc.problems import Mistake, error
from calcdoc.text.cells import basis, columns, label, labelled, plain
from calcdoc.text.formula import formula
from calcdoc.text.given import Given, given, no_makeup
from calcdoc.text.names import LETTER
from calcdoc.text.passage import Passage
from calcdoc.text.points import point
from calcdoc.text.scan import Scanner
from calcdoc.text.statements import Basis, CrosscheckStatement, Label, Measurement

_FORM: Final = re.compile(r"(against|not[ \n]+below|not[ \n]+above)\b")
_NOT: Final = re.compile(r"not\b")
_MEASURE: Final = re.compile(rf"meas[a-z]*[ \n]+(?=[{LETTER}][^|]*=)")
_MEASURED_SO: Final = "write measured P_m = 4.61 W ± 1 % against P_in"
_WITHIN: Final = re.compile(r"within\b")
_MEASURED: Final = re.compile(rf"measured[ \n]+(?=[{LETTER}])")
_EQUALS: Final = re.compile(r"=(?!=)")
_BRACKET: Final = re.compile(r"\[")
_AGAINST: Final = re.compile(r"against\b")
_AT: Final = re.compile(r"at\b")
CROSSCHECK_COLUMNS: Final = ("cross-check", "description", "basis")


def crosscheck(statement: Passage) -> CrosscheckStatement | Measurement:
    """``ID ":" (measured | sum ("against" sum "within" share | bound sum))``"""
    first, description, source = columns(statement, CROSSCHECK_COLUMNS)
    name, scanner = labelled(first, "the id of the cross-check and a colon, as in K1:")
    begin = scanner.at
    if scanner.take(_MEASURED):
        return _measurement(scanner, name, begin, plain(description), basis(source))
    if scanner.look(_MEASURE):
        scanner.refuse("`measured` before a measured value", advice=_MEASURED_SO)
    left = formula(scanner)
    form = scanner.take(_FORM)
    if form is None and scanner.take(_NOT):
        scanner.refuse("`below` or `above` after `not`")
    if form is None:
        scanner.refuse("`against`, `not below` or `not above`")
    right = formula(scanner)
    word = " ".join(form[1].split())
    allowed = _allowed(scanner) if word == "against" else None
    if not scanner.ended:
        scanner.refuse("the end of the cross-check")
    text = " ".join(scanner.passage.text[begin:].split())
    return CrosscheckStatement(
        name, left, right, word, allowed, plain(description), basis(source), text, first.whole
    )


def _allowed(scanner: Scanner) -> Given:
    scanner.expect(_WITHIN, "`within` and the share that is allowed, as in within 25 %")
    value = given(scanner)
    unit = value.units[0] if value.units else None
    is_share = unit is not None and [word.word for word in unit.words] == ["%"]
    if value.varies or value.nominal <= 0 or not is_share:
        raise Mistake(
            error(
                "crosscheck-form",
                "the allowed difference is a share of the second side, in per cent",
                value.span,
                help="write within 25 %",
            )
        )
    return value


def _measurement(
    scanner: Scanner, name: Label, begin: int, description: str, source: Basis
) -> Measurement:
    """``"measured" SYMBOL "=" given "against" sum ["at" point]``, behind ``measured``."""
    symbol = label(scanner, "what the measured value is called, as in measured P_m = 4.61 W ± 1 %")
    if scanner.look(_BRACKET):
        scanner.refuse("`=` (the unit of a value stands after its number)")
    scanner.expect(_EQUALS, "`=`")
    value = given(scanner)
    no_makeup(scanner)
    if not value.varies:
        raise Mistake(
            error(
                "crosscheck-form",
                "a measured value has an uncertainty",
                value.span,
                help="write how far the instrument may be off, as in ± 1.5 %",
            )
        )
    scanner.expect(_AGAINST, "`against` and what was computed")
    second = formula(scanner)
    points = point(scanner, "a symbol with its value") if scanner.take(_AT) else ()
    if not scanner.ended:
        scanner.refuse("`at` and the conditions of the measurement, or the end")
    text = " ".join(scanner.passage.text[begin:].split())
    return Measurement(
        name, symbol, value, second, points, description, source, text, scanner.passage.whole
    )
