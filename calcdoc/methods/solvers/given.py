"""What a solver is given: broadcasting, limits of validity, and the reasons for no result."""

from enum import IntEnum
from typing import Final

import numpy as np
from numpy.typing import ArrayLike

from calcdoc.methods.solvers.circuit import FloatArray, IntArray

COLUMNS: Final = 5000
"""Operating points solved together: enough to hide what a call of NumPy costs, some 25 MB."""


class Reason(IntEnum):
    """Why a column holds NaN where a number is missing."""

    NONE = 0
    NOT_FINITE = 1
    """A given quantity is not a finite number."""
    OUT_OF_RANGE = 2
    """The supply or its frequency is not above zero, or another quantity is below zero."""
    NO_CURRENT = 3
    """No line current flows: its power factor, distortion and phases do not exist."""
    NOT_BALANCED = 4
    """The energy does not balance to 1e-6, or a result overflows: beyond the numbers' range."""
    NEVER_REGULATED = 5
    """Without a reservoir the string is out of regulation in every half period."""
    NOT_REACHED = 6
    """The state is not reached up to the greatest line voltage looked at."""
    ALWAYS_PASSED = 7
    """The rating does not exceed the dropout, so it is passed before the string regulates."""


def columns(**given: ArrayLike) -> dict[str, FloatArray]:
    """Broadcast named quantities to columns of shape (n,).

    Raises:
        ValueError: If they do not broadcast, or to more than one axis.
    """
    arrays = {name: np.asarray(each, dtype=float) for name, each in given.items()}
    try:
        shape = np.broadcast_shapes(*(each.shape for each in arrays.values()))
    except ValueError:
        shapes = ", ".join(f"{name} {each.shape}" for name, each in arrays.items())
        raise ValueError(f"the quantities do not have a common shape: {shapes}") from None
    if len(shape) > 1:
        raise ValueError(f"one axis of operating points at most, found the shape {shape}")
    count = shape[0] if shape else 1
    return {name: np.broadcast_to(each, (count,)) for name, each in arrays.items()}


def refused(given: dict[str, FloatArray], positive: tuple[str, ...]) -> IntArray:
    """A :class:`Reason` for each column, shape (n,): some must be above zero, none below."""
    values = np.stack(list(given.values()))
    finite = np.isfinite(values).all(axis=0)
    in_range = (values >= 0.0).all(axis=0)
    for name in positive:
        in_range &= given[name] > 0.0
    found: IntArray = np.where(finite, np.where(in_range, Reason.NONE, Reason.OUT_OF_RANGE), 1)
    return found
