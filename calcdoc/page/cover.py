"""The cover: title block, purpose, verdicts, what is open, cautions, signatures."""

from html import escape
from typing import Final

from calcdoc.page import typeset
from calcdoc.page.lines import assumed, subject
from calcdoc.page.markup import Column, margin_bar, table, verdict
from calcdoc.page.prose import caution
from calcdoc.page.view import View
from calcdoc.records.record import Criterion

VERDICTS: Final = (
    Column("id", 4.5),
    Column("criterion", 22.5),
    Column("value", 10, "num"),
    Column("limit", 9.5, "num"),
    Column("margin", 7.5, "num"),
    Column("", 8.5),
    Column("verdict", 9),
    Column("governed by", 28.5, "gov"),
)
KIND: Final = "calculation record"
ROLES: Final = ("prepared", "checked", "approved")
SIGNALS: Final = ("danger", "warning", "caution", "notice")
NOT_COMPUTED: Final = ("by test", "by inspection")


def cover(view: View) -> str:
    """The whole cover."""
    parts = (_title, _purpose, _verdicts, _open, _cautions, _signatures)
    return "".join(part(view) for part in parts)


def _title(view: View) -> str:
    document = view.record.document
    kind = document.subtitle or KIND.capitalize()
    if KIND not in kind.lower():
        kind += f": {KIND}"
    revision = ", ".join(filter(None, (document.revision, document.date)))
    fields = [
        ("number", escape(document.number)),
        ("revision", escape(revision)),
        ("status", escape(document.status)),
        ("replaces", escape(document.replaces) or "nothing"),
    ]
    optional = (("product", document.product), ("owner", document.owner))
    fields += [(name, escape(value)) for name, value in optional if value]
    if view.paper:
        fields.append(("sheets", '1 of <span class="sheets"></span>'))
    block = "".join(f"<div><dt>{name}</dt><dd>{value}</dd></div>" for name, value in fields)
    return (
        f'<h1>{escape(document.title)}</h1>\n<p class="sub">{escape(kind)}</p>\n'
        f'<dl class="tb">{block}</dl>\n'
    )


def _purpose(view: View) -> str:
    return f'<p class="purpose">{escape(view.record.purpose)}</p>\n' if view.record.purpose else ""


def _verdicts(view: View) -> str:
    tally = view.record.verdict.bottom_line
    head = f'<h2 id="verdicts">Acceptance criteria: {escape(tally)}</h2>\n'
    if not view.record.criteria:
        return head
    rows = (_verdict_row(view, each) for each in view.record.criteria)
    return head + table("verdicts", "Each criterion with its verdict", VERDICTS, rows)


def _verdict_row(view: View, criterion: Criterion) -> tuple[str, ...]:
    what = subject(criterion) or view.math(criterion.text, room=14)
    case = "" if criterion.case in ("", "normal") else f"case {escape(criterion.case)}"
    by = "; ".join(filter(None, (case, view.setting(criterion.governing))))
    return (
        view.place(criterion.id),
        what,
        typeset.quantity(criterion.value_text),
        typeset.quantity(criterion.limit_text),
        typeset.quantity(criterion.margin_text),
        margin_bar(criterion.margin, criterion.verdict),
        verdict(criterion.verdict) + ("<br>accepted" if criterion.accepted else ""),
        by or _why(view, criterion),
    )


# --- what is open -----------------------------------------------------------------------------


def _open(view: View) -> str:
    """Four answers, each given even when it is "none"."""
    record = view.record
    waiting = [each for each in record.assumptions if each.state == "open"]
    tests = [each for each in record.criteria if each.verdict in NOT_COMPUTED]
    accepted = [each for each in record.criteria if each.accepted]
    unverified = dict.fromkeys(name for each in record.criteria for name in each.unverified)
    answers = (
        ("Open assumptions", [_assumption(view, each.id) for each in waiting]),
        ("Open tests", [_test(view, each) for each in tests]),
        ("Accepted failures", [_accepted(view, each) for each in accepted]),
        ("Values not verified", [escape(name) for name in unverified]),
    )
    rows = "".join(_answer(name, items) for name, items in answers)
    return f'<h2 id="open">What is open</h2>\n<div class="open">{rows}</div>\n'


def _answer(name: str, items: list[str]) -> str:
    if not items:
        return f"<p><b>{name}: none.</b></p>\n"
    count = "yes (" + str(len(items)) + ")" if name == "Open assumptions" else str(len(items))
    if len(items) == 1:
        return f"<p><b>{name}: {count}.</b> {items[0]}</p>\n"
    listed = "".join(f"<li>{item}</li>" for item in items)
    return f"<p><b>{name}: {count}.</b></p>\n<ul>{listed}</ul>\n"


def _assumption(view: View, name: str) -> str:
    one = view.assumptions[name]
    rests = view.places(one.rests_on_it)
    parts = (assumed(view, one), escape(one.reason), escape(one.note))
    shown = ": ".join(filter(None, (view.place(name), "; ".join(filter(None, parts)))))
    return shown + (f". Rests on it: {rests}." if rests else ".")


def _test(view: View, criterion: Criterion) -> str:
    parts = (subject(criterion), _why(view, criterion))
    said = "; ".join(part for part in parts if part)
    return f"{view.place(criterion.id)} ({escape(criterion.verdict)}): {said}"


def _why(view: View, criterion: Criterion) -> str:
    """Why there is no number, or what is still open; else at which values it was judged."""
    if criterion.reason:
        return view.sentence(criterion.reason)
    if criterion.verdict in NOT_COMPUTED:
        return view.basis(criterion.basis)
    return "nominal values" if criterion.method == "nominal" else ""


def _accepted(view: View, criterion: Criterion) -> str:
    return f"{view.place(criterion.id)}: {escape(criterion.accepted or '')}"


# --- cautions and signatures ------------------------------------------------------------------


def _cautions(view: View) -> str:
    """Cautions, the gravest first, one box for each signal word."""
    boxes = []
    for signal in SIGNALS:
        texts = [each.text for each in view.record.cautions if each.signal == signal]
        if texts:
            boxes.append(caution(signal, "".join(f"<p>{view.named(text)}</p>" for text in texts)))
    return f'<h2 id="cautions">Cautions</h2>\n{"".join(boxes)}' if boxes else ""


def _signatures(view: View) -> str:
    """Three boxes with the printed names; the state follows from the signatures."""
    document = view.record.document
    draft = document.status == "draft"
    names = {role: getattr(document.people, role) for role in ROLES}
    inner = '<span class="nosign">draft: cannot be signed</span>' if draft else ""
    boxes = "".join(
        f'<div id="sign-{role}"><small>{role}</small>'
        f'<span class="who">{escape(names[role]) or "not named"}</span>{inner}</div>'
        for role in ROLES
    )
    state = "draft, not for use" if draft else "issued when all three signatures are present"
    return (
        f'<section class="signing"><h2 id="signatures">Signatures</h2>'
        f'<p class="state">State: {state}.</p><div class="sig">{boxes}</div></section>\n'
    )
