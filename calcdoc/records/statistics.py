"""What root sum square and sampling say about a criterion, in words and numbers."""

from collections.abc import Iterator
from typing import Final

from calcdoc.analysis.evaluation import Conclusion, Drawn, Evaluation, Judgement, Outcome
from calcdoc.analysis.root_sum_square import Combined, Doubt
from calcdoc.frozen import replace
from calcdoc.problems import Finding, warning
from calcdoc.records import record as r
from calcdoc.records.numbers import Numbers
from calcdoc.records.rounding import apart, stored
from calcdoc.records.values import difference, with_unit
from calcdoc.records.wording import counted, typeset
from calcdoc.units import Unit

_PER_CENT: Final = 100
_DIGITS: Final = 3
_MOST: Final = 6
"""Contributions that are named one by one."""
_DOUBTS: Final = {
    Doubt.NOT_COMPUTED: "it cannot be computed with the parts at nominal; the extreme is shown",
    Doubt.NO_SLOPE: "there is no derivative here, so first order cannot be trusted",
    Doubt.ZERO: "to first order the parts have no effect here, but their limits have",
    Doubt.CURVED: "first order is wrong here: the limits do not move it as the slopes say",
}


def with_statistics(
    numbers: Numbers, criterion: r.Criterion, judgement: Judgement, unit: Unit
) -> r.Criterion:
    """A criterion by root sum square or sampling, with what they say; they prove nothing."""
    return replace(
        criterion,
        interval=interval(judgement, unit),
        standard_error=standard_error(judgement, unit),
        share=share(judgement),
        contributions=contributions(numbers, judgement, unit),
        statistics=said(numbers, judgement, unit),
        remark=_remark(criterion, judgement),
        reason=criterion.reason or undecided(judgement),
        proof="",
    )


def _remark(criterion: r.Criterion, judgement: Judgement) -> str:
    """A limit may be met by the share asked for, and the criterion not, as it has two of them."""
    margin = judgement.judged.statement.clauses.margin
    several = len(judgement.rows) > 1
    if judgement.outcome is Outcome.FAIL and judgement.slack >= 0 and not margin and several:
        return "each limit by itself is met by enough draws, all limits together are not"
    return criterion.remark


def interval(judgement: Judgement, unit: Unit) -> tuple[float | None, float | None] | None:
    """The 95 % confidence interval of the quantile that is shown, in the unit, least first."""
    drawn = judgement.statistics
    if not isinstance(drawn, Drawn):
        return None
    ends = [
        None if each is None else stored(unit.from_si(_as_value(judgement, each)))
        for each in (drawn.spread.interval.low, drawn.spread.interval.high)
    ]
    low, high = ends if judgement.side.relation[0] == ">" else reversed(ends)
    return low, high


def _as_value(judgement: Judgement, requirement: float) -> float:
    """The value at which the requirement has a size other than at the quantile."""
    sign = -1.0 if judgement.side.relation[0] == "<" else 1.0
    assert isinstance(judgement.statistics, Drawn)
    quantile = judgement.statistics.spread.quantile
    assert quantile is not None
    return judgement.value + sign * (requirement - quantile)


def standard_error(judgement: Judgement, unit: Unit) -> float | None:
    """Of the quantile that is shown, in the unit."""
    drawn = judgement.statistics
    if not isinstance(drawn, Drawn) or drawn.spread.standard_error is None:
        return None
    return stored(unit.difference_from_si(drawn.spread.standard_error))


def share(judgement: Judgement) -> r.Share | None:
    """How many draws meet it."""
    drawn = judgement.statistics
    if not isinstance(drawn, Drawn):
        return None
    found = drawn.sampled
    return r.Share(
        asked=drawn.share,
        met=found.met / max(found.counted, 1),
        lower=stored(found.lower),
        upper=stored(found.upper),
        lost=found.lost,
    )


def contributions(numbers: Numbers, judgement: Judgement, unit: Unit) -> tuple[r.Contribution, ...]:
    """What every part contributes by root sum square."""
    combined = judgement.statistics
    if not isinstance(combined, Combined):
        return ()
    return tuple(
        r.Contribution(
            symbol=_symbol(numbers, each.key), effect=stored(unit.difference_from_si(each.effect))
        )
        for each in combined.effects
    )


def said(numbers: Numbers, judgement: Judgement, unit: Unit) -> tuple[str, ...]:
    """How the parts were combined, what came out, and whether to trust it; typeset."""
    match judgement.statistics:
        case Combined():
            return tuple(_combined(numbers, judgement.statistics, unit))
        case Drawn():
            return tuple(_drawn(numbers, judgement, judgement.statistics, unit))
        case None:
            return ()


