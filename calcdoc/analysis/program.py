"""The part of a tape that some targets need, numbered anew, with what each row depends on."""

from collections.abc import Iterable, Sequence

import numpy as np

from calcdoc.analysis.points import BoolArray, FloatArray, Step, compile_steps, run
from calcdoc.analysis.tape import Op, Tape, needed
from calcdoc.analysis.vanish import dependence
from calcdoc.frozen import Frozen, replace


class Program(Frozen, frozen=True):
    """Instructions in order with all their arguments, ready to be evaluated and swept."""

    tape: Tape
    row: dict[int, int]
    """Row of each instruction of the tape it was taken from."""
    steps: tuple[Step, ...]
    depends: BoolArray
    """Shape (n_rows, n_inputs): False where the input certainly has no effect."""
    meets: frozenset[int]
    """Rows whose arguments depend on a common input."""
    lost: frozenset[int]
    """Rows that do not depend on some input that an argument depends on."""

    def part(self, targets: Iterable[int]) -> "Program":
        """The part that ``targets``, numbered as in the first tape, need."""
        rows = needed(self.tape, [self.row[target] for target in targets])
        new = {row: at for at, row in enumerate(rows)}
        tape = renumber(self.tape, rows)
        return Program(
            tape=tape,
            row={first: new[row] for first, row in self.row.items() if row in new},
            steps=compile_steps(tape),
            depends=self.depends[list(rows)],
            meets=frozenset(new[row] for row in self.meets if row in new),
            lost=frozenset(new[row] for row in self.lost if row in new),
        )

    def evaluate(self, inputs: FloatArray) -> FloatArray:
        """Values (n_rows, n_columns) at points (n_inputs, n_columns)."""
        return run(self.steps, inputs)


def renumber(tape: Tape, order: Sequence[int]) -> Tape:
    """The instructions ``order`` (ascending, closed under arguments) as a tape of their own."""
    new = {at: row for row, at in enumerate(order)}
    return Tape(
        tuple(
            replace(step, args=tuple(new[arg] for arg in step.args)) if step.args else step
            for step in (tape.instructions[at] for at in order)
        ),
        tape.n_inputs,
    )


def plain(tape: Tape, targets: Iterable[int]) -> Program:
    """What ``targets`` need, for points and for natural intervals without slopes."""
    order = needed(tape, targets)
    own = renumber(tape, order)
    return Program(
        tape=own,
        row={at: row for row, at in enumerate(order)},
        steps=compile_steps(own),
        depends=np.ones((len(order), tape.n_inputs), dtype=bool),
        meets=frozenset(),
        lost=frozenset(),
    )


def by_structure(tape: Tape, targets: Iterable[int]) -> Program:
    """What ``targets`` need; an instruction is taken to depend on all that it is made from."""
    own = plain(tape, targets)
    made_from: list[int] = []  # the inputs as bits of an int
    meets = set()
    for row, step in enumerate(own.tape.instructions):
        bits = 0
        if step.op is Op.INPUT:
            assert isinstance(step.value, int)
            bits = 1 << step.value
        for arg in step.args:
            if bits & made_from[arg]:
                meets.add(row)
            bits |= made_from[arg]
        made_from.append(bits)
    return replace(own, meets=frozenset(meets))


def by_derivatives(tape: Tape, targets: Iterable[int]) -> Program:
    """What ``targets`` need, with what each instruction really depends on; costs more."""
    own = plain(tape, targets)
    depends = dependence(own.tape)
    meets, lost = set(), set()
    for row, step in enumerate(own.tape.instructions):
        if step.args:
            counts = np.add.reduce(depends[list(step.args)], axis=0, dtype=np.intp)
            if counts.max(initial=0) > 1:
                meets.add(row)
            if ((counts > 0) & ~depends[row]).any():
                lost.add(row)
    # What lost an input has the value of its centre, which the cut at a meeting puts in.
    return replace(own, depends=depends, meets=frozenset(meets | lost), lost=frozenset(lost))
