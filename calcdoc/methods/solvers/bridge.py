"""Steady state of a bridge rectifier, its reservoir, an LED string and a series regulator.

Sources: the linear pieces are Kirchhoff's laws, see :mod:`.circuit`, :mod:`.conducting` and
:mod:`.blocking`; for an ideal source and a constant current they give the exact forms of the
capacitor-input rectifier (constant current: conduction ends at arcsin(I/(ω·C·V)) behind the crest,
starts at arccos(V_min/V) before it).
"""

from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import ArrayLike

from calcdoc.methods.solvers.circuit import BoolArray, FloatArray, IntArray, circuit
from calcdoc.methods.solvers.given import COLUMNS, Reason, columns, refused
from calcdoc.methods.solvers.results import quantities


@dataclass(frozen=True, slots=True)
class BridgeSteadyState:
    """Results in SI units (V, A, W, VA, radians), shape (n,) unless said; NaN with a reason."""

    V_max: FloatArray
    """Greatest reservoir voltage."""
    V_min: FloatArray
    """Least reservoir voltage; 0 V without a reservoir."""
    V_mean: FloatArray
    ripple: FloatArray
    """V_max − V_min, peak to peak."""
    I_s_rms: FloatArray
    """Line current."""
    I_s_peak: FloatArray
    I_D_mean: FloatArray
    """Mean current of each of the four diodes: half the mean of the rectified current."""
    I_C_rms: FloatArray
    """Reservoir ripple current."""
    P_in: FloatArray
    """Active power at the source, in front of R_s."""
    S_in: FloatArray
    """Apparent power, V_s·I_s_rms."""
    power_factor: FloatArray
    displacement_factor: FloatArray
    """cos φ₁, cosine of the angle between voltage and fundamental current."""
    THD: FloatArray
    """Rms of the harmonics 3 to 39 over the fundamental, as IEC 61000-3-2 counts (orders to 40)."""
    THD_total: FloatArray
    """Rms of all harmonics without end over the fundamental: √(I_s_rms² − I_1²)/I_1."""
    I_h: FloatArray
    """Rms of the odd harmonics 1 to 39, shape (20, n)."""
    I_string_mean: FloatArray
    I_string_min: FloatArray
    I_string_max: FloatArray
    P_string: FloatArray
    P_reg: FloatArray
    P_R: FloatArray
    """Loss in R_s."""
    P_D: FloatArray
    """Loss in the bridge, two diodes at a time."""
    theta_start: FloatArray
    """Where the line current starts, from the zero crossing of the mains."""
    theta_end: FloatArray
    conduction_angle: FloatArray
    """theta_end − theta_start; 0 without current."""
    percent_flicker: FloatArray
    """Of the string current, in percent."""
    flicker_index: FloatArray
    balance: FloatArray
    """(P_in − P_string − P_reg − P_R − P_D)/P_in; 0 without power."""
    reaches: BoolArray
    """Whether the string current ever reaches I_set; false where I_set is zero."""
    reason: IntArray
    """A :class:`.Reason` where numbers are missing."""


def bridge_steady_state(  # noqa: PLR0913  (the nine quantities that make a circuit)
    V_s: ArrayLike,
    f_s: ArrayLike,
    R_s: ArrayLike,
    V_D: ArrayLike,
    C: ArrayLike,
    I_set: ArrayLike,
    V_knee: ArrayLike,
    R_string: ArrayLike,
    V_drop: ArrayLike,
) -> BridgeSteadyState:
    """The periodic steady state of many operating points.

    Args:
        V_s: Line voltage, rms of a sinusoid, above 0 V. Each quantity is a number or an array of
            shape (n,); they are broadcast.
        f_s: Line frequency in hertz, above zero.
        R_s: Source and series resistance in ohms; 0 is an ideal source.
        V_D: Forward voltage of each diode; two conduct.
        C: Reservoir capacitance in farads; 0 is no reservoir.
        I_set: Current the regulator holds, in amperes.
        V_knee: Voltage at which the string begins to conduct.
        R_string: Slope of the string in ohms; 0 is computed as a negligible slope, see
            :data:`.circuit.LEAST_SLOPE`.
        V_drop: Voltage the regulator needs.

    Returns:
        The results; a column with a quantity out of range is NaN and says why.

    Raises:
        ValueError: If the quantities have no common shape of one axis.
    """
    given = columns(
        V_s=V_s,
        f_s=f_s,
        R_s=R_s,
        V_D=V_D,
        C=C,
        I_set=I_set,
        V_knee=V_knee,
        R_string=R_string,
        V_drop=V_drop,
    )
    reason = refused(given, ("V_s", "f_s"))
    count = len(reason)
    found = {
        each.name: np.full((20, count) if each.name == "I_h" else count, np.nan)
        for each in fields(BridgeSteadyState)
        if each.name not in ("reaches", "reason")
    }
    reaches = np.zeros(count, dtype=bool)
    rows = np.flatnonzero(reason == Reason.NONE)
    with np.errstate(all="ignore"):
        for begin in range(0, len(rows), COLUMNS):
            some = rows[begin : begin + COLUMNS]
            made = quantities(circuit(**{name: each[some] for name, each in given.items()}))
            reason[some], reaches[some] = made.reason, made.reaches
            for name, each in made.numbers.items():
                found[name][..., some] = each
    return BridgeSteadyState(**found, reaches=reaches, reason=reason)
