"""One steady half period as a table of segments, whatever kind of circuit it comes from.

Six segments, some of them empty, in the order of time from the start of the conduction:

    0 conducting, regulated      2 conducting, regulated      4 blocking, regulated
    1 conducting, on the slope   3 conducting, on the slope   5 blocking, on the slope

Conduction lies within one half period of the mains; blocking runs on to the start of the next
conduction. Where no segment lies, all voltages and currents are zero.
"""

from dataclasses import dataclass
from typing import Final

import numpy as np

from calcdoc.methods.solvers.blocking import regulated_for
from calcdoc.methods.solvers.circuit import BoolArray, Circuit, FloatArray, IntArray
from calcdoc.methods.solvers.curves import CONST, REACH, TERMS, curve, derivative

SEGMENTS: Final = 6
CONDUCTING: Final = 4
"""The first four conduct."""
REGULATED: Final = np.array([True, False, True, False, True, False])


@dataclass(frozen=True, slots=True)
class Steady:
    """The steady half period of some operating points."""

    end: FloatArray
    """Where each segment ends, radians, shape (6, n); it starts at the curves' start."""
    voltage: FloatArray
    """Curves of y, the reservoir voltage above V_0, shape (7, 6, n)."""
    string: FloatArray
    """Curves of the string current, shape (7, 6, n)."""
    line: FloatArray
    """Curves of the rectified line current, shape (7, 6, n)."""
    capacitor: FloatArray
    """Curves of the current into the reservoir, shape (7, 6, n)."""
    valley: FloatArray
    """Phase of the least reservoir voltage, radians, shape (n,)."""
    crest: FloatArray
    """Phase of the greatest."""
    y_valley: FloatArray
    y_crest: FloatArray
    dark: BoolArray
    """Whether the string is without current at some phase, shape (n,)."""


def empty(count: int) -> Steady:
    """A table to be filled by :func:`put`."""
    voltage = np.zeros((7, SEGMENTS, count))
    voltage[REACH] = 1.0
    none = np.zeros(count)
    return Steady(
        end=np.zeros((SEGMENTS, count)),
        voltage=voltage,
        string=voltage.copy(),
        line=voltage.copy(),
        capacitor=voltage.copy(),
        valley=none,
        crest=none.copy(),
        y_valley=none.copy(),
        y_crest=none.copy(),
        dark=np.zeros(count, dtype=bool),
    )


def put(table: Steady, rows: IntArray, part: Steady) -> None:
    """Write the columns of a part into a table."""
    for name in Steady.__slots__:
        getattr(table, name)[..., rows] = getattr(part, name)


def assemble(  # noqa: PLR0913  (the parts of a table)
    circuit: Circuit,
    end: FloatArray,
    voltage: FloatArray,
    line: FloatArray | None,
    extremes: tuple[FloatArray, FloatArray, FloatArray, FloatArray],
    dark: BoolArray,
) -> Steady:
    """Derive the string and reservoir currents from the voltages.

    Args:
        circuit: The operating points.
        end: Ends of the segments, shape (6, n).
        voltage: Curves of y, shape (7, 6, n).
        line: Curves of the line current where they are known better than as the sum of string
            and reservoir current, shape (7, 6, n).
        extremes: Phase of valley and of crest, voltage there.
        dark: Whether the string is without current while the bridge blocks.
    """
    string = voltage.copy()
    string[:TERMS] /= circuit.string
    string[:TERMS, REGULATED] = 0.0
    string[CONST, REGULATED] = circuit.current
    string[:TERMS, CONDUCTING:] *= ~dark
    capacitor = derivative(voltage)
    capacitor[:TERMS] *= circuit.susceptance
    if line is None:
        line = capacitor.copy()
        line[:TERMS] += string[:TERMS]
    line[:TERMS, CONDUCTING:] = 0.0
    return Steady(end, voltage, string, line, capacitor, *extremes, dark)


def discharging(
    circuit: Circuit, start: FloatArray, begin: FloatArray, stop: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Curves of y over the two blocking segments, shape (7, n), and where the second begins.

    Where regulation lasts, the second segment is empty to the last digit: on a steep slope a
    rounding of its length would count.

    Args:
        circuit: Operating points with a reservoir.
        start: Where blocking starts, radians.
        begin: Voltage above V_0 at the start.
        stop: Where blocking stops, radians.
    """
    lasts = regulated_for(circuit, begin)
    regulated = np.minimum(lasts, stop - start)
    turn = np.where(lasts < stop - start, start + regulated, stop)
    first = curve(start, const=begin, ramp=-circuit.current / circuit.susceptance)
    left = begin - regulated * circuit.current / circuit.susceptance
    second = curve(turn, circuit.susceptance * circuit.string, decay=left)
    return first, second, turn
