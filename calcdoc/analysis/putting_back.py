"""Solutions put back into their relations, and whether settled loops run away."""

from collections.abc import Mapping
from typing import Final

import numpy as np

from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.evaluation import PutBack
from calcdoc.analysis.points import FloatArray, evaluate_points
from calcdoc.model.model import Model, Variable
from calcdoc.problems import Finding, Mistake, error
from calcdoc.text.scan import shown

CLOSE: Final = 1e-9
"""Share of the largest term that may be left when a solution is put back."""


def put_back(compiled: Compiled, model: Model, points: FloatArray) -> Mapping[str, PutBack]:
    """What is left of every relation when its solution is put back.

    Args:
        compiled: The tape with both sides of each relation.
        model: For names.
        points: Shape (n_columns, n_points): nominal and all governing points.

    Raises:
        Mistake: when a solution does not satisfy its relation.
    """
    if not compiled.relations:
        return {}
    values = evaluate_points(compiled.tape, points)
    found = {}
    for key, (left, right) in compiled.relations.items():
        size = np.maximum(np.abs(values[left]), np.abs(values[right]))
        with np.errstate(divide="ignore", invalid="ignore"):
            shares = np.where(size > 0, np.abs(values[left] - values[right]) / size, 0.0)
        residual = float(np.max(shares))
        variable = model.variables[key]
        proven = variable.solved is not None and variable.solved.proven
        if not residual <= CLOSE and not proven:
            raise Mistake(_not_satisfied(variable, residual))
        found[key] = PutBack(residual, proven, None)
    return found


def _not_satisfied(variable: Variable, residual: float) -> Finding:
    return error(
        "solve",
        f"put back, the solution for {shown(variable.symbol)} leaves {residual:.2g} of the largest"
        " term",
        variable.label.span,
        help="choose another root with `where`, or solve numerically with `within a .. b`",
    )
