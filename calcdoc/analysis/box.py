"""Ranges of all input columns at once."""

import numpy as np

from calcdoc.analysis.points import FloatArray
from calcdoc.frozen import Frozen


class Box(Frozen, frozen=True):
    """Least, nominal and greatest of the input columns, shape (n_columns,), in coherent SI."""

    low: FloatArray
    nominal: FloatArray
    high: FloatArray

    def with_column(self, low: float, nominal: float, high: float) -> "Box":
        """The box with one more column."""
        return Box(
            np.append(self.low, low), np.append(self.nominal, nominal), np.append(self.high, high)
        )

    @property
    def at_nominal(self) -> "Box":
        """The box that is only the nominal point."""
        return Box(self.nominal, self.nominal, self.nominal)
