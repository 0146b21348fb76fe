"""Numbers and units in running text."""

import pytest

from calcdoc.page import typeset


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("323.4 V", "323.4\u00a0V"),
        ("-3.2 V", "\u22123.2\u00a0V"),
        ("1.8e-3 ohm", "1.8\u00a0×\u00a010<sup>\u22123</sup>\u00a0Ω"),
        ("12345.6 K", "12\u202f345.6\u00a0K"),
        ("60 W/m/K", '<span class="nb">60\u00a0W/(m·K)</span>'),
        ("3 W/m^2", '<span class="nb">3\u00a0W/m<sup>2</sup></span>'),
        ("-180 %", "\u2212180\u00a0%"),
        ("not <a> number", "not &lt;a&gt; number"),
        ("", ""),
    ],
)
def test_quantity(text: str, expected: str) -> None:
    """A text of the record becomes HTML that follows the rules for quantities."""
    assert typeset.quantity(text) == expected


def test_plain_quantity() -> None:
    """Attributes hold no markup: exponents are raised characters."""
    assert typeset.plain_quantity("1.8e-3 W/m^2") == "1.8\u00a0×\u00a010⁻³\u00a0W/m²"


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("mA·ms/µF = V", "mA·ms/µF = V"),
        ("V - V = V", "V \u2212 V = V"),
        ("m^2", "m<sup>2</sup>"),
        ("W/m/K", "W/(m·K)"),
        ("%", "%"),
    ],
)
def test_units(text: str, expected: str) -> None:
    """Units, and equations between them."""
    assert typeset.units(text) == expected


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("short by 7.2 V (-180 % of it)", "short by 7.2\u00a0V (\u2212180\u00a0% of it)"),
        ("week 49 of 2026-11-20, line R2", "week 49 of 2026-11-20, line R2"),
        ("2 steps and 3.5e-6 s", "2 steps and 3.5\u00a0×\u00a010⁻⁶\u00a0s"),
        ("12345 draws", "12\u202f345 draws"),
    ],
)
def test_numbers_in_sentences(text: str, expected: str) -> None:
    """Numbers are typeset, dates and names are left alone."""
    assert typeset.signs(text) == expected


def test_number_of_the_record() -> None:
    """A stored number is rounded to the digits asked for; none is a dash."""
    assert typeset.in_unit(24.926, "V", 4) == "24.93\u00a0V"
    assert typeset.in_unit(None, "V", 4) == "–"
