"""Back matter: clauses, registers, symbols, references, method, digests, history, end mark."""

from collections.abc import Callable
from dataclasses import dataclass
from html import escape
from typing import Final

from calcdoc.page import typeset
from calcdoc.page.lines import (
    GIVEN,
    assumed,
    both_limits,
    given_value,
    gives_limits,
    inequality,
    made_of,
    remark,
    subject,
)
from calcdoc.page.markup import Column, table, verdict
from calcdoc.page.view import View, reference_anchor
from calcdoc.records.record import Criterion, Quantity
from calcdoc.text.names import GREEK


@dataclass(frozen=True, slots=True)
class Part:
    """A part of the back matter; it is left out when its content is empty."""

    anchor: str
    title: str
    content: Callable[[View], str]


def clauses(view: View) -> str:
    """Each clause a criterion answers to.

    The author's list of references puts standards and specifications first, so its order is the
    order of the rows; criteria that cite the same document keep the author's order.
    """
    columns = (
        Column("clause", 19),
        Column("requirement", 35),
        Column("result and remark", 33),
        Column("verdict", 13),
    )
    order = {each.key: at for at, each in enumerate(view.record.references)}
    cited = [
        (clause, each) for each in view.record.criteria for clause in view.citations(each.basis)
    ]
    cited.sort(key=lambda pair: order[pair[0].partition(",")[0].strip()])
    rows = [
        (view.words(clause), _requirement(view, each), _result(view, each), _verdict(each))
        for clause, each in cited
    ]
    return table("clauses", "Clauses and their verdicts", columns, rows) if rows else ""


def _requirement(view: View, criterion: Criterion) -> str:
    what = subject(criterion)
    shown = view.words(what) if what else inequality(view, criterion, 17)
    return f"{view.place(criterion.id)}: {shown}"


def _result(view: View, criterion: Criterion) -> str:
    parts = []
    if criterion.value_text:
        against = (
            f", limit {typeset.quantity(criterion.limit_text)}" if criterion.limit_text else ""
        )
        parts.append(typeset.quantity(criterion.value_text) + against)
    case = criterion.case if criterion.case not in ("", "normal") else ""
    parts += [escape(f"case {case}") if case else "", view.sentence(criterion.remark)]
    parts.append(view.reason(remark(criterion)))
    parts.append(f"accepted: {view.words(criterion.accepted)}" if criterion.accepted else "")
    return "; ".join(filter(None, parts))


def _verdict(criterion: Criterion) -> str:
    accepted = criterion.accepted is not None
    return verdict(criterion.verdict, accepted=accepted, route_of=criterion.route_of)


def inputs(view: View) -> str:
    """Register of what was given."""
    columns = (
        Column("line", 5.5),
        Column("symbol", 8.5),
        Column("value", 18),
        Column("limits", 22),
        Column("meaning", 27),
        Column("basis", 19),
    )
    given = [each for each in view.record.quantities if each.kind in GIVEN]
    rows = [_given_row(view, each) for each in given]
    return table("register", "Conditions, inputs and assumed values", columns, rows) if rows else ""


def _given_row(view: View, quantity: Quantity) -> tuple[str, ...]:
    basis = view.basis(quantity.basis)
    if quantity.state:
        basis = ": ".join(filter(None, (escape(quantity.state), basis)))
    nominal = f'<span class="nb">{typeset.quantity(quantity.result)}</span>'
    return (
        view.place(quantity.symbol),
        view.symbol(quantity.symbol),
        nominal if gives_limits(quantity) else given_value(quantity),
        _limits(view, quantity),
        view.opening(quantity.description),
        basis or "no source given",
    )


def _limits(view: View, quantity: Quantity) -> str:
    """Both limits, and what the tolerance is made of."""
    if not quantity.varies:
        return ""
    made = f"<br><small>{made_of(view, quantity)}</small>" if quantity.makeup else ""
    return both_limits(quantity) + made


def assumptions(view: View) -> str:
    """Register of assumptions with what rests on each."""
    columns = (
        Column("id", 5.5),
        Column("assumption", 23),
        Column("why it is reasonable", 27),
        Column("state", 22),
        Column("rests on it", 22.5),
    )
    rows = [
        (
            view.place(each.id),
            assumed(view, each) if each.symbol else view.opening(each.text),
            view.opening(each.reason),
            view.words(": ".join(filter(None, (each.state, each.note)))),
            view.places(each.rests_on_it),
        )
        for each in view.record.assumptions
    ]
    return table("register", "Assumptions", columns, rows) if rows else ""


def symbols(view: View) -> str:
    """Every symbol, its meaning, its line, and where it is used."""
    columns = (
        Column("symbol", 9),
        Column("meaning", 50),
        Column("unit", 7),
        Column("line", 7),
        Column("used in", 27),
    )
    ordered = sorted(view.record.quantities, key=lambda each: _alphabetical(each.symbol))
    rows = [
        (
            view.symbol(each.symbol),
            view.opening(each.description),
            typeset.units(each.unit) if each.unit else "1",
            view.place(each.symbol),
            view.places(each.used_by),
        )
        for each in ordered
    ]
    return table("symbols", "Symbols", columns, rows) if rows else ""


