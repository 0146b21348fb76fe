"""Picture -> MathML (Core only), for the HTML page.

Symbols carry their link inside the token of their base: Chromium follows a plain ``<a>`` there,
while ``href`` on a MathML element does nothing.
"""

from html import escape
from typing import Final

from calcdoc.page.measure import TALL, measure
from calcdoc.page.pieces import Links, Piece
from calcdoc.records.shapes import (
    NO_BREAK,
    Cases,
    Fence,
    Fraction,
    Glyphs,
    Picture,
    Root,
    Row,
    Script,
    Symbol,
    linear,
)

PLAIN_SPACES: Final = str.maketrans({"\u2009": " ", "\u00a0": " ", "\u202f": " "})


def mathml(piece: Piece, links: Links) -> str:
    """One piece of a formula as a ``<math>`` element."""
    shown = piece.shown
    style = f' style="font-size:{piece.scale:g}em"' if piece.scale < 1 else ""
    names = " ".join(("res",) * piece.bold + ("wide",) * piece.breaks)
    kind = f' class="{names}"' if names else ""
    alternative = escape(linear(shown).translate(PLAIN_SPACES).strip())
    inner = "".join(_draw(part, links) for part in _parts(shown))
    return f'<math{kind}{style} alttext="{alternative}">{inner}</math>'


def _draw(shown: Picture, links: Links, link: str = "") -> str:
    match shown:
        case Glyphs():
            return _token(shown, link)
        case Row(parts):
            return "<mrow>" + "".join(_draw(part, links, link) for part in parts) + "</mrow>"
        case Symbol(name, Script(base, sub, sup)):
            return _script(_draw(base, links, links(name)), sub, sup, links)
        case Symbol(name, shape):
            return _draw(shape, links, links(name))
        case Script(Symbol(name, Script(base, sub, None)), None, sup):
            return _script(_draw(base, links, links(name)), sub, sup, links)
        case Script(base, sub, sup):
            return _script(_draw(base, links, link), sub, sup, links)
        case Fraction(over, under):
            return f"<mfrac>{_draw(over, links)}{_draw(under, links)}</mfrac>"
        case Root(inner):
            return f"<msqrt>{_draw(inner, links)}</msqrt>"
        case Fence(opening, closing, inner):
            middle = "".join(_draw(part, links) for part in _parts(inner))
            tall = measure(inner).up > TALL
            before, after = _fence(opening, "prefix", tall), _fence(closing, "postfix", tall)
            return f"<mrow>{before}{middle}{after}</mrow>"
        case Cases(rows):
            lines = "".join(f"<mtr><mtd>{_draw(row, links)}</mtd></mtr>" for row in rows)
            return f"<mrow>{_fence('{', 'prefix', tall=True)}<mtable>{lines}</mtable></mrow>"


def _parts(shown: Picture) -> tuple[Picture, ...]:
    return shown.parts if isinstance(shown, Row) else (shown,)


def _script(base: str, sub: Picture | None, sup: Picture | None, links: Links) -> str:
    inner = base + "".join(_draw(each, links) for each in (sub, sup) if each is not None)
    name = "msub" if sup is None else "msup" if sub is None else "msubsup"
    return f"<{name}>{inner}</{name}>"


def _fence(char: str, form: str, tall: bool) -> str:
    return f'<mo form="{form}" stretchy="{"true" if tall else "false"}">{char}</mo>'


def _token(glyphs: Glyphs, link: str) -> str:
    text = escape(glyphs.text, quote=False)
    if link:
        text = f"<a{link}>{text}</a>"
    match glyphs.kind:
        case "italic":
            return f'<mi class="i">{text}</mi>'
        case "number":
            return f"<mn>{text}</mn>"
        case "operator" | "relation":
            return f'<mo form="infix">{text}</mo>'
        case "sign":
            return f'<mo form="prefix">{text}</mo>'
        case "function":
            return f"<mi>{text}</mi>"
        case "upright" if len(glyphs.text) == 1 and glyphs.text.isalpha():
            return f'<mi mathvariant="normal">{text}</mi>'
        case _:
            return f"<mtext>{text.replace(' ', NO_BREAK) if not link else text}</mtext>"
