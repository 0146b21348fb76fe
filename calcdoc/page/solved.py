"""Lines of relations, restated results, sensitivities and cross-checks; rows of series."""

from html import escape

from calcdoc.page import typeset
from calcdoc.page.lines import BESIDE, aside, opened, worked_rows
from calcdoc.page.markup import ident, verdict
from calcdoc.page.view import View
from calcdoc.records.pictures import symbol
from calcdoc.records.record import (
    Crosscheck,
    Relation,
    Restated,
    Sensitivity,
    SensitivityRow,
)


def relation_line(view: View, relation: Relation) -> str:
    """A relation: the equation as stated, and where it is solved."""
    solved = view.places(relation.solved_in)
    side = aside(
        [
            view.basis(relation.basis),
            f"relation <i>{escape(relation.name)}</i>",
            f"solved in {solved}" if solved else "",
        ]
    )
    stated = view.math(f"{relation.left} = {relation.right}")
    return _line(
        f"r-{relation.line}",
        relation.line,
        f'{side}{opened(view, relation.description)}<div class="eq">{stated}</div>',
    )


def restated_line(view: View, restated: Restated) -> str:
    """A result in terms of chosen quantities, with its own numbers."""
    terms = ", ".join(view.symbol(each) for each in restated.terms)
    side = aside([f"{view.place(restated.symbol)} in terms of {terms}"])
    texts = (restated.formula, restated.substitution, restated.result)
    check = f'<p class="step">{view.step(restated.residual)}</p>' if restated.residual else ""
    return _line(
        f"r-{restated.line}",
        restated.line,
        f"{side}{opened(view, restated.description)}"
        f"{worked_rows(view, symbol(restated.symbol), texts)}{check}",
    )


def sensitivity_line(view: View, sensitivity: Sensitivity) -> str:
    """How a quantity answers to each of the quantities it depends on."""
    heads = (
        "of",
        "partial derivative",
        "at nominal",
        "1\N{NO-BREAK SPACE}% more makes",
        "the full band makes",
    )
    head = "".join(f'<th scope="col">{each}</th>' for each in heads)
    rows = "".join(_answers(view, each) for each in sensitivity.rows)
    side = aside([f"sensitivity of {view.symbol(sensitivity.symbol)}"])
    return _line(
        f"r-{sensitivity.line}",
        sensitivity.line,
        f'{side}{opened(view, sensitivity.description)}<table class="grid rows"><thead>'
        f"<tr>{head}</tr></thead><tbody>{rows}</tbody></table>",
    )


def _answers(view: View, row: SensitivityRow) -> str:
    ends = [
        f'<span class="nb">{typeset.quantity(each)}</span>'
        for each in (row.low_text, row.high_text)
        if each
    ]
    cells = (
        view.math(row.formula, room=14),
        typeset.quantity(row.value_text),
        typeset.quantity(row.per_cent_text) if row.per_cent_text else "–",
        " to ".join(ends),
    )
    shown = "".join(f"<td>{each}</td>" for each in cells)
    return f'<tr><th scope="row">{view.symbol(row.symbol)}</th>{shown}</tr>'


def crosscheck_line(view: View, check: Crosscheck) -> str:
    """Two ways to one quantity: both with their numbers, the difference, the verdict in words."""
    measured = bool(check.first_band)
    word = "at" if measured else "worst at"
    worst = f"{word} {view.setting(check.at)}" if check.at else ""
    beside = len(check.at) <= BESIDE
    side = aside([view.basis(check.basis), worst if beside else ""])
    stated = f'{view.math(check.first)} <span class="req">{check.form}</span> '
    stated += view.math(check.second)
    numbers = _measured(view, check) if measured else _at_nominal(view, check)
    below = "" if beside else f'<p class="band">{worst}</p>'
    return _line(
        f"k-{check.id}",
        check.id,
        f'{side}{opened(view, check.description)}<div class="eq">{stated}</div>'
        f'<div class="eq">{numbers}</div><p class="band">{agreement(check)}</p>{below}',
        "wl cr",
    )


def _at_nominal(view: View, check: Crosscheck) -> str:
    """Both sides at nominal."""
    return (
        f'{view.math(check.first_text)} <span class="req">and</span> '
        f'{view.math(check.second_text)} <span class="cl">at nominal</span>'
    )


def _measured(view: View, check: Crosscheck) -> str:
    """What was measured with the band of the instrument, what is computed with its own band."""
    band = f" ({typeset.sentence(check.second_band)})" if check.second_band else ""
    return (
        f'<span class="nb">{escape(check.first_band)}</span> <span class="req">measured,</span> '
        f'{view.math(check.second_text)}{band} <span class="req">computed</span>'
    )


def agreement(check: Crosscheck) -> str:
    """Whether both ways agree, and by how much they differ at the worst."""
    words = verdict("agrees") if check.agrees else verdict("differs")
    if not check.difference_text:
        return words
    allowed = typeset.quantity(check.allowed_text)
    if check.first_band:
        return (
            f"{words}, difference {typeset.quantity(check.difference_text)}, root sum square of"
            f" both bands {allowed}"
        )
    shown = f"{words}, worst difference {typeset.quantity(check.difference_text)}"
    return f"{shown}, allowed {allowed}" if allowed else shown


def _line(anchor: str, number: str, inner: str, names: str = "wl") -> str:
    return (
        f'<div class="{names}" id="{escape(anchor)}"><span class="no">{ident(number)}</span>'
        f"{inner}</div>\n"
    )
