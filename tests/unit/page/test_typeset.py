"""Numbers and units in running text."""

import pytest

from calcdoc.page import typeset
from calcdoc.records import wording


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


def test_quantity_in_plain_characters() -> None:
    """Attributes hold no markup: exponents are raised characters."""
    assert wording.typeset("1.8e-3 W/m^2") == "1.8\u00a0×\u00a010⁻³\u00a0W/m²"
    assert wording.typeset("no <number>") == "no <number>"


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
    assert typeset.sentence(text) == expected


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("over ± 10 % of 120 V", "over ±\u00a010\u00a0% of 120\u00a0V"),
        ("drawing 123456, 20000 h", "drawing 123456, 20\u202f000\u00a0h"),
        ("from -20 °C on, IEC 61000-3-2", "from \u221220\u00a0°C on, IEC 61000-3-2"),
        ("2 LEDs, 3 in a row", "2 LEDs, 3 in a row"),
        ("at 95 lm/W.", 'at <span class="nb">95\u00a0lm/W.</span>'),
        ("R & D, 5 V < 6 V", "R &amp; D, 5\u00a0V &lt; 6\u00a0V"),
    ],
)
def test_authors_words(text: str, expected: str) -> None:
    """Numbers stay with their units, digits without a unit stay as they were typed."""
    assert typeset.author(text) == expected


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("at V = 230 V ± 2 %, T = -5 °C", "at V = 230_V_×_(1_±_2_%), T = \u22125_°C"),
        ("at V = 230 V +/- 2 %", "at V = 230_V_×_(1_±_2_%)"),
        ("at V = 230 V ± 23 V", "at V = 230_V ±_23_V"),
        ("by extremes with margin 10 %", "by extremes with margin 10_%"),
    ],
)
def test_clauses(text: str, expected: str) -> None:
    """A relative tolerance is a factor, an absolute one has its unit twice."""
    assert wording.clauses(text).replace("\u00a0", "_") == expected


def test_number_of_the_record() -> None:
    """A stored number is rounded to the digits asked for; none is a dash."""
    assert typeset.in_unit(24.926, "V", 4) == "24.93\u00a0V"
    assert typeset.in_unit(None, "V", 4) == "–"
