"""Sentences and typeset numbers in plain characters: what the record says in words.

The rules for numbers and units live in ``calcdoc.records.pictures``; here they are written on one
line, for texts of the record and for attributes of a page, and applied to numbers in sentences.
"""

import re
from collections.abc import Container
from functools import lru_cache
from typing import Final

from calcdoc.records.pictures import grouped, picture
from calcdoc.records.shapes import MINUS, linear
from calcdoc.records.shapes import NO_BREAK as NO_BREAK  # noqa: PLC0414  for texts that use it
from calcdoc.records.values import exact_limit, given_nominal, with_unit
from calcdoc.text.formula import parse_text
from calcdoc.text.given import Given, Style
from calcdoc.text.names import fold
from calcdoc.text.nodes import Quantity
from calcdoc.units import Unit

_RAISED: Final = str.maketrans("0123456789-\u2212", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁻")
_POWER: Final = re.compile(r"\^([-\u2212]?[0-9]+)")
_NUMBER: Final = re.compile(
    r"(?<![\w.\u2212-])([-\u2212]?[0-9]+(?:\.[0-9]+)?)(?:e(-?[0-9]+))?(?![\w-]|\.[0-9])"
    r"([ \n](?=[A-Za-zµΩ°%]))?"
)
"""A number in a sentence, with the space before what may be its unit."""
_WORD: Final = re.compile(r"[^\s,;:()]+")
_FACTOR: Final = re.compile(r"([-\u2212]?[0-9][^\s,]*(?: [^\s,±]+)?) (?:±|\+/-) ([0-9][0-9.]* %)")
_RANGE: Final = re.compile(r" ?\.\. ?(?=-?[0-9])")
_PLUS_MINUS: Final = re.compile(r"± (?=[0-9])")
_FIRST: Final = re.compile(r"[a-z]+(?=[ ,;:.'\u2019!?/\n]|$)|[a-z]{2,}(?=-)")
"""A first word that may get a capital, unless it is a symbol or a unit."""
_SMALL: Final = frozenset({"rms"})
"""Abbreviations that are written small wherever they stand."""


@lru_cache(maxsize=4096)
def typeset(text: str) -> str:
    """A quantity of the language as printed: true minus, thin groups, × 10ⁿ, no break.

    >>> typeset("-12345.6 V") == "\u221212\u202f345.6\u00a0V"
    True
    >>> typeset("60 W/m/K") == "60\u00a0W/(m·K)"
    True
    """
    try:
        shown = linear(picture(parse_text(text)))
    except ValueError:
        return text
    return _POWER.sub(lambda found: found[1].translate(_RAISED), shown)


def sentence(text: str, *, groups: bool = True) -> str:
    r"""A sentence with numbers in it: a true minus, numbers and their units held together.

    Args:
        text: Plain text in words.
        groups: Whether a number without a unit is grouped in threes, too; not in the author's
            words, where it may be the number of a drawing.

    >>> sentence("short by 7.2 V (-180 % of the limit)")
    'short by 7.2\xa0V (\u2212180\xa0% of the limit)'
    >>> sentence("drawing 123456, 12000 h", groups=False) == "drawing 123456, 12\u202f000\u00a0h"
    True
    """

    def held(found: re.Match[str]) -> str:
        mantissa, power, space = found.groups()
        word = _WORD.match(text, found.end()) if space else None
        unit = word is not None and is_unit(word[0].rstrip("."))
        shown = mantissa.replace("-", MINUS)
        if groups or unit:
            shown = grouped(mantissa.replace(MINUS, "-"))
        if power:
            shown += f"{NO_BREAK}×{NO_BREAK}10{power.translate(_RAISED)}"
        return shown + (NO_BREAK if unit else space or "")

    return _PLUS_MINUS.sub(f"±{NO_BREAK}", _NUMBER.sub(held, text))


def clauses(text: str) -> str:
    """Clauses of the language as printed: a relative tolerance is a factor (rule T12).

    >>> print(clauses("at V_line = 230 V ± 2 %, T_a = -25 °C").replace("\u00a0", "_"))
    at V_line = 230_V_×_(1_±_2_%), T_a = −25_°C
    >>> clauses("when V_line >= 100 V") == "when V_line ≥ 100\u00a0V"
    True
    >>> clauses("for n in 3..39 odd")
    'for n in 3 to 39 odd'
    """
    times = f"{NO_BREAK}×{NO_BREAK}(1{NO_BREAK}±{NO_BREAK}"
    text = _FACTOR.sub(lambda found: f"{found[1]}{times}{found[2]})", text)
    return sentence(ranges(text.replace("<=", "≤").replace(">=", "≥")))


def ranges(text: str) -> str:
    """Ranges of the language as printed (rule T10).

    >>> ranges("outside -1 .. 1")
    'outside -1 to 1'
    """
    return _RANGE.sub(" to ", text)


def opened(text: str, symbols: Container[str]) -> str:
    """The text with a capital, unless it begins with a symbol (by key) or a unit.

    >>> opened("mind the step", ())
    'Mind the step'
    >>> opened("mA are enough", ())
    'mA are enough'
    """
    first = _FIRST.match(text)
    if not first or first[0] in _SMALL or fold(first[0]) in symbols or is_unit(first[0]):
        return text
    return text[0].upper() + text[1:]


@lru_cache(maxsize=1024)
def is_unit(word: str) -> bool:
    """Whether a word behind a number is read as its unit."""
    try:
        return isinstance(parse_text(f"1 {word}"), Quantity)
    except ValueError:
        return False


def band_in_words(given: Given) -> str:
    """The band as a reader writes it; empty for a fixed value.

    A relative tolerance is a factor, an absolute one stands in brackets, an unequal one is stated
    with its limits (rules T11 to T13).
    """
    nominal = typeset(given_nominal(given))
    unit = f"{NO_BREAK}{given.unit.text}" if given.unit.words else ""
    match given.style:
        case Style.FIXED:
            return ""
        case Style.RELATIVE:
            return (
                f"{nominal}{NO_BREAK}×{NO_BREAK}(1{NO_BREAK}±{NO_BREAK}{typeset(given.spread[0])})"
            )
        case Style.ABSOLUTE:
            return _absolute(given, unit)
        case Style.UNEQUAL:
            below, above = (typeset(each.lstrip("+")) for each in given.spread)
            return f"{nominal}, +{above}/{below}: {_limits(given)}"
        case Style.LIMITS:
            return f"{nominal}, {_as_written(given)}"
        case Style.RANGE:
            return _as_written(given)


def _absolute(given: Given, unit: str) -> str:
    number, _, own = given.spread[0].partition(" ")
    value = typeset(given.digits)
    if own == given.unit.written:
        return f"({value}{NO_BREAK}±{NO_BREAK}{typeset(number)}){unit}"
    return f"{value}{unit} ± {typeset(given.spread[0])}"


def _limits(given: Given) -> str:
    return f"{limit(given, given.unit, low=True)} to {limit(given, given.unit, low=False)}"


def _as_written(given: Given) -> str:
    """Both limits in the author's digits."""
    low, high = (typeset(with_unit(each, given.unit)) for each in given.spread)
    return f"{low} to {high}"


def limit(given: Given, unit: Unit, *, low: bool) -> str:
    """One end of a band, typeset."""
    return typeset(exact_limit(given.least if low else given.greatest, unit))


def counted(count: int, one: str, many: str = "") -> str:
    """``1 test``, ``2 tests``."""
    return f"{count} {one if count == 1 else many or one + 's'}"
