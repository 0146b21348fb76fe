"""Every listed unit word against the default registry of Pint, which is not the one we use."""

import functools
from fractions import Fraction
from typing import Any, Final

import pint
import pytest

from calcdoc.units import Dimension, unit_of
from calcdoc.units.words import ALONE, PREFIXED, PREFIXES

NAMES: Final = {
    "astronomical": "astronomical_unit",
    "electronvolt": "electron_volt",
    "amperehour": "ampere * hour",
    "watthour": "watt * hour",
    "voltampere": "volt * ampere",
    "var": "volt * ampere",
    "tonne": "metric_ton",
}
"""What the default registry calls a unit, where that differs from our registry file."""

TOLERANCE: Final = {
    "dalton": 1e-8,  # measured, not defined: our file has CODATA 2018, the default may have later
}
"""Relative difference allowed, with the reason; all other factors agree to rounding."""

EXACT: Final = 4e-16
COMMON: Final = ("p", "n", "µ", "m", "c", "d", "k", "M", "G")


@functools.cache
def default_registry() -> Any:  # noqa: ANN401  (its type depends on how it is made)
    """Pint as it comes."""
    return pint.UnitRegistry()


def theirs(name: str) -> tuple[float, Dimension]:
    """Factor to SI base units and dimension, as the default registry has them."""
    size = default_registry().Quantity(1.0, NAMES.get(name, name)).to_base_units()
    found = {str(unit): power for unit, power in size.unit_items()}
    bases = ("meter", "kilogram", "second", "ampere", "kelvin", "mole", "candela")
    # It gives angles and decays a base of their own; the SI has them as plain numbers.
    assert set(found) <= {*bases, "radian", "count"}, found
    exponents = tuple(Fraction(found.get(base, 0)).limit_denominator(10) for base in bases)
    return float(size.magnitude), Dimension(exponents)


@pytest.mark.parametrize("word", [*PREFIXED, *(word for word in ALONE if word != "°")])
def test_word(word: str) -> None:
    """Factor and dimension of the word are those of the default registry."""
    name = (PREFIXED | ALONE)[word]
    ours = unit_of([(word, 1)])
    factor, dimension = theirs(name)
    assert float(ours.factor) == pytest.approx(factor, rel=TOLERANCE.get(name, EXACT))
    assert ours.dimension == dimension


@pytest.mark.parametrize("prefix", COMMON)
def test_prefixed_words(prefix: str) -> None:
    """With the common prefixes, every word that takes one agrees as well."""
    for word, name in PREFIXED.items():
        size, _ = theirs(name)
        scale = float(
            default_registry().Quantity(1.0, PREFIXES[prefix] + "meter").to("m").magnitude
        )
        assert float(unit_of([(prefix + word, 1)]).factor) == pytest.approx(size * scale, rel=1e-15)


def test_celsius_has_the_offset_of_the_default_registry() -> None:
    """40 °C is the same temperature in kelvin for both."""
    kelvin = default_registry().Quantity(40.0, "degC").to("kelvin").magnitude
    assert float(unit_of([("°C", 1)]).to_si(Fraction(40))) == pytest.approx(kelvin, rel=EXACT)
