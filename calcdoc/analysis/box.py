"""Ranges of all input columns at once."""

from calcdoc.analysis.points import FloatArray
from calcdoc.frozen import Frozen


class Box(Frozen, frozen=True):
    """Least, nominal and greatest of the input columns, shape (n_columns,), in coherent SI."""

    low: FloatArray
    nominal: FloatArray
    high: FloatArray

    @property
    def at_nominal(self) -> "Box":
        """The box that is only the nominal point."""
        return Box(self.nominal, self.nominal, self.nominal)
