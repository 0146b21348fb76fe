"""Criteria by root sum square and by sampling: parts vary on their own, all else at its worst."""

from collections.abc import Mapping, Sequence
from itertools import product
from math import isfinite, sqrt
from statistics import NormalDist
from typing import Final

import numpy as np

from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.evaluation import Drawn, Outcome, Progress, Row, Unjudged
from calcdoc.analysis.judging import EQUAL, Found, Hearing, Ready, Weighed, holds
from calcdoc.analysis.looking_up import reached
from calcdoc.analysis.parts import Part, part_of, random_parts
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.root_sum_square import at_limits, root_sum_square
from calcdoc.analysis.sampling import Asked, Job, Sampled, Setting, sampled
from calcdoc.analysis.sides import Side
from calcdoc.model.model import Model
from calcdoc.text.names import fold
from calcdoc.text.nodes import Name
from calcdoc.text.titleblock import TitleBlock

Key = tuple[int, str]
"""Number and case of a criterion."""
MOST_CORNERS: Final = 6
"""Conditions of which all corners are tried: 64 of them."""
SQRT_3: Final = sqrt(3.0)
"""Half the band of a rectangular part in standard deviations."""
DRAWS: Final = 100_000
SEED: Final = 1
"""Both where the title block does not say."""
_SELDOM: Final = "its condition is true in too few"
_NOT_AT_NOMINAL: Final = "it cannot be computed with the parts at nominal"
"""Where a condition leaves such points out."""


def setting_of(title: TitleBlock) -> Setting:
    """How many draws, from which seed, as the title block says."""
    return Setting(
        DRAWS if title.draws is None else title.draws,
        SEED if title.seed is None else title.seed,
        quasi_random=title.sequence == "quasi-random",
    )


def parts_of(compiled: Compiled, model: Model, hearing: Hearing) -> tuple[Part, ...]:
    """The columns that vary at random for a criterion in its case.

    Values that the criterion's operating point sets are as it says, those that the case changes
    as the case says.
    """
    counts = _counts(compiled, model, hearing)
    stated = {each.symbol.key: each.given for each in hearing.judged.statement.clauses.at}
    parts = [
        each for each in random_parts(compiled.columns, model, counts) if each.stream not in stated
    ]
    parts += [
        part_of(key, compiled.columns[key], given)
        for key, given in stated.items()
        if given.varies and model.variables[key].kind != "condition"
    ]
    return tuple(parts)


def _counts(compiled: Compiled, model: Model, hearing: Hearing) -> dict[str, int]:
    """Numbers of like parts that the case changes or the operating point sets."""
    names = {
        fold(like.count.name)
        for variable in model.variables.values()
        if variable.given and (like := variable.given.parts.like) and isinstance(like.count, Name)
    }
    stated = {each.symbol.key for each in hearing.judged.statement.clauses.at}
    moved = sorted(names & (hearing.known.changes.keys() | stated) & hearing.known.variables.keys())
    if not moved:
        return {}
    rows = [hearing.known.variables[key] for key in moved]
    part = plain(compiled.tape, rows)
    values = part.evaluate(hearing.box.nominal[:, None])[:, 0]
    found = {key: float(values[part.row[at]]) for key, at in zip(moved, rows, strict=True)}
    return {key: max(1, round(number)) for key, number in found.items()}


def weighed(
    compiled: Compiled, model: Model, ready: Mapping[Key, Ready], progress: Progress | None
) -> dict[Key, Weighed | Unjudged]:
    """What root sum square and sampling say, by the criterion's number and case."""
    found: dict[Key, Weighed | Unjudged] = {
        key: combine(compiled, each) for key, each in ready.items() if each.by == "root sum square"
    }
    drawn = {key: each for key, each in ready.items() if each.by == "sampling"}
    if drawn:
        setting = setting_of(model.document.title)
        results = sample(compiled, list(drawn.values()), setting, progress)
        found |= zip(drawn, results, strict=True)
    return found


