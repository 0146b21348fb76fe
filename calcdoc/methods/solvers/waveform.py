"""The waveforms of one operating point at given phases."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from calcdoc.methods.solvers.circuit import FloatArray, circuit
from calcdoc.methods.solvers.curves import START, value
from calcdoc.methods.solvers.given import Reason, columns, refused
from calcdoc.methods.solvers.steady import steady

TWO_CYCLES = 4.0 * np.pi


@dataclass(frozen=True, slots=True)
class Waveform:
    """Voltage and currents over the phase, each of shape (m,); NaN with a reason."""

    phase: FloatArray
    """Radians from the rising zero crossing of the mains."""
    V_C: FloatArray
    """Reservoir voltage, volts."""
    I_s: FloatArray
    """Line current with its sign, amperes."""
    I_string: FloatArray
    """String current, amperes."""
    reason: Reason


def bridge_waveform(  # noqa: PLR0913  (the nine quantities that make a circuit)
    V_s: float,
    f_s: float,
    R_s: float,
    V_D: float,
    C: float,
    I_set: float,
    V_knee: float,
    R_string: float,
    V_drop: float,
    *,
    phases: ArrayLike | None = None,
) -> Waveform:
    """The steady waveforms of one operating point, from the segments of its half period.

    Args:
        V_s: Line voltage, rms; this and the others as in
            :func:`.bridge.bridge_steady_state`.
        f_s: Line frequency in hertz.
        R_s: Source and series resistance in ohms.
        V_D: Forward voltage of each diode.
        C: Reservoir capacitance in farads.
        I_set: Current the regulator holds, in amperes.
        V_knee: Voltage at which the string begins to conduct.
        R_string: Slope of the string in ohms.
        V_drop: Voltage the regulator needs.
        phases: Where, in radians, shape (m,); without it two cycles in steps of half a degree.

    Raises:
        ValueError: If a quantity is not one number or phases are not finite or have two axes.
    """
    phase = np.linspace(0.0, TWO_CYCLES, 1441) if phases is None else np.asarray(phases, float)
    if phase.ndim != 1 or not np.isfinite(phase).all():
        raise ValueError(f"phases are finite numbers along one axis, found {phase.ndim} axes")
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
    if len(reason) != 1:
        raise ValueError(f"a waveform is of one operating point, found {len(reason)}")
    if reason[0] != Reason.NONE:
        none = np.full_like(phase, np.nan)
        return Waveform(phase, none, none.copy(), none.copy(), Reason(int(reason[0])))
    with np.errstate(all="ignore"):
        return _at(phase, given)


def _at(phase: FloatArray, given: dict[str, FloatArray]) -> Waveform:
    point = circuit(**given)
    state = steady(point)
    half, along = np.divmod(phase, np.pi)
    start, end = state.voltage[START, :, 0], state.end[:, 0]
    along = np.where(along < start[0], along + np.pi, along)
    inside = (along >= start[:, None]) & (along <= end[:, None]) & (end > start)[:, None]
    segment = np.argmax(inside, axis=0)
    found = inside[segment, np.arange(len(phase))]
    within = np.clip(along, start[segment], end[segment])
    voltage, line, string = (
        np.where(found, value(each[:, segment, 0], within), 0.0)
        for each in (state.voltage, state.line, state.string)
    )
    finite = bool(np.isfinite(voltage).all() and np.isfinite(line).all())
    if not finite:
        voltage = line = string = np.full_like(phase, np.nan)
    return Waveform(
        phase,
        np.where(found, voltage + point.begin, voltage),
        np.where(half % 2.0 == 0.0, line, -line),
        string,
        Reason.NONE if finite else Reason.NOT_BALANCED,
    )
