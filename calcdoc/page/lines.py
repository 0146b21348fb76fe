"""Working lines: inputs, derived quantities, criteria, and assumptions that are sentences."""

import re
from html import escape

from calcdoc.page import typeset
from calcdoc.page.markup import band_bar, ident, margin_bar, verdict
from calcdoc.page.measure import measure, text_width
from calcdoc.page.pieces import ROOM, read
from calcdoc.page.view import View
from calcdoc.records.pictures import RELATIONS, equation, symbol
from calcdoc.records.record import Assumption, CaseValues, Criterion, Quantity
from calcdoc.records.shapes import Glyphs, Picture, Row
from calcdoc.records.wording import typeset as typeset_text

GIVEN = frozenset({"condition", "input", "assumption"})
NOT_COMPUTED = frozenset({"by test", "by inspection"})
UNCALCULATED = frozenset({"test", "inspection", "none", "any of"})
"""Methods of criteria that are no inequality."""
BESIDE = 4
"""So many values of a governing combination stand in the right margin; more, below the verdict."""
UNITS_SIZE = 0.78
"""Type size of the units carried, as a share of the formula's."""
LEAD = 0.35
"""Space before the equals sign, in em."""
WIDEST_LEFT = 9.0
"""A left side wider than this, in em, does not set the indent of the equals signs."""


def quantity_line(view: View, quantity: Quantity) -> str:
    """The line of a quantity: compact for what is given, in full for what is worked out."""
    if quantity.kind in GIVEN:
        return _given(view, quantity)
    work = _work(view, quantity)
    label = escape(quantity.line)
    return (
        f'<div class="wl" id="q-{escape(quantity.symbol)}"><span class="no">{label}</span>'
        f"{_side(view, quantity)}{opened(view, quantity.description)}{_steps(view, quantity)}{work}"
        f"{_residual(view, quantity)}{_band(view, quantity)}{_cases(view, quantity)}"
        f"{_notes(view, quantity.notes)}</div>\n"
    )


def criterion_line(view: View, criterion: Criterion) -> str:
    """A criterion: inequality, numbers, bar against the limit, verdict in words."""
    what = subject(criterion)
    work = ""
    if criterion.method not in UNCALCULATED:
        work = f'<div class="eq">{inequality(view, criterion)}</div>'
    elif criterion.method == "any of" and what:
        routes = criterion.text.removeprefix("any of ").split(", ")
        work = f'<p class="step">any of {view.places(tuple(routes))}</p>'
    return (
        f'<div class="wl cr" id="c-{escape(criterion.id)}">'
        f'<span class="no">{ident(criterion.id)}</span>{_criterion_side(view, criterion)}'
        f"{opened(view, what)}{work}{_compared(view, criterion)}{_decided(view, criterion)}"
        f"{_governed(view, criterion)}{_rows(criterion)}</div>\n"
    )


def _rows(criterion: Criterion) -> str:
    """A criterion over a series, element by element."""
    if not criterion.rows:
        return ""
    heads = ("element", "value", "limit", "margin", "verdict")
    head = "".join(f'<th scope="col">{each}</th>' for each in heads)
    rows = "".join(
        f'<tr><th scope="row">{each.index}</th><td>{typeset.quantity(each.value_text)}</td>'
        f"<td>{typeset.quantity(each.limit_text)}</td>"
        f"<td>{typeset.quantity(each.margin_text)}</td><td>{verdict(each.verdict)}</td></tr>"
        for each in criterion.rows
    )
    return f'<table class="grid rows"><thead><tr>{head}</tr></thead><tbody>{rows}</tbody></table>'


def inequality(view: View, criterion: Criterion, room: float | None = None) -> str:
    """The comparison of a criterion with its clauses."""
    shown = view.math(criterion.text) if room is None else view.math(criterion.text, room=room)
    if not criterion.clauses:
        return shown
    return f'{shown} <span class="cl">{view.clauses(criterion.clauses)}</span>'


def subject(criterion: Criterion) -> str:
    """What a criterion is about, in words; empty when only its inequality says it."""
    match criterion.method:
        case "test" | "inspection":
            return criterion.text
        case "none" | "any of":
            return criterion.description or criterion.text
        case _:
            return criterion.description


