"""Numbers, units and sentences as HTML, outside formulas.

The record holds numbers in the language of the design text (``-3.2 V``, ``1.8e-3 ohm``); they are
read and drawn like formulas, so that a number looks the same wherever it stands. What can be said
in plain characters is said by ``calcdoc.records.wording``.
"""

import re
from functools import lru_cache
from html import escape
from typing import Final

from calcdoc.page.boxes import inline
from calcdoc.page.pieces import read
from calcdoc.records import wording
from calcdoc.records.pictures import unit
from calcdoc.records.rounding import significant
from calcdoc.records.shapes import MINUS, NO_BREAK
from calcdoc.text.formula import parse_text
from calcdoc.text.nodes import Quantity

JOINTS: Final = frozenset("/·")
"""Where a line could break inside a unit."""
BETWEEN_UNITS: Final = re.compile(r"( [-+\u2212=] )")
JOINED: Final = re.compile(r"[\u2212(]*[0-9][^ \n,;:]*\u00a0[^ \n,;:]*[/·][^ \n,;:]*")
"""A typeset quantity in which a line could break."""


@lru_cache(maxsize=8192)
def quantity(text: str) -> str:
    """A text that is a quantity, as HTML: the unit's exponents and a power of ten are raised."""
    shown = inline(read(text)) if text else ""
    return f'<span class="nb">{shown}</span>' if JOINTS.intersection(text) else shown


def sentence(text: str) -> str:
    """A sentence of the record: numbers and their units held together."""
    return unbroken(wording.sentence(text))


@lru_cache(maxsize=4096)
def author(text: str) -> str:
    """The author's words: numbers and their units held together, other digits left alone."""
    return unbroken(wording.sentence(text, groups=False))


def unbroken(text: str) -> str:
    """Typeset text as HTML: no line may break at the solidus of a unit."""
    return JOINED.sub(
        lambda found: f'<span class="nb">{found[0]}</span>', escape(text, quote=False)
    )


@lru_cache(maxsize=4096)
def units(text: str) -> str:
    """A unit, or an equation between units as ``mA·ms/µF = V``, as HTML."""
    return "; ".join(_equation(each) for each in text.split("; "))


def _equation(text: str) -> str:
    parts = BETWEEN_UNITS.split(text)
    return "".join(
        part.replace("-", MINUS) if at % 2 else _unit(part) for at, part in enumerate(parts)
    )


def _unit(text: str) -> str:
    """A unit, or a number with one."""
    held = escape(text, quote=False).replace(" ", NO_BREAK)
    try:
        node = parse_text(f"1 {text}")
    except ValueError:
        return held
    return inline(unit(node.unit)) if isinstance(node, Quantity) else held


def in_unit(value: float | None, unit_text: str, digits: int) -> str:
    """A number with its unit as HTML; a dash when there is none."""
    if value is None:
        return "–"
    return quantity(f"{significant(value, digits)} {unit_text}".rstrip())


def digest(sha256: str, groups: int = 2) -> str:
    """The start of a digest in groups of four, as on the foot of a sheet."""
    return " ".join(sha256[at : at + 4] for at in range(0, 4 * groups, 4))
