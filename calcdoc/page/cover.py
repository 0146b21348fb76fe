"""The cover: title block, purpose, verdicts, what is open, cautions, signatures."""

from dataclasses import replace
from html import escape
from itertools import accumulate
from typing import Final

from calcdoc.page import typeset
from calcdoc.page.incase import case_tables
from calcdoc.page.lines import assumed, inequality, remark, subject
from calcdoc.page.markup import Column, margin_bar, table, verdict
from calcdoc.page.measure import SCRIPT, text_width
from calcdoc.page.prose import caution
from calcdoc.page.view import View
from calcdoc.records.record import Assumption, Criterion, Crosscheck
from calcdoc.records.wording import counted

VERDICTS: Final = (
    Column("id", 4),
    Column("criterion", 26.5),
    Column("value", 11, "num"),
    Column("limit", 9.5, "num"),
    Column("margin", 6.5, "num"),
    Column("", 6),
    Column("verdict", 11.5),
    Column("governed by", 25, "gov"),
)
KIND: Final = "Calculation record"
LONG: Final = 24
"""Characters of a field of the title block that ask for the width of two."""
COMBINATION: Final = 34.0
"""Width of what the last column holds in two lines, in em of its type."""
SHORT: Final = 4
"""Letters of a method's name that fit the column of ids; each further one asks for its share."""
PER_LETTER: Final = 0.55
MOST_MORE: Final = 8.0
ROLES: Final = ("prepared", "checked", "approved")
SIGNALS: Final = ("danger", "warning", "caution", "notice")
NOT_COMPUTED: Final = ("by test", "by inspection")


def cover(view: View) -> str:
    """The whole cover."""
    parts = (_title, _purpose, _verdicts, _open, _cautions, _signatures)
    return "".join(part(view) for part in parts)


def _title(view: View) -> str:
    document = view.record.document
    revision = ", ".join(filter(None, (document.revision, document.date)))
    fields = [
        ("number", document.number),
        ("revision", revision),
        ("status", document.status),
        ("replaces", document.replaces or "nothing"),
    ]
    optional = (("product", document.product), ("owner", document.owner))
    fields += [(name, value) for name, value in optional if value]
    block = "".join(_field(name, typeset.author(value), len(value)) for name, value in fields)
    if view.paper:
        block += _field("sheets", '1 of <span class="sheets"></span>', 0)
    return (
        f"<h1>{typeset.author(document.title)}</h1>\n"
        f'<p class="sub">{typeset.author(document.subtitle or KIND)}</p>\n'
        f'<dl class="tb">{block}</dl>\n'
    )


def _field(name: str, value: str, length: int) -> str:
    wide = ' class="two"' if length > LONG else ""
    return f"<div{wide}><dt>{name}</dt><dd>{value}</dd></div>"


def _purpose(view: View) -> str:
    purpose = view.record.purpose
    return f'<p class="purpose">{view.words(purpose)}</p>\n' if purpose else ""


def _verdicts(view: View) -> str:
    tally = view.record.verdict.bottom_line
    head = f'<h2 id="verdicts">Acceptance criteria: {escape(tally)}</h2>\n'
    if not view.record.criteria:
        return head
    rows = (_verdict_row(view, each) for each in view.record.criteria)
    return (
        head
        + table("verdicts", "Each criterion with its verdict", _columns(view), rows)
        + case_tables(view)
    )


def _columns(view: View) -> tuple[Column, ...]:
    """The columns of verdicts, with room for ids that begin with the name of a method."""
    ids, criteria, *others = VERDICTS
    longest = max(len(each.id.rpartition(".")[0]) for each in view.record.criteria)
    more = min(max(0.0, (longest - SHORT) * PER_LETTER), MOST_MORE)
    return (
        replace(ids, share=ids.share + more),
        replace(criteria, share=criteria.share - more),
        *others,
    )


def _verdict_row(view: View, criterion: Criterion) -> tuple[str, ...]:
    what = subject(criterion)
    case = "" if criterion.case in ("", "normal") else f"case {escape(criterion.case)}"
    by = "; ".join(filter(None, (case, _governing(view, criterion))))
    return (
        view.ident(criterion.id),
        view.opening(what) if what else inequality(view, criterion, 14),
        typeset.quantity(criterion.value_text),
        typeset.quantity(criterion.limit_text),
        typeset.quantity(criterion.margin_text),
        margin_bar(criterion),
        verdict(
            criterion.verdict,
            accepted=criterion.accepted is not None,
            route_of=criterion.route_of,
        ),
        by or _why(view, criterion),
    )


def _governing(view: View, criterion: Criterion) -> str:
    """The conditions of the governing combination, and what else fits two lines."""
    stands = criterion.governing
    given = {name: each.kind for name, each in view.quantities.items()}
    first = [name for name in stands if given.get(name) == "condition"]
    order = first + [name for name in stands if name not in first]
    ends = list(accumulate(_width(name, stands[name]) for name in order))
    fits = len(order)
    if ends and ends[-1] > COMBINATION:
        more = text_width(f"and {len(order)} more, see {criterion.id}")
        fits = sum(end + more <= COMBINATION for end in ends)
        fits = min(max(fits, len(first), 1), len(order))
    shown = view.setting({name: stands[name] for name in order[:fits]})
    if fits == len(order):
        return shown
    rest = f"and {len(order) - fits} more, see {view.place(criterion.id)}"
    return f'{shown} <span class="nb">{rest}</span>'


