"""From the steady half period to the numbers a designer asks for, by exact integrals."""

from dataclasses import dataclass
from typing import Final

import numpy as np

from calcdoc.methods.solvers.circuit import BoolArray, Circuit, FloatArray, IntArray
from calcdoc.methods.solvers.curves import (
    CONST,
    REACH,
    SIN,
    START,
    derivative,
    falling_root,
    value,
)
from calcdoc.methods.solvers.given import Reason
from calcdoc.methods.solvers.harmonics import amplitudes
from calcdoc.methods.solvers.integrals import Terms, integral, over, product
from calcdoc.methods.solvers.light import flicker_index, percent_flicker
from calcdoc.methods.solvers.segments import CONDUCTING, REGULATED, SEGMENTS, Steady
from calcdoc.methods.solvers.steady import steady

BALANCED: Final = 1e-6
"""Greatest share of the power that may be missing."""


@dataclass(frozen=True, slots=True)
class Quantities:
    """Results by name, shape (n,) or for ``I_h`` (20, n), with what is said beside them."""

    numbers: dict[str, FloatArray]
    reaches: BoolArray
    reason: IntArray


def quantities(circuit: Circuit) -> Quantities:
    """All results of some operating points."""
    state = steady(circuit)
    by = over(state.voltage, state.end)
    numbers = _voltages(circuit, state, by) | _line(circuit, state, by)
    numbers |= _string(circuit, state, by)
    numbers |= _powers(circuit, state, by, numbers)
    numbers |= _spectrum(state, numbers)
    numbers |= _balance(numbers)
    reaches = (state.y_crest >= circuit.regulates * (1.0 - 1e-12)) & (circuit.current > 0.0)
    return Quantities(numbers, reaches, _missing(numbers))


def _mean(parts: FloatArray) -> FloatArray:
    """The mean over half a period of integrals over segments, shape (n,)."""
    mean: FloatArray = parts.sum(axis=0) / np.pi
    return mean


def _share(part: FloatArray, whole: FloatArray) -> FloatArray:
    """A quotient; NaN where the whole is zero."""
    share: FloatArray = np.divide(part, whole, out=np.full_like(whole, np.nan), where=whole > 0.0)
    return share


def _voltages(circuit: Circuit, state: Steady, by: Terms) -> dict[str, FloatArray]:
    covered = _mean(by.one)
    return {
        "V_max": state.y_crest + circuit.begin,
        "V_min": state.y_valley + circuit.begin,
        "V_mean": _mean(integral(state.voltage, by)) + circuit.begin * covered,
        "ripple": state.y_crest - state.y_valley,
    }


def _line(circuit: Circuit, state: Steady, by: Terms) -> dict[str, FloatArray]:
    mean = _mean(integral(state.line, by))
    rms = np.sqrt(np.maximum(_mean(product(state.line, state.line, by)), 0.0))
    flows = rms > 0.0
    start, end = state.line[START, 0], state.end[CONDUCTING - 1]
    return {
        "I_s_rms": rms,
        "I_s_peak": _peak(state),
        "I_D_mean": 0.5 * mean,
        "I_C_rms": np.sqrt(np.maximum(_mean(product(state.capacitor, state.capacitor, by)), 0.0)),
        "P_R": circuit.source * rms * rms,
        "P_D": circuit.diodes * mean,
        "theta_start": np.where(flows, start, np.nan),
        "theta_end": np.where(flows, end, np.nan),
        "conduction_angle": np.where(flows, end - start, 0.0),
    }


