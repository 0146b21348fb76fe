"""Figures on both pages: the picture, its number and caption, and what it shows in words."""

from html import escape

from calcdoc.page import charts
from calcdoc.page.view import View
from calcdoc.records.record import AnyFigure


def figure(view: View, shown: AnyFigure) -> str:
    """A figure; whoever does not see it is told what it shows."""
    from calcdoc.page.plot import svg  # noqa: PLC0415  (few records have figures)

    name = f"figure-{shown.number}"
    drawn = svg(charts.drawing(shown), name)
    words = escape(shown.alternative)
    if view.paper:  # the layout engine takes the alternative text of a picture from its title
        drawn = drawn.replace(">", f"><title>{words}</title>", 1)
    else:
        drawn = drawn.replace("<svg ", f'<svg role="img" aria-label="{words}" ', 1)
    notes = "".join(f" {view.named(each)}" for each in shown.notes)
    said = f'<span class="soft">{notes}</span>' if notes else ""
    return (
        f'<figure class="fig" id="{name}">{drawn}<figcaption><b>Figure {shown.number}.</b>'
        f" {view.words(shown.caption.rstrip('.'))}.{said}</figcaption></figure>\n"
    )
