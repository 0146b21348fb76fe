"""Local improvement of the best point of a hunt by a pattern of steps that shrinks."""

from dataclasses import dataclass, field
from typing import Final

import numpy as np

from calcdoc.analysis.hunt import Hunt
from calcdoc.analysis.points import FloatArray

STEPS: Final = np.array([-1.0, -0.5, -0.25, 0.25, 0.5, 1.0])
SMALLEST_REACH: Final = 1e-15
"""Share of the box below which no floating-point number is left to try."""


@dataclass(slots=True)
class Pattern:
    """Steps around the best point of a hunt; ``reach`` is the longest, as a share of the box."""

    hunt: Hunt
    reach: float = 0.25
    together: FloatArray = field(init=False)
    """Shape (n_free,): the point with the best step along every input at once."""

    def __post_init__(self) -> None:
        self.together = self.hunt.at

    def points(self) -> FloatArray:
        """Points to try, shape (n_free, 6*n_free + 1), inside the box."""
        n_free = len(self.hunt.free)
        points = np.repeat(self.hunt.at[:, None], n_free * len(STEPS) + 1, axis=1)
        along = points[:, :-1].reshape(n_free, n_free, len(STEPS))
        every = np.arange(n_free)
        along[every, every] += STEPS * (self.reach * self.hunt.width[:, None])
        points[:, :-1] = along.reshape(n_free, -1)
        points[:, -1] = self.together
        low, high = self.hunt.box
        return np.clip(points, low[:, None], high[:, None])

    def move(self, points: FloatArray, signed: FloatArray) -> None:
        """Use the signed values of the points: go to the best, or shrink the pattern."""
        along = signed[:-1].reshape(len(self.hunt.free), len(STEPS))
        step = STEPS[along.argmax(axis=1)] * (self.reach * self.hunt.width)
        better = along.max(axis=1) > self.hunt.best
        low, high = self.hunt.box
        self.together = np.clip(self.hunt.at + np.where(better, step, 0.0), low, high)
        if not self.hunt.offer(points, signed):
            self.reach *= 0.25
