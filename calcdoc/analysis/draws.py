"""Random numbers of all parts: one stream for each symbol, or scrambled quasi-random points.

The stream of a symbol is keyed by seed and symbol alone, so an edit elsewhere does not reshuffle
it. Quasi-random points are spread more evenly over all parts together, so there every part has a
share in all points; sixteen scramblings that know nothing of each other show how sure a result is.
What like parts have of their own stays random there: it is much, and little depends on each.
"""

import hashlib
from collections.abc import Iterator, Mapping
from math import sqrt
from typing import Final

import numpy as np

from calcdoc.analysis.distributions import (
    MOST_DIMENSIONS,
    next_points,
    normal_quantile,
    scrambled,
)
from calcdoc.analysis.parts import Variate
from calcdoc.analysis.points import FloatArray
from calcdoc.frozen import Frozen

SCRAMBLINGS: Final = 16
MOST_LIKE: Final = 64
"""Of more like parts the mean is drawn as a normal one: its kurtosis is off by 0.02 or less."""
_BLOCK: Final = 65_536
"""Single like parts drawn at once."""


class Setting(Frozen, frozen=True):
    """How to draw."""

    draws: int
    seed: int
    quasi_random: bool = False
    chunk: int = 8_192
    """Points computed at once, a power of two: memory does not grow with the draws."""

    @property
    def rounds(self) -> int:
        """Scramblings, or one."""
        return SCRAMBLINGS if self.quasi_random else 1

    @property
    def in_round(self) -> int:
        """Draws of one round; of a quasi-random sequence a power of two, for balance."""
        if not self.quasi_random:
            return self.draws
        return 1 << max(0, -(-self.draws // SCRAMBLINGS) - 1).bit_length()

    @property
    def total(self) -> int:
        """How many draws there will be: at least as many as asked for."""
        return self.rounds * self.in_round

    @property
    def size(self) -> int:
        """Points in a chunk."""
        return min(self.chunk, 1 << max(0, self.in_round - 1).bit_length())


def generator(seed: int, *key: str) -> np.random.Generator:
    """A stream of its own for each key."""
    word = hashlib.sha256(":".join((str(seed), *key)).encode()).digest()
    return np.random.Generator(np.random.PCG64(int.from_bytes(word[:16], "big")))


class Draws:
    """Fills the values of all variates, chunk by chunk."""

    def __init__(self, values: Mapping[Variate, FloatArray], setting: Setting) -> None:
        """The arrays of ``values``, shape (setting.size,), are filled for every chunk."""
        self.values, self.setting = values, setting
        self.variates = variates = tuple(values)
        seed = setting.seed
        self._common = {each: generator(seed, each.stream) for each in variates}
        self._own = {each: generator(seed, each.stream, "each") for each in variates}
        self._random = generator(seed, "", "scrambling")

    def chunks(self) -> Iterator[int]:
        """Fill ``values`` again and again; yields how many points to use, round after round."""
        size = self.setting.size
        dimensions = min(len(self.variates), MOST_DIMENSIONS)
        for _ in range(self.setting.rounds):
            quasi = self.setting.quasi_random and dimensions
            sequence = scrambled(dimensions, self._random) if quasi else None
            for begin in range(0, self.setting.in_round, size):
                points = None if sequence is None else next_points(sequence, size)
                for at, each in enumerate(self.variates):
                    given = None if points is None or at >= dimensions else points[at]
                    self._fill(each, given)
                yield min(size, self.setting.in_round - begin)

    def _fill(self, variate: Variate, given: FloatArray | None) -> None:
        """One variate; ``given`` are shares between 0 and 1 to be used in place of random ones."""
        out, random = self.values[variate], self._common[variate]
        if variate.shape == "normal":
            if given is None:
                random.standard_normal(out=out)
            else:
                normal_quantile(given, out)
            return
        if given is None:
            random.random(out=out)
        else:
            np.copyto(out, given)
        _shape(variate, out)
        if variate.count > 1:
            out *= variate.shared
            out += (1.0 - variate.shared) * self._mean_of_own(variate)

    def _mean_of_own(self, variate: Variate) -> FloatArray:
        """Means of like parts that vary on their own, shape (size,)."""
        size, count = self.setting.size, variate.count
        random = self._own[variate]
        if count > MOST_LIKE:
            centre, deviation = _moments(variate)
            mean: FloatArray = centre + deviation / np.sqrt(count) * random.standard_normal(size)
            np.clip(mean, 0.0, 1.0, out=mean)
            return mean
        mean = np.empty(size)
        rows = max(1, _BLOCK // count)
        for begin in range(0, size, rows):
            some = mean[begin : begin + rows]
            drawn = random.random((len(some), count))
            _shape(variate, drawn)
            drawn.mean(axis=1, out=some)
        return mean


def _moments(variate: Variate) -> tuple[float, float]:
    """Mean and standard deviation over the unit band."""
    if variate.shape == "triangular":
        mode = variate.mode
        return (1.0 + mode) / 3.0, sqrt((1.0 - mode + mode**2) / 18.0)
    return 0.5, sqrt(1.0 / 12.0)


def _shape(variate: Variate, out: FloatArray) -> None:
    """Turn shares between 0 and 1 into deviates of the unit band, in place."""
    if variate.shape == "triangular":
        mode = variate.mode
        rising = np.sqrt(out * mode)
        falling = 1.0 - np.sqrt((1.0 - out) * (1.0 - mode))
        np.copyto(out, np.where(out < mode, rising, falling))