def worst_conditions(compiled: Compiled, ready: Ready, found: Found, spread: float) -> FloatArray:
    """Where conditions stand: the worst for this method of their corners and where they govern.

    What governs at extremes has all parts at their limits, and need not be worst where parts vary
    on their own. Each corner is weighed to first order: the requirement with parts at nominal, less
    ``spread`` times the root of the sum of squares of what their limits do.

    Returns:
        Shape (n_columns,): the governing point with other conditions, when those are worse.
    """
    points = _corners(compiled, ready, found)
    if len(points) == 1:
        return points[0]
    drawn = [part for part in ready.parts if part.is_random]
    program = plain(compiled.tape, _instructions(found.side))
    values = program.evaluate(
        np.concatenate([_moved(point, ready.parts, drawn) for point in points], axis=1)
    )
    shape = (len(points), 1 + 2 * len(drawn))
    requirement = values[program.row[found.side.requirement]].reshape(shape)
    effects = np.minimum(requirement[:, 1:].reshape(len(points), -1, 2).min(axis=2, initial=np.inf)
                         - requirement[:, :1], 0.0)  # fmt: skip
    score = requirement[:, 0] - spread * np.sqrt(np.sum(effects**2, axis=1))
    if found.side.when is not None:
        applies = values[program.row[found.side.when]].reshape(shape)[:, 0] != 0.0
        score = np.where(applies, score, np.inf)
    score = np.where(np.isfinite(score), score, np.inf)
    return points[int(np.argmin(score))]


def _instructions(side: Side) -> tuple[int, ...]:
    return (side.requirement,) if side.when is None else (side.requirement, side.when)


def _corners(compiled: Compiled, ready: Ready, found: Found) -> list[FloatArray]:
    """The governing point, then all corners of what is not random; of many one is turned each."""
    box, point = ready.hearing.box, found.extreme.point
    random = {part.column for part in ready.parts}
    rests = reached(compiled.tape, found.side.requirement) - random
    columns = [at for at in sorted(rests) if box.low[at] < box.high[at]]
    if len(columns) > MOST_CORNERS:
        choices = [{at: end} for at in columns for end in (box.low[at], box.high[at])]
    else:
        ends = product(*((box.low[at], box.high[at]) for at in columns))
        choices = [dict(zip(columns, each, strict=True)) for each in ends]
    corners = [point]
    for choice in choices if columns else ():
        corner = point.copy()
        for at, end in choice.items():
            corner[at] = end
        corners.append(corner)
    return corners


def _moved(point: FloatArray, parts: Sequence[Part], drawn: Sequence[Part]) -> FloatArray:
    """A point with parts at nominal, then each at its limits; biases stay where they govern."""
    base = point.copy()
    for part in parts:
        above = bool(point[part.column] > part.nominal)
        base[part.column] = part.nominal + (part.bias_high if above else part.bias_low)
    return at_limits(base, drawn)


def combine(compiled: Compiled, ready: Ready) -> Weighed | Unjudged:
    """Judge by root sum square: every limit on its own.

    Effects start from the parts at nominal, so a condition that is false there leaves nothing to
    combine.
    """
    combined = [
        root_sum_square(
            compiled.tape,
            (each.side.requirement,),
            ready.parts,
            worst_conditions(compiled, ready, each, 1.0),
            each.extreme.value,
        )
        for each in ready.found
    ]
    rows, requirements = [], []
    for found, each in zip(ready.found, combined, strict=True):
        base = _At(compiled, found.side, each.point)
        if not base.applies:
            return _unjudged(
                ready,
                Outcome.NOT_DECIDED,
                "its condition is false with the parts at nominal, so there are no effects to"
                " combine: judge it by extremes or by sampling",
            )
        rows.append(base.row(each.requirement, None))
        requirements.append(each.requirement)
    bases = tuple(each.point for each in combined)
    return Weighed(tuple(rows), tuple(requirements), None, tuple(combined), bases)


def sample(
    compiled: Compiled, ready: Sequence[Ready], setting: Setting, progress: Progress | None
) -> list[Weighed | Unjudged]:
    """Judge by sampling, all criteria with the same draws."""
    jobs = [_job(compiled, each) for each in ready]
    results = sampled(compiled.tape, jobs, setting, progress)
    return [_weighed(compiled, one, result) for one, result in zip(ready, results, strict=True)]


