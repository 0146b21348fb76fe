"""Numbers and units in running text: the one place that typesets them outside formulas.

The record holds them in the language of the design text (``-3.2 V``, ``1.8e-3 ohm``); they are
read and drawn like formulas, so that a number looks the same wherever it stands.
"""

import re
from functools import lru_cache
from html import escape
from typing import Final

from calcdoc.page.boxes import inline
from calcdoc.page.mathml import linear
from calcdoc.page.pieces import read
from calcdoc.records.pictures import grouped, unit
from calcdoc.records.rounding import significant
from calcdoc.records.shapes import MINUS, NO_BREAK
from calcdoc.text.formula import parse_text
from calcdoc.text.nodes import Quantity

NUMBER: Final = re.compile(
    r"(?<![\w.\u2212-])([-\u2212]?[0-9]+(?:\.[0-9]+)?)(?:e(-?[0-9]+))?(?![\w-]|\.[0-9])"
    r"( (?=[A-Za-zµΩ°%]))?"
)
JOINTS: Final = frozenset("/·")
"""Where a line could break inside a unit."""
BETWEEN_UNITS: Final = re.compile(r"( [-+\u2212=] )")
RAISED: Final = str.maketrans("0123456789-\u2212", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁻")
WORD: Final = re.compile(r"[^\s,;:()]+")


@lru_cache(maxsize=8192)
def quantity(text: str) -> str:
    """A text that is a quantity, as HTML: the unit's exponents and a power of ten are raised."""
    shown = inline(read(text)) if text else ""
    return f'<span class="nb">{shown}</span>' if JOINTS.intersection(text) else shown


@lru_cache(maxsize=8192)
def plain_quantity(text: str) -> str:
    """The same without markup, for attributes: exponents are raised characters."""
    return re.sub(r"\^([\d\u2212-]+)", lambda m: m[1].translate(RAISED), linear(read(text)))


@lru_cache(maxsize=4096)
def units(text: str) -> str:
    """A unit, or an equation between units as ``mA·ms/µF = V``, as HTML."""
    parts = BETWEEN_UNITS.split(text)
    return "".join(
        part.replace("-", MINUS) if at % 2 else _unit(part) for at, part in enumerate(parts)
    )


def _unit(text: str) -> str:
    try:
        node = parse_text(f"1 {text}")
    except ValueError:
        return escape(text, quote=False)
    return inline(unit(node.unit)) if isinstance(node, Quantity) else escape(text, quote=False)


def in_unit(value: float | None, unit_text: str, digits: int) -> str:
    """A number with its unit as HTML; a dash when there is none."""
    if value is None:
        return "–"
    return quantity(f"{significant(value, digits)} {unit_text}".rstrip())


def digest(sha256: str, groups: int = 2) -> str:
    """The start of a digest in groups of four, as on the foot of a sheet."""
    return " ".join(sha256[at : at + 4] for at in range(0, 4 * groups, 4))


def signs(text: str) -> str:
    r"""A sentence with numbers in it: a true minus, numbers and their units held together.

    >>> signs("short by 7.2 V (-180 % of the limit)")
    'short by 7.2\xa0V (\u2212180\xa0% of the limit)'
    """
    return NUMBER.sub(_held, text)


def _held(found: re.Match[str]) -> str:
    mantissa, power, space = found.groups()
    shown = grouped(mantissa.replace(MINUS, "-"))
    if power:
        shown += f"{NO_BREAK}×{NO_BREAK}10{power.translate(RAISED)}"
    if not space:
        return shown
    word = WORD.match(found.string, found.end())
    return shown + (NO_BREAK if word and _is_unit(word[0].rstrip(".")) else " ")


@lru_cache(maxsize=1024)
def _is_unit(word: str) -> bool:
    try:
        return isinstance(parse_text(f"1 {word}"), Quantity)
    except ValueError:
        return False
