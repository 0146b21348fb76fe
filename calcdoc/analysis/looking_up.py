"""Arguments of look-ups as ranges on the axes of a table."""

from collections.abc import Iterable
from fractions import Fraction
from typing import TYPE_CHECKING, Final

import numpy as np

from calcdoc.analysis.extremes import Question, extremes
from calcdoc.analysis.points import BoolArray, evaluate_points
from calcdoc.analysis.tape import Op, Tape
from calcdoc.frozen import Frozen
from calcdoc.tables.table import Axis, Found, Range, Table
from calcdoc.text.cases import NORMAL

if TYPE_CHECKING:
    from calcdoc.analysis.working import Working

SAME: Final = Fraction(1, 10**9)
"""Share by which a computed argument may miss a row of its axis and still mean it."""


class LookedUp(Frozen, frozen=True):
    """One look-up: who asked, what was found, and the column it moves in, if it moves."""

    owner: str
    """Key of the quantity, or of the id of the criterion or cross-check."""
    table: Table
    found: Found
    column: int | None
    moved_by: frozenset[int] = frozenset()
    """Columns the arguments depend on. The column moves without them, so a result in which both
    count is bounded, but need not be attained."""
    case: str = NORMAL

    @property
    def key(self) -> str:
        """What the column is known by in combinations."""
        return f"@{self.column}"


def reached(tape: Tape, at: int) -> frozenset[int]:
    """Columns that an instruction can depend on."""
    columns: set[int] = set()
    seen: set[int] = set()
    waiting = [at]
    while waiting:
        step = waiting.pop()
        if step in seen:
            continue
        seen.add(step)
        instruction = tape.instructions[step]
        if isinstance(instruction.value, int) and instruction.op is Op.INPUT:
            columns.add(instruction.value)
        waiting.extend(instruction.args)
    return frozenset(columns)


def moves_apart(looked: Iterable[LookedUp], matters: BoolArray) -> bool:
    """Whether a look-up counts together with what it is looked up by, or with another such one.

    Then the combination that was found may not exist: a look-up moves in a column of its own.
    """
    moving = [each for each in looked if each.column is not None and matters[each.column]]
    owned = {each.column for each in moving}
    seen = {int(at) for at in np.flatnonzero(matters)} - owned
    for each in moving:
        if each.moved_by & seen:
            return True
        seen |= each.moved_by
    return False


def argument_range(working: "Working", at: int, axis: Axis) -> Range:
    """Least, nominal and greatest of an argument over the declared band, in the axis's unit."""
    assert axis.unit is not None
    tape, box = working.builder.tape(), working.box
    step = tape.instructions[at]
    if step.op is Op.CONST and isinstance(step.value, Fraction):
        exact = step.value / axis.unit.factor
        return exact, exact, exact
    nominal = float(evaluate_points(tape, box.nominal[:, None])[at, 0])
    asked = [Question(at, end, box.low, box.nominal, box.high) for end in (False, True)]
    least, greatest = (each.value for each in extremes(tape, asked))
    low, middle, high = (Fraction(each) / axis.unit.factor for each in (least, nominal, greatest))
    return min(low, middle), middle, max(high, middle)


def snapped(table: Table, number: int, argument: Range | str) -> Range | str:
    """An argument with what rounding put beside a row put onto it."""
    if isinstance(argument, str):
        return argument
    rows = {row.at[number] for row in table.rows}
    places = [each for each in rows if isinstance(each, Fraction)]

    def near(value: Fraction) -> Fraction:
        return next((at for at in places if abs(value - at) <= SAME * abs(at)), value)

    low, nominal, high = (near(each) for each in argument)
    return low, nominal, high
