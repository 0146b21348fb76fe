"""SARIF 2.1.0: findings of the texts, failing criteria and differing cross-checks, with places.

One run for all files. A rule is listed when it has a result. Columns count code points from 1, as
everywhere in calcdoc, and an end column stands behind the last character. A file that cannot be
read, or that we failed on, has no place to point at: it is a notification of the tool.
"""

import os
from collections.abc import Iterable, Mapping, Sequence
from pathlib import Path
from typing import Final
from urllib.parse import quote

from calcdoc import __version__
from calcdoc.commands.checked import Checked
from calcdoc.commands.verdicts import criterion_said, crosscheck_said, named
from calcdoc.problems import Finding
from calcdoc.problems.codes import codes
from calcdoc.problems.finding import Place
from calcdoc.records.record import Criterion
from calcdoc.records.store import to_json
from calcdoc.source import SourceFile, Span

SCHEMA: Final = (
    "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"
)
_FAILS: Final = """\
A combination of conditions, tolerances and assumptions breaks the limit, or leaves less margin \
than is asked for."""
_OPEN: Final = """\
No combination was found that breaks the limit, but that there is none could not be proven."""
_DIFFERS: Final = """\
A cross-check compares a result with an independent one. Where they differ by more than is \
allowed, one of them is wrong or is used outside its validity."""
VERDICTS: Final = {
    "criterion-fails": ("a criterion fails", _FAILS),
    "criterion-not-decided": ("a criterion is not decided", _OPEN),
    "crosscheck-differs": ("two ways to one quantity disagree", _DIFFERS),
}
"""Rules that are no problem of the text, with title and reason."""
_OF_VERDICT: Final = {
    "fail": ("criterion-fails", "error"),
    # SARIF's kind "open" means just this, but it demands the level "none", which viewers hide:
    # an undecided criterion has to be seen, so it is a warning of a rule of its own.
    "not decided": ("criterion-not-decided", "warning"),
}
_Data = dict[str, object]


def sarif(checked: Sequence[Checked]) -> bytes:
    """All files as one log with one run."""
    sheets = _sheets(checked)
    seen = [
        result for index, each in enumerate(checked) for result in _results(each, index, sheets)
    ]
    rules = sorted({str(result["ruleId"]) for result in seen})
    indices = {rule: index for index, rule in enumerate(rules)}
    run = {
        "tool": {
            "driver": {
                "name": "calcdoc",
                "version": __version__,
                "rules": [_rule(each) for each in rules],
            }
        },
        "columnKind": "unicodeCodePoints",
        "newlineSequences": ["\r\n", "\n", "\r"],
        "artifacts": [
            *(_artifact(each) for each in checked),
            *(_hashed(_uri(path), each) for path, (each, _) in sheets.items()),
        ],
        "invocations": [_invocation(checked)],
        "results": [{**each, "ruleIndex": indices[str(each["ruleId"])]} for each in seen],
    }
    return to_json({"$schema": SCHEMA, "version": "2.1.0", "runs": [run]})


def _rule(name: str) -> _Data:
    if name in VERDICTS:
        title, why = VERDICTS[name]
        return {"id": name, "shortDescription": _text(title), "fullDescription": _text(why)}
    code = codes()[name]
    return {
        "id": name,
        "shortDescription": _text(code.title),
        "fullDescription": _text(code.why),
        "help": _text(f"An example that is refused:\n\n{code.example}"),
    }


_Sheets = Mapping[str, tuple[SourceFile, int]]
"""Sheets of methods by path, with their places in the list of artifacts."""


def _sheets(checked: Sequence[Checked]) -> _Sheets:
    """Every sheet that a place names, once, behind the designs."""
    found = {
        span.path: each.sheets[span.path]
        for each in checked
        for span in _spans(each)
        if span.path in each.sheets
    }
    return {path: (each, len(checked) + at) for at, (path, each) in enumerate(found.items())}


def _spans(checked: Checked) -> Iterable[Span]:
    for finding in checked.findings:
        yield finding.place.span
        yield from (each.span for each in finding.related)
    yield from checked.places.values()


def _hashed(uri: str, source: SourceFile) -> _Data:
    return {"location": {"uri": uri}, "hashes": {"sha-256": source.sha256}}


