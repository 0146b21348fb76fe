"""Solutions put back into their relations, and whether settled loops run away."""

from collections.abc import Mapping
from typing import Final

import numpy as np

from calcdoc.analysis.box import Box
from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.derivative import loop_slope
from calcdoc.analysis.evaluation import Gain, PutBack
from calcdoc.analysis.extremes import Question, extremes
from calcdoc.analysis.points import FloatArray, evaluate_points
from calcdoc.analysis.tape import TapeBuilder
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
    for key, sides in compiled.relations.items():
        size = np.max(np.abs(values[list(sides.terms)]), axis=0)
        left = np.abs(values[sides.left] - values[sides.right])
        with np.errstate(divide="ignore", invalid="ignore"):
            residual = float(np.max(np.where(left > 0, left / size, 0.0)))
        variable = model.variables[key]
        proven = variable.solved is not None and variable.solved.proven
        if not residual <= CLOSE and not proven:
            raise Mistake(_not_satisfied(variable, residual))
        is_loop = variable.implicit is not None and variable.implicit.is_loop
        gain = _gain(compiled, compiled.roots[key], compiled.box) if is_loop else None
        found[key] = PutBack(residual, proven, gain)
    return found


def _gain(compiled: Compiled, root: int, box: Box) -> Gain:
    """The greatest gain of a loop over the declared band.

    It counts with its sign: a change that comes back smaller, or turned round, dies out.
    """
    builder = TapeBuilder.on(compiled.tape)
    slope = loop_slope(builder, root)
    (greatest,) = extremes(builder.tape(), [Question(slope, True, box.low, box.nominal, box.high)])
    return Gain(greatest.value, greatest.bound)


def running_away(model: Model, found: Mapping[str, PutBack]) -> Mapping[str, frozenset[str]]:
    """Key of every quantity to the settled loops it rests on whose gain may reach one."""
    away = {key for key, each in found.items() if each.gain and not each.gain.settles}
    rests: dict[str, frozenset[str]] = {}
    for key in model.order:
        own = {key} & away
        rests[key] = frozenset(own).union(
            *(rests[each] for each in model.variables[key].depends_on)
        )
    return rests


def _not_satisfied(variable: Variable, residual: float) -> Finding:
    return error(
        "solve",
        f"put back, the solution for {shown(variable.symbol)} leaves {residual:.2g} of the largest"
        " term",
        variable.label.span,
        help="choose another root with `where`, or solve numerically with `within a .. b`",
    )
