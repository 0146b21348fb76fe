"""Conversions as NIST SP 811 (2008 edition) and the SI Brochure (9th edition, 2019) state them.

Each row names its source and how the value was obtained: MEMORY, not read for this file, check
against the document before calling it published; COMPUTED, follows from definitions by the
arithmetic shown. Values exact by definition are compared exactly, rounded ones to their digits.
"""

from fractions import Fraction
from typing import Final, NamedTuple

import pytest

from calcdoc.model.constants import CONSTANTS
from calcdoc.text.literal import bracketed_unit, resolve
from calcdoc.text.passage import passage_of
from calcdoc.text.scan import Scanner


class Row(NamedTuple):
    """A unit and its size in coherent SI units."""

    unit: str
    size: str
    source: str
    status: str


EXACT: Final = (
    Row("min", "60", "SI Brochure table 8; SP 811 table 6", "MEMORY"),
    Row("h", "3600", "SI Brochure table 8; SP 811 table 6", "MEMORY"),
    Row("d", "86400", "SI Brochure table 8; SP 811 table 6", "MEMORY"),
    Row("L", "1/1000", "SI Brochure table 8: 1 L = 1 dm^3", "MEMORY"),
    Row("t", "1000", "SI Brochure table 8; SP 811 table 6", "MEMORY"),
    Row("ha", "10000", "SI Brochure table 8: 1 ha = 1 hm^2", "MEMORY"),
    Row("au", "149597870700", "SI Brochure table 8 (IAU 2012)", "MEMORY"),
    Row("eV", "1.602176634e-19", "SI Brochure table 8, exact since 2019", "MEMORY"),
    Row("kW·h", "3600000", "SP 811 B.8: 3.6 E+06 J", "MEMORY"),
    Row("Wh", "3600", "SP 811 B.8: 3.6 E+03 J", "MEMORY"),
    Row("Ah", "3600", "SP 811 B.8: ampere hour, 3.6 E+03 C", "MEMORY"),
    Row("%", "1/100", "SP 811 7.10.2: % is the number 0.01", "MEMORY"),
    Row("g/cm^3", "1000", "0.001 kg over (0.01 m)^3", "COMPUTED"),
    Row("L/min", "1/60000", "0.001 m^3 over 60 s", "COMPUTED"),
    Row("mA·h", "18/5", "0.001 A times 3600 s", "COMPUTED"),
    Row("mA·ms/µF", "1", "1e-6 C over 1e-6 F", "COMPUTED"),
    Row("kΩ·µF", "1/1000", "1000 Ω times 1e-6 F", "COMPUTED"),
    Row("V/µs", "1000000", "1 V over 1e-6 s", "COMPUTED"),
    Row("lm/cm^2", "10000", "1 lm over (0.01 m)^2", "COMPUTED"),
    Row("°C/W", "1", "SP 811 8.5: a difference of 1 °C is 1 K", "MEMORY"),
)

ROUNDED: Final = (
    Row("deg", "1.745329E-02", "SP 811 B.8: degree (angle), 7 digits", "MEMORY"),
    Row("Da", "1.66053906660e-27", "SI Brochure table 8, CODATA 2018", "MEMORY"),
)


def size_of(text: str) -> Fraction:
    """The factor of a unit as written."""
    return resolve(bracketed_unit(Scanner(passage_of("", f"[{text}]")))).factor


@pytest.mark.parametrize("row", EXACT, ids=[row.unit for row in EXACT])
def test_exact_size(row: Row) -> None:
    """The size is exact by definition and is held as that fraction."""
    assert size_of(row.unit) == Fraction(row.size)


@pytest.mark.parametrize("row", ROUNDED, ids=[row.unit for row in ROUNDED])
def test_rounded_size(row: Row) -> None:
    """The size agrees with every digit that is stated."""
    digits = len(row.size.lower().split("e")[0].replace(".", ""))
    assert f"{float(size_of(row.unit)):.{digits - 1}e}" == f"{float(row.size):.{digits - 1}e}"


PREFIX_POWERS: Final = {
    "q": -30, "r": -27, "y": -24, "z": -21, "a": -18, "f": -15, "p": -12, "n": -9, "µ": -6,
    "m": -3, "c": -2, "d": -1, "da": 1, "h": 2, "k": 3, "M": 6, "G": 9, "T": 12, "P": 15,
    "E": 18, "Z": 21, "Y": 24, "R": 27, "Q": 30,
}  # fmt: skip
"""SI Brochure table 7 with the prefixes of 2022; MEMORY."""


@pytest.mark.parametrize(("prefix", "power"), PREFIX_POWERS.items())
def test_prefix(prefix: str, power: int) -> None:
    """Every SI prefix is its power of ten, exactly."""
    assert size_of(f"{prefix}V") == Fraction(10) ** power


def test_celsius_scale() -> None:
    """t/°C = T/K - 273.15, exactly (SI Brochure 2.3.1; MEMORY)."""
    unit = resolve(bracketed_unit(Scanner(passage_of("", "[°C]"))))
    assert unit.to_si(Fraction(0)) == Fraction("273.15")
    assert unit.to_si(Fraction("-273.15")) == 0


def test_defining_constants() -> None:
    """The constants that define the SI have their exact values (SI Brochure table 1; MEMORY)."""
    assert CONSTANTS["c_0"].value == 299792458
    assert CONSTANTS["h_P"].value == Fraction("6.62607015e-34")
    assert CONSTANTS["q_e"].value == Fraction("1.602176634e-19")
    assert CONSTANTS["k_B"].value == Fraction("1.380649e-23")
