"""What is kept of very many draws: how many meet, mean and variance, and one tail."""

from typing import Final

import numpy as np

from calcdoc.analysis.points import FloatArray
from calcdoc.frozen import Working

_NOTHING: Final = np.empty(0)


class Moments(Working):
    """Running mean and variance of finite values."""

    count: int = 0
    mean: float = 0.0
    squares: float = 0.0
    """Sum of the squared distances from the mean."""

    def add(self, values: FloatArray) -> None:
        """Take in more values, all finite."""
        if not values.size:
            return
        with np.errstate(all="ignore"):
            mean = float(values.mean())
            away = values - mean
            squares = float(np.dot(away, away))
            total = self.count + values.size
            step = mean - self.mean
            self.squares += squares + step**2 * (self.count * (values.size / total))
            self.mean += step * (values.size / total)
        self.count = total

    @property
    def deviation(self) -> float:
        """The standard deviation; zero for a single value."""
        return float(np.sqrt(self.squares / (self.count - 1))) if self.count > 1 else 0.0


class Tail:
    """The least or the greatest of all values, whichever are fewer up to the places asked for."""

    def __init__(self, draws: int, first: int, last: int) -> None:
        """Keep what places ``first`` to ``last`` need, counted from zero, least first."""
        first, last = max(first, 0), min(last, draws - 1)
        self.draws = draws
        self.least = last + 1 <= draws - first
        self.kept = last + 1 if self.least else draws - first
        self._values = _NOTHING
        self._waiting: list[FloatArray] = []
        self._n_waiting = 0
        self._sorted = True
        self._edge = np.inf

    def add(self, values: FloatArray) -> None:
        """Take in more values; infinite ones have their place, NaN must not be there."""
        signed = values if self.least else -values
        new = signed[signed < self._edge] if np.isfinite(self._edge) else signed.copy()
        self._waiting.append(new)
        self._n_waiting += new.size
        if self._n_waiting > max(self.kept, values.size):
            self._settle()

    def _settle(self) -> None:
        values = np.concatenate((self._values, *self._waiting))
        self._waiting, self._n_waiting = [], 0
        if values.size >= self.kept:
            values.partition(self.kept - 1)
            values = values[: self.kept].copy()
            self._edge = float(values[-1])
        self._values, self._sorted = values, False

    def at(self, place: int) -> float:
        """The value at a place counted from zero, least first; it must be one of those kept."""
        if self._waiting or not self._sorted:
            self._settle()
            self._values.sort()
            self._sorted = True
        sign, rank = (1.0, place) if self.least else (-1.0, self.draws - 1 - place)
        return sign * float(self._values[rank])
