"""Judging a criterion from its draws as they come."""

from collections.abc import Sequence
from fractions import Fraction
from math import ceil, floor, isfinite, sqrt
from typing import Final

import numpy as np

from calcdoc.analysis.distributions import Bounds, ranks, share_bounds, student
from calcdoc.analysis.draws import Setting
from calcdoc.analysis.points import BoolArray, FloatArray
from calcdoc.analysis.tallies import Moments, Tail
from calcdoc.frozen import Frozen

CONFIDENCE: Final = 0.95
DISAGREE: Final = 0.05
"""Relative difference of standard deviations from which first order and sampling disagree."""

_CHANCE: Final = 3.0
"""Standard errors of a standard deviation, as shares of it, for so many draws (near normal)."""


class Spread(Frozen, frozen=True):
    """How the requirement of one limit is distributed over the draws."""

    quantile: float | None
    """What the asked share of the draws reaches, on the risky side; None where that is no number:
    too many draws cannot be computed, or the criterion applies to too few."""
    interval: Bounds
    """95 % confidence interval of that quantile, whatever the distribution is."""
    standard_error: float | None
    """Of that quantile; None where there are too few draws to say."""
    mean: float | None
    deviation: float | None
    """Standard deviation; both over the draws that were computed, None without any."""
    first_order: float | None
    """Standard deviation by first order at the base; None where there is no derivative."""
    base: FloatArray
    """Shape (n_columns,): where the parts varied around."""
    disagree: bool
    """Whether the two standard deviations tell different stories."""


class Sampled(Frozen, frozen=True):
    """A criterion by sampling."""

    draws: int
    counted: int
    """For how many of them its condition is true: they count. All without a condition."""
    met: int
    """How many of those meet it."""
    lost: int
    """How many could not be computed; they do not meet it."""
    lower: float
    upper: float
    """One-sided 95 % confidence bounds of the share that meets it."""
    spreads: tuple[Spread, ...]
    """One for each limit, in order."""


class Limit(Frozen, frozen=True):
    """One limit with where its values come from."""

    requirement: FloatArray | float
    """Filled anew for each chunk."""
    when: FloatArray | float | None
    strict: bool
    equal: float
    base: FloatArray
    first_order: float | None


class JobCount:
    """The draws of one criterion, as they come."""

    def __init__(self, limits: Sequence[Limit], share: Fraction, setting: Setting) -> None:
        self.setting = setting
        self.limits = [_LimitCount(limit, 1 - share, setting) for limit in limits]
        self.met, self.counted = [0] * setting.rounds, [0] * setting.rounds
        self.lost = self.done = 0

    def add(self, count: int) -> None:
        """Take in the first ``count`` values of a chunk; a round ends with a chunk."""
        holds: BoolArray = np.ones(count, dtype=bool)
        lost: BoolArray = np.zeros(count, dtype=bool)
        counts: BoolArray = np.zeros(count, dtype=bool)
        for limit in self.limits:
            limit.add(count, holds, lost, counts)
        here = self.done // self.setting.in_round
        self.met[here] += int(np.count_nonzero(holds & counts))
        self.counted[here] += int(np.count_nonzero(counts))
        self.lost += int(np.count_nonzero(lost))
        self.done += count
        if self.done % self.setting.in_round == 0:
            for limit in self.limits:
                limit.end_round()

    def result(self) -> Sampled:
        """The criterion after all draws."""
        met, counted = sum(self.met), sum(self.counted)
        lower, upper = share_bounds(met, counted, CONFIDENCE) if counted else (0.0, 1.0)
        if self.setting.rounds > 1 and all(self.counted):
            shares = np.array(self.met) / np.array(self.counted)
            away = student(CONFIDENCE, len(shares) - 1) * _error(shares)
            lower = max(0.0, min(lower, met / counted - away))
            upper = min(1.0, max(upper, met / counted + away))
        spreads = tuple(limit.spread() for limit in self.limits)
        return Sampled(self.setting.total, counted, met, self.lost, lower, upper, spreads)


def _error(values: FloatArray) -> float:
    """Standard error of the mean of independent rounds."""
    return float(np.std(values, ddof=1)) / sqrt(len(values))


