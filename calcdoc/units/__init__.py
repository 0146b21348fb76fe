"""Units and dimensions; the only place that asks Pint."""

from calcdoc.units.dimension import ONE, Dimension
from calcdoc.units.reader import known_word, nearest_word, unit_of
from calcdoc.units.unit import PLAIN, Unit

__all__ = ["ONE", "PLAIN", "Dimension", "Unit", "known_word", "nearest_word", "unit_of"]
