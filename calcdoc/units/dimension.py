"""Dimensions: exponents of the seven base quantities of the SI, with their names in words."""

from fractions import Fraction
from typing import Final

from calcdoc.frozen import Frozen

BASE_NAMES: Final = (
    "[length]",
    "[mass]",
    "[time]",
    "[current]",
    "[temperature]",
    "[substance]",
    "[luminosity]",
)
BASE_UNITS: Final = ("m", "kg", "s", "A", "K", "mol", "cd")


def whole(power: Fraction | int) -> Fraction | int:
    """A whole power as an int: quick to add, equal to the fraction."""
    return power.numerator if power.denominator == 1 else power


class Dimension(Frozen, frozen=True):
    """A product of powers of the base quantities; a group under ``*``.

    >>> (VOLTAGE / CURRENT).in_words()
    'a resistance'
    """

    exponents: tuple[Fraction | int, ...] = (0,) * 7

    def __mul__(self, other: "Dimension") -> "Dimension":
        return Dimension(tuple(a + b for a, b in zip(self.exponents, other.exponents, strict=True)))

    def __truediv__(self, other: "Dimension") -> "Dimension":
        return Dimension(tuple(a - b for a, b in zip(self.exponents, other.exponents, strict=True)))

    def __pow__(self, power: Fraction | int) -> "Dimension":
        return Dimension(tuple(whole(a * power) for a in self.exponents))

    @property
    def is_one(self) -> bool:
        """Whether this is the dimension of a plain number."""
        return not any(self.exponents)

    def in_words(self) -> str:
        """The dimension for a reader: ``a voltage``, or ``a quantity in V²/s`` without a name."""
        from_table = _WORDS.get(self)
        return from_table or f"a quantity in {self.in_base_units()}"

    def in_base_units(self) -> str:
        """The dimension as a product of SI base units, for what has no name.

        >>> Dimension((2, 0, -1, 0, 0, 0, 0)).in_base_units()
        'm²/s'
        """
        above = [_power(u, e) for u, e in zip(BASE_UNITS, self.exponents, strict=True) if e > 0]
        below = [_power(u, -e) for u, e in zip(BASE_UNITS, self.exponents, strict=True) if e < 0]
        under = "·".join(below) if len(below) == 1 else f"({'·'.join(below)})"
        return ("·".join(above) or "1") + (f"/{under}" if below else "")


_RAISED: Final = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")


def _power(unit: str, exponent: Fraction | int) -> str:
    if exponent == 1:
        return unit
    whole = Fraction(exponent)
    if whole.denominator == 1:
        return unit + str(whole.numerator).translate(_RAISED)
    return f"{unit}^({whole})"


ONE: Final = Dimension()
LENGTH: Final = Dimension((1, 0, 0, 0, 0, 0, 0))
MASS: Final = Dimension((0, 1, 0, 0, 0, 0, 0))
TIME: Final = Dimension((0, 0, 1, 0, 0, 0, 0))
CURRENT: Final = Dimension((0, 0, 0, 1, 0, 0, 0))
TEMPERATURE: Final = Dimension((0, 0, 0, 0, 1, 0, 0))
SUBSTANCE: Final = Dimension((0, 0, 0, 0, 0, 1, 0))
LUMINOUS: Final = Dimension((0, 0, 0, 0, 0, 0, 1))
POWER: Final = Dimension((2, 1, -3, 0, 0, 0, 0))
VOLTAGE: Final = POWER / CURRENT

_WORDS: Final[dict[Dimension, str]] = {
    ONE: "a plain number",
    LENGTH: "a length",
    LENGTH**2: "an area",
    LENGTH**3: "a volume",
    MASS: "a mass",
    TIME: "a time",
    TIME**-1: "a frequency",
    CURRENT: "a current",
    TEMPERATURE: "a temperature",
    SUBSTANCE: "an amount of substance",
    LUMINOUS: "a luminous flux",
    LUMINOUS / LENGTH**2: "an illuminance",
    LUMINOUS / POWER: "a luminous efficacy",
    POWER: "a power",
    POWER * TIME: "an energy",
    VOLTAGE: "a voltage",
    VOLTAGE / CURRENT: "a resistance",
    CURRENT / VOLTAGE: "a conductance",
    CURRENT * TIME: "a charge",
    CURRENT * TIME / VOLTAGE: "a capacitance",
    VOLTAGE * TIME / CURRENT: "an inductance",
    VOLTAGE * TIME: "a magnetic flux",
    VOLTAGE * TIME / LENGTH**2: "a magnetic flux density",
    VOLTAGE / LENGTH: "an electric field strength",
    VOLTAGE / TIME: "a voltage per time",
    VOLTAGE / TEMPERATURE: "a voltage per temperature",
    VOLTAGE**2: "a voltage squared",
    CURRENT**2: "a current squared",
    CURRENT**2 * TIME: "a current squared times time",
    CURRENT / TIME: "a current per time",
    TEMPERATURE / POWER: "a thermal resistance",
    POWER / TEMPERATURE: "a thermal conductance",
    POWER * TIME / TEMPERATURE: "a heat capacity",
    TEMPERATURE**-1: "a temperature coefficient",
    LENGTH / TIME: "a speed",
    LENGTH / TIME**2: "an acceleration",
    POWER * TIME / LENGTH: "a force",
    POWER * TIME / LENGTH**3: "a pressure",
}
