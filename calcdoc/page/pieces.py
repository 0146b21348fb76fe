"""A formula cut into pieces that fit the column: a line may break between pieces, never in one.

A formula breaks before a relation, then before plus and minus, and only then before a
multiplication sign. A piece that is still too wide is set smaller, down to a readable size.
"""

from collections.abc import Callable
from dataclasses import dataclass
from functools import lru_cache
from typing import Final

from calcdoc.page.measure import measure
from calcdoc.records.pictures import equation, picture
from calcdoc.records.shapes import THIN, Glyphs, Kind, Picture, Row
from calcdoc.text.formula import parse_text

SMALLEST: Final = 0.7
"""Smaller type than this share is not set: such a piece may break inside instead."""
ROOM: Final = 32.0
"""Width of the column of working lines, in em of the formula's type."""


@dataclass(frozen=True, slots=True)
class Piece:
    """A part of a formula that stays on one line."""

    shown: Picture
    scale: float = 1.0
    """Type size as a share of the surrounding one."""
    breaks: bool = False
    """Too wide even in the smallest type: lines may break inside it."""
    bold: bool = False


Links = Callable[[str], str]
"""From a symbol's name to the attributes of its link, as `` href="#q-V_pk"``; empty for none."""
Draw = Callable[[Piece, Links], str]


def no_links(_symbol: str) -> str:
    """Link nothing."""
    return ""


@lru_cache(maxsize=4096)
def read(text: str) -> Picture:
    """The picture of a text of the record; a text that is no formula stands as it is."""
    left, sign, right = text.partition(" = ")
    if sign:
        return equation(read(left), read(right))
    try:
        return picture(parse_text(text))
    except ValueError:
        return Glyphs(text, "upright")


def is_formula(text: str) -> bool:
    """Whether a text of the record is a formula (a criterion may be a sentence)."""
    return not isinstance(read(text), Glyphs) or text.isalnum()


def pieces(
    shown: Picture, room: float = ROOM, *, fine: float | None = None, bold: bool = False
) -> tuple[Piece, ...]:
    """The picture in pieces no wider than ``room`` em.

    ``fine`` cuts what is wider than that, though there may be room: on a screen nobody knows.
    """
    widest = room if fine is None else fine
    if measure(shown).width <= widest:
        return (Piece(shown, bold=bold),)
    cut: list[Piece] = []
    for part in _cut(shown, ("relation", "operator"), "+−<>≤≥=≠"):
        finer = (
            [part]
            if measure(part).width <= widest
            else _cut(part, ("operator", "space"), "×" + THIN)
        )
        cut.extend(_fitted(each, room, bold=bold) for each in finer)
    return tuple(cut)


def _fitted(shown: Picture, room: float, *, bold: bool) -> Piece:
    scale = room / measure(shown).width
    if scale >= 1.0:
        return Piece(shown, bold=bold)
    return Piece(shown, max(round(scale, 2), SMALLEST), breaks=scale < SMALLEST, bold=bold)


def _cut(shown: Picture, kinds: tuple[Kind, ...], signs: str) -> list[Picture]:
    """A row cut before each of the signs, which then begin a piece."""
    if not isinstance(shown, Row):
        return [shown]
    cut: list[list[Picture]] = [[]]
    for part in shown.parts:
        if isinstance(part, Glyphs) and part.kind in kinds and part.text in signs and cut[-1]:
            cut.append([])
        cut[-1].append(part)
    return [Row(tuple(parts)) for parts in cut]