def remark(criterion: Criterion) -> str:
    """What there is to say besides the subject: a reason, or what a test is for; once."""
    said = criterion.reason
    if criterion.verdict in NOT_COMPUTED:
        said = "; ".join(filter(None, (criterion.description, criterion.reason)))
    return "" if said == subject(criterion) else said


def sentence_line(view: View, assumption: Assumption) -> str:
    """An assumption that is a sentence."""
    reason = (
        f' <span class="soft">{view.words(assumption.reason)}</span>' if assumption.reason else ""
    )
    rests = view.places(assumption.rests_on_it)
    state = view.words(_state(assumption.state, assumption.note))
    side = [state, f"used in {rests}" if rests else ""]
    return (
        f'<div class="in" id="a-{escape(assumption.id)}"><span class="no">{escape(assumption.id)}'
        f'</span>{aside(side)}<p class="what">{view.opening(assumption.text)}{reason}</p></div>\n'
    )


# --- given quantities -------------------------------------------------------------------------


def _given(view: View, quantity: Quantity) -> str:
    """One compact line: symbol, value with tolerance, limits, description."""
    left = view.math(equation_left(quantity.symbol))
    limits = ""
    if quantity.varies and not gives_limits(quantity):
        limits = f' <span class="soft">{both_limits(quantity)}</span>'
    notes = _notes(view, quantity.notes) + _cases(view, quantity)
    if len(quantity.makeup) > 1:
        notes += f'<p class="step">{made_of(view, quantity)}</p>'
    elif quantity.makeup:
        limits += f' <span class="soft">{made_of(view, quantity)}</span>'
    label = escape(quantity.id or quantity.line)
    return (
        f'<div class="in" id="q-{escape(quantity.symbol)}"><span class="no">{label}</span>'
        f'{_side(view, quantity)}<p class="giv">{left} {given_value(quantity)}{limits} '
        f'<span class="what">{view.words(quantity.description)}</span></p>{notes}</div>\n'
    )


def given_value(quantity: Quantity) -> str:
    """The value of a given quantity with its tolerance, which is typeset already."""
    nominal = f'<span class="nb">{typeset.quantity(quantity.result)}</span>'
    if not quantity.tolerance:
        return nominal
    parts = re.split("(, | to )", quantity.tolerance)
    shown = "".join(
        each if at % 2 else f'<span class="nb">{escape(each)}</span>'
        for at, each in enumerate(parts)
    )
    if gives_limits(quantity) and typeset_text(quantity.result) not in quantity.tolerance:
        return f"{nominal}, {shown}"
    return shown


def made_of(view: View, quantity: Quantity) -> str:
    """What a tolerance is made of, in one line."""
    return view.named("; ".join(quantity.makeup))


def gives_limits(quantity: Quantity) -> bool:
    """Whether the tolerance is written as its two limits, which need not be said again."""
    return " to " in quantity.tolerance


def assumed(view: View, assumption: Assumption) -> str:
    """What is assumed: a sentence, or a quantity with its value."""
    quantity = view.quantities.get(assumption.symbol)
    if quantity is None:
        return view.words(assumption.text)
    return f"{view.symbol(quantity.symbol)} = {given_value(quantity)}"


def equation_left(name: str) -> Picture:
    """A symbol with the equals sign after it."""
    return Row((symbol(name), Glyphs("=", "relation")))


def both_limits(quantity: Quantity) -> str:
    """Both ends of a band; a line may break between them."""
    least, greatest = (
        f'<span class="nb">{typeset.quantity(each)}</span>'
        for each in (quantity.least_text, quantity.greatest_text)
    )
    return f"{least} to {greatest}"


# --- worked quantities ------------------------------------------------------------------------


def _work(view: View, quantity: Quantity) -> str:
    texts = _worked_out(quantity)
    if quantity.index is not None:
        running = _running(quantity)
        lists = _series(view, quantity)
        return worked_rows(view, symbol(quantity.symbol, running), (*texts, ""), below=lists)
    result = quantity.result if quantity.result != quantity.formula else ""
    carried = quantity.units_carried
    return worked_rows(view, symbol(quantity.symbol), (*texts, result), carried=carried)


