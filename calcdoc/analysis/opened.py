"""Roots opened up for hazards: the residual put among the formulas that its arguments come from."""

from collections.abc import Mapping, Sequence

import numpy as np

from calcdoc.analysis.boxes import Boxes
from calcdoc.analysis.domains import suspected
from calcdoc.analysis.enclosure import enclose
from calcdoc.analysis.guards import Guard
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.questions import Extreme, Question
from calcdoc.analysis.sweep import sweep
from calcdoc.analysis.tape import Implicit, Op, Tape, TapeBuilder
from calcdoc.frozen import Frozen


def doubtful(implicit: Implicit, args: Sequence[FloatArray]) -> bool:
    """Whether anything may go wrong with a root, from ranges (2, 1) of its arguments."""
    enclosed = enclose(implicit, args, 1, sweep)
    fine = bool(enclosed.certain[0] and enclosed.unique[0])
    return not fine or doubtful_inside(implicit, args)


def surely_one(implicit: Implicit, args: Sequence[FloatArray]) -> bool:
    """Whether there is at most one root, and no jump, from ranges (2, 1) of its arguments."""
    return bool(enclose(implicit, args, 1, sweep).unique[0])


def doubtful_inside(implicit: Implicit, args: Sequence[FloatArray]) -> bool:
    """Whether something may go wrong in the residual, anywhere in the bracket."""
    part = plain(implicit.tape, (implicit.residual,))
    unknown = np.array([[float(implicit.low)], [float(implicit.high)]])
    ranges = np.stack((unknown, *args), axis=1)
    swept = sweep(part, Boxes(ranges[0], ranges[1], np.zeros((0, 1), dtype=np.intp)))
    for at, step in enumerate(part.tape.instructions):
        own = [swept.values[arg] for arg in step.args]
        if not np.isfinite(swept.values[at]).all() or suspected(step, own) is not None:
            return True
        if isinstance(step.value, Implicit) and doubtful(step.value, own):
            return True
    return False


class Opened(Frozen, frozen=True):
    """The residual of a root among the formulas, its unknown a further input column."""

    tape: Tape
    target: int
    """Instruction of the residual; where the root is not computed at all it is zero."""
    origins: Mapping[int, int]
    """Instruction of the residual's own tape for each one that was put in."""

    @classmethod
    def of(cls, tape: Tape, at: int, guard: Guard) -> "Opened":
        """Open one root."""
        step = tape.instructions[at]
        assert isinstance(step.value, Implicit)
        builder = TapeBuilder.on(tape)
        unknown = builder.add(Op.INPUT, value=tape.n_inputs)
        builder.n_inputs += 1
        residual = step.value.residual
        new = builder.include(step.value.tape, (residual,), (unknown, *step.args))
        target = new[residual]
        if guard is not None:
            target = builder.add(Op.IF, guard, target, builder.add(Op.CONST, value=0.0))
        origins = {there: here for here, there in reversed(new.items())}
        return cls(builder.tape(), target, origins)


class LostSign(Frozen, frozen=True):
    """Where the residual of a root has the same sign at both ends of its bracket."""

    low: int
    """Instruction of the residual at the lower end."""
    high: int
    subject: int
    """Instruction that is negative where there is no change of sign."""
    guard: Guard

    @classmethod
    def at(cls, builder: TapeBuilder, root: int, guard: Guard) -> "LostSign":
        """Add the residual at both ends of the bracket to the tape."""
        step = builder.tape().instructions[root]
        assert isinstance(step.value, Implicit)
        residual = step.value.residual
        low, high = (
            builder.include(
                step.value.tape,
                (residual,),
                (builder.add(Op.CONST, value=float(end)), *step.args),
            )[residual]
            for end in (step.value.low, step.value.high)
        )
        rises = builder.add(Op.MIN, builder.add(Op.NEG, low), high)
        falls = builder.add(Op.MIN, low, builder.add(Op.NEG, high))
        subject = builder.add(Op.MAX, rises, falls)
        if guard is not None:
            subject = builder.add(Op.IF, guard, subject, builder.add(Op.CONST, value=0.0))
        return cls(low, high, subject, guard)

    def questions(
        self, tape: Tape, least: FloatArray, nominal: FloatArray, greatest: FloatArray
    ) -> list[Question]:
        """Ask how close each end comes to the other sign than it has at nominal."""
        values = self._values(tape, nominal)
        return [
            Question(at, values[at] < 0.0, least, nominal, greatest) for at in (self.low, self.high)
        ]

    def first(self, tape: Tape, points: Sequence[FloatArray]) -> FloatArray | None:
        """The first point (n_inputs,) without a change of sign."""
        return next(
            (point for point in points if self._values(tape, point)[self.subject] < 0.0), None
        )

    def possible(self, questions: Sequence[Question], answers: Sequence[Extreme]) -> bool:
        """Whether an end may have the other sign somewhere."""
        return any(
            answer.bound > 0.0 if question.greatest else answer.bound < 0.0
            for question, answer in zip(questions, answers, strict=True)
        )

    def computed(self, tape: Tape, point: FloatArray) -> bool:
        """Whether the root is computed at all at a point (n_inputs,)."""
        return self.guard is None or self._values(tape, point)[self.guard] != 0.0

    def _values(self, tape: Tape, point: FloatArray) -> dict[int, float]:
        wanted = [self.low, self.high, self.subject]
        wanted += [] if self.guard is None else [self.guard]
        part = plain(tape, wanted)
        values = part.evaluate(point[:, None])
        return {at: float(values[part.row[at], 0]) for at in wanted}
