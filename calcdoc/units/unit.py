"""A unit as text, exact factor to the coherent SI unit, and dimension."""

from fractions import Fraction
from typing import Final

from calcdoc.frozen import Frozen
from calcdoc.units.dimension import ONE, Dimension

_RAISED: Final = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")
ZERO_CELSIUS: Final = Fraction(27315, 100)


class Unit(Frozen, frozen=True):
    """A product of unit words with exponents, such as ``mA·ms/µF``.

    ``celsius`` marks a temperature read on the Celsius scale: then a value needs the offset too.
    """

    words: tuple[tuple[str, int], ...]
    factor: Fraction
    dimension: Dimension
    celsius: bool = False

    @property
    def text(self) -> str:
        """As printed: one solidus at most, bracketed below when it has several words."""
        above = [_word(word, power) for word, power in self.words if power > 0]
        below = [_word(word, -power) for word, power in self.words if power < 0]
        if not below:
            return "·".join(above)
        if not above and len(below) == 1 and self.words[0][1] < 0:
            return f"1/{below[0]}"
        under = below[0] if len(below) == 1 else f"({'·'.join(below)})"
        return f"{'·'.join(above) or '1'}/{under}"

    @property
    def written(self) -> str:
        """In the language of the text, where it can be read again: ``W/m/K``, ``m^2``."""
        above = [_written(word, power) for word, power in self.words if power > 0]
        below = [_written(word, -power) for word, power in self.words if power < 0]
        return "/".join(["·".join(above) or "1", *below]) if self.words else ""

    def to_si(self, number: Fraction) -> Fraction:
        """The value in the coherent SI unit (kelvin for Celsius), exactly."""
        return number + ZERO_CELSIUS if self.celsius else number * self.factor

    def from_si(self, value: float) -> float:
        """A value in the coherent SI unit, expressed in this unit."""
        return value - float(ZERO_CELSIUS) if self.celsius else value / float(self.factor)

    def difference_from_si(self, value: float) -> float:
        """A difference in the coherent SI unit, expressed in this unit (kelvin for Celsius)."""
        return value / float(self.factor)


def _word(word: str, power: int) -> str:
    return word if power == 1 else word + str(power).translate(_RAISED)


def _written(word: str, power: int) -> str:
    return word if power == 1 else f"{word}^{power}"


PLAIN: Final = Unit((), Fraction(1), ONE)
"""The unit of a plain number."""
