"""The bridge blocks: the reservoir alone feeds the string, and falls until the mains meets it.

regulated:  ω·C·dy/dθ = −I_set               y falls along a straight line to R_string·I_set
slope:      ω·C·dy/dθ = −y/R_string          y decays with T = ω·C·R_string
"""

from dataclasses import dataclass

import numpy as np

from calcdoc.methods.solvers.circuit import CREST, Circuit, FloatArray
from calcdoc.methods.solvers.curves import CLOSE, curve, rising_root


@dataclass(frozen=True, slots=True)
class Discharge:
    """The fall from a voltage over a length of phase; fields of shape (n,)."""

    regulated: FloatArray
    """How long the set current flows, radians."""
    end: FloatArray
    """Voltage above V_0 at the end."""
    damping: FloatArray
    """−ln of what is left at the end of a small change at the beginning."""


def discharge(circuit: Circuit, begin: FloatArray, length: FloatArray) -> Discharge:
    """Let the reservoir feed the string.

    Args:
        circuit: Operating points with a reservoir.
        begin: Voltage above V_0 at the beginning, shape (n,), not negative.
        length: Phase it lasts, radians, shape (n,).
    """
    regulated = np.minimum(regulated_for(circuit, begin), length)
    left = begin - regulated * circuit.current / circuit.susceptance
    damping = (length - regulated) / (circuit.susceptance * circuit.string)
    return Discharge(regulated, left * np.exp(-damping), damping)


def regulated_for(circuit: Circuit, begin: FloatArray) -> FloatArray:
    """How long the reservoir alone can hold the set current, radians, shape (n,)."""
    above = np.maximum(begin - circuit.regulates, 0.0)
    lasts: FloatArray = above * circuit.susceptance / circuit.current
    return lasts


def meets(
    circuit: Circuit, begin: FloatArray, near: FloatArray | None = None, close: float = CLOSE
) -> FloatArray:
    """The phase at which the rising mains meets the falling reservoir, radians, shape (n,).

    What the mains offers bends down and the discharge bends up, so that their difference has one
    zero between the zero crossing and the crest.

    Args:
        circuit: Operating points with a reservoir whose mains peak passes V_0.
        begin: Voltage above V_0 at the zero crossing, from 0 V to the peak offered, shape (n,).
        near: Where they met from voltages nearby, to begin the search at.
        close: How closely to find it.
    """
    lasts = np.minimum(regulated_for(circuit, begin), CREST)
    left = np.minimum(begin, circuit.regulates)
    still = circuit.offered(lasts) >= np.where(lasts < CREST, left, -np.inf)
    guess = circuit.rises_past(np.where(still, begin, left)) if near is None else near
    difference = curve(
        np.where(still, 0.0, lasts),
        circuit.susceptance * circuit.string,
        const=-circuit.offset - np.where(still, begin, 0.0),
        ramp=np.where(still, circuit.current / circuit.susceptance, 0.0),
        sin=circuit.amplitude,
        decay=np.where(still, 0.0, -left),
    )
    low, high = np.where(still, 0.0, lasts), np.where(still, lasts, CREST)
    return rising_root(difference, low, high, guess, close)
