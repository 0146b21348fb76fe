"""One pass over the tape: ranges and slopes of every instruction over many boxes at once.

Each column is a box of its own. The pass carries, for every instruction, an interval that
contains its values over the box, one at the centre of the box, and the interval slopes with
respect to the inputs named by the column's slots. Where an operation meets the same input on two
sides, the interval is cut by the mean-value form: the centre plus slopes times half widths.
"""

from fractions import Fraction

import numpy as np

from calcdoc.analysis import intervals as iv
from calcdoc.analysis.boxes import Boxes, Swept
from calcdoc.analysis.enclosure import enclose
from calcdoc.analysis.points import BoolArray, FloatArray, IntArray
from calcdoc.analysis.program import Program
from calcdoc.analysis.slopes import Tangent, tangent
from calcdoc.analysis.tape import Implicit, Instruction, Op

__all__ = ["Boxes", "Swept", "sweep"]


def sweep(program: Program, boxes: Boxes) -> Swept:
    """Carry all boxes through a program.

    Every input that has width in a column must be named by a slot of that column, unless the
    target of interest does not depend on it.
    """
    n_columns = boxes.low.shape[1]
    centre = boxes.centre()
    half = _half_widths(boxes, centre)
    low = np.concatenate((boxes.low, centre), axis=1)
    high = np.concatenate((boxes.high, centre), axis=1)
    swept = Swept([], [])
    both: list[FloatArray] = []  # boxes, then their centres, as columns of one array
    with np.errstate(all="ignore"):
        for at, step in enumerate(program.tape.instructions):
            move: Tangent = None
            if step.op is Op.INPUT:
                assert isinstance(step.value, int)
                row = step.value
                both.append(np.array((low[row], high[row])))
                move = _seed(boxes.slots, row)
            elif isinstance(step.value, Implicit):
                args = [both[arg] for arg in step.args]
                root = enclose(step.value, args, 2 * n_columns, sweep)
                both.append(root.value)
                move = root.tangent([swept.moves[arg] for arg in step.args], n_columns)
            else:
                both.append(_value(step, [both[arg] for arg in step.args], 2 * n_columns))
            value = both[at][:, :n_columns]
            if step.args and step.op is not Op.ROOT:
                values = tuple(swept.values[arg] for arg in step.args)
                move = tangent(step, values, tuple(swept.moves[arg] for arg in step.args), value)
            if move is not None and at in program.lost:
                move = _forget(move, boxes.slots, program.depends[at])
            if at in program.meets:
                _cut(value, both[at][:, n_columns:], move, half)
            swept.values.append(value)
            swept.moves.append(move)
    return swept


def _half_widths(boxes: Boxes, centre: FloatArray) -> FloatArray:
    """Largest distance from the centre for each slot, rounded up; shape (n_slots, n_columns)."""
    columns = np.arange(boxes.low.shape[1])
    reach = np.maximum(boxes.high - centre, centre - boxes.low)
    half = np.where(boxes.slots >= 0, reach[boxes.slots, columns], 0.0)
    return np.where(half > 0.0, np.nextafter(half, np.inf), 0.0)


def _seed(slots: IntArray, row: int) -> Tangent:
    """Tangent of an input: one in its own slots."""
    own = slots == row
    return np.stack((own, own)).astype(np.float64) if own.any() else None


def _value(step: Instruction, args: list[FloatArray], n_columns: int) -> FloatArray:
    """Interval of one instruction over boxes and centres, by natural interval arithmetic."""
    if step.op is Op.CONST:
        assert isinstance(step.value, Fraction | float | int)
        number = float(step.value)
        out = np.full((2, n_columns), number)
        return out if step.value == number else iv.outward(out)
    if step.op is Op.POWER:
        assert isinstance(step.value, Fraction | int)
        return iv.power(args[0], Fraction(step.value))
    if step.op is Op.IF:
        return iv.choose(args[0], args[1], args[2])
    if len(args) == 1:
        return iv.ONE[step.op](args[0])
    return iv.TWO[step.op](args[0], args[1])


def _forget(move: FloatArray, slots: IntArray, depends: BoolArray) -> Tangent:
    """Zero the slopes to inputs that certainly have no effect."""
    kept = depends[slots] & (slots >= 0)
    return np.where(kept, move, 0.0) if kept.any() else None


def _cut(value: FloatArray, centre: FloatArray, move: Tangent, half: FloatArray) -> None:
    """Cut ``value`` in place to the mean-value form around the centre."""
    if move is None:
        np.copyto(value, centre)
        return
    steep = np.maximum(-move[0], move[1]) * half
    np.copyto(steep, 0.0, where=half == 0.0)  # a thin side stays thin, however steep
    reach = np.nextafter(steep, np.inf).sum(axis=0) * (1.0 + 1e-14)
    np.fmax(value[0], np.nextafter(centre[0] - reach, -np.inf), out=value[0])
    np.fmin(value[1], np.nextafter(centre[1] + reach, np.inf), out=value[1])
