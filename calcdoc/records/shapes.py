"""The picture tree: how a formula looks, without saying in what it is drawn."""

from collections.abc import Iterable
from typing import Final, Literal

from calcdoc.frozen import Frozen

Kind = Literal[
    "italic", "upright", "number", "operator", "sign", "relation", "unit", "function", "space"
]

THIN: Final = "\u2009"
NO_BREAK: Final = "\u00a0"
NARROW: Final = "\u202f"
MINUS: Final = "\u2212"


class Glyphs(Frozen, frozen=True):
    """A run of characters of one kind; the kind decides the face and the space around it."""

    text: str
    kind: Kind


class Row(Frozen, frozen=True):
    """Pictures side by side on one baseline."""

    parts: tuple["Picture", ...]


class Fraction(Frozen, frozen=True):
    """One picture over another, with a bar."""

    over: "Picture"
    under: "Picture"


class Root(Frozen, frozen=True):
    """A square root."""

    inner: "Picture"


class Script(Frozen, frozen=True):
    """A base with a subscript, a superscript, or both."""

    base: "Picture"
    sub: "Picture | None" = None
    sup: "Picture | None" = None


class Fence(Frozen, frozen=True):
    """Brackets that are as tall as what they hold."""

    opening: str
    closing: str
    inner: "Picture"


class Cases(Frozen, frozen=True):
    """A brace with one row for each case: a value and the condition for it."""

    rows: tuple["Row", ...]


class Symbol(Frozen, frozen=True):
    """The picture of a symbol, with the name by which a view can link it."""

    name: str
    shape: "Picture"


Picture = Glyphs | Row | Fraction | Root | Script | Fence | Cases | Symbol


def row(parts: Iterable[Picture]) -> Picture:
    """The parts side by side; a row in a row dissolves, a single part stands alone."""
    flat: list[Picture] = []
    for part in parts:
        flat.extend(part.parts if isinstance(part, Row) else (part,))
    return flat[0] if len(flat) == 1 else Row(tuple(flat))


def row_of(parts: Iterable[Picture]) -> Row:
    """The parts side by side, a row even when there is only one."""
    shown = row(parts)
    return shown if isinstance(shown, Row) else Row((shown,))


def joined(parts: list[Picture], between: Glyphs) -> list[Picture]:
    """The parts with the same glyphs between each two."""
    all_parts: list[Picture] = []
    for part in parts:
        all_parts += [between, part] if all_parts else [part]
    return all_parts


def inside(shown: Picture) -> tuple[Picture, ...]:
    """The pictures a picture is made of, in reading order."""
    match shown:
        case Glyphs():
            return ()
        case Row(parts) | Cases(parts):
            return parts
        case Fraction(over, under):
            return (over, under)
        case Script(base, sub, sup):
            return tuple(each for each in (base, sub, sup) if each is not None)
        case Root(inner) | Fence(_, _, inner) | Symbol(_, inner):
            return (inner,)


def mentions_symbol(shown: Picture) -> bool:
    """Whether a symbol or π stands in it: if not, it is made of numbers alone."""
    if isinstance(shown, Symbol) or shown == Glyphs("π", "upright"):
        return True
    return any(mentions_symbol(each) for each in inside(shown))


def first(shown: Picture) -> Glyphs:
    """The glyphs a picture begins with; nothing for a shape of its own."""
    while not isinstance(shown, Glyphs):
        if isinstance(shown, Root | Fence | Cases | Fraction | Symbol):
            return Glyphs("", "upright")
        shown = inside(shown)[0]
    return shown


def last(shown: Picture) -> Glyphs:
    """The glyphs a picture ends with; nothing for a shape of its own."""
    while not isinstance(shown, Glyphs):
        if isinstance(shown, Root | Fence | Cases | Fraction | Symbol):
            return Glyphs("", "upright")
        shown = shown.base if isinstance(shown, Script) else inside(shown)[-1]
    return shown


def linear(shown: Picture) -> str:
    """The picture on one line, in plain characters: for readers that do not draw."""
    match shown:
        case Glyphs(text, kind):
            return f" {text} " if kind in ("operator", "relation") else text
        case Row(parts):
            return "".join(linear(part) for part in parts)
        case Symbol(_, shape):
            return linear(shape)
        case Fraction(over, under):
            return f"({linear(over)})/({linear(under)})"
        case Root(inner):
            return f"√({linear(inner)})"
        case Fence(opening, closing, inner):
            return f"{opening}{linear(inner)}{closing}"
        case Cases(rows):
            return "{" + "; ".join(linear(row) for row in rows) + "}"
        case Script(base, sub, sup):
            below = f"_{linear(sub)}" if sub is not None else ""
            above = f"^{linear(sup)}" if sup is not None else ""
            return linear(base) + below + above
