"""Acceptance criteria: an inequality with clauses, or a verdict that is not calculated."""

import re
from fractions import Fraction
from typing import Final

from calcdoc.frozen import replace
from calcdoc.problems import Mistake, error
from calcdoc.text.accepting import ACCEPT, ANY_OF, NEARLY_ACCEPT, acceptance, any_of
from calcdoc.text.cases import CLAUSE_STARTS, scope
from calcdoc.text.cells import basis, columns, labelled, plain
from calcdoc.text.derivation import index_set
from calcdoc.text.formula import formula
from calcdoc.text.given import given
from calcdoc.text.literal import resolve
from calcdoc.text.nodes import Node
from calcdoc.text.passage import Passage
from calcdoc.text.points import point
from calcdoc.text.scan import Scanner, shown
from calcdoc.text.statements import (
    Acceptance,
    AnyOf,
    Clauses,
    Inequality,
    Margin,
    Uncalculated,
)
from calcdoc.units import ONE

_UNCALCULATED: Final = re.compile(r"(by test|by inspection|not applicable)\s*:\s*")
_NEARLY: Final = re.compile(
    r"(by|not)\s+[a-z]+(?=\s*(:|$))|(test|inspection|tested|inspected)(?=\s*:)"
)
_NO_COLON: Final = re.compile(r"(?:by test\b|by inspection\b|not applicable\b)(?=\s+\S)")
_DIGIT: Final = re.compile(r"[0-9]")
_COMPARE: Final = re.compile(r"<=|>=|<|>")
_NOMINAL: Final = re.compile(r"nominal\b")
_CLAUSE: Final = re.compile(rf"({'|'.join(CLAUSE_STARTS)})\b")
_METHOD: Final = re.compile(r"(extremes|root sum square|sampling)\b")
_MARGIN: Final = re.compile(r"margin\b")
CRITERION_COLUMNS: Final = ("criterion", "description", "basis")


def criterion(statement: Passage) -> Inequality | Uncalculated | AnyOf | Acceptance:
    """``ID ":" (inequality clause* | "any of" ids | verdict ":" text) | description | basis``"""
    if ACCEPT.match(statement.text):
        return acceptance(statement)
    if found := NEARLY_ACCEPT.match(statement.text):
        raise Mistake(
            error(
                "acceptance",
                f"expected `accept` and the id of a criterion, found {shown(found[1])}",
                statement.span(*found.span(1)),
                help="write accept R3 | reason | [DEV-3] until 2027-06-30",
            )
        )
    first, description, source = columns(statement, CRITERION_COLUMNS)
    name, scanner = labelled(first, "the id of the criterion and a colon, as in R1:")
    if found := scanner.take(_UNCALCULATED):
        text = plain(first.part(found.end(), len(first.text)))
        if not text:
            scanner.refuse(f"what `{found[1]}` is about")
        return Uncalculated(name, found[1], text, plain(description), basis(source), first.whole)
    if found := scanner.look(_NO_COLON):
        scanner.at = found.end()
        scanner.refuse(
            f"`:` after `{found.group()}`", advice=f"write {found.group()}: and what it is about"
        )
    if found := scanner.look(_NEARLY):
        raise Mistake(
            error(
                "criterion-form",
                f"expected `by test:`, `by inspection:` or `not applicable:`, found"
                f" `{found[0].strip()}`",
                scanner.span(*found.span()),
                help="write the words, a colon and what it is about, as in by test: temperatures",
            )
        )
    if scanner.take(ANY_OF):
        return any_of(scanner, name, plain(description), basis(source))
    operands, operators = _inequality(scanner)
    clauses = _clauses(scanner)
    return Inequality(
        name, operands, operators, clauses, plain(description), basis(source), first.whole
    )


