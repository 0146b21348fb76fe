"""Criteria by root sum square and by sampling: parts vary on their own, all else at its worst."""

from collections.abc import Sequence
from math import isfinite
from typing import Final

from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.evaluation import Drawn, Outcome, Row, Unjudged
from calcdoc.analysis.judging import EQUAL, Found, Hearing, holds
from calcdoc.analysis.parts import Part, part_of, random_parts
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.putting_back import Solutions
from calcdoc.analysis.root_sum_square import Combined, root_sum_square
from calcdoc.analysis.sampling import Asked, Job, Progress, Sampled, Setting, sampled
from calcdoc.analysis.sides import Side
from calcdoc.frozen import Frozen
from calcdoc.model.model import Model
from calcdoc.text.names import fold
from calcdoc.text.nodes import Name
from calcdoc.text.titleblock import TitleBlock

DRAWS: Final = 100_000
SEED: Final = 1
"""Both where the title block does not say."""
_SELDOM: Final = "its condition is true in too few"
_NOT_AT_NOMINAL: Final = "it cannot be computed with the parts at nominal"
"""Where a condition leaves such points out."""


class Weighed(Frozen, frozen=True):
    """What the statistics say about the limits of a criterion in one case."""

    rows: tuple[Row, ...]
    requirements: tuple[float, ...]
    outcome: Outcome | None
    """Over all limits, for sampling; None where each limit is judged on its own."""
    statistics: tuple[Combined | Drawn, ...]
    """For each limit."""


class Ready(Frozen, frozen=True):
    """A criterion in one case with what was found at the extremes and the parts that vary."""

    hearing: Hearing
    found: tuple[Found, ...]
    parts: tuple[Part, ...]
    solutions: Solutions


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
    return {
        key: max(1, round(float(values[part.row[at]]))) for key, at in zip(moved, rows, strict=True)
    }


def combine(compiled: Compiled, ready: Ready) -> Weighed | Unjudged:
    """Judge by root sum square: every limit on its own.

    Effects start from the parts at nominal, so a condition that is false there leaves nothing to
    combine.
    """
    combined = [
        root_sum_square(
            compiled.tape, (each.side.requirement,), ready.parts, each.extreme.point,
            each.extreme.value,
        )
        for each in ready.found
    ]  # fmt: skip
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
    return Weighed(tuple(rows), tuple(requirements), None, tuple(combined))


def sample(
    compiled: Compiled, ready: Sequence[Ready], setting: Setting, progress: Progress | None
) -> list[Weighed | Unjudged]:
    """Judge by sampling, all criteria with the same draws."""
    results = sampled(compiled.tape, [_job(each) for each in ready], setting, progress)
    return [_weighed(compiled, one, result) for one, result in zip(ready, results, strict=True)]


def _job(ready: Ready) -> Job:
    share = ready.hearing.judged.statement.clauses.share
    assert share is not None
    asked = tuple(
        Asked(each.side.requirement, "=" not in each.side.relation, _tolerance(each),
              each.extreme.point, each.side.when)
        for each in ready.found
    )  # fmt: skip
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
    return Weighed(tuple(rows), tuple(requirements), outcome, drawn)


def _no_value(result: Sampled, outcome: Outcome, why: str) -> str:
    """The verdict of the draws, without the value of one of them."""
    more = ": more draws decide" if outcome is Outcome.NOT_DECIDED else ""
    return (
        f"{result.met} of {result.draws} draws meet it; {why}, so there is no value to show{more}"
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
