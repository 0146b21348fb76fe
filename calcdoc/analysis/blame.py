"""Confirm a suspected failure: find a point in the box at which it happens, or clear it."""

from fractions import Fraction
from typing import Final

import numpy as np

from calcdoc.analysis.box import Box
from calcdoc.analysis.domains import Case, Need
from calcdoc.analysis.points import BoolArray, FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.sweep import Boxes, sweep
from calcdoc.analysis.tape import Op, Tape
from calcdoc.frozen import Frozen

ZERO: Final = 1e-12
"""A divisor this small against the largest term that makes it up counts as zero."""
JUMP: Final = 1e-6
"""A change of sign that stays this far from zero on both sides is a jump, not a zero."""
NEAR: Final = 1e-9
"""Share of the box around a point within which a guard must hold for a zero not hit exactly."""


def scale(tape: Tape, at: int, ranges: dict[int, FloatArray]) -> float:
    """Size of the largest term that makes up an instruction: what a difference is small against.

    Args:
        tape: The formulas.
        at: The instruction.
        ranges: Natural interval (2, 1) of each instruction.
    """
    step = tape.instructions[at]
    if step.op in (Op.ADD, Op.SUB, Op.NEG, Op.ABS):
        return max(scale(tape, arg, ranges) for arg in step.args)
    if step.op is Op.MUL:
        return scale(tape, step.args[0], ranges) * scale(tape, step.args[1], ranges)
    if step.op is Op.POWER and isinstance(step.value, Fraction | int) and step.value > 0:
        return float(scale(tape, step.args[0], ranges) ** float(step.value))
    return float(np.abs(ranges[at]).max())


class Judge(Frozen, frozen=True):
    """Looks at the points found for one case."""

    tape: Tape
    box: Box
    case: Case
    tolerance: float
    """A divisor up to this size counts as zero where there is no guard."""

    def verdict(self, points: FloatArray) -> FloatArray | None:
        """A point (n_inputs,) at which the case fails, nominal if it does, else None.

        Args:
            points: Shape (n_inputs, n): nominal first, then extremes of the subject.
        """
        subject, reached = self._look(points)
        exact = np.flatnonzero(reached & self.case.broken(subject))
        if exact.size:
            first: FloatArray = points[:, exact[0]]
            return first
        if self.case.need is not Need.NOT_ZERO:
            return None
        near: list[FloatArray] = list(points[:, reached & (np.abs(subject) <= self.tolerance)].T)
        real = np.flatnonzero(reached & np.isfinite(subject))
        signs = np.sign(subject[real])
        if signs.size and signs.min() < 0.0 < signs.max():
            start, end = points[:, real[signs.argmin()]], points[:, real[signs.argmax()]]
            crossing = self._crossing(start, end)
            near += [] if crossing is None else [crossing]
        for point in near:
            if (hit := self._hit(point)) is not None:
                return hit
            if self.case.guard is None or self._guarded_around(point):
                return point
        return None

    def value(self, point: FloatArray, at: int) -> float:
        """Value of an instruction at a point."""
        program = plain(self.tape, (at,))
        return float(program.evaluate(point[:, None])[program.row[at], 0])

    def _look(self, points: FloatArray) -> tuple[FloatArray, BoolArray]:
        """The subject at some points, and whether the instruction is computed there."""
        guard = self.case.guard
        wanted = [self.case.subject] if guard is None else [self.case.subject, guard]
        program = plain(self.tape, wanted)
        values = program.evaluate(points)
        subject = values[program.row[self.case.subject]]
        if guard is None:
            return subject, np.ones(len(subject), dtype=bool)
        return subject, values[program.row[guard]] != 0.0

    def _crossing(self, start: FloatArray, end: FloatArray) -> FloatArray | None:
        """Where the subject passes zero between a negative and a positive point.

        None where it only jumps across, so that it can be computed on both sides.
        """
        subject = np.zeros(1)
        for _ in range(10):
            way = np.linspace(0.0, 1.0, 65)
            points = start[:, None] + (end - start)[:, None] * way
            points[:, -1] = end
            subject, _reached = self._look(points)
            first = int(np.argmax(subject > 0.0))
            start, end = points[:, max(first - 1, 0)], points[:, first]
            subject = subject[[max(first - 1, 0), first]]
        if np.abs(subject).min() > JUMP / ZERO * self.tolerance:
            return None
        return start if abs(subject[0]) <= abs(subject[1]) else end

    def _guarded_around(self, point: FloatArray) -> bool:
        """Whether the instruction is computed everywhere near a point.

        ``if(x > 0, 1/x, 0)`` comes close to zero but never divides by it.
        """
        assert self.case.guard is not None
        width = NEAR * (self.box.high - self.box.low)
        low = np.maximum(point - width, self.box.low)[:, None]
        high = np.minimum(point + width, self.box.high)[:, None]
        program = plain(self.tape, (self.case.guard,))
        swept = sweep(program, Boxes(low, high, np.zeros((0, 1), dtype=np.intp)))
        return bool(swept.values[program.row[self.case.guard]][0, 0] == 1.0)

    def _hit(self, point: FloatArray) -> FloatArray | None:
        """A point near by at which the subject is exactly zero and the guard holds."""
        width = self.box.high - self.box.low
        moving = np.flatnonzero(width > 0.0)
        here = np.repeat(point[:, None], len(moving), axis=1)
        every = np.arange(len(moving))
        moved = here.copy()
        moved[moving, every] += 1e-6 * width[moving]
        slope = (self._look(moved)[0] - self._look(here)[0]) / (1e-6 * width[moving])
        for _ in range(3):
            with np.errstate(all="ignore"):
                step = self._look(here)[0] / slope
            target = here[moving, every] - np.where(np.isfinite(step), step, 0.0)
            target = np.where(np.abs(target) < 1e-14 * width[moving], 0.0, target)
            here[moving, every] = np.clip(target, self.box.low[moving], self.box.high[moving])
            subject, reached = self._look(here)
            if (hits := np.flatnonzero((subject == 0.0) & reached)).size:
                return here[:, hits[0]]
        return None
