"""The bridge conducts through a series resistance: the linear circuit and its events.

With the string's conductance g = 1/R_string where it follows its slope, and g = 0 where the
regulator holds I_set,

    ω·C·dy/dθ = (V_amp·sin θ − offset − y)/R_s − (g·y or I_set),
    T = ω·C·R_s/(1 + g·R_s),

and the line current is the mains behind an admittance, Y = (g + jωC)/(1 + R_s·(g + jωC)), with
the same decay. Two facts keep every search inside a bracket. Where dy/dθ is zero its own slope is
that of the mains, so y has one valley at most before the crest of the mains and one crest at most
behind it. And the line current begins at zero, and falls back to zero once.
"""

from dataclasses import dataclass, fields

import numpy as np

from calcdoc.methods.solvers.circuit import CREST, BoolArray, Circuit, FloatArray, IntArray
from calcdoc.methods.solvers.curves import (
    CLOSE,
    COS,
    DECAY,
    REACH,
    START,
    curve,
    derivative,
    falling_root,
    lowered,
    rising_root,
    value,
)


@dataclass(frozen=True, slots=True)
class Conduction:
    """The events of one conduction, phases in radians and voltages above V_0, shape (n,).

    In order; what does not happen falls together with a neighbour: the string is regulated
    from ``start`` to ``leaves``, follows its slope to ``enters``, is regulated to ``drops``,
    and follows its slope to ``end``.
    """

    start: FloatArray
    leaves: FloatArray
    enters: FloatArray
    drops: FloatArray
    end: FloatArray
    valley: FloatArray
    crest: FloatArray
    y_start: FloatArray
    y_leaves: FloatArray
    y_enters: FloatArray
    y_drops: FloatArray
    y_end: FloatArray
    y_valley: FloatArray
    y_crest: FloatArray

    def take(self, which: BoolArray) -> "Conduction":
        """Some of the columns."""
        return Conduction(*(getattr(self, each.name)[which] for each in fields(self)))

    def put(self, rows: IntArray, part: "Conduction") -> None:
        """Write the columns of a part."""
        for each in fields(self):
            getattr(self, each.name)[rows] = getattr(part, each.name)


def voltage(circuit: Circuit, regulated: bool, start: FloatArray, begin: FloatArray) -> FloatArray:
    """The curves of y from a start, shape (7, n)."""
    share = 1.0 if regulated else circuit.string / (circuit.source + circuit.string)
    reach = circuit.susceptance * circuit.source * share
    forced = share * circuit.amplitude / (1.0 + reach * reach)
    const = -share * circuit.offset - (circuit.source * circuit.current if regulated else 0.0)
    made = curve(start, reach, const=const, sin=forced, cos=-reach * forced)
    made[DECAY] = begin - (const + forced * (np.sin(start) - reach * np.cos(start)))
    return made


def line_current(circuit: Circuit, regulated: bool, of: FloatArray) -> FloatArray:
    """The curves of the line current that belong to those of y, shape (7, n)."""
    lead = circuit.susceptance
    if regulated:
        scale = circuit.amplitude / (1.0 + (circuit.source * lead) ** 2)
        const, in_phase = circuit.current, scale * circuit.source * lead * lead
    else:
        both = circuit.source + circuit.string
        scale = circuit.amplitude / (both**2 + (circuit.source * circuit.string * lead) ** 2)
        const = -circuit.offset / both
        in_phase = scale * (both + circuit.source * (circuit.string * lead) ** 2)
        scale = scale * circuit.string**2
    made = curve(of[START], of[REACH], const=const, sin=in_phase, decay=-of[DECAY] / circuit.source)
    made[COS] = scale * lead
    return made


class _Course:
    """Working arrays of one conduction, filled for those columns an event concerns."""

    def __init__(
        self,
        circuit: Circuit,
        start: FloatArray,
        begin: FloatArray,
        near: Conduction | None,
        close: float,
    ) -> None:
        self.circuit, self.near, self.close = circuit, near, close
        self.limit = np.pi - circuit.rises_past(np.zeros_like(start))
        """Here the mains falls past V_0; no later than this the line current ends."""
        self.phase = {"start": start, "leaves": start.copy()}
        self.level = {"start": begin, "leaves": begin.copy()}

    def open(self, name: str, like: str) -> None:
        """An event that so far falls together with another."""
        self.phase[name], self.level[name] = self.phase[like].copy(), self.level[like].copy()

    def put(self, name: str, rows: IntArray, phase: FloatArray, level: FloatArray) -> None:
        self.phase[name][rows], self.level[name][rows] = phase, level

    def guess(self, name: str, rows: IntArray, otherwise: FloatArray) -> FloatArray:
        """Where an event was on a course nearby."""
        if self.near is None:
            return otherwise
        guess: FloatArray = getattr(self.near, name)[rows]
        return guess

    def from_event(
        self, name: str, rows: IntArray, regulated: bool
    ) -> tuple[Circuit, FloatArray, FloatArray]:
        """Circuit, start and curves of y of some columns from an event on."""
        some, start = self.circuit.take(rows), self.phase[name][rows]
        return some, start, voltage(some, regulated, start, self.level[name][rows])


