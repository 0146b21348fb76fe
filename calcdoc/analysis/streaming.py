"""A tape over very many points, in buffers that stay in the cache.

What depends on no moving column is computed once and becomes a number; an ``if`` whose condition
stands still becomes its branch; what is left is bound to a few buffers that are used again as
soon as their value is no longer needed.
"""

from collections.abc import Callable, Mapping, Sequence
from fractions import Fraction
from functools import partial
from typing import Final

import numpy as np

from calcdoc.analysis.derivative import derivative
from calcdoc.analysis.points import ONE, TWO, BoolArray, FloatArray, compile_steps, solved
from calcdoc.analysis.program import plain
from calcdoc.analysis.tape import Implicit, Instruction, Op, Tape, TapeBuilder
from calcdoc.frozen import Frozen

Call = Callable[[], object]
Value = FloatArray | float


class Source(Frozen, frozen=True):
    """Where a moving column comes from: offset + scale * values."""

    values: FloatArray
    """Shape (size,); filled anew by the owner before each run."""
    scale: float = 1.0
    offset: float = 0.0

    @property
    def is_plain(self) -> bool:
        """Whether the values are used as they are."""
        return self.scale == 1.0 and self.offset == 0.0


class Stream(Frozen, frozen=True):
    """Bound instructions: ``run`` fills the values of the targets from the sources."""

    calls: tuple[Call, ...]
    values: Mapping[int, Value]
    """By target: an array (size,) that every run fills, or a number if it stands still."""
    reads: set[int]
    """The moving columns it uses."""

    def run(self) -> None:
        """Compute all targets; what cannot be computed is not finite."""
        for call in self.calls:
            call()


def stream(
    tape: Tape, targets: Sequence[int], base: FloatArray, sources: Mapping[int, Source], size: int
) -> Stream:
    """Bind what some targets need.

    Args:
        tape: The formulas, in coherent SI.
        targets: Instructions to be computed.
        base: Shape (n_inputs,): where the columns that do not move stand. Where the others stand
            here is where a root is sought first.
        sources: The moving columns.
        size: How many points a run computes.
    """
    program = plain(tape, targets)
    at_base = program.evaluate(base[:, None])[:, 0]
    binder = _Binder(program.tape.instructions, at_base, sources, size)
    found = binder.bind([program.row[target] for target in targets])
    return Stream(tuple(binder.calls), dict(zip(targets, found, strict=True)), binder.reads)


class _Binder:
    """Gives each moving row a buffer and notes its call."""

    def __init__(
        self,
        steps: Sequence[Instruction],
        at_base: FloatArray,
        sources: Mapping[int, Source],
        size: int,
    ) -> None:
        self.steps, self.at_base, self.sources, self.size = steps, at_base, sources, size
        self.calls: list[Call] = []
        self.reads: set[int] = set()
        self.branch: dict[int, int] = {}
        """Row of an ``if`` that is decided to the row of its branch."""
        self.users: dict[int, int] = {}
        """How many calls to come use a moving row."""
        self.bound: dict[int, FloatArray] = {}
        self.free: list[FloatArray] = []
        self.moves = self._moving()

    def bind(self, targets: Sequence[int]) -> list[Value]:
        """Note the calls that the targets need, and say where their values will be."""
        rows = [self._row(target) for target in targets]
        self._count_users(rows)
        for row in sorted(self.users):
            if self.steps[row].op is not Op.INPUT:
                self._call(row)
        return [self._value(row) for row in rows]

    def _row(self, row: int) -> int:
        return self.branch.get(row, row)

    def _moving(self) -> list[bool]:
        """Which rows move; decides every ``if`` whose condition stands still."""
        moves: list[bool] = []
        for row, step in enumerate(self.steps):
            if step.op is Op.INPUT:
                moves.append(step.value in self.sources)
                continue
            if step.op is Op.IF and not moves[step.args[0]]:
                yes = self.at_base[step.args[0]] != 0.0
                self.branch[row] = self._row(step.args[1 if yes else 2])
                moves.append(moves[self.branch[row]])
                continue
            moves.append(any(moves[arg] for arg in step.args))
        return moves

    def _count_users(self, targets: Sequence[int]) -> None:
        """Count the users of every row that moves and is needed; a target is used for ever."""
        waiting = [row for row in targets if self.moves[row]]
        self.users = dict.fromkeys(waiting, 1)
        seen = set(waiting)
        while waiting:
            for arg in map(self._row, self.steps[waiting.pop()].args):
                if self.moves[arg]:
                    self.users[arg] = self.users.get(arg, 0) + 1
                    if arg not in seen:
                        seen.add(arg)
                        waiting.append(arg)

    def _value(self, row: int) -> Value:
        """Where the value of a row is; a moving input is fetched when it is first used."""
        if not self.moves[row]:
            return float(self.at_base[row])
        if row not in self.bound:
            column = self.steps[row].value
            assert isinstance(column, int)
            self.reads.add(column)
            source = self.sources[column]
            if source.is_plain:
                self.users[row] += 1  # the buffer is not ours
                self.bound[row] = source.values
            else:
                out = self.bound[row] = self._take()
                self.calls.append(partial(np.multiply, source.values, source.scale, out))
                self.calls.append(partial(np.add, out, source.offset, out))
        return self.bound[row]

    def _take(self) -> FloatArray:
        return self.free.pop() if self.free else np.zeros(self.size)

    def _release(self, rows: Sequence[int]) -> None:
        """One user less; a buffer without users is free."""
        for row in rows:
            if self.moves[row]:
                self.users[row] -= 1
                if not self.users[row]:
                    self.free.append(self.bound[row])

    def _call(self, row: int) -> None:
        step = self.steps[row]
        rows = [self._row(arg) for arg in step.args]
        args = [self._value(arg) for arg in rows]
        if step.op in (Op.IF, Op.ROOT):  # the result must not overwrite what is still read
            out = self._take()
            self._release(rows)
        else:
            self._release(rows)
            out = self._take()
        self.bound[row] = out
        if step.op is Op.ROOT:
            assert isinstance(step.value, Implicit)
            start = self.at_base[[row, *step.args]]
            self.calls.append(_Root(step.value, args, start, out))
        else:
            self.calls.append(_operation(step, args, out))


