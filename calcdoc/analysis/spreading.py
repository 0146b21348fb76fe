"""The spread of a quantity: parts vary at random, conditions and biases stand still."""

from typing import Final

import numpy as np

from calcdoc.analysis.base_point import base_point
from calcdoc.analysis.box import Box
from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.evaluation import Evaluation, Judgement
from calcdoc.analysis.extremes import Question, effort, extremes
from calcdoc.analysis.looking_up import reached
from calcdoc.analysis.parts import Part, random_parts
from calcdoc.analysis.pictured import Bound, Spread
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.sampling import drawn
from calcdoc.analysis.sides import Against
from calcdoc.analysis.statistical import setting_of
from calcdoc.frozen import replace
from calcdoc.model.model import Pictured
from calcdoc.problems import Mistake, error
from calcdoc.text.cases import NORMAL
from calcdoc.text.names import fold
from calcdoc.text.nodes import Group, Name, Node
from calcdoc.text.scan import shown

BINS: Final = 40
DRAWS: Final = 100_000
"""The most that a figure takes."""
WORK: Final = 500_000_000
"""Instructions times draws that a figure may cost: some seconds. Larger ones take fewer draws."""
FEWEST: Final = 1000


def spread(
    compiled: Compiled, evaluation: Evaluation, pictured: Pictured, against: Against | None
) -> Spread:
    """Draw the parts a quantity rests on.

    Where criteria compare the quantity with a limit, conditions stand where they govern the one
    that is nearest to it, and biases at that end; else all stand at nominal.

    Raises:
        Mistake: when no draw can be computed.
    """
    symbol = pictured.statement.symbol
    assert symbol is not None
    target, title = compiled.variables[symbol.key], evaluation.model.document.title
    judged = [
        each
        for conclusion in evaluation.conclusions
        if isinstance(each := conclusion.in_case.get(NORMAL), Judgement)
        and _is(each.side.value_tree, symbol.key)
    ]
    box, governing = compiled.box, compiled.box.nominal
    nearest = min(judged, key=lambda each: each.requirement) if judged else None
    if nearest is not None:
        box = _box(compiled, nearest)
        governing = _governing(compiled, nearest, box)
    rests = reached(compiled.tape, target)
    every = tuple(
        each for each in random_parts(compiled.columns, evaluation.model) if each.column in rests
    )
    parts = tuple(each for each in every if each.is_random)
    base = governing
    if nearest is not None:
        worst = nearest.side.requirement
        base = base_point(plain(compiled.tape, (worst,)), (worst,), every, governing)
    asked = setting_of(title)
    affordable = max(FEWEST, WORK // effort(compiled.tape, target))
    setting = replace(asked, draws=min(asked.draws, DRAWS, affordable))
    values = drawn(compiled.tape, target, parts, base, setting)
    draws, seed = setting.total, setting.seed
    kept = values[np.isfinite(values)]
    if not kept.size:
        raise Mistake(
            error(
                "figure-form",
                f"no draw of {shown(symbol.name)} can be computed",
                symbol.span,
                help="check its formula over the bands of its inputs",
            )
        )
    still = _still(box, base, every)
    ends = (Question(target, end, still.low, base, still.high) for end in (False, True))
    least, greatest = (each.value for each in extremes(compiled.tape, tuple(ends)))
    program = plain(compiled.tape, (target,))
    nominal = float(program.evaluate(base[:, None])[program.row[target], 0])
    keys = {column: key for key, column in compiled.columns.items()}
    moved = sorted(rests & {int(at) for at in np.flatnonzero(base != compiled.box.nominal)})
    low, high = float(kept.min()), float(kept.max())
    counts = np.histogram(kept, BINS, (low, high))[0] if low < high else np.array([kept.size])
    return Spread(
        pictured,
        draws,
        seed,
        draws - kept.size,
        low,
        high,
        tuple(int(each) for each in counts),
        float(kept.mean()),
        float(kept.std()),
        nominal,
        min(least, nominal),
        max(greatest, nominal),
        _bounds(compiled, judged, against, base),
        nearest.judged.statement.id.name if nearest else "",
        {keys[at]: float(base[at]) for at in moved},
        tuple(each.key for each in parts if _assumed(evaluation, each)),
    )


def _is(tree: Node, key: str) -> bool:
    """Whether a side of a criterion is the quantity itself."""
    while isinstance(tree, Group):
        tree = tree.inner
    return isinstance(tree, Name) and fold(tree.name) == key


def _box(compiled: Compiled, judgement: Judgement) -> Box:
    """The box a criterion is judged over."""
    clauses, box = judgement.judged.statement.clauses, compiled.box
    low, nominal, high = box.low.copy(), box.nominal.copy(), box.high.copy()
    for point in clauses.at:
        column = compiled.columns[point.symbol.key]
        low[column], nominal[column], high[column] = point.given.si
    return Box(low, nominal, high)


def _governing(compiled: Compiled, judgement: Judgement, box: Box) -> FloatArray:
    """The combination that governs a criterion; what does not matter stands at nominal."""
    point = box.nominal.copy()
    for key, stand in judgement.governing.items():
        point[compiled.columns[key]] = stand.value
    return point


def _still(box: Box, base: FloatArray, parts: tuple[Part, ...]) -> Box:
    """The box with everything but the parts where it stands."""
    low, high = base.copy(), base.copy()
    for part in parts:
        low[part.column], high[part.column] = box.low[part.column], box.high[part.column]
    return Box(low, base, high)


def _bounds(
    compiled: Compiled, judged: list[Judgement], against: Against | None, base: FloatArray
) -> tuple[Bound, ...]:
    """The stated limit, else those of the criteria on this quantity."""
    if against is not None:
        program = plain(compiled.tape, (against.limit,))
        value = float(program.evaluate(base[:, None])[program.row[against.limit], 0])
        return (Bound("", value),) if np.isfinite(value) else ()
    return tuple(
        Bound(each.judged.statement.id.name, row.limit) for each in judged for row in each.rows
    )


def _assumed(evaluation: Evaluation, part: Part) -> bool:
    given = evaluation.model.variables[part.key].given
    return given is not None and given.parts.assumed
