"""A formula graph as a tape: one instruction per distinct operation, operands before users.

Values are plain numbers in coherent SI; units were checked on the tree before.
Equal operations are stored once, so a quantity used twice is computed once and moves once.
"""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from enum import Enum
from fractions import Fraction

from calcdoc.frozen import Frozen


class Op(Enum):
    """What an instruction does with its arguments."""

    INPUT = "input"  # no arguments; ``value`` is the column of the input, an int
    CONST = "const"  # no arguments; ``value`` is a Fraction where exact, else a float
    ADD = "+"
    SUB = "-"
    MUL = "*"
    DIV = "/"
    NEG = "neg"
    POWER = "power"  # one argument; ``value`` is the exponent, a Fraction
    POW = "pow"  # base and exponent, both arguments; the base must be positive
    SQRT = "sqrt"
    EXP = "exp"
    LN = "ln"
    LOG10 = "log10"
    SIN = "sin"
    COS = "cos"
    TAN = "tan"
    ASIN = "asin"
    ACOS = "acos"
    ATAN = "atan"
    ABS = "abs"
    MIN = "min"  # two arguments
    MAX = "max"  # two arguments
    FLOOR = "floor"
    CEIL = "ceil"
    IF = "if"  # condition, value if true, value if false
    LT = "<"  # the rest yield conditions
    LE = "<="
    AND = "and"
    OR = "or"
    NOT = "not"
    ROOT = "root"  # the unknown of ``value``, an Implicit, whose other columns are the arguments


class Implicit(Frozen, frozen=True):
    """An unknown in a bracket, given by a residual that is zero there.

    The residual is r(x, y1, ..., yn). For a quantity that settles, x = g(x, y1, ..., yn), it is
    g - x.
    """

    tape: "Tape"
    """The residual; column 0 is the unknown x, columns 1..n are y1..yn."""
    residual: int
    """Instruction of the residual."""
    low: Fraction | float
    """Lower end of the bracket, in coherent SI."""
    high: Fraction | float
    loop: int | None = None
    """Instruction of g for a quantity that settles; None for an equation."""


class Instruction(Frozen, frozen=True):
    """One operation; ``args`` are indices of earlier instructions."""

    op: Op
    args: tuple[int, ...] = ()
    value: Fraction | float | int | Implicit | None = None


class Tape(Frozen, frozen=True):
    """Instructions in order of computation and the number of input columns they read."""

    instructions: tuple[Instruction, ...]
    n_inputs: int


def needed(tape: Tape, targets: Iterable[int]) -> tuple[int, ...]:
    """Indices of the instructions that the targets use, themselves included, ascending."""
    seen: set[int] = set()
    stack = list(targets)
    while stack:
        at = stack.pop()
        if at not in seen:
            seen.add(at)
            stack.extend(tape.instructions[at].args)
    return tuple(sorted(seen))


@dataclass(slots=True)
class TapeBuilder:
    """Collects instructions; asking twice for the same operation gives the same index."""

    n_inputs: int
    _instructions: list[Instruction] = field(default_factory=list)
    _index: dict[Instruction, int] = field(default_factory=dict)

    @classmethod
    def on(cls, tape: Tape) -> "TapeBuilder":
        """A builder that goes on from ``tape``, whose indices stay."""
        index = {instruction: at for at, instruction in enumerate(tape.instructions)}
        return cls(tape.n_inputs, list(tape.instructions), index)

    def __len__(self) -> int:
        """How many instructions there are."""
        return len(self._instructions)

    def add(self, op: Op, *args: int, value: Fraction | float | Implicit | None = None) -> int:
        """Index of the instruction, new or already there."""
        if op is Op.MUL and args[0] == args[1]:
            op, args, value = Op.POWER, args[:1], Fraction(2)
        instruction = Instruction(op, args, value)
        at = self._index.get(instruction)
        if at is None:
            at = self._index[instruction] = len(self._instructions)
            self._instructions.append(instruction)
        return at

    def include(self, tape: Tape, targets: Iterable[int], columns: Sequence[int]) -> dict[int, int]:
        """Add what ``targets`` of another tape need, with instructions of this one for its inputs.

        Args:
            tape: The other tape.
            targets: Some of its instructions.
            columns: For each of its input columns an instruction of this builder.

        Returns:
            Where each instruction of the other tape that is needed came to stand.
        """
        new: dict[int, int] = {}
        for at in needed(tape, targets):
            step = tape.instructions[at]
            if step.op is Op.INPUT:
                assert isinstance(step.value, int)
                new[at] = columns[step.value]
            else:
                new[at] = self.add(step.op, *(new[arg] for arg in step.args), value=step.value)
        return new

    def tape(self) -> Tape:
        """The tape so far."""
        return Tape(tuple(self._instructions), self.n_inputs)
