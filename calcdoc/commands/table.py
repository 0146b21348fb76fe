"""The verdict table for the terminal."""

from calcdoc.commands.verdicts import undecided
from calcdoc.records.record import Criterion, Record
from calcdoc.records.wording import counted, typeset
from calcdoc.text.cases import NORMAL

_SIGNS = {"<=": "≤", ">=": "≥", "<": "<", ">": ">"}
Row = tuple[str, ...]
_RIGHT = frozenset({2, 4, 5})
"""Columns of numbers."""


def verdict_table(record: Record) -> str:
    """Title, one row for each criterion, and the bottom line."""
    document = record.document
    head = f"{document.number} revision {document.revision}: {document.title}"
    rows = [_row(each) for each in record.criteria]
    lines = [head, "", *_aligned(rows), ""] if rows else [head, ""]
    return "\n".join((*lines, *_bottom(record)))


def _row(criterion: Criterion) -> Row:
    what = criterion.description or " ".join(filter(None, (criterion.text, criterion.clauses)))
    if criterion.value is None and criterion.method in ("test", "inspection", "none"):
        return (criterion.id, _verdict(criterion), "", "", "", "", criterion.text)
    if criterion.value is None:
        return (criterion.id, _verdict(criterion), "", "", "", "", what)
    if criterion.description and "margin" in criterion.clauses:
        what += f" {typeset(criterion.clauses)}"
    at = ", ".join(f"{symbol} {typeset(text)}" for symbol, text in criterion.governing.items())
    where = "; ".join(filter(None, (_case(criterion), f"at {at}" if at else "")))
    return (
        criterion.id,
        _verdict(criterion),
        typeset(criterion.value_text),
        _SIGNS[criterion.relation],
        typeset(criterion.limit_text),
        f"margin {typeset(criterion.margin_text)}",
        f"{what}{f' ({where})' if where else ''}",
    )


def _case(criterion: Criterion) -> str:
    return f"in {criterion.case}" if criterion.case not in ("", NORMAL) else ""


def _verdict(criterion: Criterion) -> str:
    """The verdict in words; an accepted failure stays a failure."""
    if criterion.accepted:
        return f"{criterion.verdict}, accepted"
    if criterion.route_of:
        return f"({criterion.verdict})"
    return criterion.verdict


def _aligned(rows: list[Row]) -> list[str]:
    widths = [max(len(row[column]) for row in rows) for column in range(len(rows[0]))]
    return [
        "  "
        + "  ".join(
            cell.rjust(width) if column in _RIGHT else cell.ljust(width)
            for column, (cell, width) in enumerate(zip(row, widths, strict=True))
        ).rstrip()
        for row in rows
    ]


def _bottom(record: Record) -> list[str]:
    """The bottom line, then what is open."""
    said = [record.verdict.bottom_line]
    said += [f"{each.id}: {each.reason}" for each in record.criteria if each.reason]
    said += [f"{each.id} {case}" for each in record.criteria for case in undecided(each)]
    said += [f"{each.id}: {each.accepted}" for each in record.criteria if each.accepted]
    said += [
        f"{each.id} differs by {typeset(each.difference_text)}"
        for each in record.crosschecks
        if not each.agrees
    ]
    open_ones = [each.id or each.symbol for each in record.assumptions if each.state == "open"]
    if open_ones:
        said.append(f"{counted(len(open_ones), 'open assumption')}: {', '.join(open_ones)}")
    tests = [each.id for each in record.criteria if each.verdict in ("by test", "by inspection")]
    if tests:
        said.append(f"{counted(len(tests), 'criterion', 'criteria')} not calculated:"
                    f" {', '.join(tests)}")  # fmt: skip
    unverified = dict.fromkeys(name for each in record.quantities for name in each.unverified)
    said += [f"values not verified: {name}" for name in unverified]
    return [*said, *record.notices]
