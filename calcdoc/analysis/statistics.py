"""Root sum square and sampling: parts vary on their own, the rest stands at its worst.

Both start from the combination that governs a criterion at the extremes, and neither says more
than the extremes do: a result is never beyond them.
"""

from typing import Final

import numpy as np

from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.parts import Part, base_point, draw, stream
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import Program, plain
from calcdoc.analysis.sides import Side
from calcdoc.frozen import Frozen

CHUNK: Final = 40_000
"""Draws computed at once: memory does not grow with their number."""
CONFIDENCE: Final = 0.95
DISAGREE: Final = 0.1
"""Relative difference of standard deviations from which first order and sampling disagree."""


class Combined(Frozen, frozen=True):
    """A criterion by root sum square."""

    requirement: float
    """At the limits combined, never beyond the extremes."""
    base: float
    """With parts at nominal, conditions and biases at their worst."""
    limit: float
    """Of the criterion, at the base."""


class Sampled(Frozen, frozen=True):
    """A criterion by sampling."""

    draws: int
    seed: int
    met: int
    """How many draws meet the limit."""
    lower: float
    upper: float
    """One-sided 95 % confidence bounds of the share that meets it."""
    quantile: float
    """The requirement that the asked share of draws meets."""
    interval: tuple[float, float]
    """95 % confidence interval of that quantile."""
    standard_error: float
    limit: float
    first_order: float
    deviation: float
    """Standard deviations of the requirement: by first order, and of the draws."""

    @property
    def disagree(self) -> bool:
        """Whether first order and sampling tell different stories."""
        larger = max(self.first_order, self.deviation)
        return larger > 0 and abs(self.first_order - self.deviation) > DISAGREE * larger


def root_sum_square(
    compiled: Compiled, parts: tuple[Part, ...], side: Side, governing: FloatArray, worst: float
) -> Combined:
    """Combine the effects of the parts' limits as the root of the sum of their squares.

    Args:
        compiled: The tape.
        parts: The columns that vary at random.
        side: The limit that governs.
        governing: Shape (n_columns,): the combination that governs at the extremes.
        worst: The requirement there.
    """
    program = plain(compiled.tape, (side.requirement, side.limit))
    base = base_point(parts, governing)
    points = [base]
    for part in parts:
        for end in (part.low, part.high):
            moved = base.copy()
            moved[part.column] += end - part.nominal
            points.append(moved)
    values = program.evaluate(np.stack(points, axis=1))
    requirement = values[program.row[side.requirement]]
    effects = np.minimum(requirement[1::2], requirement[2::2]) - requirement[0]
    shares = np.array([part.independent for part in parts])
    combined = requirement[0] - float(np.sqrt(np.sum((np.minimum(effects, 0.0) * shares) ** 2)))
    limit = float(values[program.row[side.limit], 0])
    return Combined(max(combined, worst), float(requirement[0]), limit)


def sampled(  # noqa: PLR0913  (a criterion and how to draw)
    compiled: Compiled,
    parts: tuple[Part, ...],
    side: Side,
    governing: FloatArray,
    *,
    share: float,
    draws: int,
    seed: int,
) -> Sampled:
    """Draw every part on its own and see how many draws meet the limit.

    Args:
        compiled: The tape.
        parts: The columns that vary at random.
        side: The limit that governs.
        governing: Shape (n_columns,): the combination that governs at the extremes.
        share: The share of draws that must meet the limit.
        draws: Their number.
        seed: Of all streams.
    """
    program = plain(compiled.tape, (side.requirement, side.limit))
    base = base_point(parts, governing)
    requirement = _requirements(program, parts, side, base, draws, seed)
    at_base = program.evaluate(base[:, None])
    limit = float(at_base[program.row[side.limit], 0])
    strict = "=" not in side.relation
    met = int(np.count_nonzero(requirement > 0 if strict else requirement >= -1e-12 * abs(limit)))
    lower, upper = _bounds(met, draws)
    requirement.sort()
    at = int(np.clip(round((1 - share) * draws) - 1, 0, draws - 1))
    spread = 1.96 * np.sqrt(share * (1 - share) * draws)
    low, high = (int(np.clip(each, 0, draws - 1)) for each in (at - spread, at + spread))
    interval = (float(requirement[low]), float(requirement[high]))
    return Sampled(
        draws,
        seed,
        met,
        lower,
        upper,
        float(requirement[at]),
        interval,
        (interval[1] - interval[0]) / (2 * 1.96),
        limit,
        _first_order(program, parts, side, base),
        float(np.std(requirement)),
    )


def _requirements(  # noqa: PLR0913  (a criterion and how to draw)
    program: Program, parts: tuple[Part, ...], side: Side, base: FloatArray, draws: int, seed: int
) -> FloatArray:
    """The requirement of every draw, in chunks of a few ten thousand."""
    used = [part for part in parts if program.depends[program.row[side.requirement], part.column]]
    streams = [stream(seed, part.key) for part in used]
    found = np.empty(draws)
    for begin in range(0, draws, CHUNK):
        count = min(CHUNK, draws - begin)
        points = np.repeat(base[:, None], count, axis=1)
        for part, generator in zip(used, streams, strict=True):
            points[part.column] += draw(part, generator, count)
        found[begin : begin + count] = program.evaluate(points)[program.row[side.requirement]]
    return found


def _bounds(met: int, draws: int) -> tuple[float, float]:
    """Exact one-sided bounds of a share (Clopper and Pearson), 95 % each."""
    from scipy.special import betaincinv  # noqa: PLC0415  (only sampling needs it)

    lower = 0.0 if met == 0 else float(betaincinv(met, draws - met + 1, 1 - CONFIDENCE))
    upper = 1.0 if met == draws else float(betaincinv(met + 1, draws - met, CONFIDENCE))
    return lower, upper


def _first_order(program: Program, parts: tuple[Part, ...], side: Side, base: FloatArray) -> float:
    """The standard deviation of the requirement from slopes at the base alone."""
    points = [base]
    steps = []
    for part in parts:
        step = 1e-6 * max(part.high - part.low, 1e-300)
        steps.append(step)
        for sign in (1, -1):
            moved = base.copy()
            moved[part.column] += sign * step
            points.append(moved)
    values = program.evaluate(np.stack(points, axis=1))[program.row[side.requirement]]
    slopes = (values[1::2] - values[2::2]) / (2 * np.array(steps))
    deviations = np.array([_deviation(part) * part.independent for part in parts])
    return float(np.sqrt(np.sum((slopes * deviations) ** 2)))


def _deviation(part: Part) -> float:
    """The standard deviation of one part."""
    low, high = part.low - part.nominal, part.high - part.nominal
    if part.shape == "normal":
        return high / part.k
    if part.shape == "triangular":
        return float(np.sqrt((low**2 + high**2 - low * high) / 18))
    return (high - low) / float(np.sqrt(12))
