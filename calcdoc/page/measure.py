"""How large a picture is, in em of its own type size: what the layout needs to know beforehand.

The drawing rules of ``calcdoc.page.boxes`` and the numbers here belong together: a bar, a radical
or a tall bracket can only be placed when the height of what it spans is known. Widths are those of
the serif face, to a twentieth of an em; they decide where a long formula may break and how far the
equals signs stand in.
"""

from dataclasses import dataclass
from functools import lru_cache
from typing import Final

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

UP: Final = 0.762
DOWN: Final = 0.238
"""Ascent and descent of the serif face; with a line height of 1 they are the line box."""
AXIS: Final = 0.26
"""Height of the fraction bar above the baseline."""
BAR: Final = 0.05
GAP: Final = 0.08
"""Between a bar and what stands over or under it."""
SCRIPT: Final = 0.72
RAISE: Final = 0.55
LOWER: Final = 0.34
"""Shift of a superscript and a subscript, in em of the script."""
NESTED: Final = 0.84
"""Size of a fraction within a fraction."""
ROOT_TOP: Final = 0.922
ROOT_BOTTOM: Final = 0.265
ROOT_WIDTH: Final = 0.794
"""The radical sign of the mathematics face, from its baseline."""
FENCE_TOP: Final = 0.736
FENCE_BOTTOM: Final = 0.196
ROW_GAP: Final = 0.25
"""Between the rows of a brace."""
TALL: Final = 1.1
"""Brackets around anything taller than this above the baseline are stretched."""

WIDTHS: Final = {
    0.25: " ,.:;j|lι",
    0.3: "!-fti{}·Iεζ",
    0.35: "\"()[]s'",
    0.4: "*/?J\\rceξτz",
    0.45: "gvxyγνχ",
    0.5: "$0123456789S^_abkopqδηθκλρυPL",
    0.55: "#duhnαβμσΓ~BEFTZ",
    0.6: "RYπφψΣC",
    0.65: "KVX×ωΔΞ±",
    0.7: "%+<=>AGDNOQw−ΛΦΨ",
    0.75: "HUΘΠ&",
    0.8: "mΩ",
    0.9: "@MW",
}
ADVANCE: Final = {char: width for width, chars in WIDTHS.items() for char in chars}


@dataclass(frozen=True, slots=True)
class Box:
    """Extent of a picture: width, height above and depth below the baseline, in em."""

    width: float
    up: float = UP
    down: float = DOWN

    def times(self, scale: float) -> "Box":
        """The same picture in another size."""
        return Box(self.width * scale, self.up * scale, self.down * scale)


@lru_cache(maxsize=4096)
def measure(shown: Picture, *, nested: bool = False) -> Box:
    """The extent of a picture; ``nested`` when it stands inside a fraction."""
    match shown:
        case Glyphs(text, kind):
            pad = {"operator": 0.5, "relation": 0.55}.get(kind, 0.0)
            return Box(text_width(text) + pad)
        case Row(parts):
            return _beside([measure(part, nested=nested) for part in parts])
        case Symbol(_, shape):
            return measure(shape, nested=nested)
        case Script():
            return _script(shown, nested=nested)
        case Fraction():
            return _fraction(shown, nested=nested)
        case Root(inner):
            box = measure(inner, nested=nested)
            return Box(box.width + ROOT_WIDTH + 0.15, box.up + 0.16, max(box.down, ROOT_BOTTOM))
        case Fence(_, _, inner):
            box = measure(inner, nested=nested)
            return Box(box.width + 0.72, box.up, box.down)
        case Cases(rows):
            boxes = [measure(row, nested=nested) for row in rows]
            height = sum(box.up + box.down for box in boxes) + ROW_GAP * (len(rows) - 1)
            return Box(max(box.width for box in boxes) + 1.4, height / 2 + AXIS, height / 2 - AXIS)


def raised(base: Box) -> float:
    """How far a superscript stands above the baseline, in em of the script."""
    return RAISE if base.up <= TALL else (base.up - 0.45) / SCRIPT


def text_width(text: str) -> float:
    """Width of a run of text in the serif face, in em."""
    return sum(ADVANCE.get(char, 0.5) for char in text)


def _beside(boxes: list[Box]) -> Box:
    return Box(
        sum(box.width for box in boxes),
        max((box.up for box in boxes), default=UP),
        max((box.down for box in boxes), default=DOWN),
    )


def _script(shown: Script, *, nested: bool) -> Box:
    box = measure(shown.base, nested=nested)
    up, down, width = box.up, box.down, 0.0
    if shown.sup is not None:
        sup = measure(shown.sup).times(SCRIPT)
        up, width = max(up, sup.up + raised(box) * SCRIPT), sup.width
    if shown.sub is not None:
        sub = measure(shown.sub).times(SCRIPT)
        down, width = max(down, sub.down + LOWER * SCRIPT), max(width, sub.width)
    return Box(box.width + width + 0.05, up, down)


def _fraction(shown: Fraction, *, nested: bool) -> Box:
    over, under = measure(shown.over, nested=True), measure(shown.under, nested=True)
    box = Box(
        max(over.width, under.width) + 0.5,
        AXIS + BAR / 2 + GAP + over.up + over.down,
        -AXIS + BAR / 2 + GAP + under.up + under.down,
    )
    return box.times(NESTED) if nested else box
