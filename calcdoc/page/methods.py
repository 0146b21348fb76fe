"""The head of a method that was applied: what it is, and whether it is valid here."""

from html import escape
from typing import Final

from calcdoc.page import typeset
from calcdoc.page.view import View
from calcdoc.records.record import AppliedMethod, MethodBox, MethodLimit

END: Final = "</section>\n"
_SAID: Final = {
    "within": "Within its limits of validity over the whole band and in every case",
    "outside": "Outside its limits of validity; what rests on it is not valid",
    "not decided": "Not proven to be within its limits of validity",
}


def head(view: View, box: MethodBox) -> str:
    """The begin of a method: its name, its sheet, and its limits one by one."""
    applied = view.applied[box.name]
    sheet = f"{escape(applied.method)}, revision {escape(applied.revision)}"
    return (
        f'<section class="meth"><h3 id="{escape(box.anchor)}">{view.words(applied.title)}'
        f' <span class="soft">method {sheet}, as {escape(applied.name)}</span></h3>\n'
        f"{_validity(view, applied)}"
    )


def _validity(view: View, applied: AppliedMethod) -> str:
    if not applied.limits:
        return '<p class="step">The sheet states no limits of validity.</p>\n'
    bad = "" if applied.verdict == "within" else " bad"
    rows = "".join(f"<li>{_limit(view, each)}</li>" for each in applied.limits)
    said = f'<span class="v{bad}">{_SAID[applied.verdict]}</span>'
    return f'<p class="band">{said}:</p>\n<ul class="lims">{rows}</ul>\n'


def _limit(view: View, limit: MethodLimit) -> str:
    about = "; ".join(filter(None, (view.words(limit.description), view.basis(limit.basis))))
    said = f"{view.math(limit.text)}{f' ({about})' if about else ''}: {escape(limit.verdict)}"
    if limit.value_text:
        at = f" at {view.setting(limit.at)}" if limit.at else ""
        case = "" if limit.case == "normal" else f" in {escape(limit.case)}"
        least = f"{typeset.quantity(limit.value_text)} against {typeset.quantity(limit.limit_text)}"
        said += (
            f", nearest {least}{at}{case}" if limit.verdict == "within" else f", {least}{at}{case}"
        )
    return said + (f" ({view.sentence(limit.reason)})" if limit.reason else "")
