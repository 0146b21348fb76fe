"""The rule of a `crosschecks` block: two independent ways to one quantity must agree."""

import re
from typing import Final

from calcdoc.problems import Mistake, error
from calcdoc.text.cells import basis, columns, labelled, plain
from calcdoc.text.formula import formula
from calcdoc.text.given import Given, given
from calcdoc.text.passage import Passage
from calcdoc.text.scan import Scanner, not_yet
from calcdoc.text.statements import CrosscheckStatement

_FORM: Final = re.compile(r"(against|not[ \n]+below|not[ \n]+above)\b")
_WITHIN: Final = re.compile(r"within\b")
_MEASURED: Final = re.compile(r"measured\b")
CROSSCHECK_COLUMNS: Final = ("cross-check", "description", "basis")


def crosscheck(statement: Passage) -> CrosscheckStatement:
    """``ID ":" sum ("against" sum "within" share | "not below" sum | "not above" sum)``"""
    first, description, source = columns(statement, CROSSCHECK_COLUMNS)
    name, scanner = labelled(first, "the id of the cross-check and a colon, as in K1:")
    if found := scanner.look(_MEASURED):
        raise Mistake(not_yet("`measured`", scanner.span(*found.span())))
    begin = scanner.at
    left = formula(scanner)
    form = scanner.take(_FORM)
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
