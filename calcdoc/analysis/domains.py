"""Where operations cannot be computed: the condition on a subject that each one needs."""

from enum import Enum
from fractions import Fraction
from typing import Final

import numpy as np

from calcdoc.analysis import intervals as iv
from calcdoc.analysis.guards import Guard
from calcdoc.analysis.points import BoolArray, FloatArray
from calcdoc.analysis.tape import Instruction, Op, TapeBuilder
from calcdoc.frozen import Frozen

POLE: Final = "division by zero"
ROOT: Final = "square root of a negative"
LOGARITHM: Final = "logarithm of zero or less"
POWER: Final = "power of a negative base"
ARC: Final = "arcsine outside -1..1"
TANGENT: Final = "tangent at a pole"
OVERFLOW: Final = "overflow"
NO_CHANGE: Final = "no sign change in the bracket"
SEVERAL: Final = "several roots in the bracket"
JUMP: Final = "jump over zero in the bracket"


class Need(Enum):
    """What must be true of a subject."""

    NOT_ZERO = "not zero"
    NOT_NEGATIVE = "not negative"
    POSITIVE = "positive"


class Case(Frozen, frozen=True):
    """One way in which one instruction may fail."""

    instruction: int
    argument: int
    """Index of the instruction that yields the argument to blame."""
    kind: str
    subject: int
    """Index of the instruction whose value must be as needed: the argument, or made from it."""
    need: Need
    guard: Guard = None
    """Condition under which the instruction is computed at all."""

    def broken(self, subject: FloatArray) -> BoolArray:
        """Where values of the subject make the instruction fail, to the last digit."""
        if self.need is Need.NOT_ZERO:
            return np.equal(subject, 0.0)
        compare = np.less if self.need is Need.NOT_NEGATIVE else np.less_equal
        return compare(subject, 0.0)


def suspected(step: Instruction, args: list[FloatArray]) -> tuple[int, str] | None:
    """Place of the argument and kind of failure that ranges (2, 1) of the arguments allow."""
    if step.op is Op.POWER:
        assert isinstance(step.value, Fraction | int)
        return _power(Fraction(step.value), *_ends(args[0]))
    if step.op is Op.DIV:
        low, high = _ends(args[1])
        return (1, POLE) if low <= 0.0 <= high else None
    if step.op is Op.POW:
        low, _ = _ends(args[0])
        zero = low == 0.0 and _ends(args[1])[0] < 0.0
        return (0, POWER) if low < 0.0 or zero else None
    if len(args) == 1:
        return _function(step.op, args[0])
    return None


def _ends(interval: FloatArray) -> tuple[float, float]:
    return float(interval[0, 0]), float(interval[1, 0])


def _power(exponent: Fraction, low: float, high: float) -> tuple[int, str] | None:
    if exponent.denominator != 1 and low < 0.0:
        return 0, ROOT if exponent == Fraction(1, 2) else POWER
    return (0, POLE) if exponent < 0 and low <= 0.0 <= high else None


def _function(op: Op, a: FloatArray) -> tuple[int, str] | None:
    low, high = _ends(a)
    fails = {
        Op.SQRT: (ROOT, low < 0.0),
        Op.LN: (LOGARITHM, low <= 0.0),
        Op.LOG10: (LOGARITHM, low <= 0.0),
        Op.ASIN: (ARC, low < -1.0 or high > 1.0),
        Op.ACOS: (ARC, low < -1.0 or high > 1.0),
        Op.TAN: (TANGENT, bool(iv.contains_turn(a, np.pi / 2, np.pi)[0])),
    }
    kind, possible = fails.get(op, ("", False))
    return (0, kind) if possible else None


def cases(
    builder: TapeBuilder, instruction: int, argument: int, kind: str, guard: Guard
) -> tuple[Case, ...]:
    """The subjects to look at for one suspect; what has to be computed is added to the tape."""
    if kind == TANGENT:
        cosine = builder.add(Op.COS, argument)
        return (Case(instruction, argument, kind, cosine, Need.NOT_ZERO, guard),)
    if kind == ARC:
        one = builder.add(Op.CONST, value=Fraction(1))
        below = builder.add(Op.SUB, one, argument)
        above = builder.add(Op.ADD, one, argument)
        return tuple(
            Case(instruction, argument, kind, subject, Need.NOT_NEGATIVE, guard)
            for subject in (below, above)
        )
    needs = {POLE: Need.NOT_ZERO, LOGARITHM: Need.POSITIVE}
    need = needs.get(kind, Need.NOT_NEGATIVE)
    first = Case(instruction, argument, kind, argument, need, guard)
    step = builder.tape().instructions[instruction]
    if step.op is not Op.POW:
        return (first,)
    falls = builder.add(Op.LT, step.args[1], builder.add(Op.CONST, value=Fraction(0)))
    where = falls if guard is None else builder.add(Op.AND, guard, falls)
    return first, Case(instruction, argument, POLE, argument, Need.NOT_ZERO, where)