def _alphabetical(name: str) -> tuple[str, str]:
    """Latin before Greek, a spelled letter in the place of its sign, small beside capital."""
    owner, _, symbol = name.rpartition(".")
    base, _, below = symbol.partition("_")
    shown = f"{owner}.{GREEK.get(base, base)}_{below}".removeprefix(".")
    return shown.lower(), shown


def crosschecks(view: View) -> str:
    """Two ways to one quantity."""
    columns = (
        Column("id", 6),
        Column("first way", 24),
        Column("second way", 24),
        Column("condition", 12),
        Column("difference", 12, "num"),
        Column("allowed", 10, "num"),
        Column("verdict", 12),
    )
    rows = [
        (
            view.ident(each.id),
            view.math(each.first, room=14),
            view.math(each.second, room=14),
            escape(each.form),
            typeset.quantity(each.difference_text),
            typeset.quantity(each.allowed_text),
            verdict("agrees" if each.agrees else "differs"),
        )
        for each in view.record.crosschecks
    ]
    return table("crosschecks", "Cross-checks", columns, rows) if rows else ""


def references(view: View) -> str:
    """Documents cited."""
    columns = (
        Column("key", 12),
        Column("title", 32),
        Column("edition", 26),
        Column("held", 12),
        Column("cited in", 18),
    )
    rows = [
        (
            f'<span id="{reference_anchor(each.key)}">{escape(each.key)}</span>',
            view.words(each.title),
            view.words(each.edition),
            view.words(each.held),
            view.places(each.cited_by),
        )
        for each in view.record.references
    ]
    return table("references", "References", columns, rows) if rows else ""


def method(view: View) -> str:
    """How the numbers came about."""
    tool = view.record.tool
    libraries = ", ".join(f"{name} {version}" for name, version in sorted(tool.libraries.items()))
    sentences = [view.sentence(each) for each in view.record.methods]
    if view.record.sampling:
        drawn = view.record.sampling
        sentences.append(
            f"Sampling: {typeset.sentence(f'{drawn.draws} draws')}, seed {drawn.seed},"
            f" {drawn.sequence} numbers ({escape(drawn.generator)})."
        )
    sentences.append(escape(f"Computed by calcdoc {tool.version} with {libraries}."))
    return "".join(f"<p>{each}</p>\n" for each in sentences)


def problems(view: View) -> str:
    """Notices, and warnings that the text gave rise to."""
    rows = [f"<li>{view.sentence(each)}</li>" for each in view.record.notices]
    for each in view.record.problems:
        file = f"{escape(each.file)}, " if each.file else ""
        place = f"{file}line {each.line}: " if each.line else ""
        hint = f" ({view.sentence(each.help)})" if each.help else ""
        rows.append(f"<li>{place}{view.sentence(each.message)} [{escape(each.code)}]{hint}</li>")
    return f"<ul>{''.join(rows)}</ul>\n" if rows else ""


def digests(view: View) -> str:
    """SHA-256 of the text, of every file it used, and of the record."""
    columns = (Column("what", 34), Column("SHA-256", 66, "dig"))
    source = view.record.source
    rows = [(escape(f"design text {source.name}"), _grouped(source.sha256))]
    rows += [(escape(f"file {each.name}"), _grouped(each.sha256)) for each in source.files]
    rows.append(("record, JSON", _grouped(view.record_digest)))
    return table("digests", "Digests", columns, rows)


def _grouped(sha256: str) -> str:
    return escape(typeset.digest(sha256, 16).strip())


def history(view: View) -> str:
    """Revisions with their reasons."""
    columns = (Column("revision", 12), Column("date", 16), Column("reason", 72))
    rows = [
        (escape(each.revision), escape(each.date), view.words(each.reason))
        for each in view.record.document.history
    ]
    return table("history", "Revisions", columns, rows) if rows else ""


PARTS: Final = (
    Part("clauses", "Clause table", clauses),
    Part("inputs", "Register of inputs", inputs),
    Part("assumptions", "Register of assumptions", assumptions),
    Part("symbols", "Symbols", symbols),
    Part("crosschecks", "Cross-checks", crosschecks),
    Part("references", "References", references),
    Part("method", "How the numbers were computed", method),
    Part("problems", "Notices and warnings", problems),
    Part("digests", "Digests", digests),
    Part("history", "Revision history", history),
)


def end_mark(view: View) -> str:
    """The last line: nothing of the record comes after it."""
    document = view.record.document
    name = escape(f"{document.number} revision {document.revision}")
    return f'<p class="end">end of record {name}</p>\n'