def _peak(state: Steady) -> FloatArray:
    """Greatest line current: at an event, or where its slope falls through zero between two.

    Within a segment the slope turns from positive to negative once at most.
    """
    line = state.line[:, :CONDUCTING].reshape(len(state.line), -1)
    start, end = line[START], state.end[:CONDUCTING].reshape(-1)
    best = np.where(end > start, np.maximum(value(line, start), value(line, end)), 0.0)
    slope = derivative(line)
    turns = (end > start) & (value(slope, start) > 0.0) & (value(slope, end) < 0.0)
    rows = np.flatnonzero(turns)
    low, high = start[rows], end[rows]
    summit = falling_root(slope[:, rows], low, high, 0.5 * (low + high))
    best[rows] = np.maximum(best[rows], value(line[:, rows], summit))
    greatest: FloatArray = best.reshape(CONDUCTING, -1).max(axis=0)
    return np.maximum(greatest, 0.0)


def _string(circuit: Circuit, state: Steady, by: Terms) -> dict[str, FloatArray]:
    mean = _mean(integral(state.string, by))
    least = np.clip(state.y_valley / circuit.string, 0.0, circuit.current)
    greatest = np.clip(state.y_crest / circuit.string, 0.0, circuit.current)
    least = np.where(state.dark, 0.0, least)
    steady_light = np.where(mean > 0.0, 0.0, np.nan)
    return {
        "I_string_mean": mean,
        "I_string_min": least,
        "I_string_max": greatest,
        "percent_flicker": percent_flicker(least, greatest),
        "flicker_index": np.where(least < greatest, flicker_index(state, mean), steady_light),
    }


def _powers(
    circuit: Circuit, state: Steady, by: Terms, found: dict[str, FloatArray]
) -> dict[str, FloatArray]:
    mains = np.zeros((7, SEGMENTS, len(circuit.amplitude)))
    mains[SIN] = circuit.amplitude
    mains[REACH], mains[START] = state.line[REACH], state.line[START]
    mean, square = found["I_string_mean"], _mean(product(state.string, state.string, by))
    lit = REGULATED[:, None] & (state.string[CONST] > 0.0)
    above = np.where(lit, integral(state.voltage, by) - circuit.regulates * by.one, 0.0)
    power = np.maximum(_mean(product(mains, state.line, by)), 0.0)
    apparent = circuit.amplitude / np.sqrt(2.0) * found["I_s_rms"]
    return {
        "P_in": power,
        "S_in": apparent,
        "power_factor": np.minimum(_share(power, apparent), 1.0),
        "P_string": (circuit.begin - circuit.drop) * mean + circuit.string * square,
        "P_reg": circuit.drop * mean + circuit.current * _mean(above),
    }


def _spectrum(state: Steady, found: dict[str, FloatArray]) -> dict[str, FloatArray]:
    c = amplitudes(state.line[:, :CONDUCTING], state.end[:CONDUCTING])
    rms = np.abs(c) / np.sqrt(2.0)
    first, total = rms[0], found["I_s_rms"]
    return {
        "I_h": rms,
        "THD": _share(np.sqrt(np.sum(rms[1:] ** 2, axis=0)), first),
        "THD_total": _share(np.sqrt(np.maximum(total * total - first * first, 0.0)), first),
        "displacement_factor": _share(-c[0].imag, np.abs(c[0])),
    }


def _balance(found: dict[str, FloatArray]) -> dict[str, FloatArray]:
    used = found["P_string"] + found["P_reg"] + found["P_R"] + found["P_D"]
    return {"balance": np.where(found["P_in"] > 0.0, 1.0 - _share(used, found["P_in"]), 0.0)}


def _missing(found: dict[str, FloatArray]) -> IntArray:
    """Why results are missing; where they do not balance all of them are taken back."""
    broken = ~(np.abs(found["balance"]) <= BALANCED)
    flows = found["I_s_rms"] > 0.0
    for name in ("V_max", "V_min", "V_mean", "P_string", "P_reg", "I_s_peak", "I_C_rms"):
        broken |= ~np.isfinite(found[name])
    broken |= flows & ~np.isfinite(found["THD"])
    for name, each in found.items():
        found[name] = np.where(broken, np.nan, each)
    reason: IntArray = np.where(
        broken, Reason.NOT_BALANCED, np.where(flows, Reason.NONE, Reason.NO_CURRENT)
    )
    return reason
