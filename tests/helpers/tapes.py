"""Write tapes in tests as formulas: ``x*(1 - x)`` on :class:`Term` objects."""

from dataclasses import dataclass
from fractions import Fraction

import numpy as np

from calcdoc.analysis.extremes import Extreme, Question, extremes
from calcdoc.analysis.tape import Op, TapeBuilder


@dataclass(frozen=True, slots=True)
class Term:
    """An instruction of a builder, with Python's operators."""

    builder: TapeBuilder
    at: int

    def then(self, op: Op, *others: "Term | float") -> "Term":
        """Apply an operation to this term and others."""
        return Term(self.builder, self.builder.add(op, self.at, *map(self._index, others)))

    def power(self, exponent: Fraction | int) -> "Term":
        """Rational power."""
        exact = Fraction(exponent)
        return Term(self.builder, self.builder.add(Op.POWER, self.at, value=exact))

    def _index(self, other: "Term | float") -> int:
        if isinstance(other, Term):
            return other.at
        return self.builder.add(Op.CONST, value=Fraction(str(other)))

    def __add__(self, other: "Term | float") -> "Term":
        return self.then(Op.ADD, other)

    def __sub__(self, other: "Term | float") -> "Term":
        return self.then(Op.SUB, other)

    def __mul__(self, other: "Term | float") -> "Term":
        return self.then(Op.MUL, other)

    def __truediv__(self, other: "Term | float") -> "Term":
        return self.then(Op.DIV, other)

    def __neg__(self) -> "Term":
        return self.then(Op.NEG)

    def __lt__(self, other: "Term | float") -> "Term":
        return self.then(Op.LT, other)

    def __le__(self, other: "Term | float") -> "Term":
        return self.then(Op.LE, other)


def inputs(count: int) -> tuple[Term, ...]:
    """The input columns of a new tape."""
    builder = TapeBuilder(count)
    return tuple(Term(builder, builder.add(Op.INPUT, value=row)) for row in range(count))


def number(near: Term, value: Fraction | float) -> Term:
    """A constant on the tape of ``near``; a float counts with its shortest decimal digits."""
    exact = value if isinstance(value, Fraction) else Fraction(str(value))
    return Term(near.builder, near.builder.add(Op.CONST, value=exact))


def choose(condition: Term, if_true: Term | float, if_false: Term | float) -> Term:
    """``if(condition, if_true, if_false)``."""
    return condition.then(Op.IF, if_true, if_false)


def ends(target: Term, *ranges: tuple[float, float, float]) -> tuple[Extreme, Extreme]:
    """Least and greatest of a term; ranges are (least, nominal, greatest) of the inputs."""
    low, nominal, high = np.array(ranges).T
    questions = [Question(target.at, greatest, low, nominal, high) for greatest in (False, True)]
    least, most = extremes(target.builder.tape(), questions)
    return least, most
