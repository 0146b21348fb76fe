"""A bridge without a reservoir, with one or two regulators for two-step dimming.

The regulators stand side by side under the same string, and their currents add: each holds its
share, one is switched off to dim (set its current to zero in a case), and both need the same
dropout. Switching over from one current to another is the same circuit with one regulator at
another current, so adding covers both; the currents of two regulators in one string cannot do
anything else. Where the string current does not reach the sum, it is taken to divide as the set
currents do: with both fully on, their own resistances decide, which a designer does not set.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from calcdoc.methods.solvers.bridge import BridgeSteadyState, bridge_steady_state
from calcdoc.methods.solvers.circuit import FloatArray
from calcdoc.methods.solvers.given import columns


@dataclass(frozen=True, slots=True)
class BridgeDirect:
    """Steady state without a reservoir, in SI units, shape (n,)."""

    whole: BridgeSteadyState
    """Everything but the division between the regulators."""
    I_mean_1: FloatArray
    I_mean_2: FloatArray
    P_reg_1: FloatArray
    P_reg_2: FloatArray


def bridge_direct(  # noqa: PLR0913  (the quantities that make a circuit)
    V_s: ArrayLike,
    f_s: ArrayLike,
    R_s: ArrayLike,
    V_D: ArrayLike,
    I_set_1: ArrayLike,
    V_knee: ArrayLike,
    R_string: ArrayLike,
    V_drop: ArrayLike,
    I_set_2: ArrayLike = 0.0,
) -> BridgeDirect:
    """The steady state of many operating points without a reservoir.

    Args:
        V_s: Line voltage, rms; this and the others as in
            :func:`.bridge.bridge_steady_state`.
        f_s: Line frequency in hertz.
        R_s: Source and series resistance in ohms.
        V_D: Forward voltage of each diode.
        I_set_1: Current of the first regulator, in amperes.
        V_knee: Voltage at which the string begins to conduct.
        R_string: Slope of the string in ohms.
        V_drop: Voltage the regulators need.
        I_set_2: Current of the second regulator; 0 is none, or one that is switched off.

    Returns:
        The results; where either current is out of range both are NaN, with the reason in
        ``whole``.

    Raises:
        ValueError: If the quantities have no common shape of one axis.
    """
    given = columns(
        V_s=V_s,
        f_s=f_s,
        R_s=R_s,
        V_D=V_D,
        I_set_1=I_set_1,
        V_knee=V_knee,
        R_string=R_string,
        V_drop=V_drop,
        I_set_2=I_set_2,
    )
    first, second = given.pop("I_set_1"), given.pop("I_set_2")
    with np.errstate(all="ignore"):
        both = np.where(np.minimum(first, second) < 0.0, -1.0, first + second)
        whole = bridge_steady_state(**given, C=0.0, I_set=both)
        share = np.divide(first, both, out=np.zeros_like(both), where=both > 0.0)
        return BridgeDirect(
            whole=whole,
            I_mean_1=share * whole.I_string_mean,
            I_mean_2=(1.0 - share) * whole.I_string_mean,
            P_reg_1=share * whole.P_reg,
            P_reg_2=(1.0 - share) * whole.P_reg,
        )
