"""Buffers of one size, and what is computed into them again and again."""

from collections.abc import Callable, Mapping

import numpy as np

from calcdoc.analysis.points import FloatArray
from calcdoc.frozen import Frozen

Call = Callable[[], object]
Value = FloatArray | float


class Source(Frozen, frozen=True):
    """Where a moving column comes from: offset + scale * values."""

    values: FloatArray
    """Shape (size,); filled anew by the owner before each run."""
    scale: float = 1.0
    offset: float = 0.0

    @property
    def is_plain(self) -> bool:
        """Whether the values are used as they are."""
        return self.scale == 1.0 and self.offset == 0.0


class Stream(Frozen, frozen=True):
    """Bound instructions: ``run`` fills the values of the targets from the sources."""

    calls: tuple[Call, ...]
    values: Mapping[int, Value]
    """By target: an array (size,) that every run fills, or a number if it stands still."""
    reads: set[int]
    """The moving columns it uses."""

    def run(self) -> None:
        """Compute all targets; what cannot be computed is not finite."""
        for call in self.calls:
            call()


class Pool:
    """Buffers of one size, free or in use; streams that run one after the other share them."""

    def __init__(self, size: int) -> None:
        self.size = size
        self.free: list[FloatArray] = []

    def take(self) -> FloatArray:
        """A buffer that nobody uses."""
        return self.free.pop() if self.free else np.zeros(self.size)
