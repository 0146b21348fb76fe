"""Where the random parts vary around: all else at its worst, for one criterion."""

from collections.abc import Sequence

import numpy as np

from calcdoc.analysis.parts import Part
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import Program


def base_point(
    program: Program, requirements: Sequence[int], parts: Sequence[Part], governing: FloatArray
) -> FloatArray:
    """Parts at nominal, each bias at its worse end, all else where it governs.

    The worse end is the one with the lower requirement; a part as it is when new counts as well,
    where that is worse than both ends. The search starts on the side the governing point is on and
    turns one bias at a time, so that it ends where no single bias makes it worse.

    Args:
        program: Computes the requirements.
        requirements: Instructions of the tape; the least of them counts.
        parts: The columns that vary.
        governing: Shape (n_columns,): the combination that governs at the extremes.

    Returns:
        Shape (n_columns,).
    """
    point = governing.copy()
    biased = []
    for part in parts:
        above = bool(governing[part.column] > part.nominal)
        ends = part.nominal + part.bias_low, part.nominal + part.bias_high
        point[part.column] = ends[above]
        if ends[0] < ends[1]:
            biased.append((part.column, sorted({*ends, part.nominal})))
    rows = [program.row[requirement] for requirement in requirements]
    for _ in range(2 * len(biased) + 1 if biased else 0):
        points = [point]
        for column, options in biased:
            for option in options:
                if option != point[column]:
                    other = point.copy()
                    other[column] = option
                    points.append(other)
        found = program.evaluate(np.stack(points, axis=1))[rows]
        least = np.where(np.isfinite(found), found, np.inf).min(axis=0)
        worst = int(np.argmin(least))
        if not least[worst] < least[0]:
            break
        point = points[worst]
    return point
