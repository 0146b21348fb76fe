"""Modes and faults: a line for each in the body, and a table case by criterion on the cover."""

from collections.abc import Iterator
from html import escape
from typing import Final

from calcdoc.page import typeset
from calcdoc.page.lines import aside
from calcdoc.page.markup import Column, table, verdict
from calcdoc.page.view import View
from calcdoc.records.record import Case, CaseChange, Criterion

_BESIDE: Final = 8
"""Criteria that find room beside the names of cases; more go into a further table."""
_WHOLE: Final = 25
"""Rows of a table that one sheet can hold whole beside the rest of the cover."""
_NAME: Final = 22.0
"""Width of the column of names, in per cent."""


def case_line(view: View, case: Case) -> str:
    """A mode or a fault: its name, and what it changes from what to what."""
    side = aside([view.basis(case.basis), escape(case.kind)])
    about = f": {view.words(case.description)}" if case.description else ""
    rows = "".join(_change(view, each) for each in case.changes)
    return (
        f'<div class="wl" id="case-{escape(case.line)}"><span class="no">{escape(case.line)}</span>'
        f'{side}<p class="what"><b>{escape(case.kind.capitalize())} {escape(case.name)}</b>{about}'
        f"</p>{rows}</div>\n"
    )


def _change(view: View, change: CaseChange) -> str:
    """What becomes of one quantity, and what it is otherwise."""
    if change.formula:
        shown = view.math(f"{change.symbol} = {change.formula}")
        shown += f' <span class="req">=</span> {view.math(change.result, bold=True)}'
    else:
        shown = view.math(f"{change.symbol} = {change.result}", bold=True)
    said = [typeset.unbroken(change.band)] if change.band else []
    said.append(f"normally {typeset.quantity(change.normal)}")
    return f'<div class="eq">{shown} <span class="cl">{"; ".join(said)}</span></div>'


def case_tables(view: View) -> str:
    """Every case with the verdict and margin of each criterion that is judged in it."""
    if len(view.record.cases) == 1:
        return ""
    judged = [each for each in view.record.criteria if each.by_case]
    if not judged:
        return ""
    shown = "".join(_table(view, some) for some in _some(judged))
    shown += "".join(_reasons(view, each) for each in judged)
    return f'<h3 id="cases">Verdicts by case</h3>\n{shown}'


def _reasons(view: View, criterion: Criterion) -> str:
    """Why a criterion is not decided in cases, where its own line does not say it."""
    cases: dict[tuple[str, str], list[str]] = {}
    for name, here in criterion.by_case.items():
        if here.reason and name != criterion.case:
            cases.setdefault((here.verdict, here.reason), []).append(name)
    return "".join(
        f'<p class="band"><span class="cl">{escape(criterion.id)} in {escape(", ".join(names))}:'
        f"</span> {verdict(words)}, {view.sentence(reason)}</p>\n"
        for (words, reason), names in cases.items()
    )


def _some(criteria: list[Criterion]) -> Iterator[list[Criterion]]:
    """Criteria in groups of like size that find room side by side."""
    groups = -(-len(criteria) // _BESIDE)
    size = -(-len(criteria) // groups)
    for first in range(0, len(criteria), size):
        yield criteria[first : first + size]


def _table(view: View, criteria: list[Criterion]) -> str:
    width = (100 - _NAME) / max(len(criteria), _BESIDE // 2)
    columns = [Column("case", _NAME), *(Column(each.id, width) for each in criteria)]
    rows = [
        (_name(case), *(_cell(each, case.name) for each in criteria)) for case in view.record.cases
    ]
    kind = "cases whole" if len(rows) <= _WHOLE else "cases"
    return table(kind, "Each case with the verdict of each criterion", columns, rows)


def _name(case: Case) -> str:
    kind = "" if case.kind == "normal" else f"<small>{escape(case.kind)}</small> "
    link = f'<a href="#case-{escape(case.line)}">{escape(case.name)}</a>' if case.line else ""
    return f"{kind}{link or escape(case.name)}"


def _cell(criterion: Criterion, case: str) -> str:
    """Verdict and margin; a dash where the criterion is not judged.

    The verdict of one of several routes does not count on its own and stands in brackets.
    """
    here = criterion.by_case.get(case)
    if here is None:
        return '<span class="cl" title="not judged in this case">–</span>'
    route = criterion.route_of
    words = f"({escape(here.verdict)})"
    if not route:
        words = verdict(here.verdict, accepted=here.accepted is not None)
    margin = (
        f' <small class="nb">{typeset.quantity(here.margin_text)}</small>'
        if here.margin_text
        else ""
    )
    return f"{words}{margin}"
