"""Findings for people (with the line and a caret), for editors and grep, and for tools."""

import unicodedata
from collections.abc import Iterable, Mapping
from typing import Final

from calcdoc.problems.finding import Finding, Place, Severity
from calcdoc.source import SourceFile

TAB = 4
WIDEST = 110
"""Characters of a source line that are shown; longer lines are cut around the place."""

_ACTING: Final = ("Cc", "Cs", "Zl", "Zp")
_TURNING: Final = frozenset("\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069")
"""Characters that turn the direction of a text, so that it is not what it looks like."""
_NO_CELL: Final = ("Mn", "Me", "Cf")

Sources = Mapping[str, SourceFile]


def in_order(findings: Iterable[Finding]) -> tuple[Finding, ...]:
    """Findings by place, then code, each said once."""
    return tuple(
        sorted(
            dict.fromkeys(findings),
            key=lambda f: (f.place.span.path, f.place.span.start, f.code, f.message),
        )
    )


def headline(finding: Finding, sources: Sources) -> str:
    """``path:line:column: error[code]: message``."""
    span = finding.place.span
    line, column = sources[span.path].position(span.start)
    severity = finding.severity.value
    return f"{span.path}:{line}:{column}: {severity}[{finding.code}]: {finding.message}"


def full(finding: Finding, sources: Sources) -> str:
    """The headline, the line with a caret, the related places, and the help."""
    shown = [headline(finding, sources)]
    places = (finding.place, *finding.related)
    numbers = [sources[each.span.path].position(each.span.start)[0] for each in places]
    margin = " " * len(str(max(numbers)))
    shown.append(f"{margin} |")
    shown += _excerpt(finding.place, sources, "^", margin)
    for place in finding.related:
        line, column = sources[place.span.path].position(place.span.start)
        shown.append(f"{margin} --> {place.span.path}:{line}:{column}")
        shown += _excerpt(place, sources, "-", margin)
    if finding.help:
        shown.append(f"help: {finding.help}")
    return "\n".join(shown)


def as_data(finding: Finding, sources: Sources) -> dict[str, object]:
    """A finding as plain data for JSON."""
    span = finding.place.span
    line, column = sources[span.path].position(span.start)
    return {
        "file": span.path,
        "line": line,
        "column": column,
        "code": finding.code,
        "severity": finding.severity.value,
        "message": finding.message,
        "help": finding.help,
    }


def has_errors(findings: Iterable[Finding]) -> bool:
    """Whether any finding stops the text from being evaluated."""
    return any(each.severity is Severity.ERROR for each in findings)


def _excerpt(place: Place, sources: Sources, mark: str, margin: str) -> list[str]:
    source, span = sources[place.span.path], place.span
    number, column = source.position(span.start)
    line = source.line(number)
    length = max(1, min(span.end - span.start, len(line) - column + 1))
    line, column, length = _cut(line, column, length)
    before, marked = line[: column - 1], line[column - 1 : column - 1 + length]
    caret = " " * _cells(before) + mark * max(1, _cells(marked))
    label = f" {place.label}" if place.label else ""
    return [
        f"{str(number).rjust(len(margin))} | {_flat(line)}".rstrip(),
        f"{margin} | {caret}{label}",
    ]


def _cut(line: str, column: int, length: int) -> tuple[str, int, int]:
    """The part of a long line around the place, with the column and length in it."""
    if len(line) <= WIDEST:
        return line, column, length
    start = max(0, min(column - 1 - WIDEST // 4, len(line) - WIDEST))
    head = "…" if start else ""
    tail = "…" if start + WIDEST < len(line) else ""
    column = column - start + len(head)
    return head + line[start : start + WIDEST] + tail, column, min(length, WIDEST - column + 1)


def _flat(line: str) -> str:
    """A line as shown: tabs expanded, characters a terminal would act on replaced."""
    return "".join(_shown(character) for character in line)


def _shown(character: str) -> str:
    if character == "\t":
        return " " * TAB
    if unicodedata.category(character) in _ACTING or character in _TURNING:
        return "\ufffd"
    return character


def _cells(text: str) -> int:
    """Character cells a text takes on a terminal."""
    return sum(_width(character) for character in _flat(text))


def _width(character: str) -> int:
    if unicodedata.category(character) in _NO_CELL:
        return 0
    return 2 if unicodedata.east_asian_width(character) in "WF" else 1
