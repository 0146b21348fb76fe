"""Figures on both pages: the picture, its number and caption, and what it shows in words."""

from html import escape

from calcdoc.page import charts
from calcdoc.page.view import View
from calcdoc.records.record import AnyFigure
from calcdoc.records.shapes import NARROW, NO_BREAK


def figure(view: View, shown: AnyFigure) -> str:
    """A figure; whoever does not see it is told what it shows."""
    from calcdoc.page.plot import svg  # noqa: PLC0415  (few records have figures)

    name = f"figure-{shown.number}"
    drawn = charts.drawings(shown)
    parts = [svg(each, f"{name}-{at}") for at, each in enumerate(drawn, 1)]
    words = [shown.alternative, *[f"Figure {shown.number}, continued."] * (len(parts) - 1)]
    pictures = "".join(
        f'<div class="pic">{_told(view, part, said)}</div>'
        for part, said in zip(parts, words, strict=True)
    )
    kind = "fig" if len(parts) == 1 else "fig long"
    return (
        f'<figure class="{kind}" id="{name}">{pictures}<figcaption>'
        f"<b>Figure {shown.number}.</b> {view.words(shown.caption.rstrip('.'))}."
        f"{_notes(view, shown)}</figcaption></figure>\n"
    )


def _told(view: View, drawn: str, words: str) -> str:
    """The picture with its text alternative, where the reader of the page looks for it."""
    if view.paper:
        # The layout engine takes it from the title, and gives a narrow space no width in a picture;
        # the plain one of the sans serif face is a fifth of an em, which is as thin.
        drawn = drawn.replace(NARROW, NO_BREAK)
        return drawn.replace(">", f"><title>{escape(words)}</title>", 1)
    return drawn.replace("<svg ", f'<svg role="img" aria-label="{escape(words)}" ', 1)


def _notes(view: View, shown: AnyFigure) -> str:
    notes = "".join(f" {view.named(each)}" for each in shown.notes)
    return f'<span class="soft">{notes}</span>' if notes else ""