def _combined(numbers: Numbers, combined: Combined, unit: Unit) -> Iterator[str]:
    spread = typeset(difference(combined.spread, unit, _DIGITS))
    yield (
        f"Worst over conditions and biases, parts by root sum square: their limits together move it"
        f" by {spread}; {_level(combined)}."
    )
    if combined.held:
        yield "The extremes are nearer than that, so they are what is shown."
    if combined.effects:
        shown = [
            f"{_symbol(numbers, each.key)} {typeset(difference(abs(each.effect), unit, _DIGITS))}"
            for each in combined.effects[:_MOST]
        ]
        more = len(combined.effects) - len(shown)
        rest = f" and {more} more with less" if more else ""
        yield f"Contributions: {', '.join(shown)}{rest}."
    if combined.doubt is not None:
        yield f"Beware: {_DOUBTS[combined.doubt]}."


def _level(combined: Combined) -> str:
    """What the limits stand for."""
    normal = [f"{each:g}" for each in combined.levels if each is not None]
    parts = []
    if normal:
        parts.append(f"limits of normal parts stand for {' or '.join(normal)} standard deviations")
    if None in combined.levels:
        parts.append("those of the others" if normal else "their limits")
        parts[-1] += " are the ends of the whole band"
    return ", ".join(parts) or "no part moves it"


def _symbol(numbers: Numbers, key: str) -> str:
    return numbers.model.variables[key.partition("@")[0]].symbol


def _drawn(numbers: Numbers, judgement: Judgement, drawn: Drawn, unit: Unit) -> Iterator[str]:
    sampled = drawn.sampled
    met = _share(sampled.met / max(sampled.counted, 1))
    yield (
        f"Worst over conditions and biases, parts by sampling: {met} of"
        f" {typeset(str(sampled.counted))} draws meet it, at least {_share(sampled.lower)} with"
        f" 95\u00a0% confidence; asked for {_share(drawn.share)}."
    )
    if judgement.judged.statement.clauses.when is not None:
        yield (
            f"Its condition is true for {typeset(str(sampled.counted))} of"
            f" {typeset(str(sampled.draws))} draws; the shares are of these."
        )
    if sampled.lost:
        yield f"{counted(sampled.lost, 'draw')} could not be computed and count as not meeting it."
    ends = interval(judgement, unit)
    error = drawn.spread.standard_error
    if ends and None not in ends and error is not None:
        low, high = (stored(each) for each in ends if each is not None)
        shown = [typeset(with_unit(each, unit)) for each in apart(low, high, numbers.digits)]
        yield (
            f"The value shown is the {_share(drawn.share)} quantile on the risky side:"
            f" 95\u00a0% interval {shown[0]} to {shown[1]}, standard error"
            f" {typeset(difference(error, unit, 2))}."
        )
    if drawn.spread.disagree and drawn.spread.deviation is not None:
        own = typeset(difference(drawn.spread.deviation, unit, _DIGITS))
        first = drawn.spread.first_order
        slopes = typeset(difference(first, unit, _DIGITS)) if first is not None else "none"
        yield (
            f"First order would mislead here: it gives a standard deviation of {slopes}, the draws"
            f" have {own}."
        )


def _share(share: float) -> str:
    """A share in per cent, with the digits it takes to tell it from all and none."""
    text = f"{share * _PER_CENT:.4f}".rstrip("0").rstrip(".")
    return typeset(f"{text} %")


def undecided(judgement: Judgement) -> str:
    """Why sampling does not decide; empty when it does, or when it is not sampling."""
    drawn = judgement.statistics
    if not isinstance(drawn, Drawn) or judgement.outcome is not Outcome.NOT_DECIDED:
        return ""
    if drawn.sampled.lost:
        return (
            f"{drawn.sampled.lost} of {drawn.sampled.draws} draws could not be computed, and the"
            f" others do not suffice for {_share(drawn.share)}"
        )
    low, high = _share(drawn.sampled.lower), _share(drawn.sampled.upper)
    return (
        f"between {low} and {high} of all parts meet it, each bound with 95\u00a0% confidence, and"
        f" {_share(drawn.share)} are asked for: more draws decide"
    )


def doubts(evaluation: Evaluation) -> tuple[Finding, ...]:
    """Criteria for which first order is zero or wrong: root sum square would mislead."""
    return tuple(found for each in evaluation.conclusions if (found := _doubt(each)) is not None)


def _doubt(conclusion: Conclusion) -> Finding | None:
    statement = conclusion.judged.statement
    for judgement in conclusion.in_case.values():
        statistics = judgement.statistics if isinstance(judgement, Judgement) else None
        if isinstance(statistics, Combined) and statistics.doubt is not None:
            return warning(
                "first-order",
                f"`{statement.id.name}` by root sum square: {_DOUBTS[statistics.doubt]}",
                statement.id.span,
                help="judge it by extremes or by sampling",
            )
        if isinstance(statistics, Drawn) and statistics.spread.disagree:
            return warning(
                "first-order",
                f"`{statement.id.name}`: first order and sampling disagree on how far the parts"
                " move it",
                statement.id.span,
                help="sampling holds; do not reckon with slopes or root sum square here",
            )
    return None
