"""Solutions put back into their relations, and whether settled loops run away."""

from collections.abc import Mapping
from typing import Final

import numpy as np

from calcdoc.analysis.box import Box
from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.derivative import loop_slope
from calcdoc.analysis.evaluation import Gain, PutBack
from calcdoc.analysis.extremes import Question, extremes
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.tape import TapeBuilder
from calcdoc.analysis.trouble import said
from calcdoc.analysis.working import InCase
from calcdoc.frozen import Frozen
from calcdoc.model.model import Model, Variable
from calcdoc.problems import Finding, error
from calcdoc.text.scan import shown

CLOSE: Final = 1e-9
"""Share of the largest term that may be left when a solution is put back."""


class Solutions(Frozen, frozen=True):
    """What is known of solved and settled quantities in one case."""

    back: Mapping[str, PutBack]
    bad: Mapping[str, str]
    """Quantities whose solution does not satisfy its relation, with the reason."""
    away: Mapping[str, frozenset[str]]
    """Key of every quantity to the settled loops it rests on whose gain may reach one."""


def solutions(
    model: Model, normal: Mapping[str, PutBack], found: Mapping[str, PutBack | Finding]
) -> Solutions:
    """What is known in a case; what it does not move is as in the normal one."""
    back = dict(normal) | {key: each for key, each in found.items() if isinstance(each, PutBack)}
    bad = {key: said(each) for key, each in found.items() if isinstance(each, Finding)}
    return Solutions(back, bad, _running_away(model, back))


def put_back(
    compiled: Compiled, model: Model, case: InCase, points: FloatArray, box: Box
) -> Mapping[str, PutBack | Finding]:
    """What is left of the relations that a case moves when their solutions are put back.

    Args:
        compiled: The tape with both sides of each relation.
        model: For names.
        case: The case; the normal one moves all relations.
        points: Shape (n_columns, n_points): nominal and all governing points.
        box: Where loops must settle.

    Returns:
        For each solved or settled quantity what is left, or what to say when it does not satisfy
        its relation.
    """
    if not case.relations:
        return {}
    rows = {at for each in case.relations.values() for at in (each.left, each.right, *each.terms)}
    part = plain(compiled.tape, rows)
    values = part.evaluate(points)
    return {
        key: _put_back(compiled, model.variables[key], case, values[
            [part.row[at] for at in (sides.left, sides.right, *sides.terms)]
        ], box)
        for key, sides in case.relations.items()
    }  # fmt: skip


def _put_back(
    compiled: Compiled, variable: Variable, case: InCase, values: FloatArray, box: Box
) -> PutBack | Finding:
    """Compare both sides; ``values`` has them first, then their terms, shape (n, n_points)."""
    left, size = np.abs(values[0] - values[1]), np.max(np.abs(values[2:]), axis=0)
    with np.errstate(divide="ignore", invalid="ignore"):
        residual = float(np.max(np.where(left > 0, left / size, 0.0)))
    proven = variable.solved is not None and variable.solved.proven
    if not residual <= CLOSE and not proven:
        return _not_satisfied(variable, residual)
    is_loop = variable.implicit is not None and variable.implicit.is_loop
    gain = _gain(compiled, case.roots[variable.key], box) if is_loop else None
    return PutBack(residual, proven, gain)


def _gain(compiled: Compiled, root: int, box: Box) -> Gain:
    """The greatest gain of a loop over a box.

    It counts with its sign: a change that comes back smaller, or turned round, dies out.
    """
    builder = TapeBuilder.on(compiled.tape)
    slope = loop_slope(builder, root)
    (greatest,) = extremes(builder.tape(), [Question(slope, True, box.low, box.nominal, box.high)])
    return Gain(greatest.value, greatest.bound)


def _running_away(model: Model, found: Mapping[str, PutBack]) -> Mapping[str, frozenset[str]]:
    away = {key for key, each in found.items() if each.gain and not each.gain.settles}
    if not away:
        return dict.fromkeys(model.order, frozenset())
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
