"""Picture -> HTML boxes, for the PDF: real text that can be searched and copied.

The layout engine of the PDF does not know MathML, so bars, radicals and tall brackets are placed
here, from the extents of ``calcdoc.page.measure``; the style sheet ``sheet.css`` holds the rest of
the same drawing rules.
"""

from html import escape

from calcdoc.page import measure as m
from calcdoc.page.measure import Box, measure
from calcdoc.page.pieces import Links, Piece
from calcdoc.records.shapes import (
    Cases,
    Fence,
    Fraction,
    Glyphs,
    Picture,
    Root,
    Row,
    Script,
    Symbol,
)


def boxes(piece: Piece, _links: Links) -> str:
    """One piece of a formula as an inline box."""
    names = "m" + (" wide" if piece.breaks else "") + (" res" if piece.bold else "")
    style = f' style="font-size:{piece.scale:g}em"' if piece.scale < 1 else ""
    return f'<span class="{names}"{style}>{_draw(piece.shown, nested=False).strip(" ")}</span>'


def inline(shown: Picture) -> str:
    """A small picture (a symbol, a value) in running text, for both pages."""
    return _draw(shown, nested=False).strip(" ")


def _draw(shown: Picture, *, nested: bool) -> str:
    match shown:
        case Glyphs():
            return _run(shown)
        case Row(parts):
            return "".join(_draw(part, nested=nested) for part in parts)
        case Symbol(_, shape):
            return _draw(shape, nested=nested)
        case Script(Symbol(_, Script(base, sub, None)), None, sup):
            return _scripts(base, sub, sup, nested=nested)
        case Script(base, sub, sup):
            return _scripts(base, sub, sup, nested=nested)
        case Fraction():
            return _fraction(shown, nested=nested)
        case Root(inner):
            return _root(inner, nested=nested)
        case Fence(opening, closing, inner):
            box = measure(inner, nested=nested)
            middle = _draw(inner, nested=nested)
            return _fence(opening, box) + middle + _fence(closing, box)
        case Cases():
            return _cases(shown, nested=nested)


def _run(glyphs: Glyphs) -> str:
    text = escape(glyphs.text, quote=False)
    match glyphs.kind:
        case "italic":
            return f"<i>{text}</i>"
        case "operator" | "relation":
            return f" {text} "
        case "function":
            return f'<span class="fn">{text}</span>'
        case _:
            return text


def _scripts(base: Picture, sub: Picture | None, sup: Picture | None, *, nested: bool) -> str:
    """Base and scripts; of two, the superscript is pulled back over the subscript."""
    text = _draw(base, nested=nested)
    if sub is not None:
        text += f"<sub>{_draw(sub, nested=True)}</sub>"
    if sup is not None:
        style = ""
        box = measure(base, nested=nested)
        if sub is not None:
            below, above = measure(sub).width, measure(sup).width
            style = (
                f' style="margin-left:{-below:.2f}em;margin-right:{max(0, below - above):.2f}em"'
            )
        elif box.up > m.TALL:
            style = f' style="vertical-align:{m.raised(box):.3f}em"'
        text += f"<sup{style}>{_draw(sup, nested=True)}</sup>"
    return text


def _fraction(shown: Fraction, *, nested: bool) -> str:
    under = measure(shown.under, nested=True)
    drop = under.up + m.GAP + m.BAR / 2 - m.AXIS
    small = " small" if nested else ""
    return (
        f'<span class="fr{small}" style="vertical-align:{-drop:.3f}em">'
        f'<span class="n">{_draw(shown.over, nested=True)}</span>'
        f'<span class="d">{_draw(shown.under, nested=True)}</span></span>'
    )


def _root(inner: Picture, *, nested: bool) -> str:
    box = measure(inner, nested=nested)
    top, bottom = box.up + 0.16, max(box.down + 0.03, m.ROOT_BOTTOM)
    stretch = _stretch(top, bottom, m.ROOT_TOP, m.ROOT_BOTTOM)
    return (
        f'<span class="rs"{stretch}>√</span><span class="rd">{_draw(inner, nested=nested)}</span>'
    )


def _fence(char: str, box: Box) -> str:
    if box.up <= m.TALL:
        return char
    stretch = _stretch(box.up, box.down, m.FENCE_TOP, m.FENCE_BOTTOM)
    return f'<span class="tall"{stretch}>{char}</span>'


def _cases(shown: Cases, *, nested: bool) -> str:
    box = measure(shown, nested=nested)
    drop = box.down - measure(shown.rows[-1], nested=nested).down
    rows = "".join(f'<span class="row">{_draw(row, nested=nested)}</span>' for row in shown.rows)
    return _fence("{", box) + f'<span class="cs" style="vertical-align:{-drop:.3f}em">{rows}</span>'


def _stretch(top: float, bottom: float, glyph_top: float, glyph_bottom: float) -> str:
    """Attributes that scale a glyph about its baseline and shift it to span top to bottom."""
    scale = (top + bottom) / (glyph_top + glyph_bottom)
    shift = scale * glyph_top - top
    if abs(scale - 1) < 0.02 and abs(shift) < 0.02:  # noqa: PLR2004  not visible
        return ""
    return f' style="transform:translateY({shift:.3f}em) scaleY({scale:.3f})"'
