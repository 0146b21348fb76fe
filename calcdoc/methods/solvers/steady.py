"""The steady half period of any circuit: one function for each kind, and which applies.

- *idle*: nothing flows, because the peak offered stays below V_0 or the set current is zero. The
  reservoir stands at the peak offered, to which it was charged once.
- *direct*: no reservoir. The string follows the mains; all phases are closed forms. Between two
  pulses the node behind the bridge is taken to follow the rectified mains down to zero, as the
  leakage of any real string makes it.
- *ideal source*: a reservoir without series resistance. While the bridge conducts the reservoir
  follows the mains, and the line current is ω·C·dv/dθ plus the string current; conduction ends in
  closed form where that is zero, independently of its start, and only the start is searched.
- *resistive*: a reservoir behind a resistance; a fixed point.
"""

import numpy as np

from calcdoc.methods.solvers.blocking import discharge, meets
from calcdoc.methods.solvers.circuit import CREST, Circuit, FloatArray
from calcdoc.methods.solvers.conducting import line_current, voltage
from calcdoc.methods.solvers.curves import curve
from calcdoc.methods.solvers.fixed_point import steady_conduction
from calcdoc.methods.solvers.segments import (
    Steady,
    assemble,
    discharging,
    empty,
    put,
)


def steady(circuit: Circuit) -> Steady:
    """The steady half period of operating points of all kinds."""
    table = empty(len(circuit.amplitude))
    direct = circuit.susceptance == 0.0
    flows = (circuit.amplitude > circuit.offset) & (circuit.current > 0.0)
    ideal = circuit.source == 0.0
    for which, solve in (
        (~direct & ~flows, _idle),
        (direct, _direct),
        (~direct & flows & ideal, _ideal_source),
        (~direct & flows & ~ideal, _resistive),
    ):
        rows = np.flatnonzero(which)
        if len(rows):
            put(table, rows, solve(circuit.take(rows)))
    return table


def _idle(circuit: Circuit) -> Steady:
    crest = np.full_like(circuit.amplitude, CREST)
    level = np.maximum(circuit.amplitude - circuit.diodes, 0.0) - circuit.begin
    still = curve(crest, const=level)
    none = np.ones(len(crest), dtype=bool)
    end = np.stack([crest] * 5 + [crest + np.pi])
    return assemble(
        circuit, end, np.stack([still] * 6, axis=1), None, (crest, crest, level, level), none
    )


def _direct(circuit: Circuit) -> Steady:
    zero = np.zeros_like(circuit.amplitude)
    both = circuit.source + circuit.string
    start = circuit.rises_past(zero)
    enters = circuit.rises_past(both * circuit.current)
    follows = circuit.rises_past(-circuit.begin)
    share = circuit.string / both
    slope = curve(zero, const=-share * circuit.offset, sin=share * circuit.amplitude)
    drop = circuit.source * circuit.current
    holds = curve(zero, const=-circuit.offset - drop, sin=circuit.amplitude)
    falling = curve(zero, const=-circuit.offset, sin=circuit.amplitude)
    rising = curve(zero, const=-circuit.offset, sin=-circuit.amplitude)
    curves = np.stack([slope, slope, holds, slope, falling, rising], axis=1)
    starts = [start, start, enters, np.pi - enters, np.pi - start, np.pi + follows]
    ends = [start, enters, np.pi - enters, np.pi - start, np.pi - follows, np.pi + start]
    curves[5] = np.stack(starts)
    top = circuit.offered(np.full_like(zero, CREST))
    lit = np.where(share * top <= circuit.regulates, share * top, top - drop)
    crest = np.where(top > 0.0, lit, np.maximum(top, -circuit.begin))
    extremes = (zero, np.full_like(zero, CREST), -circuit.begin, crest)
    return assemble(circuit, np.stack(ends), curves, None, extremes, np.ones(len(zero), dtype=bool))


def _ideal_source(circuit: Circuit) -> Steady:
    falls = np.pi - circuit.rises_past(circuit.regulates)
    end = _ideal_end(circuit, falls)
    begin = discharge(circuit, np.maximum(circuit.offered(end), 0.0), np.pi - end).end
    start = meets(circuit, begin)
    enters = np.maximum(start, np.pi - falls)
    drops = np.clip(falls, enters, end)
    level = np.maximum(circuit.offered(end), 0.0)
    mains = curve(start, const=-circuit.offset, sin=circuit.amplitude)
    *blocking, turn = discharging(circuit, end, level, np.pi + start)
    curves = np.stack([mains] * 4 + blocking, axis=1)
    curves[5, :4] = np.stack([start, start, enters, drops])
    ends = np.stack([start, enters, drops, end, turn, np.pi + start])
    crest = np.full_like(start, CREST)
    extremes = (start, crest, circuit.offered(start), circuit.offered(crest))
    return assemble(circuit, ends, curves, None, extremes, np.zeros(len(start), dtype=bool))


def _ideal_end(circuit: Circuit, falls: FloatArray) -> FloatArray:
    """Where ω·C·V_amp·cos θ plus the string current is zero behind the crest.

    Args:
        circuit: Operating points with a reservoir and no series resistance.
        falls: Where the mains falls below what the regulator needs, radians, shape (n,).
    """
    charge = circuit.susceptance * circuit.amplitude
    regulated = np.arccos(np.clip(-circuit.current / charge, -1.0, 1.0))
    lag = np.arctan2(1.0, circuit.susceptance * circuit.string)
    tilt = np.hypot(1.0, circuit.susceptance * circuit.string)
    slope = lag + np.arccos(np.clip(circuit.offset / (circuit.amplitude * tilt), -1.0, 1.0))
    held = (regulated <= falls) & (circuit.current < charge)
    return np.where(held, regulated, np.maximum(slope, falls))


def _resistive(circuit: Circuit) -> Steady:
    course = steady_conduction(circuit)
    stop = np.pi + course.start
    conducting = [
        voltage(circuit, True, course.start, course.y_start),
        voltage(circuit, False, course.leaves, course.y_leaves),
        voltage(circuit, True, course.enters, course.y_enters),
        voltage(circuit, False, course.drops, course.y_drops),
    ]
    *blocking, turn = discharging(circuit, course.end, course.y_end, stop)
    curves = np.stack([*conducting, *blocking], axis=1)
    lines = [
        line_current(circuit, at % 2 == 0, each) for at, each in enumerate([*conducting, *blocking])
    ]
    ends = [course.leaves, course.enters, course.drops, course.end]
    ends += [turn, stop]
    extremes = (course.valley, course.crest, course.y_valley, course.y_crest)
    dark = np.zeros(len(stop), dtype=bool)
    return assemble(circuit, np.stack(ends), curves, np.stack(lines, axis=1), extremes, dark)
