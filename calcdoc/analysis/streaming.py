"""A tape over very many points, in buffers that stay in the cache.

What depends on no moving column is computed once and becomes a number; an ``if`` whose condition
stands still becomes its branch; what is left is bound to a few buffers that are used again as
soon as their value is no longer needed.
"""

from collections.abc import Mapping, Sequence
from fractions import Fraction
from functools import partial

import numpy as np

from calcdoc.analysis.buffers import Call, Pool, Source, Stream, Value
from calcdoc.analysis.newton import Root
from calcdoc.analysis.points import ONE, TWO, FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.tape import Implicit, Instruction, Op, Tape


def stream(
    tape: Tape, targets: Sequence[int], base: FloatArray, sources: Mapping[int, Source], pool: Pool
) -> Stream:
    """Bind what some targets need.

    Args:
        tape: The formulas, in coherent SI.
        targets: Instructions to be computed.
        base: Shape (n_inputs,): where the columns that do not move stand. Where the others stand
            here is where a root is sought first.
        sources: The moving columns.
        pool: Buffers for what is computed on the way; the targets keep theirs.
    """
    program = plain(tape, targets)
    at_base = program.evaluate(base[:, None])[:, 0]
    binder = _Binder(program.tape.instructions, at_base, sources, pool)
    found = binder.bind([program.row[target] for target in targets])
    return Stream(tuple(binder.calls), dict(zip(targets, found, strict=True)), binder.reads)


class _Binder:
    """Gives each moving row a buffer and notes its call."""

    def __init__(
        self,
        steps: Sequence[Instruction],
        at_base: FloatArray,
        sources: Mapping[int, Source],
        pool: Pool,
    ) -> None:
        self.steps, self.at_base, self.sources, self.pool = steps, at_base, sources, pool
        self.calls: list[Call] = []
        self.reads: set[int] = set()
        self.branch: dict[int, int] = {}
        """Row of an ``if`` that is decided to the row of its branch."""
        self.users: dict[int, int] = {}
        """How many calls to come use a moving row."""
        self.bound: dict[int, FloatArray] = {}
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
                out = self.bound[row] = self.pool.take()
                self.calls.append(partial(np.multiply, source.values, source.scale, out))
                self.calls.append(partial(np.add, out, source.offset, out))
        return self.bound[row]

    def _release(self, rows: Sequence[int]) -> None:
        """One user less; a buffer without users is free."""
        for row in rows:
            if self.moves[row]:
                self.users[row] -= 1
                if not self.users[row]:
                    self.pool.free.append(self.bound[row])

    def _call(self, row: int) -> None:
        step = self.steps[row]
        rows = [self._row(arg) for arg in step.args]
        args = [self._value(arg) for arg in rows]
        if step.op in (Op.IF, Op.ROOT):  # the result must not overwrite what is still read
            out = self.bound[row] = self.pool.take()
            self.calls.append(self._slow(row, step, args, out))
            self._release(rows)
        else:
            self._release(rows)
            out = self.bound[row] = self.pool.take()
            self.calls.append(_operation(step, args, out))

    def _bind(
        self, tape: Tape, targets: Sequence[int], base: FloatArray, sources: Mapping[int, Source]
    ) -> Stream:
        return stream(tape, targets, base, sources, self.pool)

    def _slow(self, row: int, step: Instruction, args: list[Value], out: FloatArray) -> Call:
        """The call of an instruction that reads its arguments more than once."""
        if isinstance(step.value, Implicit):
            start = self.at_base[[row, *step.args]]
            return Root(step.value, args, start, out, self._bind)
        condition, yes, no = args
        assert not isinstance(condition, float)
        return partial(_choose, condition, yes, no, out)


def _operation(step: Instruction, args: Sequence[Value], out: FloatArray) -> Call:
    """The call of one instruction, element by element."""
    operation = TWO.get(step.op) or ONE.get(step.op)
    if operation is not None:
        return partial(operation, *args, out=out)
    if step.op is Op.NOT:
        return partial(np.subtract, 1.0, args[0], out)
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
