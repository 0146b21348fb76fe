"""Sampling: parts are drawn at random, all else stands at its worst for the criterion.

All criteria of a run share the draws. Normal parts have no end, so a draw may lie beyond the
extremes; rectangular and triangular ones stay within their limits.
"""

from collections.abc import Mapping, Sequence
from fractions import Fraction
from math import isfinite

import numpy as np

from calcdoc.analysis.base_point import base_point
from calcdoc.analysis.buffers import Pool, Source, Stream
from calcdoc.analysis.counting import JobCount, Limit, Sampled, Spread
from calcdoc.analysis.draws import Draws, Setting
from calcdoc.analysis.evaluation import Progress
from calcdoc.analysis.gradient import gradient
from calcdoc.analysis.parts import Part, Variate
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.streaming import stream
from calcdoc.analysis.tape import Tape
from calcdoc.frozen import Frozen

__all__ = ["Asked", "Job", "Progress", "Sampled", "Setting", "Spread", "drawn", "sampled"]


class Asked(Frozen, frozen=True):
    """One limit of a criterion."""

    requirement: int
    """Instruction that must not be negative."""
    strict: bool
    """Whether it must not be zero either."""
    equal: float
    """Size up to which it counts as zero."""
    governing: FloatArray
    """Shape (n_columns,): where conditions stand for this limit, and on which side of nominal a
    bias is looked for first."""
    when: int | None = None
    """Instruction of a condition; where it does not hold, the limit is met."""


class Job(Frozen, frozen=True):
    """One criterion to be judged by sampling; a draw meets it when it meets all its limits."""

    asked: tuple[Asked, ...]
    parts: tuple[Part, ...]
    share: Fraction
    """Of the draws that must meet it."""


def sampled(
    tape: Tape, jobs: Sequence[Job], setting: Setting, progress: Progress | None = None
) -> tuple[Sampled, ...]:
    """Draw every part on its own and see how many draws meet each criterion.

    Each limit is judged with conditions and biases where they are worst for it.

    Args:
        tape: The formulas, in coherent SI.
        jobs: The criteria; all of them see the same draws.
        setting: How many draws, from which seed.
        progress: Told after every chunk.
    """
    size = setting.size
    values = {p.variate: np.zeros(size) for job in jobs for p in job.parts if p.is_random}
    bases = [[_base(tape, job, each) for each in job.asked] for job in jobs]
    streams = _streams(tape, jobs, bases, values, size)
    counts = [
        JobCount(
            [_limit(tape, job, *each, streams) for each in zip(job.asked, at, strict=True)],
            job.share,
            setting,
        )
        for job, at in zip(jobs, bases, strict=True)
    ]
    draws = Draws(_used(values, streams), setting)
    done = 0
    with np.errstate(all="ignore"):
        for count in draws.chunks():
            for bound in streams.values():
                bound.run()
            for each in counts:
                each.add(count)
            done += count
            if progress is not None:
                progress(done, setting.total)
        return tuple(each.result() for each in counts)


def drawn(
    tape: Tape, target: int, parts: Sequence[Part], base: FloatArray, setting: Setting
) -> FloatArray:
    """One quantity at every draw, shape (setting.total,); what cannot be computed is not finite.

    Args:
        tape: The formulas, in coherent SI.
        target: Instruction of the quantity.
        parts: The columns that vary.
        base: Shape (n_columns,): where they vary around, and where all else stands.
        setting: How many draws, from which seed.
    """
    values = {part.variate: np.zeros(setting.size) for part in parts if part.is_random}
    pool = Pool(setting.size)
    bound = stream(tape, (target,), base, _sources(parts, base, values), pool)
    used = _used(values, {(base.tobytes(), tuple(parts)): bound})
    found, done = np.empty(setting.total), 0
    with np.errstate(all="ignore"):
        for count in Draws(used, setting).chunks():
            bound.run()
            here = bound.values[target]
            found[done : done + count] = here if isinstance(here, float) else here[:count]
            done += count
    return found


def _base(tape: Tape, job: Job, asked: Asked) -> FloatArray:
    program = plain(tape, (asked.requirement,))
    return base_point(program, (asked.requirement,), job.parts, asked.governing)


Values = Mapping[Variate, FloatArray]
_Key = tuple[bytes, tuple[Part, ...]]


def _streams(
    tape: Tape,
    jobs: Sequence[Job],
    bases: Sequence[Sequence[FloatArray]],
    values: Values,
    size: int,
) -> dict[_Key, Stream]:
    """One stream for all limits that vary around one base."""
    pool = Pool(size)
    targets: dict[_Key, dict[int, None]] = {}
    points: dict[_Key, FloatArray] = {}
    for job, at in zip(jobs, bases, strict=True):
        for asked, base in zip(job.asked, at, strict=True):
            key = base.tobytes(), job.parts
            points[key] = base
            wanted = targets.setdefault(key, {})
            wanted[asked.requirement] = None
            if asked.when is not None:
                wanted[asked.when] = None
    return {
        key: stream(tape, tuple(wanted), points[key], _sources(key[1], points[key], values), pool)
        for key, wanted in targets.items()
    }


def _sources(parts: Sequence[Part], base: FloatArray, values: Values) -> dict[int, Source]:
    found = {}
    for part in parts:
        if part.is_random:
            offset, scale = part.placed
            at = float(base[part.column]) + offset
            found[part.column] = Source(values[part.variate], scale, at)
    return found


def _used(values: Values, streams: Mapping[_Key, Stream]) -> dict[Variate, FloatArray]:
    """The variates that any limit depends on: no others are drawn."""
    used = {
        part.variate
        for (_, parts), bound in streams.items()
        for part in parts
        if part.column in bound.reads
    }
    return {variate: array for variate, array in values.items() if variate in used}


def _limit(
    tape: Tape, job: Job, asked: Asked, base: FloatArray, streams: Mapping[_Key, Stream]
) -> Limit:
    found = streams[base.tobytes(), job.parts].values
    slopes = gradient(tape, [asked.requirement], base)[0]
    with np.errstate(all="ignore"):
        moves = [slopes[part.column] * part.deviation for part in job.parts if part.is_random]
    first_order = float(np.sqrt(np.sum(np.square(moves))))
    return Limit(
        found[asked.requirement],
        None if asked.when is None else found[asked.when],
        asked.strict,
        asked.equal,
        base,
        first_order if isfinite(first_order) else None,
    )
