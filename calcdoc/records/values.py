"""Numbers with units as texts, in the language of the design text."""

from fractions import Fraction

from calcdoc.records.rounding import exactly, significant, trimmed
from calcdoc.text.given import Given
from calcdoc.units import Unit

_MOST_DIGITS = 6
"""Digits of an input's limit; the author's digits rarely need as many."""


def with_unit(number: str, unit: Unit) -> str:
    """``325.3 V``; a plain number alone."""
    return f"{number} {unit.written}" if unit.words else number


def computed(si: float, unit: Unit, digits: int) -> str:
    """A computed value with so many significant digits."""
    return with_unit(significant(unit.from_si(si), digits), unit)


def difference(si: float, unit: Unit, digits: int) -> str:
    """A difference; of temperatures it is in kelvin."""
    number = significant(unit.difference_from_si(si), digits)
    return f"{number} K" if unit.celsius else with_unit(number, unit)


def given_nominal(given: Given) -> str:
    """The nominal value in the author's digits."""
    return with_unit(given.digits, given.unit)


def exact_limit(value: Fraction, unit: Unit) -> str:
    """A limit of an input, exact as far as six digits go."""
    text = f"{exactly(value).normalize():f}"
    short = len(text.strip("-0.").replace(".", "")) <= _MOST_DIGITS
    number = trimmed(value, 15 if short else _MOST_DIGITS)
    return with_unit(number, unit)


def stands_at(given: Given, si: float) -> str:
    """Where an input stands in a combination: its limit exactly, or a value inside ."""
    least, nominal, greatest = given.si
    for end, exact in ((least, given.least), (nominal, given.nominal), (greatest, given.greatest)):
        if si == end:
            return exact_limit(exact, given.unit)
    return with_unit(trimmed(given.unit.from_si(si), _MOST_DIGITS), given.unit)