def _inequality(scanner: Scanner) -> tuple[tuple[Node, ...], tuple[str, ...]]:
    """``inequality = sum compare sum [compare sum]``, both signs pointing the same way."""
    start = scanner.at
    operands, operators = [formula(scanner)], []
    while found := scanner.take(_COMPARE):
        operators.append(found.group())
        operands.append(formula(scanner))
    if not operators:
        scanner.refuse("<=, >=, < or >")
    span = scanner.span(start, scanner.at)
    if len(operators) > 2:  # noqa: PLR2004  (one or two sides)
        raise Mistake(
            error(
                "criterion-form",
                "a criterion has one or two limits",
                span,
                help="write the further limits as criteria of their own",
            )
        )
    if len({sign[0] for sign in operators}) > 1:
        raise Mistake(
            error(
                "criterion-form",
                "both signs of a two-sided criterion point the same way",
                span,
                help="write the least first: a <= x <= b",
            )
        )
    return tuple(operands), tuple(operators)


def _clauses(scanner: Scanner) -> Clauses:
    """``clause = by | at | in | with | for | when``, each once, in any order."""
    clauses, seen = Clauses(), set()
    scanner.blanks()
    begin = scanner.at
    while not scanner.ended:
        found = scanner.take(_CLAUSE)
        if found is None:
            scanner.refuse(
                "an operator, a clause (by, at, in, when, with margin) or the end of the criterion"
            )
        word = found[1]
        if word in seen:
            raise Mistake(
                error(
                    "criterion-form",
                    f"the clause `{word}` stands here twice",
                    scanner.span(*found.span()),
                    help="keep one of them",
                )
            )
        seen.add(word)
        clauses = _clause(scanner, clauses, word, found.start())
    if clauses.at_nominal and clauses.by != "extremes":
        raise Mistake(
            error(
                "criterion-form",
                f"at nominal no part varies, so there is nothing to judge by {clauses.by}",
                scanner.span(begin, len(scanner.passage.text)),
                help="keep one of the two clauses",
            )
        )
    text = " ".join(scanner.passage.text[begin:].split())
    return replace(clauses, text=text)


def _clause(scanner: Scanner, clauses: Clauses, word: str, start: int) -> Clauses:
    if word == "in":
        return replace(clauses, scope=scope(scanner))
    if word == "when":
        return replace(clauses, when=_when(scanner))
    if word == "for":
        scanner.at = start
        return replace(clauses, index=index_set(scanner, None))
    if word == "by":
        found = scanner.take(_METHOD)
        if found is None:
            scanner.refuse("`extremes`, `root sum square` or `sampling`")
        share = _share(scanner) if found[1] == "sampling" else None
        end = len(scanner.passage.text[: scanner.at].rstrip())
        by_span = scanner.span(start, end)
        return replace(clauses, by=found[1], share=share, by_span=by_span)
    if word == "with":
        scanner.expect(_MARGIN, "`margin` after `with`")
        return replace(clauses, margin=_margin(scanner))
    if scanner.take(_NOMINAL):
        return replace(clauses, at_nominal=True)
    return replace(clauses, at=point(scanner, "`nominal`, or a symbol with its value"))


def _when(scanner: Scanner) -> Node:
    """``when = condition``, up to the next clause."""
    if scanner.ended or scanner.look(_CLAUSE):
        scanner.refuse("a condition, as in when P_in > 5 W")
    return formula(scanner, conditions=True)


def _share(scanner: Scanner) -> Fraction:
    """``"sampling" share``, a share of the draws in per cent, or 0.997 as a plain number."""
    if not scanner.look(_DIGIT):
        scanner.refuse("the share of draws that must meet it, as in by sampling 99.7 %")
    value = given(scanner)
    share = value.unit.to_si(value.nominal)
    if value.varies or value.unit.dimension != ONE or not 0 < share < 1:
        raise Mistake(
            error(
                "criterion-form",
                "sampling asks for a share of the draws between 0 % and 100 %",
                value.span,
                help="write by sampling 99.7 %",
            )
        )
    return share


def _margin(scanner: Scanner) -> Margin:
    value = given(scanner)
    unit = value.units[0] if value.units else None
    is_share = unit is not None and [each.word for each in unit.words] == ["%"]
    if value.varies or value.nominal < 0 or (unit and resolve(unit).celsius):
        raise Mistake(
            error(
                "criterion-form",
                "a margin is one value that is not negative",
                value.span,
                help="write a share of the limit (10 %) or a difference (5 K)",
            )
        )
    return Margin(value, is_share, value.span)
