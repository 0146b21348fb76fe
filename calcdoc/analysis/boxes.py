"""Boxes of inputs as columns, and what one pass finds over them."""

from collections.abc import Callable

import numpy as np

from calcdoc.analysis.points import FloatArray, IntArray
from calcdoc.analysis.program import Program
from calcdoc.analysis.slopes import Tangent
from calcdoc.frozen import Frozen


class Boxes(Frozen, frozen=True):
    """Boxes as columns."""

    low: FloatArray
    """Shape (n_inputs, n_columns)."""
    high: FloatArray
    """Shape (n_inputs, n_columns)."""
    slots: IntArray
    """Shape (n_slots, n_columns): the inputs whose slopes are wanted, -1 for none."""

    def centre(self) -> FloatArray:
        """Middle of each box, surely inside it; shape (n_inputs, n_columns)."""
        return np.clip(self.low + 0.5 * (self.high - self.low), self.low, self.high)


class Swept(Frozen, frozen=True):
    """Ranges and slopes found by one pass, by row of the program."""

    values: list[FloatArray]
    """Intervals of shape (2, n_columns)."""
    moves: list[Tangent]
    """Tangents of shape (2, n_slots, n_columns); None where nothing moves."""


Sweep = Callable[[Program, Boxes], Swept]
"""Carries all boxes through a program."""
