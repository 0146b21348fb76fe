"""Where a root can lie over boxes of its arguments, and how it moves with them.

The bracket is cut down to the pieces in which the interval residual contains zero. Where the
slope of the residual to the unknown keeps its sign there is one root, and dx/dy is
-(dr/dy)/(dr/dx); the ends of its range then belong to corners of the box, and one interval
Newton step around the root at a corner encloses it to a few floating-point steps.
Where that slope may be zero, or a change of sign between the ends of the bracket is not certain,
the unknown may jump with every argument, anywhere in the bracket.
"""

from collections.abc import Sequence
from functools import lru_cache
from typing import Final

import numpy as np

from calcdoc.analysis import intervals as iv
from calcdoc.analysis.boxes import Boxes, Sweep
from calcdoc.analysis.points import BoolArray, FloatArray, IntArray, compile_steps, solved
from calcdoc.analysis.program import Program, by_derivatives
from calcdoc.analysis.slopes import Tangent
from calcdoc.analysis.tape import Implicit
from calcdoc.frozen import Frozen

PIECES: Final = 8
MOST_CUTS: Final = 6
WORTH: Final = 0.8
"""A cut that leaves more of the bracket than this is the last one."""
MOST_STEPS: Final = 4
THIN: Final = 1e-14
"""Width of an enclosure, as a share of its value, that is small enough."""
SLACK: Final = 2
"""The computed root may be this many floating-point steps from where its residual is zero."""


class Enclosure(Frozen, frozen=True):
    """Roots over boxes, one box a column."""

    value: FloatArray
    """Shape (2, n): every root that can be computed for points of the box lies within."""
    slope: FloatArray
    """Shape (2, n): slope of the residual to the unknown over ``value``."""
    slopes: FloatArray
    """Shape (2, n_args, n): slopes of the residual to the arguments."""
    certain: BoolArray
    """Shape (n,): at every point the residual changes sign between the ends of the bracket."""

    @property
    def unique(self) -> BoolArray:
        """Shape (n,): at every point there is at most one root, and no jump."""
        steady: BoolArray = _signs(self.slope) & np.isfinite(self.slope).all(axis=0)
        return steady

    def tangent(self, moves: Sequence[Tangent], n_columns: int) -> Tangent:
        """How the unknown of the first columns moves when its arguments move."""
        known = (self.certain & _signs(self.slope))[:n_columns]
        top: FloatArray | None = None
        for each, move in enumerate(moves):
            if move is not None:
                slope = self.slopes[:, each, :n_columns]
                free = ~known & ((slope[0] != 0.0) | (slope[1] != 0.0))
                slope = np.where(free, iv.whole(slope), slope)
                part = iv.mul(slope[:, None], move)
                top = part if top is None else iv.add(top, part)
        if top is None:
            return None
        slope = np.where(known, self.slope[:, :n_columns], 1.0)
        return iv.neg(iv.div(top, slope[:, None]))


@lru_cache(maxsize=64)
def residual_program(implicit: Implicit) -> Program:
    """The residual, ready to be swept."""
    return by_derivatives(implicit.tape, (implicit.residual,))


class _Carrier(Frozen, frozen=True):
    """Carries the residual over boxes of the unknown and the arguments."""

    program: Program
    row: int
    sweep: Sweep

    def __call__(self, x: FloatArray, low: FloatArray, high: FloatArray) -> "_Residual":
        """Residual over x (2, n) and arguments (n_args, n) from ``low`` to ``high``."""
        slots = np.repeat(np.arange(len(low) + 1)[:, None], x.shape[1], axis=1)
        boxes = Boxes(np.vstack((x[:1], low)), np.vstack((x[1:], high)), slots)
        swept = self.sweep(self.program, boxes)
        move = swept.moves[self.row]
        slopes = np.zeros((2, *slots.shape)) if move is None else move
        return _Residual(swept.values[self.row], slopes)


class _Residual(Frozen, frozen=True):
    """Residual over some boxes."""

    value: FloatArray
    """Shape (2, n)."""
    slopes: FloatArray
    """Shape (2, 1 + n_args, n): to the unknown and the arguments."""


def enclose(
    implicit: Implicit, args: Sequence[FloatArray], n_columns: int, sweep: Sweep
) -> Enclosure:
    """Enclose the unknown over boxes.

    Args:
        implicit: The unknown.
        args: Intervals (2, n_columns) of its arguments.
        n_columns: Number of boxes.
        sweep: How to carry boxes through the residual.
    """
    n_args = len(args)
    result = Enclosure(
        value=np.repeat([[float(implicit.low)], [float(implicit.high)]], n_columns, axis=1),
        slope=iv.whole(np.empty((2, n_columns))),
        slopes=np.zeros((2, n_args, n_columns)),
        certain=np.zeros(n_columns, dtype=bool),
    )
    program = residual_program(implicit)
    row = program.row[implicit.residual]
    result.slopes[:, program.depends[row, 1:]] = iv.whole(np.empty((2, 1, 1)))
    ends = np.stack(args) if args else np.empty((0, 2, n_columns))
    here = np.flatnonzero(np.isfinite(ends).all(axis=(0, 1)))
    if here.size:
        carry = _Carrier(program, row, sweep)
        _enclose(implicit, carry, result, here, ends[:, 0, here], ends[:, 1, here])
    return result


