"""Arguments of look-ups as ranges on the axes of a table."""

from fractions import Fraction
from typing import TYPE_CHECKING, Final

from calcdoc.analysis.extremes import Question, extremes
from calcdoc.analysis.points import evaluate_points
from calcdoc.analysis.tape import Op
from calcdoc.frozen import Frozen
from calcdoc.tables.table import Axis, Found, Range, Table

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

    @property
    def key(self) -> str:
        """What the column is known by in combinations."""
        return f"@{self.column}"


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
