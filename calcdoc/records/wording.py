"""Sentences and typeset numbers that the record says in words."""

import re
from typing import Final

from calcdoc.records.values import exact_limit, given_nominal, with_unit
from calcdoc.text.given import Given, Style
from calcdoc.units import Unit

NO_BREAK: Final = "\u00a0"
THIN: Final = "\u202f"
MINUS: Final = "\u2212"
_NUMBER: Final = re.compile(r"(?<![A-Za-z0-9_.])(-?)([0-9]+)(?:\.([0-9]+))?(?:e(-?)([0-9]+))?")
_RAISED: Final = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")
_UNGROUPED: Final = 4


def typeset(text: str) -> str:
    """A quantity of the language as printed: true minus, thin groups, × 10ⁿ, no break.

    >>> typeset("-12345.6 V") == "\u221212\u202f345.6\u00a0V"
    True
    """
    number, _, unit = text.partition(" ")
    shown = _NUMBER.sub(_number, number)
    return f"{shown}{NO_BREAK}{_printed_unit(unit)}" if unit else shown


def _number(found: re.Match[str]) -> str:
    sign, whole, part, minus, power = found.groups()
    if len(whole) > _UNGROUPED:
        head = len(whole) % 3
        groups = [whole[:head]] * bool(head) + [
            whole[i : i + 3] for i in range(head, len(whole), 3)
        ]
        whole = THIN.join(groups)
    if part and len(part) > _UNGROUPED:
        part = THIN.join(part[i : i + 3] for i in range(0, len(part), 3))
    shown = (MINUS if sign else "") + whole + (f".{part}" if part else "")
    if power is None:
        return shown
    return f"{shown}{NO_BREAK}×{NO_BREAK}10{(minus + power).translate(_RAISED)}"


def _printed_unit(written: str) -> str:
    """``W/m/K`` as ``W/(m·K)``, ``m^2`` as ``m²``."""
    above, *below = written.split("/")
    under = below[0] if len(below) == 1 else f"({'·'.join(below)})"
    shown = above + (f"/{under}" if below else "")
    return re.sub(r"\^(-?[0-9]+)", lambda m: m[1].translate(_RAISED), shown)


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