def worked_rows(
    view: View,
    left: Picture,
    texts: tuple[str, ...],
    *,
    carried: str = "",
    below: str = "",
) -> str:
    """Formula and substitution, then the result (the last text), equals signs under each other.

    Formula and substitution share a line when there is room for both.
    """
    width = measure(left).width + LEAD
    indent = width if width <= WIDEST_LEFT else 1.5
    room = ROOM - indent
    formulas = [_led(each) for each in texts[:-1] if each]
    beside = UNITS_SIZE * text_width(carried) + 1.5 if carried else 0.0
    rights = [view.math(each, room=room) for each in formulas]
    if rights and sum(measure(each).width for each in formulas) + beside <= room:
        rights = [" ".join(rights)]
    if carried and rights:
        rights[-1] += f' <span class="units">{typeset.units(carried)}</span>'
    if texts[-1]:
        rights.append(view.math(_led(texts[-1]), bold=True, room=room))
    if below:
        rights.append(below)
    lead = (
        f'<span class="lhs" style="margin-left:{-indent:.2f}em;min-width:{indent:.2f}em">'
        f"{view.math(left)}</span>"
    )
    rows = [
        f'<div class="eq">{lead if at == 0 else ""}{row}</div>' for at, row in enumerate(rights)
    ]
    return f'<div class="work" style="padding-left:{indent:.2f}em">{"".join(rows)}</div>'


def _running(quantity: Quantity) -> Picture:
    """The running index of a series, as its formula names it."""
    words = set(re.findall(r"\w+", quantity.formula))
    return Glyphs(next((each for each in "nki" if each in words), "n"), "italic")


def _worked_out(quantity: Quantity) -> tuple[str, ...]:
    """Formula and substitution, each only when it says something new."""
    texts = dict.fromkeys(filter(None, (quantity.formula, quantity.substitution)))
    if quantity.result != quantity.formula:
        texts.pop(quantity.result, None)
    return tuple(texts)


def _led(text: str) -> Picture:
    """A right side with the equals sign before it."""
    shown = equation(Row(()), read(text))
    return Row(shown.parts)


def _series(view: View, quantity: Quantity) -> str:
    """The values of a series, each behind its index, and the band of each."""
    lists = [("", quantity.nominal)]
    if quantity.varies:
        lists += [("least ", quantity.least), ("greatest ", quantity.greatest)]
    shown = []
    for name, values in lists:
        items = (
            f'<span class="nb">{at}: {typeset.in_unit(value, quantity.unit, _digits(view))}</span>'
            for at, value in zip(quantity.index or (), _listed(values), strict=False)
        )
        kind = "cl" if name else "ser"
        shown.append(f'<span class="{kind}">{name}{"; ".join(items)}</span>')
    return "<br>".join(shown)


def _listed(values: float | list[float]) -> list[float]:
    return values if isinstance(values, list) else [values]


def _digits(view: View) -> int:
    return view.record.document.digits


def opened(view: View, text: str) -> str:
    """The description of a line, above its formulas."""
    return f'<p class="what">{view.opening(text)}</p>' if text else ""


def _steps(view: View, quantity: Quantity) -> str:
    """How it was solved: from which relations, and each step; the last one is the formula."""
    last = f": {quantity.symbol} = {quantity.formula}"
    shown = [view.step(each.removesuffix(last)) for each in quantity.steps]
    names = [each.strip() for each in quantity.from_relation.split(",") if each.strip()]
    if names:
        origin = f"from {view.places(tuple(names))}"
        shown[:1] = ["; ".join([origin, *shown[:1]])]
    return "".join(f'<p class="step">{each}</p>' for each in shown)


def _residual(view: View, quantity: Quantity) -> str:
    return f'<p class="step">{view.step(quantity.residual)}</p>' if quantity.residual else ""


def _notes(view: View, notes: tuple[str, ...]) -> str:
    return "".join(f'<p class="step">{view.sentence(note)}</p>' for note in notes)


def _band(_view: View, quantity: Quantity) -> str:
    """Least, bar, greatest; nothing when the quantity does not vary."""
    ends = (quantity.least, quantity.nominal, quantity.greatest)
    if not quantity.varies or any(isinstance(end, list) for end in ends):
        return ""
    least, nominal, greatest = (float(end) for end in ends if not isinstance(end, list))
    return (
        f'<p class="band"><span class="nb">least {typeset.quantity(quantity.least_text)}</span> '
        f"{band_bar(least, nominal, greatest)} "
        f'<span class="nb">greatest {typeset.quantity(quantity.greatest_text)}</span></p>'
    )


