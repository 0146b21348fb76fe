"""The circuit of bridge, reservoir, string and regulator, as columns of a few combined values.

One column is one operating point. With the phase θ = ω·t from the mains' zero crossing, the
voltage the bridge offers in every half period, behind two diodes, is

    e(θ) = V_amp·sin θ − 2·V_D,        0 ≤ θ ≤ π.

String and regulator in series draw, from the reservoir voltage v,

    i(v) = min(max(v − V_0, 0)/R_string, I_set),        V_0 = V_knee + V_drop:

the set current from V_0 + R_string·I_set on; below that the regulator is fully on, keeps its
dropout V_drop, and the current follows the slope of the string; below V_0 nothing flows.
All voltages inside the solver are counted from V_0: y = v − V_0, so that the string current is
y/R_string without a difference of nearly equal numbers.
"""

from dataclasses import dataclass, fields
from typing import Final

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]
IntArray = NDArray[np.intp]

CREST: Final = np.pi / 2
LEAST_SLOPE: Final = 1e-7
"""Least slope of the string, as a share of V_amp/I_set.

A string without slope has no current of its own at V_0: it takes what the rest of the circuit
lets it. This is the limit of ever steeper slopes, and is computed as the slope whose whole
regulating range is this share of the mains amplitude, less than any result is read to.
"""


@dataclass(frozen=True, slots=True)
class Circuit:
    """Operating points as columns, each field of shape (n,), in volts, ohms, amperes, siemens."""

    amplitude: FloatArray
    """V_amp = √2·V_s."""
    diodes: FloatArray
    """2·V_D."""
    begin: FloatArray
    """V_0 = V_knee + V_drop, where the string begins to conduct."""
    drop: FloatArray
    """V_drop, the part of V_0 that is the regulator's."""
    source: FloatArray
    """R_s."""
    susceptance: FloatArray
    """ω·C; zero without a reservoir."""
    string: FloatArray
    """R_string, no less than :data:`LEAST_SLOPE` allows."""
    current: FloatArray
    """I_set."""

    @property
    def offset(self) -> FloatArray:
        """What the mains has to exceed for current to flow: 2·V_D + V_0."""
        return self.diodes + self.begin

    @property
    def regulates(self) -> FloatArray:
        """The voltage above V_0 from which the regulator holds its current: R_string·I_set."""
        return self.string * self.current

    def take(self, which: BoolArray | IntArray) -> "Circuit":
        """Some of the columns."""
        return Circuit(*(getattr(self, each.name)[which] for each in fields(self)))

    def offered(self, phase: FloatArray) -> FloatArray:
        """What the bridge offers above V_0 at phases of the first half period: e(θ) − V_0."""
        offered: FloatArray = self.amplitude * np.sin(phase) - self.offset
        return offered

    def rises_past(self, level: FloatArray) -> FloatArray:
        """The phase up to the crest where the bridge offers this level above V_0; else the crest.

        It falls past the same level at π less this phase.
        """
        share = np.clip((self.offset + level) / self.amplitude, 0.0, 1.0)
        phase: FloatArray = np.arcsin(share)
        return phase


def circuit(  # noqa: PLR0913  (the nine quantities that make a circuit)
    V_s: FloatArray,
    f_s: FloatArray,
    R_s: FloatArray,
    V_D: FloatArray,
    C: FloatArray,
    I_set: FloatArray,
    V_knee: FloatArray,
    R_string: FloatArray,
    V_drop: FloatArray,
) -> Circuit:
    """Combine the quantities a designer gives, all of shape (n,) in SI units and valid."""
    amplitude = np.sqrt(2.0) * V_s
    least = LEAST_SLOPE * amplitude / np.where(I_set > 0.0, I_set, 1.0)
    return Circuit(
        amplitude=amplitude,
        diodes=2.0 * V_D,
        begin=V_knee + V_drop,
        drop=V_drop,
        source=R_s,
        susceptance=2.0 * np.pi * f_s * C,
        string=np.maximum(R_string, least),
        current=I_set,
    )