def conduction(
    circuit: Circuit,
    start: FloatArray,
    begin: FloatArray,
    near: Conduction | None = None,
    close: float = CLOSE,
) -> Conduction:
    """Follow one conduction from its start to its end.

    Args:
        circuit: Operating points with a reservoir and a series resistance.
        start: Where the mains meets the reservoir, radians, up to the crest, shape (n,).
        begin: Voltage above V_0 there, shape (n,), not negative.
        near: A course of the same circuits from voltages nearby, to begin the searches at.
        close: How closely to find events.
    """
    course = _Course(circuit, start, begin, near, close)
    dips = _fall(course)
    rises = _rise(course, dips)
    falls = _hold(course, ~dips | rises)
    _end(course, (dips & ~rises) | falls)
    return Conduction(
        **course.phase, **{f"y_{name}": level for name, level in course.level.items()}
    )


def _fall(course: _Course) -> BoolArray:
    """From the start to the valley while regulated; whether regulation is lost before it."""
    circuit = course.circuit
    dips: BoolArray = course.level["start"] <= circuit.regulates
    course.open("valley", "start")
    rows = np.flatnonzero(~dips)
    some, start, y = course.from_event("start", rows, regulated=True)
    guess = course.guess("valley", rows, start)
    valley = rising_root(derivative(y), start, np.full_like(start, CREST), guess, course.close)
    level = value(y, valley)
    course.put("valley", rows, valley, level)
    course.put("leaves", rows, valley, level)
    lost = level < some.regulates
    dips[rows] = lost
    falling = lowered(y[:, lost], some.regulates[lost])
    crossing = falling_root(falling, start[lost], valley[lost], start[lost], course.close)
    course.put("leaves", rows[lost], crossing, some.regulates[lost])
    return dips


def _rise(course: _Course, dips: BoolArray) -> BoolArray:
    """Along the slope of the string through the valley; whether regulation is reached."""
    course.open("enters", "leaves")
    course.open("crest", "leaves")
    rises = np.zeros_like(dips)
    rows = np.flatnonzero(dips)
    some, start, y = course.from_event("leaves", rows, regulated=False)
    middle, slope = np.full_like(start, CREST), derivative(y)
    valley = rising_root(slope, start, middle, course.guess("valley", rows, start), course.close)
    course.put("valley", rows, valley, value(y, valley))
    guess = course.guess("crest", rows, middle)
    crest = falling_root(slope, middle, course.limit[rows], guess, course.close)
    level = value(y, crest)
    course.put("crest", rows, crest, level)
    course.put("enters", rows, crest, level)
    up = level > some.regulates
    rises[rows] = up
    rising = lowered(y[:, up], some.regulates[up])
    guess = course.guess("enters", rows, 0.5 * (valley + crest))[up]
    crossing = rising_root(rising, valley[up], crest[up], guess, course.close)
    course.put("enters", rows[up], crossing, some.regulates[up])
    return rises


def _hold(course: _Course, holds: BoolArray) -> BoolArray:
    """Regulated over the crest; whether regulation is lost before the line current ends."""
    course.open("drops", "enters")
    course.open("end", "enters")
    falls = np.zeros_like(holds)
    rows = np.flatnonzero(holds)
    some, start, y = course.from_event("enters", rows, regulated=True)
    last = np.pi - some.rises_past(some.regulates)
    first = np.maximum(start, CREST)
    crest = falling_root(
        derivative(y), first, last, course.guess("crest", rows, first), course.close
    )
    course.put("crest", rows, crest, value(y, crest))
    lost, line = last.copy(), line_current(some, True, y)
    under = value(y, last) < some.regulates
    sinking = lowered(y[:, under], some.regulates[under])
    lost[under] = falling_root(sinking, crest[under], last[under], last[under], course.close)
    falls[rows] = under = under & (value(line, lost) > 0.0)
    end, held = lost.copy(), ~under
    guess = course.guess("end", rows, 0.5 * (crest + lost))[held]
    end[held] = falling_root(line[:, held], crest[held], lost[held], guess, course.close)
    course.put("drops", rows, end, value(y, end))
    course.put("end", rows, end, value(y, end))
    course.put("drops", rows[under], lost[under], some.regulates[under])
    return falls


def _end(course: _Course, slopes: BoolArray) -> None:
    """Along the slope of the string to the end of the line current."""
    rows = np.flatnonzero(slopes)
    some, start, y = course.from_event("drops", rows, regulated=False)
    limit = course.limit[rows]
    guess = course.guess("end", rows, 0.5 * (start + limit))
    end = falling_root(line_current(some, False, y), start, limit, guess, course.close)
    course.put("end", rows, end, value(y, end))
