"""The author's prose and the order of the body, as HTML for both pages."""

from collections.abc import Iterable
from html import escape

from calcdoc.page import figures, incase, lines, methods, solved, typeset
from calcdoc.page.markup import verdict
from calcdoc.page.view import View
from calcdoc.records import record as r


def body(view: View) -> str:
    """The body of the record in the author's order."""
    return blocks(view, view.record.body, _levels(view.record.body))


def blocks(view: View, items: Iterable[r.Block], levels: dict[int, int] | None = None) -> str:
    """Blocks one after the other; ``levels`` gives each rank of heading its place in the page."""
    return "".join(block(view, item, levels or {}) for item in items)


def block(  # noqa: PLR0911  (one for each kind of block)
    view: View, item: r.Block, levels: dict[int, int]
) -> str:
    """One block: a table of cases, one for each kind."""
    match item:
        case r.Heading():
            return _heading(view, item, levels.get(item.level, min(item.level, 6)))
        case r.Paragraph():
            return f"<p>{inlines(view, item.inline)}</p>\n"
        case r.Items(start, items):
            name, first = ("ul", "") if start is None else ("ol", f' start="{start}"')
            rows = "".join(f"<li>{_tight(view, each)}</li>" for each in items)
            return f"<{name}{first}>{rows}</{name}>\n"
        case r.Quote(inner):
            return f"<blockquote>{blocks(view, inner)}</blockquote>\n"
        case r.Listing(text):
            return f"<pre><code>{escape(text)}</code></pre>\n"
        case r.Grid():
            return _grid(view, item)
        case r.Rule():
            return "<hr>\n"
        case r.CautionBox(signal, inner):
            return caution(signal, blocks(view, inner))
        case r.MethodBox():
            return methods.head(view, item) + blocks(view, item.blocks) + methods.END
        case r.FigureLine(number):
            return figures.figure(view, view.figures[number])
        case _:
            return _line(view, item)


Line = (
    r.QuantityLine
    | r.CriterionLine
    | r.RelationLine
    | r.RestatedLine
    | r.SensitivityLine
    | r.CaseLine
    | r.CrosscheckLine
    | r.SentenceLine
)


def _line(view: View, item: Line) -> str:
    """A line of the calculation."""
    match item:
        case r.QuantityLine(symbol):
            return lines.quantity_line(view, view.quantities[symbol])
        case r.CriterionLine(name):
            return lines.criterion_line(view, view.criteria[name])
        case r.RelationLine(name):
            return solved.relation_line(view, view.relations[name])
        case r.RestatedLine(line):
            return solved.restated_line(view, view.restated[line])
        case r.SensitivityLine(line):
            return solved.sensitivity_line(view, view.sensitivities[line])
        case r.CaseLine(name):
            return incase.case_line(view, view.cases[name])
        case r.CrosscheckLine(name):
            return solved.crosscheck_line(view, view.crosschecks[name])
        case r.SentenceLine(name):
            return lines.sentence_line(view, view.assumptions[name])


def caution(signal: str, inner: str) -> str:
    """A caution: the signal word in capitals in the margin, a rule above and below."""
    return f'<div class="caut" role="note"><b>{escape(signal.upper())}</b>{inner}</div>\n'


def inlines(view: View, items: Iterable[r.Inline]) -> str:
    """Pieces of a paragraph."""
    return "".join(_inline(view, item) for item in items)


def _inline(view: View, item: r.Inline) -> str:
    match item:
        case r.Words(text):
            return typeset.author(text)
        case r.Emphasis(strong, inner):
            name = "strong" if strong else "em"
            return f"<{name}>{inlines(view, inner)}</{name}>"
        case r.Code(text):
            return f"<code>{escape(text, quote=False)}</code>"
        case r.Link(address, inner):
            return f'<a href="{escape(address)}">{inlines(view, inner)}</a>'
        case r.Picture():
            source = f"data:{escape(item.media_type)};base64,{escape(item.data)}"
            return f'<img src="{source}" alt="{escape(item.alternative)}">'
        case r.Break():
            return "<br>"
        case r.Value(symbol, form, text):
            shown = typeset.quantity(text)
            if form == "equation":
                shown = f"{view.symbol(symbol)} = {shown}"
            return f'<span class="nb">{shown}</span>'
        case r.Verdict(name, text):
            return f"{view.place(name)} ({verdict(text)})"


def _levels(items: tuple[r.Block, ...]) -> dict[int, int]:
    """The author's ranks of headings, closed up, below the title of the record."""
    ranks = sorted({item.level for item in items if isinstance(item, r.Heading)})
    return {rank: min(place, 6) for place, rank in enumerate(ranks, start=2)}


def _heading(view: View, item: r.Heading, level: int) -> str:
    number = f'<span class="hn">{escape(item.number)}</span> ' if item.number else ""
    text = inlines(view, item.inline)
    return f'<h{level} id="{escape(item.anchor)}">{number}{text}</h{level}>\n'


def _tight(view: View, items: tuple[r.Block, ...]) -> str:
    """A list item; a single paragraph needs no paragraph element."""
    if len(items) == 1 and isinstance(items[0], r.Paragraph):
        return inlines(view, items[0].inline)
    return blocks(view, items)


def _grid(view: View, item: r.Grid) -> str:
    kinds = [' class="num"' if each == "right" else "" for each in item.align]
    kinds += [""] * len(item.head)
    heads = "".join(
        f'<th scope="col"{kind}>{inlines(view, cell)}</th>'
        for kind, cell in zip(kinds, item.head, strict=False)
    )
    rows = "".join(
        "<tr>"
        + "".join(
            f"<td{kind}>{inlines(view, cell)}</td>" for kind, cell in zip(kinds, row, strict=False)
        )
        + "</tr>"
        for row in item.rows
    )
    return f'<table class="grid"><thead><tr>{heads}</tr></thead><tbody>{rows}</tbody></table>\n'
