"""JUnit XML: a test suite for each design, a test case for each criterion and cross-check.

    pass              a case with nothing in it but its numbers
    fail, differs     failure: it was computed, and it does not hold
    not decided       error: JUnit's word for a test that came to no result; it keeps apart what
                      fails and what is not known
    by test, by inspection, not applicable
                      skipped: nothing was computed
    one of several routes
                      a case with its numbers; what counts is the criterion that names the routes
    a text with errors, a file that cannot be read
                      one case ``text`` or ``file`` with an error for each finding

A design without a record is named by its file, as its title block may be what is wrong.
"""

import re
from collections.abc import Sequence
from typing import Final
from xml.etree.ElementTree import Element, SubElement, indent, tostring

from calcdoc.commands.checked import Checked
from calcdoc.commands.verdicts import criterion_said, crosscheck_said, named, stated
from calcdoc.problems import Severity
from calcdoc.problems.views import full, headline
from calcdoc.records.record import Criterion, Crosscheck, Record

_ELEMENTS: Final = {
    "fail": "failure",
    "not decided": "error",
    "by test": "skipped",
    "by inspection": "skipped",
    "not applicable": "skipped",
}
"""Verdicts to the element that says them; a pass has none."""
_COUNTED: Final = {"failures": "failure", "errors": "error", "skipped": "skipped"}
_NO_XML: Final = re.compile("[^\t\n\r\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
"""Characters that XML 1.0 cannot hold in any spelling."""


def junit(checked: Sequence[Checked]) -> bytes:
    """All designs as one document in UTF-8."""
    root = Element("testsuites", name="calcdoc")
    for each in checked:
        _suite(root, each)
    for name in ("tests", "failures", "errors"):
        root.set(name, str(sum(int(suite.get(name, "0")) for suite in root)))
    indent(root)
    text = tostring(root, encoding="unicode")
    return f'<?xml version="1.0" encoding="UTF-8"?>\n{text}\n'.encode()


def _suite(root: Element, checked: Checked) -> None:
    record = checked.record
    name = _suite_name(record) if record else checked.name
    suite = SubElement(root, "testsuite", name=_plain(name), file=_plain(checked.name))
    if record:
        for criterion in record.criteria:
            _criterion(_case(suite, record, criterion), criterion)
        for crosscheck in record.crosschecks:
            _crosscheck(_case(suite, record, crosscheck), crosscheck)
    elif checked.source:
        _text(suite, checked)
    else:
        case = SubElement(suite, "testcase", classname=_plain(checked.name), name="file")
        _say(case, "error", "file", checked.trouble.partition("\n")[0], checked.trouble)
    _warnings(suite, checked)
    cases = suite.findall("testcase")
    suite.set("tests", str(len(cases)))
    for count, element in _COUNTED.items():
        suite.set(count, str(sum(case.find(element) is not None for case in cases)))


def _suite_name(record: Record) -> str:
    return f"{record.document.number}-{record.document.revision}"


def _case(suite: Element, record: Record, entry: Criterion | Crosscheck) -> Element:
    number = _plain(record.document.number)
    return SubElement(suite, "testcase", classname=number, name=_plain(named(entry)))


def _criterion(case: Element, criterion: Criterion) -> None:
    element = None if criterion.route_of else _ELEMENTS.get(criterion.verdict)
    if criterion.value is None and element:
        said = f"{criterion.verdict}: {criterion_said(criterion)}"
        text = f"{stated(criterion)}\n{said}" if criterion.by_case else ""
        _say(case, element, criterion.verdict, said, text)
        return
    said = criterion_said(criterion)
    if element is None:
        SubElement(case, "system-out").text = _plain(said)
        return
    _say(case, element, criterion.verdict, said, f"{stated(criterion)}\n{said}")


def _crosscheck(case: Element, crosscheck: Crosscheck) -> None:
    said = crosscheck_said(crosscheck)
    if crosscheck.agrees:
        SubElement(case, "system-out").text = _plain(said)
    else:
        _say(case, "failure", "cross-check differs", said)


def _text(suite: Element, checked: Checked) -> None:
    """One case with an error for each error of the text."""
    source = checked.source
    assert source is not None
    sources = {**checked.sheets, source.path: source}
    case = SubElement(suite, "testcase", classname=_plain(checked.name), name="text")
    for each in checked.findings:
        if each.severity is Severity.ERROR:
            _say(case, "error", each.code, each.message, full(each, sources))


def _warnings(suite: Element, checked: Checked) -> None:
    source = checked.source
    if source is None:
        return
    sources = {**checked.sheets, source.path: source}
    said = [headline(each, sources) for each in checked.findings
            if each.severity is Severity.WARNING]  # fmt: skip
    if said:
        SubElement(suite, "system-err").text = _plain("\n".join(said))


def _say(case: Element, element: str, kind: str, message: str, text: str = "") -> None:
    said = SubElement(case, element, type=kind, message=_plain(message))
    said.text = _plain(text) or None


def _plain(text: str) -> str:
    """A text that XML can hold."""
    return _NO_XML.sub("\ufffd", text)