def _artifact(checked: Checked) -> _Data:
    location: _Data = {"location": {"uri": _uri(checked.name)}, "roles": ["analysisTarget"]}
    if checked.source:
        location["hashes"] = {"sha-256": checked.source.sha256}
    return location


def _invocation(checked: Sequence[Checked]) -> _Data:
    """Whether every file could be checked, and why not."""
    troubles = [
        {
            "level": "error",
            "message": _text(each.trouble),
            "locations": [{"physicalLocation": _physical(each.name, index)}],
        }
        for index, each in enumerate(checked)
        if each.trouble
    ]
    done: _Data = {"executionSuccessful": not troubles}
    return {**done, "toolExecutionNotifications": troubles} if troubles else done


def _results(checked: Checked, index: int, sheets: _Sheets) -> Iterable[_Data]:
    """Findings in the order of the text, then criteria and cross-checks in the author's."""
    source = checked.source
    if source is None:
        return
    where = _Where(source, checked.name, index, sheets)
    for finding in checked.findings:
        yield _finding(finding, where)
    if checked.record is None:
        return
    yield from _criteria(checked.record.criteria, checked.places, where)
    for crosscheck in checked.record.crosschecks:
        if not crosscheck.agrees:
            said = f"{named(crosscheck)}: {crosscheck_said(crosscheck)}"
            span = checked.places[crosscheck.id]
            yield _result("crosscheck-differs", "error", said, where.location(span))


def _criteria(
    criteria: Iterable[Criterion], places: Mapping[str, Span], where: "_Where"
) -> Iterable[_Data]:
    for criterion in criteria:
        if criterion.verdict in _OF_VERDICT and not criterion.route_of:
            rule, level = _OF_VERDICT[criterion.verdict]
            said = f"{named(criterion)}: {criterion.verdict}: {criterion_said(criterion)}"
            result = _result(rule, level, said, where.location(places[criterion.id]))
            yield (
                {**result, "suppressions": _suppressed(criterion.accepted)}
                if (criterion.accepted)
                else result
            )


def _suppressed(accepted: str) -> list[_Data]:
    """An accepted failure, as those who read such logs expect it."""
    return [{"kind": "inSource", "status": "accepted", "justification": accepted}]


def _finding(finding: Finding, where: "_Where") -> _Data:
    said = f"{finding.message}\nhelp: {finding.help}" if finding.help else finding.message
    place = where.location(finding.place.span)
    result = _result(finding.code, finding.severity.value, said, place)
    related = [where.related(number, each) for number, each in enumerate(finding.related)]
    return {**result, "relatedLocations": related} if related else result


def _result(rule: str, level: str, said: str, location: _Data) -> _Data:
    return {"ruleId": rule, "level": level, "message": _text(said), "locations": [location]}


class _Where:
    """Places of one file, and of the sheets it applies."""

    def __init__(self, source: SourceFile, name: str, index: int, sheets: _Sheets) -> None:
        self._own, self._name, self._sheets = (source, index), name, sheets

    def location(self, span: Span) -> _Data:
        in_sheet = span.path != self._own[0].path
        name = span.path if in_sheet else self._name
        source, index = self._sheets[span.path] if in_sheet else self._own
        line, column = source.position(span.start)
        end_line, end_column = source.position(span.end)
        region = {
            "startLine": line, "startColumn": column,
            "endLine": end_line, "endColumn": end_column,
        }  # fmt: skip
        return {"physicalLocation": {**_physical(name, index), "region": region}}

    def related(self, number: int, place: Place) -> _Data:
        location: _Data = {"id": number, **self.location(place.span)}
        return {**location, "message": _text(place.label)} if place.label else location


def _physical(name: str, index: int) -> _Data:
    return {"artifactLocation": {"uri": _uri(name), "index": index}}


def _uri(name: str) -> str:
    """A file as the user named it, as a URI: relative ones stay relative."""
    path = Path(name)
    if path.is_absolute():
        return path.as_uri()
    return quote(os.fsencode(path.as_posix()), safe="/")


def _text(text: str) -> _Data:
    """A message; what a file name holds that is no character is replaced."""
    return {"text": text.encode(errors="replace").decode()}