def _job(compiled: Compiled, ready: Ready) -> Job:
    share = ready.hearing.judged.statement.clauses.share
    assert share is not None
    deviations = NormalDist().inv_cdf(float(share)) / SQRT_3
    asked = tuple(
        Asked(
            each.side.requirement,
            "=" not in each.side.relation,
            _tolerance(each),
            worst_conditions(compiled, ready, each, deviations),
            each.side.when,
        )
        for each in ready.found
    )
    return Job(asked, ready.parts, share)


def _tolerance(found: Found) -> float:
    side = found.side
    return EQUAL * max(abs(found.computed[side.value]), abs(found.computed[side.limit]))


def _unjudged(ready: Ready, outcome: Outcome, reason: str) -> Unjudged:
    return Unjudged(ready.hearing.judged, ready.hearing.case, outcome, reason)


def _weighed(compiled: Compiled, ready: Ready, result: Sampled) -> Weighed | Unjudged:
    share = float(ready.hearing.judged.statement.clauses.share or 0)
    outcome = Outcome.NOT_DECIDED
    if result.lower >= share:
        outcome = Outcome.PASS
    elif result.upper < share and not result.lost:
        outcome = Outcome.FAIL
    rows, requirements = [], []
    for found, spread in zip(ready.found, result.spreads, strict=True):
        if spread.quantile is None and result.lost > (1 - share) * result.draws:
            reason = f"{result.lost} of {result.draws} draws could not be computed"
            return _unjudged(ready, Outcome.NOT_DECIDED, reason)
        if spread.quantile is None:
            return _unjudged(ready, outcome, _no_value(result, outcome, _SELDOM))
        base = _At(compiled, found.side, spread.base)
        if not isfinite(base.limit + base.margin):
            return _unjudged(ready, outcome, _no_value(result, outcome, _NOT_AT_NOMINAL))
        rows.append(base.row(spread.quantile, outcome if len(ready.found) == 1 else None))
        requirements.append(spread.quantile)
    drawn = tuple(Drawn(share, result, each) for each in result.spreads)
    bases = tuple(each.base for each in result.spreads)
    return Weighed(tuple(rows), tuple(requirements), outcome, drawn, bases)


def _no_value(result: Sampled, outcome: Outcome, why: str) -> str:
    """The verdict of the draws, without the value of one of them."""
    more = ": more draws decide" if outcome is Outcome.NOT_DECIDED else ""
    return (
        f"{result.met} of {result.counted} draws meet it; {why}, so there is no value to show{more}"
    )


class _At:
    """A limit with value and limit where the parts vary around."""

    def __init__(self, compiled: Compiled, side: Side, point: FloatArray) -> None:
        self.side = side
        wanted = (side.value, side.limit, side.requirement)
        part = plain(compiled.tape, wanted if side.when is None else (*wanted, side.when))
        values = part.evaluate(point[:, None])[:, 0]
        value, self.limit, requirement = (float(values[part.row[at]]) for at in wanted)
        self.applies = side.when is None or bool(values[part.row[side.when]])
        """Whether its condition is true here."""
        self.sign = -1.0 if side.relation[0] == "<" else 1.0
        self.margin = self.sign * (value - self.limit) - requirement
        """What is asked for beyond the limit."""

    def value(self, requirement: float) -> float:
        """The value at which the requirement has this size."""
        return self.limit + self.sign * (requirement + self.margin)

    def row(self, requirement: float, outcome: Outcome | None) -> Row:
        """The limit with its value; without an outcome it is judged by the requirement."""
        value = self.value(requirement)
        tolerance = EQUAL * max(abs(value), abs(self.limit))
        if outcome is None:
            met = holds(self.side, requirement, tolerance)
            outcome = Outcome.PASS if met else Outcome.FAIL
        slack = requirement + self.margin
        slack = 0.0 if abs(slack) <= tolerance else slack
        return Row(self.side.element or 0, value, self.limit, slack, outcome)