def _width(name: str, value: str) -> float:
    """Width of one value of a combination with what parts it from the next, in em."""
    base, _, below = name.rpartition(".")[2].partition("_")
    return text_width(base) + SCRIPT * text_width(below) + text_width(f" {value}, ")


# --- what is open -----------------------------------------------------------------------------


def _open(view: View) -> str:
    """Four answers, each given even when it is "none"."""
    record = view.record
    waiting = [each for each in record.assumptions if each.state == "open"]
    tests = [each for each in record.criteria if each.verdict in NOT_COMPUTED]
    accepted = [each for each in record.criteria if each.accepted or _accepted_cases(each)]
    resting = [each.unverified for each in record.criteria]
    used = [each.unverified for each in record.quantities]
    unverified = dict.fromkeys(name for each in (*resting, *used) for name in each)
    answers = [
        ("Open assumptions", [_assumption(view, each.id) for each in waiting]),
        ("Open tests", [_test(view, each) for each in tests]),
        ("Accepted failures", [_accepted(view, each) for each in accepted]),
        ("Values not verified", [view.words(name) for name in unverified]),
    ]
    if record.crosschecks:
        apart = [each for each in record.crosschecks if not each.agrees]
        answers.append(("Cross-checks that differ", [_crosscheck(view, each) for each in apart]))
    rows = "".join(_answer(name, items) for name, items in answers if items)
    none = " ".join(f"{name}: none." for name, items in answers if not items)
    rows += f"<p><b>{none}</b></p>\n" if none else ""
    return f'<h2 id="open">What is open</h2>\n<div class="open">{rows}</div>\n'


def _answer(name: str, items: list[str]) -> str:
    count = "yes (" + str(len(items)) + ")" if name == "Open assumptions" else str(len(items))
    if len(items) == 1:
        return f"<p><b>{name}: {count}.</b> {items[0]}</p>\n"
    listed = "".join(f"<li>{item}</li>" for item in items)
    return f"<p><b>{name}: {count}.</b></p>\n<ul>{listed}</ul>\n"


def _assumption(view: View, name: str) -> str:
    one = view.assumptions[name]
    parts = (assumed(view, one), view.words(one.reason), view.words(one.note))
    shown = ": ".join(filter(None, (view.place(name), "; ".join(filter(None, parts)))))
    return f"{shown}{_resting(view, one)}."


def _resting(view: View, assumption: Assumption) -> str:
    """The criteria that rest on an assumption; of the lines only how many, they are in the back."""
    ids = [each for each in assumption.rests_on_it if each in view.criteria]
    lines = len(assumption.rests_on_it) - len(ids)
    parts = [view.places(tuple(ids))] if ids else []
    parts += [counted(lines, "line")] if lines else []
    register = '<a href="#back-assumptions">see its register</a>'
    return f". Rests on it: {' and '.join(parts)}, {register}" if parts else ""


def _crosscheck(view: View, check: Crosscheck) -> str:
    shown = f"{view.place(check.id)}: {view.words(check.description)}".rstrip(": ")
    return f"{shown}, difference {typeset.quantity(check.difference_text)}"


def _test(view: View, criterion: Criterion) -> str:
    parts = [view.words(subject(criterion)), view.words(remark(criterion))]
    parts.append(view.basis(criterion.basis))
    said = "; ".join(part for part in parts if part)
    return f"{view.place(criterion.id)} ({escape(criterion.verdict)}): {said}"


def _why(view: View, criterion: Criterion) -> str:
    """Why there is no number; else at which values it was judged."""
    if criterion.verdict in NOT_COMPUTED:
        return view.words(remark(criterion)) or view.basis(criterion.basis)
    if remark(criterion):
        return view.reason(remark(criterion))
    return "nominal values" if criterion.method == "nominal" else ""


def _accepted(view: View, criterion: Criterion) -> str:
    """What is accepted and until when; where only some failures are, also which are not."""
    place = view.place(criterion.id)
    if criterion.accepted:
        return f"{place}: {view.words(criterion.accepted)}"
    cases = _accepted_cases(criterion)
    names = ", ".join(cases)
    said = "; ".join(dict.fromkeys(cases.values())).replace(f" in {names},", ",", 1)
    rest = []
    for word, verdict_ in (("not accepted", "fail"), ("not decided", "not decided")):
        others = [name for name, each in criterion.by_case.items()
                  if each.verdict == verdict_ and name not in cases]  # fmt: skip
        rest += [escape(f"{word} in {', '.join(others)}")] if others else []
    return f"{place} in {escape(names)}: {'; '.join([view.words(said), *rest])}"


def _accepted_cases(criterion: Criterion) -> dict[str, str]:
    """Cases in which the failure is accepted, with the words."""
    return {name: each.accepted for name, each in criterion.by_case.items() if each.accepted}


# --- cautions and signatures ------------------------------------------------------------------


def _cautions(view: View) -> str:
    """Cautions, the gravest first, one box for each signal word."""
    boxes = []
    for signal in SIGNALS:
        texts = [each.text for each in view.record.cautions if each.signal == signal]
        if texts:
            boxes.append(caution(signal, "".join(f"<p>{view.words(text)}</p>" for text in texts)))
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
        f'<section class="signing"><h2 id="signatures">Signatures: {state}</h2>'
        f'<div class="sig">{boxes}</div></section>\n'
    )