def _enclose(  # noqa: PLR0913
    implicit: Implicit,
    carry: _Carrier,
    result: Enclosure,
    here: IntArray,
    low: FloatArray,
    high: FloatArray,
) -> None:
    """Fill in the columns ``here``, whose arguments have ends."""
    n = len(here)
    bracket = result.value[:, here]
    x = np.concatenate((bracket, bracket[[0, 0]], bracket[[1, 1]]), axis=1)
    first = carry(x, np.tile(low, 3), np.tile(high, 3))
    start, end = first.value[:, n : 2 * n], first.value[:, 2 * n :]
    rises = (start[1] <= 0.0) & (end[0] >= 0.0)
    falls = (start[0] >= 0.0) & (end[1] <= 0.0)
    result.certain[here] = rises | falls
    x, slopes = bracket, first.slopes[:, :, :n].copy()
    if (doubt := np.flatnonzero(~_signs(slopes[:, 0]))).size:
        x[:, doubt], slopes[:, :, doubt] = _cut_down(
            carry, x[:, doubt], slopes[:, :, doubt], low[:, doubt], high[:, doubt]
        )
    good = np.flatnonzero((rises | falls) & _signs(slopes[:, 0]))
    if good.size:
        x[:, good], slopes[:, :, good] = _step_in(
            implicit, carry, x[:, good], slopes[:, :, good], low[:, good], high[:, good]
        )
    result.value[:, here] = x
    result.slope[:, here] = slopes[:, 0]
    result.slopes[:, :, here] = slopes[:, 1:]


def _signs(slope: FloatArray) -> BoolArray:
    """Where a slope keeps its sign."""
    signed: BoolArray = (slope[0] > 0.0) | (slope[1] < 0.0)
    return signed


def _cut_down(
    carry: _Carrier, x: FloatArray, slopes: FloatArray, low: FloatArray, high: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Cut the bracket to the pieces that may hold a root, until the slope has a sign there."""
    least, most = x
    x, slopes = x.copy(), slopes.copy()
    active = np.arange(x.shape[1])
    for _ in range(MOST_CUTS):
        if not active.size:
            break
        n = len(active)
        edges = x[0, active] + (x[1, active] - x[0, active]) * (
            np.arange(PIECES + 1)[:, None] / PIECES
        )
        edges[-1] = x[1, active]
        pieces = np.stack((edges[:-1], edges[1:]))
        pieces = np.clip(iv.outward(pieces, SLACK), least[active], most[active])
        found = carry(
            pieces.reshape(2, -1), np.tile(low[:, active], PIECES), np.tile(high[:, active], PIECES)
        )
        value = found.value.reshape(2, PIECES, n)
        moves = found.slopes.reshape(2, -1, PIECES, n)
        may = (value[0] <= 0.0) & (value[1] >= 0.0)
        any_left = may.any(axis=0)
        first, last = may.argmax(axis=0), PIECES - 1 - may[::-1].argmax(axis=0)
        every = np.arange(n)
        width = x[1, active] - x[0, active]
        new = np.stack((pieces[0, first, every], pieces[1, last, every]))
        order = np.arange(PIECES)[:, None]
        inside = (order >= first) & (order <= last)
        hull = np.stack((
            np.where(inside, moves[0], np.inf).min(axis=1),
            np.where(inside, moves[1], -np.inf).max(axis=1),
        ))  # fmt: skip
        took = active[any_left]
        x[:, took], slopes[:, :, took] = new[:, any_left], hull[:, :, any_left]
        going = any_left & ~_signs(hull[:, 0]) & (new[1] - new[0] < WORTH * width)
        active = active[going]
    return x, slopes


def _step_in(  # noqa: PLR0913
    implicit: Implicit,
    carry: _Carrier,
    x: FloatArray,
    slopes: FloatArray,
    low: FloatArray,
    high: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Interval Newton steps around the roots at the corners that give the ends of the range."""
    n = x.shape[1]
    steps = compile_steps(implicit.tape)
    before, roots = np.empty(0), np.empty(0)
    for _ in range(MOST_STEPS):
        corner_low, corner_high = _corners(slopes, low, high)
        middle = np.clip(corner_low + 0.5 * (corner_high - corner_low), corner_low, corner_high)
        if not np.array_equal(middle, before):
            before, roots = middle, solved(implicit, steps, middle)
        known = np.isfinite(roots)
        around = np.clip(np.where(known, roots, np.tile(x[0], 2)), *np.tile(x, 2))
        found = carry(
            np.concatenate((np.stack((around, around)), x), axis=1),
            np.concatenate((corner_low, low), axis=1),
            np.concatenate((corner_high, high), axis=1),
        )
        slopes = found.slopes[:, :, 2 * n :]
        # Twice the residual: once for the root, once for what is rounded off in computing it.
        step = iv.div(found.value[:, : 2 * n] * 2.0, np.tile(slopes[:, 0], 2))
        reach = iv.outward(iv.sub(np.stack((around, around)), step), SLACK)
        reach = np.where(known, reach, np.tile(x, 2))
        new_low, new_high = np.maximum(x[0], reach[0, :n]), np.minimum(x[1], reach[1, n:])
        new = np.stack((np.minimum(new_low, x[1]), np.maximum(new_high, x[0])))
        width = new[1] - new[0]
        going = (width < WORTH * (x[1] - x[0])) & (width > THIN * np.abs(new).max(axis=0))
        x = new
        if not going.any():
            break
    return x, slopes


def _corners(
    slopes: FloatArray, low: FloatArray, high: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Parts of the boxes (n_args, 2n) for the least root, then for the greatest.

    The least root stands where a residual that rises with the unknown is greatest; an argument
    whose slope may have either sign keeps its range.
    """
    falls = slopes[1, :1] < 0.0
    up = np.where(falls, slopes[1, 1:] <= 0.0, slopes[0, 1:] >= 0.0)
    down = ~up & np.where(falls, slopes[0, 1:] >= 0.0, slopes[1, 1:] <= 0.0)
    corner_low = np.where(up, high, low), np.where(down, high, low)
    corner_high = np.where(down, low, high), np.where(up, low, high)
    return np.concatenate(corner_low, axis=1), np.concatenate(corner_high, axis=1)
