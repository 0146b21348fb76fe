"""One criterion in one case: value, limit and outcome where limit less value is least."""

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Final

from calcdoc.analysis.box import Box
from calcdoc.analysis.evaluation import (
    Combination,
    Conclusion,
    Drawn,
    Judgement,
    Outcome,
    Row,
    Unjudged,
)
from calcdoc.analysis.extremes import Extreme
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.putting_back import Solutions
from calcdoc.analysis.sides import Side
from calcdoc.analysis.working import InCase
from calcdoc.frozen import Frozen
from calcdoc.model.model import Judged

if TYPE_CHECKING:  # most criteria need no statistics
    from calcdoc.analysis.parts import Part
    from calcdoc.analysis.root_sum_square import Combined

EQUAL: Final = 1e-12
"""Share of the largest term below which a requirement counts as met with equality."""
SLIGHTLY: Final = 1e-9
"""Share of the largest term by which what is proven may lie beyond what was attained."""
_WORST_FIRST: Final = (
    Outcome.FAIL,
    Outcome.NOT_DECIDED,
    Outcome.PASS,
    Outcome.NOT_APPLICABLE,
)


class Hearing(Frozen, frozen=True):
    """A criterion in one case, ready to be judged."""

    judged: Judged
    case: str
    known: InCase
    """What its names mean."""
    sides: tuple[Side, ...]
    box: Box
    asked: tuple[int, ...]
    """For each side the number of the question where its requirement is least."""


class Found(Frozen, frozen=True):
    """What was found about one side: its extreme and the values of the tape there."""

    side: Side
    extreme: Extreme
    computed: Mapping[int, float]
    """Value of every instruction that matters, at the point of the extreme."""


class Weighed(Frozen, frozen=True):
    """The limits of a criterion in one case, by its method."""

    rows: tuple[Row, ...]
    requirements: tuple[float, ...]
    outcome: Outcome | None
    """Over all limits, for sampling; None where each limit is judged on its own."""
    statistics: "tuple[Combined | Drawn, ...]"
    """For each limit; empty by extremes."""
    bases: tuple[FloatArray, ...] = ()
    """For each limit where its parts vary around, shape (n_columns,)."""


class Ready(Frozen, frozen=True):
    """A criterion in one case with what was found at the extremes and the parts that vary."""

    hearing: Hearing
    found: tuple[Found, ...]
    parts: "tuple[Part, ...]"
    """By extremes none: there they move like all else."""
    solutions: Solutions

    @property
    def by(self) -> str:
        """The method it is judged by."""
        return self.hearing.judged.statement.clauses.by


def by_extremes(ready: Ready) -> Weighed:
    """Every limit at its extreme."""
    rows = tuple(row_of(each) for each in ready.found)
    return Weighed(rows, tuple(each.extreme.value for each in ready.found), None, ())


def no_ground(judged: Judged, case: str, found: Sequence[Found]) -> Unjudged | None:
    """Why there is nothing to judge: the condition is true nowhere, or may be."""
    without = [each for each in found if _beside_its_condition(each)]
    if len(without) < len(found):
        return None
    if all(each.extreme.bound >= each.extreme.value for each in without):
        reason = "its condition is true nowhere"
        return Unjudged(judged, case, Outcome.NOT_APPLICABLE, reason)
    reason = "no point was found at which its condition is true, and none could be excluded"
    return Unjudged(judged, case, Outcome.NOT_DECIDED, reason)


def _beside_its_condition(found: Found) -> bool:
    """Whether the condition is false where the target is least, and so everywhere it was tried."""
    return found.side.when is not None and not found.computed[found.side.when]


def row_of(found: Found) -> Row:
    """Value, limit and outcome of one limit at the point that governs it."""
    side, extreme = found.side, found.extreme
    value, limit = found.computed[side.value], found.computed[side.limit]
    slack = limit - value if side.relation[0] == "<" else value - limit
    tolerance = EQUAL * max(abs(value), abs(limit))
    outcome = _outcome(side, extreme.value, extreme.bound, max(abs(value), abs(limit)))
    if _beside_its_condition(found):
        outcome = Outcome.NOT_APPLICABLE if extreme.bound >= extreme.value else Outcome.NOT_DECIDED
    slack = 0.0 if abs(slack) <= tolerance else slack
    return Row(side.element or 0, value, limit, slack, outcome)


def _outcome(side: Side, requirement: float, bound: float, size: float) -> Outcome:
    """Pass when it is proven to hold, fail when a point breaks it, else not decided."""
    if not holds(side, requirement, EQUAL * size):
        return Outcome.FAIL
    proven = holds(side, bound, EQUAL * size) or requirement - bound <= SLIGHTLY * size
    return Outcome.PASS if proven else Outcome.NOT_DECIDED


def holds(side: Side, requirement: float, tolerance: float) -> bool:
    """Whether a requirement is met; a strict one not with equality."""
    strict = "=" not in side.relation
    return requirement > tolerance if strict else requirement >= -tolerance


def governing_row(judged: Judged, rows: Sequence[Row], requirements: Sequence[float]) -> int:
    """The limit nearest to being broken: the worst verdict first, then the least distance.

    Elements of a series have limits of their own size, so shares of the limit compare them.
    """
    by_share = bool(judged.statement.clauses.index) and all(
        row.limit != 0 and not judged.typed.weight for row in rows
    )

    def distance(at: int) -> tuple[int, float]:
        size = abs(rows[at].limit) if by_share else 1.0
        return _WORST_FIRST.index(rows[at].outcome), requirements[at] / size

    return min(range(len(rows)), key=distance)


def judgement(  # noqa: PLR0913  (what the judgement is made of)
    hearing: Hearing,
    found: Sequence[Found],
    rows: tuple[Row, ...],
    requirements: Sequence[float],
    governing: Combination,
    which: int,
    values: Mapping[str, float],
    away: tuple[str, ...],
    statistics: "Combined | Drawn | None" = None,
) -> Judgement:
    """The criterion at its governing point."""
    row, extreme = rows[which], found[which].extreme
    tolerance = EQUAL * max(abs(row.value), abs(row.limit))
    equal = abs(requirements[which]) <= tolerance
    return Judgement(
        judged=hearing.judged,
        case=hearing.case,
        side=hearing.sides[which],
        value=row.value,
        limit=row.limit,
        slack=row.slack,
        requirement=0.0 if equal else requirements[which],
        equal=equal,
        outcome=row.outcome,
        governing=governing,
        values=values,
        proof=extreme.proof,
        bound=extreme.bound,
        rows=rows,
        away=away,
        statistics=statistics,
    )


def concluded(judged: Judged, in_case: Mapping[str, Judgement | Unjudged]) -> Conclusion:
    """A criterion over its cases: the worst outcome governs, then the least requirement."""

    def badness(each: Judgement | Unjudged) -> tuple[int, float]:
        least = each.requirement if isinstance(each, Judgement) else float("-inf")
        return _WORST_FIRST.index(each.outcome), least

    return Conclusion(judged, in_case, min(in_case.values(), key=badness))


def values_at(rows: Mapping[int, int], column: FloatArray) -> dict[int, float]:
    """Values by instruction, from a column of a program's rows."""
    return {at: float(column[row]) for at, row in rows.items()}