class _Places:
    """Where a quantile and what tells of its uncertainty stand among so many ordered draws."""

    def __init__(self, draws: int, risk: Fraction) -> None:
        low, high = ranks(draws, float(risk), CONFIDENCE) if draws else (0, 1)
        self.ends = low - 1, high - 1
        self.place = min(floor(risk * draws), draws - 1)
        spread = sqrt(draws * risk * (1 - risk))
        self.around = floor(self.place - spread), ceil(self.place + spread)

    @property
    def all(self) -> tuple[int, ...]:
        """Every place that is asked for."""
        return (*self.ends, *self.around)


class _LimitCount:
    """The draws of one limit, as they come."""

    def __init__(self, limit: Limit, risk: Fraction, setting: Setting) -> None:
        self.limit, self.risk, self.setting = limit, risk, setting
        self.moments = Moments()
        self.counted = 0
        places = _Places(setting.total, risk).all
        # With a condition the places move down, by how much is known at the end only.
        self.tail = Tail(setting.total, min(places) if limit.when is None else 0, max(places))
        self.rounds: list[float] = []
        self.of_round = self._new_round()

    def _new_round(self) -> Tail | None:
        if self.setting.rounds == 1 or self.limit.when is not None:
            return None
        place = self._round_place
        return Tail(self.setting.in_round, place, place)

    @property
    def _round_place(self) -> int:
        return min(floor(self.risk * self.setting.in_round), self.setting.in_round - 1)

    def add(self, count: int, holds: BoolArray, lost: BoolArray, counts: BoolArray) -> None:
        """Take in a chunk; what holds, is lost and counts is noted in the arrays."""
        limit = self.limit
        values = _first(limit.requirement, count)
        good = values > limit.equal if limit.strict else values >= -limit.equal
        computed = np.isfinite(values)
        applies = None if limit.when is None else _first(limit.when, count) != 0.0
        if applies is None:
            counts[:] = True
            self.counted += count
        else:
            counts |= applies
            self.counted += int(np.count_nonzero(applies))
        if computed.all() and applies is None:
            self.moments.add(values)
        else:
            good &= computed
            known = computed if applies is None else computed & applies
            self.moments.add(values[known])
            values = np.where(computed, values, -np.inf)
            unknown = ~computed
            if applies is not None:
                good |= ~applies
                unknown &= applies
                values[~applies] = np.inf
            lost |= unknown
        holds &= good
        self.tail.add(values)
        if self.of_round is not None:
            self.of_round.add(values)

    def end_round(self) -> None:
        """Note the quantile of a scrambling."""
        if self.of_round is not None:
            self.rounds.append(self.of_round.at(self._round_place))
            self.of_round = self._new_round()

    def spread(self) -> Spread:
        """The distribution after all draws."""
        moments, places = self.moments, _Places(self.counted, self.risk)
        quantile = self.tail.at(places.place) if self.counted else float("inf")
        interval = [self._at(place) for place in places.ends]
        error = self._standard_error(places)
        rounds = np.array(self.rounds)
        if rounds.size and np.isfinite(rounds).all():
            of_rounds = _error(rounds)
            away = student((1 + CONFIDENCE) / 2, len(rounds) - 1) * of_rounds
            low, high = interval
            interval = [
                None if low is None else min(low, quantile - away),
                None if high is None else max(high, quantile + away),
            ]
            error = of_rounds or error
        return Spread(
            quantile=quantile if isfinite(quantile) else None,
            interval=Bounds(*interval),
            standard_error=error,
            mean=moments.mean if moments.count else None,
            deviation=moments.deviation if moments.count else None,
            first_order=self.limit.first_order,
            base=self.limit.base,
            disagree=bool(moments.count) and self._disagree(moments.deviation),
        )

    def _disagree(self, deviation: float) -> bool:
        first = self.limit.first_order
        if first is None:
            return True
        larger = max(first, deviation)
        chance = _CHANCE / sqrt(max(self.moments.count - 1, 1))
        return larger > self.limit.equal and abs(first - deviation) > (DISAGREE + chance) * larger

    def _at(self, place: int) -> float | None:
        """The value at a place; None where there is none or it is no number."""
        if not 0 <= place < self.counted:
            return None
        value = self.tail.at(place)
        return value if isfinite(value) else None

    def _standard_error(self, places: "_Places") -> float | None:
        """From the values one standard deviation of the count away on either side."""
        low, high = (self._at(place) for place in places.around)
        return None if low is None or high is None else (high - low) / 2.0


def _first(values: FloatArray | float, count: int) -> FloatArray:
    return np.full(count, values) if isinstance(values, float) else values[:count]