def _operation(step: Instruction, args: Sequence[Value], out: FloatArray) -> Call:
    """The call of one instruction, element by element."""
    operation = TWO.get(step.op) or ONE.get(step.op)
    if operation is not None:
        return partial(operation, *args, out=out)
    if step.op is Op.NOT:
        return partial(np.subtract, 1.0, args[0], out)
    if step.op is Op.IF:
        condition, yes, no = args
        assert not isinstance(condition, float)
        return partial(_choose, condition, yes, no, out)
    assert step.op is Op.POWER
    assert isinstance(step.value, Fraction | int)
    exponent = Fraction(step.value)
    if exponent == 2:  # noqa: PLR2004
        return partial(np.multiply, args[0], args[0], out)
    if exponent == -1:
        return partial(np.divide, 1.0, args[0], out)
    if exponent == Fraction(1, 2):
        return partial(np.sqrt, args[0], out)
    return partial(np.power, args[0], float(exponent), out)


def _choose(condition: FloatArray, yes: Value, no: Value, out: FloatArray) -> None:
    np.copyto(out, no)
    np.copyto(out, yes, where=condition != 0.0)


NEWTON_STEPS: Final = 8
CLOSE: Final = 1e-8
"""A step of this share of the unknown is the last: the next one would be its square."""


class _Root:
    """Solves for an unknown by Newton's rule from the root at the base, all points together.

    Points where that does not settle within the bracket, or where the residual does not change
    its sign over the bracket, go to the solver that never leaves the bracket; it yields NaN where
    there is no root.
    """

    def __init__(
        self, implicit: Implicit, known: Sequence[Value], start: FloatArray, out: FloatArray
    ) -> None:
        self.implicit, self.known, self.start, self.out = implicit, known, start, out
        self.low, self.high = float(implicit.low), float(implicit.high)
        self.step, self.size = np.zeros_like(out), np.zeros_like(out)
        builder = TapeBuilder.on(implicit.tape)
        slope = derivative(builder, implicit.residual, builder.add(Op.INPUT, value=0))
        self.slope = implicit.residual if slope is None else slope
        self.at = self._bound(builder.tape(), [implicit.residual, self.slope], Source(out))
        self.ends = [
            self._bound(implicit.tape, [implicit.residual], end)
            for end in (implicit.low, implicit.high)
        ]
        self.steps = compile_steps(implicit.tape)

    def _bound(self, tape: Tape, targets: list[int], x: Source | Fraction | float) -> Stream:
        """The residual where the unknown moves or stands still."""
        moving = {
            at: Source(each) for at, each in enumerate(self.known, 1) if not isinstance(each, float)
        }
        base = self.start.copy()
        if isinstance(x, Source):
            moving[0] = x
        else:
            base[0] = float(x)
        return stream(tape, targets, base, moving, len(self.out))

    def __call__(self) -> None:
        """Fill ``out`` with roots."""
        rest = ~(self._newton() & self._signs_change())
        if rest.any():
            known = [
                np.full(len(self.out), each)[rest] if isinstance(each, float) else each[rest]
                for each in self.known
            ]
            args = np.stack(known) if known else np.empty((0, int(rest.sum())))
            self.out[rest] = solved(self.implicit, self.steps, args)

    def _newton(self) -> BoolArray:
        """Whether Newton's rule settled, for each point."""
        residual, slope = (self.at.values[row] for row in (self.implicit.residual, self.slope))
        x, step, size = self.out, self.step, self.size
        x.fill(self.start[0])
        settled: BoolArray = np.zeros(len(x), dtype=bool)
        for _ in range(0 if residual is slope else NEWTON_STEPS):
            self.at.run()
            np.divide(residual, slope, step)
            np.subtract(x, step, x)
            np.abs(step, step)
            np.abs(x, size)
            np.multiply(size, CLOSE, size)
            settled = step <= size
            if settled.all():
                break
        return settled & (x >= self.low) & (x <= self.high)

    def _signs_change(self) -> BoolArray:
        """Whether the ends of the bracket have residuals of either sign, for each point."""
        for end in self.ends:
            end.run()
        first, last = (np.sign(end.values[self.implicit.residual]) for end in self.ends)
        changes: BoolArray = first * last <= 0.0
        return changes
