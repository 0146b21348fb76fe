"""Constants of nature a formula may name, in coherent SI units.

The first four are exact by definition of the SI (SI Brochure, 9th edition, 2019). The electric and
magnetic constants are CODATA 2022; the tests compare all of them with ``scipy.constants``.
"""

from fractions import Fraction
from typing import Final

from calcdoc.frozen import Frozen
from calcdoc.text.names import fold
from calcdoc.units import ONE, Dimension
from calcdoc.units.dimension import CURRENT, LENGTH, POWER, TEMPERATURE, TIME, VOLTAGE


class Constant(Frozen, frozen=True):
    """A constant's value and what it is."""

    value: Fraction | None
    """Exact as published; None for π, which no fraction is."""
    dimension: Dimension
    unit: str
    """Its unit as printed, coherent SI."""
    meaning: str


_ENERGY: Final = POWER * TIME

CONSTANTS: Final = {
    fold(name): constant
    for name, constant in {
        "pi": Constant(None, ONE, "", "ratio of a circle's circumference to its diameter"),
        "k_B": Constant(
            Fraction("1.380649e-23"), _ENERGY / TEMPERATURE, "J/K", "Boltzmann constant"
        ),
        "q_e": Constant(Fraction("1.602176634e-19"), CURRENT * TIME, "C", "elementary charge"),
        "h_P": Constant(Fraction("6.62607015e-34"), _ENERGY * TIME, "J·s", "Planck constant"),
        "c_0": Constant(Fraction(299792458), LENGTH / TIME, "m/s", "speed of light in vacuum"),
        "epsilon_0": Constant(
            Fraction("8.8541878188e-12"),
            CURRENT * TIME / VOLTAGE / LENGTH,
            "F/m",
            "electric constant",
        ),
        "mu_0": Constant(
            Fraction("1.25663706127e-6"),
            VOLTAGE * TIME / CURRENT / LENGTH,
            "H/m",
            "magnetic constant",
        ),
    }.items()
}
