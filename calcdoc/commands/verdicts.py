"""A criterion or a cross-check in one line, for the formats that other tools read."""

from typing import Final

from calcdoc.records.record import Criterion, Crosscheck
from calcdoc.records.wording import sentence, typeset
from calcdoc.text.cases import NORMAL

SIGNS: Final = {"<=": "≤", ">=": "≥", "<": "<", ">": ">"}


def named(entry: Criterion | Crosscheck) -> str:
    """Id and description, or what stands there when it is not described."""
    return f"{entry.id}: {entry.description or stated(entry)}"


def stated(entry: Criterion | Crosscheck) -> str:
    """The inequality with its clauses, the text of a test, or the comparison, as written."""
    if isinstance(entry, Criterion):
        return f"{entry.text} {entry.clauses}".rstrip()
    return f"{entry.first} {entry.form} {entry.second}"


def criterion_said(criterion: Criterion) -> str:
    """Value, limit, margin, the combination that governs, and what there is to remark."""
    remarks = [sentence(each) for each in (criterion.remark, criterion.reason) if each]
    if criterion.value is not None:
        case = f", in {criterion.case}" if criterion.case != NORMAL else ""
        numbers = (
            f"value {typeset(criterion.value_text)}, limit {SIGNS[criterion.relation]}"
            f" {typeset(criterion.limit_text)}, margin {typeset(criterion.margin_text)}"
            f"{case}{_at(criterion.governing)}"
        )
        remarks.insert(0, numbers)
    remarks += undecided(criterion)
    if criterion.unverified:
        remarks.append(f"on unverified values: {', '.join(criterion.unverified)}")
    if criterion.accepted:
        remarks.append(f"accepted: {criterion.accepted}")
    if criterion.route_of:
        remarks.append(f"one of the routes of {criterion.route_of}")
    return "; ".join(remarks or [criterion.text])


def undecided(criterion: Criterion) -> list[str]:
    """The cases without a verdict beside the one that governs, each with its reason."""
    return [
        f"not decided in {name}: {sentence(case.reason)}"
        for name, case in criterion.by_case.items()
        if case.verdict == "not decided" and name != criterion.case
    ]


def crosscheck_said(crosscheck: Crosscheck) -> str:
    """Both sides, the worst difference, what is allowed, and where."""
    allowed = f", allowed {typeset(crosscheck.allowed_text)}" if crosscheck.allowed_text else ""
    if crosscheck.first_band:
        band = f" ({typeset(crosscheck.second_band)})" if crosscheck.second_band else ""
        return (
            f"{stated(crosscheck)}: {crosscheck.first_band} measured,"
            f" {typeset(crosscheck.second_text)}{band} computed, difference"
            f" {typeset(crosscheck.difference_text)}{allowed}{_at(crosscheck.at)}"
        )
    return (
        f"{stated(crosscheck)}: {typeset(crosscheck.first_text)} and"
        f" {typeset(crosscheck.second_text)} at nominal, worst difference"
        f" {typeset(crosscheck.difference_text)}{allowed}{_at(crosscheck.at)}"
    )


def _at(combination: dict[str, str]) -> str:
    at = ", ".join(f"{symbol} = {typeset(text)}" for symbol, text in combination.items())
    return f", at {at}" if at else ""