def _cases(view: View, quantity: Quantity) -> str:
    """The values in the cases that change it, one line each."""
    return "".join(
        f'<p class="band"><span class="cl">in {escape(name)}:</span>'
        f" {_in_case(view, quantity, values)}</p>"
        for name, values in quantity.by_case.items()
    )


def _in_case(view: View, quantity: Quantity, values: CaseValues) -> str:
    if values.reason:
        return f"not computed, {view.reason(values.reason)}"
    if values.text:
        return typeset.unbroken(values.text)
    unit = quantity.unit
    return "; ".join(
        f'<span class="nb">{at}: {typeset.in_unit(value, unit, _digits(view))}</span>'
        for at, value in zip(quantity.index or (), _listed(values.nominal or []), strict=False)
    )


# --- the right margin -------------------------------------------------------------------------


def _side(view: View, quantity: Quantity) -> str:
    """Basis, what it rests on, where it is used."""
    basis = view.basis(quantity.basis)
    if quantity.kind == "assumption" and quantity.state and quantity.state not in quantity.basis:
        basis = _state(escape(quantity.state), basis)
    if not basis and quantity.kind in GIVEN:
        basis = "no source given"
    rests = view.places(quantity.depends_on)
    used = view.places(quantity.used_by)
    between = " · " if quantity.kind in GIVEN else "<br>"
    parts = [basis, f"from {rests}" if rests else "", f"used in {used}" if used else ""]
    return aside(parts, between)


def _criterion_side(view: View, criterion: Criterion) -> str:
    by = _combination(view, criterion) if len(criterion.governing) <= BESIDE else ""
    unverified = ", ".join(view.words(each) for each in criterion.unverified)
    return aside(
        [
            view.basis(criterion.basis),
            by,
            f"rests on values not verified: {unverified}" if unverified else "",
        ]
    )


def _governed(view: View, criterion: Criterion) -> str:
    """A long governing combination, below the verdict."""
    if len(criterion.governing) <= BESIDE:
        return ""
    return f'<p class="band">{_combination(view, criterion)}</p>'


def _combination(view: View, criterion: Criterion) -> str:
    case = "" if criterion.case in ("", "normal") else f"case {escape(criterion.case)}"
    by = "; ".join(filter(None, (case, view.setting(criterion.governing))))
    return f"governed by {by}" if by else ""


def aside(parts: list[str], between: str = "<br>") -> str:
    """What stands in the right margin of a line."""
    shown = between.join(part for part in parts if part)
    return f'<div class="side">{shown}</div>' if shown else ""


def _state(state: str, note: str) -> str:
    return f"{state}: {note}" if note else state


# --- criteria ---------------------------------------------------------------------------------


def _compared(view: View, criterion: Criterion) -> str:
    """Value side with numbers, the value, and what is required."""
    if not criterion.value_text:
        return ""
    shown = view.math(criterion.substitution) if criterion.substitution else ""
    value = _led(criterion.value_text) if shown else read(criterion.value_text)
    shown += " " + view.math(value, bold=True)
    if criterion.limit_text:
        relation = RELATIONS.get(criterion.relation, criterion.relation)
        limit = Row((Glyphs(relation, "relation"), *_parts(read(criterion.limit_text))))
        shown += f' <span class="req">required</span> {view.math(limit)}'
    return f'<div class="eq">{shown.strip()}</div>'


def _parts(shown: Picture) -> tuple[Picture, ...]:
    return shown.parts if isinstance(shown, Row) else (shown,)


def _decided(view: View, criterion: Criterion) -> str:
    """The bar, the verdict in words, the margin, the remark."""
    accepted = criterion.accepted
    words = verdict(criterion.verdict, accepted=accepted is not None, route_of=criterion.route_of)
    words += f": {view.words(accepted)}" if accepted else ""
    why = view.reason(remark(criterion))
    margin = f"margin {typeset.quantity(criterion.margin_text)}" if criterion.margin_text else ""
    if criterion.verdict == "fail" and criterion.remark:
        margin = ""
    first = f"{words}: {why}" if why else words
    text = ", ".join(filter(None, (first, margin, view.sentence(criterion.remark))))
    return f'<p class="band">{margin_bar(criterion)} {text}</p>{_statistics(view, criterion)}'


def _statistics(view: View, criterion: Criterion) -> str:
    """How parts were combined, and what came out; their numbers are typeset already."""
    return "".join(f'<p class="step">{view.named(each)}</p>' for each in criterion.statistics)
