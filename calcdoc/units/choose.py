"""The unit a quantity is shown in, when the author names none."""

from functools import lru_cache
from typing import Final

from calcdoc.units.dimension import (
    BASE_UNITS,
    CURRENT,
    LENGTH,
    LUMINOUS,
    MASS,
    ONE,
    POWER,
    TEMPERATURE,
    TIME,
    VOLTAGE,
    Dimension,
)
from calcdoc.units.reader import unit_of
from calcdoc.units.unit import PLAIN, Unit

Words = tuple[tuple[str, int], ...]

_NAMED: Final[dict[Dimension, Words]] = {
    VOLTAGE: (("V", 1),),
    CURRENT: (("A", 1),),
    POWER: (("W", 1),),
    VOLTAGE / CURRENT: (("Ω", 1),),
    CURRENT / VOLTAGE: (("S", 1),),
    CURRENT * TIME: (("C", 1),),
    CURRENT * TIME / VOLTAGE: (("F", 1),),
    VOLTAGE * TIME / CURRENT: (("H", 1),),
    VOLTAGE * TIME: (("Wb", 1),),
    POWER * TIME: (("J", 1),),
    TIME: (("s", 1),),
    TIME**-1: (("s", -1),),
    LENGTH: (("m", 1),),
    MASS: (("g", 1),),
    TEMPERATURE: (("K", 1),),
    LUMINOUS: (("lm", 1),),
    LUMINOUS / LENGTH**2: (("lx", 1),),
    LUMINOUS / POWER: (("lm", 1), ("W", -1)),
    TEMPERATURE / POWER: (("K", 1), ("W", -1)),
    POWER / TEMPERATURE: (("W", 1), ("K", -1)),
    POWER * TIME / TEMPERATURE: (("J", 1), ("K", -1)),
    VOLTAGE / TEMPERATURE: (("V", 1), ("K", -1)),
    VOLTAGE / TIME: (("V", 1), ("s", -1)),
    VOLTAGE / LENGTH: (("V", 1), ("m", -1)),
    VOLTAGE**2: (("V", 2),),
    CURRENT**2: (("A", 2),),
    CURRENT**2 * TIME: (("A", 2), ("s", 1)),
    CURRENT / TIME: (("A", 1), ("s", -1)),
    POWER * TIME / LENGTH: (("N", 1),),
    POWER * TIME / LENGTH**3: (("Pa", 1),),
}
_UNPREFIXED: Final = frozenset({"K", "lx"})
_PREFIXES: Final = ("p", "n", "µ", "m", "", "k", "M", "G")
_SECONDS_ABOVE: Final = 4
"""Prefixes above one are left off the second: 5400 s, not 5.4 ks."""
_LEAST, _MOST = 1.0, 1000.0


def choose_unit(dimension: Dimension, value: float, *, celsius: bool = False) -> Unit:
    """A prefix so that the number lies between 1 and 1000.

    Args:
        dimension: The dimension of the quantity.
        value: Its value in the coherent SI unit; zero keeps the unit without prefix.
        celsius: Whether it is a temperature and no difference.
    """
    if celsius:
        return unit_of([("°C", 1)])
    if dimension == ONE:
        return PLAIN
    words = _NAMED.get(dimension) or _base_words(dimension)
    if words is None:
        return Unit(((dimension.in_base_units(), 1),), PLAIN.factor, dimension)
    (first, power), *rest = words
    if power != 1 or first in _UNPREFIXED or not value:
        return unit_of(words)
    allowed = _PREFIXES[: _SECONDS_ABOVE + 1] if first == "s" else _PREFIXES
    for prefix in allowed:
        unit = _cached(((prefix + first, power), *rest))
        if abs(unit.from_si(value)) < _MOST * (1 - 1e-12):
            return unit
    return unit


@lru_cache(maxsize=512)
def _cached(words: Words) -> Unit:
    return unit_of(words)


def _base_words(dimension: Dimension) -> Words | None:
    """A product of base units; None when an exponent is no whole number."""
    pairs = [(u, e) for u, e in zip(BASE_UNITS, dimension.exponents, strict=True) if e]
    if any(e.denominator != 1 for _, e in pairs):
        return None
    return tuple((unit, int(power)) for unit, power in pairs)
