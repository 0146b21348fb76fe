"""What SciPy computes for sampling: exact bounds, quantiles, and low-discrepancy points.

SciPy takes a third of a second to load, so only what samples imports it, and here alone.
"""

from typing import TYPE_CHECKING, Final

import numpy as np

from calcdoc.analysis.points import FloatArray
from calcdoc.frozen import Frozen

if TYPE_CHECKING:
    from scipy.stats.qmc import Sobol

MOST_DIMENSIONS: Final = 21201
"""Of low-discrepancy points; direction numbers are known for no more."""
_BITS: Final = 30


class Bounds(Frozen, frozen=True):
    """Two ends; None where the draws are too few to say."""

    low: float | None
    high: float | None


def share_bounds(met: int, draws: int, confidence: float) -> tuple[float, float]:
    """Exact one-sided bounds of a share (Clopper and Pearson), each with the confidence asked."""
    from scipy.special import betaincinv  # noqa: PLC0415

    lower = 0.0 if met == 0 else float(betaincinv(met, draws - met + 1, 1.0 - confidence))
    upper = 1.0 if met == draws else float(betaincinv(met + 1, draws - met, confidence))
    return lower, upper


def ranks(draws: int, share: float, confidence: float) -> tuple[int, int]:
    """Places, counted from one, of the ordered draws that enclose a quantile.

    The share of the distribution below the quantile is ``share``. How many of the draws fall
    below it is binomial, whatever the distribution is; each tail gets half of what is left.

    Returns:
        Lower and upper place; 0 and draws + 1 where there are too few draws.
    """
    tail = (1.0 - confidence) / 2.0
    return _least(draws, share, tail), _least(draws, share, 1.0 - tail) + 1


def _least(draws: int, share: float, chance: float) -> int:
    """The least count whose binomial distribution function reaches a chance."""
    from scipy.special import bdtr  # noqa: PLC0415

    low, high = -1, draws
    while high - low > 1:
        middle = (low + high) // 2
        if bdtr(middle, draws, share) >= chance:
            high = middle
        else:
            low = middle
    return high


def student(confidence: float, freedom: int) -> float:
    """Quantile of Student's t distribution."""
    from scipy.special import stdtrit  # noqa: PLC0415

    return float(stdtrit(freedom, confidence))


def normal_quantile(shares: FloatArray, out: FloatArray) -> None:
    """Standard normal deviates below which these shares lie."""
    from scipy.special import ndtri  # noqa: PLC0415

    ndtri(shares, out)


def scrambled(dimensions: int, generator: np.random.Generator) -> "Sobol":
    """Sobol's sequence in a scrambling of its own."""
    from scipy.stats.qmc import Sobol  # noqa: PLC0415

    return Sobol(dimensions, scramble=True, bits=_BITS, rng=generator)


def next_points(sequence: "Sobol", count: int) -> FloatArray:
    """The next points, shape (n_dimensions, count), strictly between 0 and 1."""
    points: FloatArray = sequence.random(count).T + 0.5 ** (_BITS + 1)
    return points
