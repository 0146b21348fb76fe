"""Units: the closed list of words, their printed form, exact factors and dimensions."""

from collections import Counter
from fractions import Fraction

import pytest

from calcdoc.text.literal import bracketed_unit, resolve
from calcdoc.text.passage import passage_of
from calcdoc.text.scan import Scanner
from calcdoc.units import PLAIN, Unit, known_word, nearest_word, unit_of
from calcdoc.units.dimension import CURRENT, ONE, POWER, TEMPERATURE, TIME, VOLTAGE
from calcdoc.units.words import ALONE, PREFIXED, PREFIXES, SPELLED


def read(text: str) -> Unit:
    """A unit as written."""
    return resolve(bracketed_unit(Scanner(passage_of("", f"[{text}]"))))


PRINTED = [
    ("uF", "µF"),
    ("\u03bcF", "µF"),
    ("ohm", "Ω"),
    ("kohm", "kΩ"),
    ("\u2126", "Ω"),
    ("degC", "°C"),
    ("°C/W", "K/W"),
    ("1/°C", "1/K"),
    ("mV/degC", "mV/K"),
    ("V·s/m^2", "V·s/m²"),
    ("m²·K⁻¹", "m²/K"),
    ("W/m/K", "W/(m·K)"),
    ("V/s/A", "V/(s·A)"),
    ("V/V", ""),
    ("m·m", "m²"),
    ("1/h", "1/h"),
    ("1/s^2", "1/s²"),
    ("%", "%"),
]


@pytest.mark.parametrize(("written", "printed"), PRINTED)
def test_printed_form(written: str, printed: str) -> None:
    """ASCII spellings and look-alikes print as the SI writes them, with one solidus."""
    assert read(written).text == printed


@pytest.mark.parametrize("written", [each for each, _ in PRINTED if each != "V/V"])
def test_written_form_reads_back(written: str) -> None:
    """What a record writes in the language of the text is the same unit when read again."""
    unit = read(written)
    again = read(unit.written)
    assert (again.text, again.factor, again.dimension) == (unit.text, unit.factor, unit.dimension)
    assert again.celsius is unit.celsius


FACTORS = [
    ("mV", "0.001"),
    ("µF", "0.000001"),
    ("kΩ", "1000"),
    ("kW·h", "3600000"),
    ("Ah", "3600"),
    ("1/min", "1/60"),
    ("mm²", "0.000001"),
    ("g", "0.001"),
    ("kg", "1"),
    ("t", "1000"),
    ("%", "0.01"),
    ("ppm", "0.000001"),
    ("°C", "1"),
    ("L/min", "1/60000"),
    ("eV", "1.602176634e-19"),
    ("mg/cm^3", "1"),
]


@pytest.mark.parametrize(("written", "factor"), FACTORS)
def test_factor_is_exact(written: str, factor: str) -> None:
    """The factor to the coherent SI unit is a fraction without error."""
    assert read(written).factor == Fraction(factor)


def test_celsius() -> None:
    """A temperature in °C has an offset, exact in decimal; a difference has none."""
    celsius = read("°C")
    assert celsius.to_si(Fraction(40)) == Fraction("313.15")
    assert celsius.from_si(313.15) == pytest.approx(40, abs=1e-12)
    assert celsius.difference_from_si(5.0) == 5.0
    assert celsius.dimension == TEMPERATURE
    assert read("K").to_si(Fraction(40)) == 40
    assert not read("K/W").celsius


def test_dimensions() -> None:
    """Words of the trade have the dimensions they are used with."""
    assert read("VA").dimension == read("var").dimension == POWER
    assert read("Ah").dimension == CURRENT * TIME
    assert read("Wh").dimension == POWER * TIME
    assert read("deg").dimension == read("rad").dimension == read("%").dimension == ONE
    assert read("V·s").dimension == VOLTAGE * TIME
    assert unit_of([]) == PLAIN


def test_every_word_is_known() -> None:
    """Every listed word is read alone, every prefixed one with every prefix."""
    for word in (*PREFIXED, *ALONE, *SPELLED):
        assert known_word(word), word
    for prefix in (*PREFIXES, "u"):
        for word in PREFIXED:
            assert known_word(prefix + word), prefix + word


@pytest.mark.parametrize(
    "word", ["mil", "inch", "x", "kk", "kmin", "mh", "k%", "dB", "Volt", "sec", "e", "pi", "°F", ""]
)
def test_other_words_are_unknown(word: str) -> None:
    """What is not on the list is no unit, nor is a prefix on a word that takes none."""
    assert not known_word(word)


@pytest.mark.parametrize(
    ("word", "nearest"),
    [
        ("kOhm", "kΩ"),
        ("Volts", "V"),
        ("milliamps", None),
        ("milliamperes", "mA"),
        ("KHz", "kHz"),
        ("hrs", "h"),
        ("percent", "%"),
        ("minutes", "min"),
        ("Vrms", "V"),
        ("qqqq", None),
    ],
)
def test_nearest_word(word: str, nearest: str | None) -> None:
    """Names and habits are known; what is like nothing gets no advice."""
    assert nearest_word(word) == nearest


def test_no_word_has_two_readings() -> None:
    """No two ways of prefix and word spell one word, so the order of search cannot matter."""
    spelled = Counter(prefix + word for prefix in ("", *PREFIXES) for word in PREFIXED)
    spelled.update((*ALONE, *SPELLED))
    assert len(spelled) > 800
    assert [word for word, times in spelled.items() if times > 1] == []
