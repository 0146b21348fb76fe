"""Root sum square: the effects of the parts' limits, to first order, combined as if independent.

Conditions and biases stand at their worst, and the result is never beyond the extremes.
"""

from collections.abc import Sequence
from enum import Enum
from math import hypot, isfinite, sqrt
from typing import Final

import numpy as np

from calcdoc.analysis.base_point import base_point
from calcdoc.analysis.gradient import gradient
from calcdoc.analysis.parts import Part
from calcdoc.analysis.points import FloatArray, largest_term
from calcdoc.analysis.program import plain
from calcdoc.analysis.tape import Tape
from calcdoc.frozen import Frozen

APART: Final = 0.05
"""Share by which first order may differ from the effects that the limits really have."""
ROUNDING: Final = 1e-12
"""Share of the largest term below which an effect is none."""
MISSED: Final = 0.5
"""The extremes of the parts are at least this share of the sum of first order's effects away, or
first order has missed something, as in a product of two parts that are both zero."""


class Doubt(Enum):
    """Why first order cannot be trusted."""

    NOT_COMPUTED = "not computed"  # the base itself cannot be computed; the extreme stands
    NO_SLOPE = "no slope"  # there is no derivative at the base
    ZERO = "zero"  # the slopes are zero, yet the parts move the requirement
    CURVED = "curved"  # the limits do not do what the slopes say


class Effect(Frozen, frozen=True):
    """What one part contributes."""

    key: str
    """Of its column."""
    slope: float | None
    """Of the requirement by the part, in coherent SI; None where there is no derivative."""
    change: float
    """Of the part, from nominal to its worse limit; for like parts, of their mean."""
    effect: float
    """On the requirement, zero or negative: slope times change."""


class Combined(Frozen, frozen=True):
    """A requirement by root sum square."""

    requirement: float
    """At the limits combined, never beyond the extremes."""
    base: float
    """With parts at nominal, conditions and biases at their worst."""
    point: FloatArray
    """The base, shape (n_columns,)."""
    spread: float
    """Root of the sum of squares of the effects, zero or positive."""
    held: bool
    """Whether the extreme was less far away than the spread, and so is the result."""
    effects: tuple[Effect, ...]
    """The greatest first; parts without any effect are left out."""
    levels: tuple[float | None, ...]
    """What the limits of these parts stand for: standard deviations of normal parts, in rising
    order; then None when some limits are the ends of the whole band."""
    doubt: Doubt | None

    @property
    def doubtful(self) -> bool:
        """Whether first order is zero or wrong."""
        return self.doubt is not None


def root_sum_square(
    tape: Tape,
    requirements: Sequence[int],
    parts: Sequence[Part],
    governing: FloatArray,
    worst: float,
) -> Combined:
    """Combine the effects of the parts' limits as the root of the sum of their squares.

    Args:
        tape: The formulas, in coherent SI.
        requirements: Instructions that must not be negative; the least one at the base counts.
        parts: The columns that vary.
        governing: Shape (n_columns,): where conditions stand, and on which side of nominal a bias
            is looked for first.
        worst: The requirement at the extremes.
    """
    program = plain(tape, requirements)
    base = base_point(program, requirements, parts, governing)
    drawn = [part for part in parts if part.is_random]
    values = program.evaluate(at_limits(base, drawn))
    rows = [program.row[at] for at in requirements]
    which = int(np.argmin(values[rows, 0]))  # the first that is no number, if there is one
    found = values[rows[which]]
    requirement = float(found[0])
    if not isfinite(requirement):
        return Combined(worst, worst, base, 0.0, False, (), (), Doubt.NOT_COMPUTED)
    zero = ROUNDING * float(largest_term(program.tape, rows[which], values[:, :1])[0])
    slopes = gradient(tape, [requirements[which]], base)[0]
    moved = np.where(np.isfinite(found[1:]), found[1:] - requirement, np.inf).reshape(-1, 2)
    moves = [
        move
        for part, (at_low, at_high) in zip(drawn, moved.tolist(), strict=True)
        if (move := _Move(part, float(slopes[part.column]), at_low, at_high)).matters(zero)
    ]
    effects = sorted((each.effect for each in moves), key=lambda each: (each.effect, each.key))
    spread = hypot(*(each.effect for each in effects))
    far = requirement - min(worst, requirement)
    return Combined(
        requirement - min(spread, far),
        requirement,
        base,
        spread,
        spread > far + zero,
        tuple(effects),
        _levels([each.part for each in moves]),
        _doubt(moves, far if far > zero else 0.0),
    )


def at_limits(base: FloatArray, parts: Sequence[Part]) -> FloatArray:
    """The base, then every part by itself at its low and its high limit: one column each."""
    points = np.repeat(base[:, None], 1 + 2 * len(parts), axis=1)
    for number, part in enumerate(parts):
        for end, change in enumerate(part.limits):
            points[part.column, 1 + 2 * number + end] += change
    return points


class _Move(Frozen, frozen=True):
    """What a part does: its slope, and the changes that its limits really make."""

    part: Part
    slope: float
    at_low: float
    at_high: float

    def matters(self, zero: float) -> bool:
        """Whether it moves the requirement by more than rounding."""
        largest = max(abs(self.at_low), abs(self.at_high), self.linear)
        return not largest <= zero  # a slope that is no number matters

    @property
    def effect(self) -> Effect:
        """To the limit at which the requirement falls; without a slope what it really does."""
        if not isfinite(self.slope):
            change = self.part.limits[self.at_high < self.at_low]
            worse = min(self.at_low, self.at_high, 0.0)
            return Effect(self.part.key, None, change, worse)
        change = self.part.limits[self.slope < 0.0]
        effect = -max(-self.slope * change, 0.0)
        return Effect(self.part.key, self.slope, change, effect or 0.0)

    @property
    def linear(self) -> float:
        """Quadratic mean of the effects of both limits, to first order."""
        return abs(self.slope) * _mean(*self.part.limits)

    @property
    def actual(self) -> float:
        """The same with the formulas themselves."""
        return _mean(self.at_low, self.at_high)

    @property
    def at_extremes(self) -> float:
        """To first order, with like parts all at their limit."""
        low, high = self.part.low - self.part.nominal, self.part.high - self.part.nominal
        return max(-self.slope * low, -self.slope * high, 0.0)


def _mean(low: float, high: float) -> float:
    return hypot(low, high) / sqrt(2.0)


def _levels(parts: Sequence[Part]) -> tuple[float | None, ...]:
    normal = sorted({part.k for part in parts if part.shape == "normal"})
    whole = any(part.shape != "normal" for part in parts)
    return (*normal, None) if whole else tuple(normal)


def _doubt(moves: Sequence[_Move], far: float) -> Doubt | None:
    """Compare first order with what the limits do, one by one and all together.

    One by one, both limits count alike, so that mere bending to one side is no reason for doubt:
    1/R at R ± 5 % has effects of 4.8 % and 5.3 %, whose quadratic mean is first order within 0.1 %.
    """
    if any(not isfinite(each.slope) for each in moves):
        return Doubt.NO_SLOPE
    linear = hypot(*(each.linear for each in moves))
    actual = hypot(*(each.actual for each in moves))
    if not isfinite(actual):
        return Doubt.CURVED
    if linear <= APART * max(actual, far):
        return Doubt.ZERO if max(actual, far) > 0.0 else None
    summed = sum(each.at_extremes for each in moves)
    if not abs(actual - linear) <= APART * max(actual, linear) or summed < MISSED * far:
        return Doubt.CURVED
    return None
