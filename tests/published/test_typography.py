"""Typography of quantities and rounding: rules T1 to T28 and R1 to R7, on pages and in helpers.

Each test names its rule and where the rule comes from, with how far the source was seen: SEEN (the
text itself), SECONDARY (quoted by others), MEMORY (from memory, to be checked), COMPUTED (by hand).
SP 811 is NIST Special Publication 811 (2008). The pages are those of both demos and of a design
full of long formulas, as words of the HTML, and as text of the PDF where poppler is installed.
"""

import re
import unicodedata
from functools import lru_cache
from html import unescape
from pathlib import Path

import pytest

from calcdoc.page.mathml import mathml
from calcdoc.page.pieces import Piece, no_links
from calcdoc.records import rounding
from calcdoc.records.pictures import picture
from calcdoc.records.wording import clauses, sentence, typeset
from calcdoc.text.formula import parse_text
from tests.helpers.pages import DEMOS, LAYOUT_ENGINE, page, record, sheets

PAGES = (*DEMOS, "long-formulas")
NB, THIN = "\u00a0", "\u202f"
UNITS = r"(?:%|°C|A²·s|Hz|K/W|lm/W|lm|kΩ|MΩ|Ω|µF|µm|mA|mV/K|mV|mW/K|mW|ms|mm|kV|V|W|A|K|F)"
"""Units that stand on the pages, longer ones before those they begin with."""
NAMES = re.compile(r"\b(?:IEC|EN|TR|TT|drawing)[ -][0-9][0-9-]*|of 100000 parts")
"""Names of documents are no numbers: EN 60038; nor are counts the author leaves closed."""


def drawn(formula: str) -> str:
    """MathML of a formula."""
    return mathml(Piece(picture(parse_text(formula))), no_links)


@lru_cache(maxsize=8)
def html_text(name: str) -> str:
    """The words of a page as a reader copies them; formulas as pieces, code left out."""
    shown = re.sub(r"(?s)<(style|script|pre|code|title)\b.*?</\1>", " ", page(name))
    shown = re.sub(r'(?s)<td class="dig".*?</td>', " ", shown)
    shown = re.sub(r"<sup>([^<]*)</sup>", lambda found: raised(found[1]), shown)
    shown = re.sub(r"<mn>10</mn><mn>([^<]*)</mn>", lambda found: "10" + raised(found[1]), shown)
    shown = re.sub(r"</?(?:b|i|strong|em|a|span|sub|mn|mtext|mo)\b[^>]*>", "", shown)
    return NAMES.sub(" ", unescape(re.sub(r"<[^>]*>", "\n", shown)))


def raised(digits: str) -> str:
    """Digits as raised characters."""
    return digits.translate(str.maketrans("0123456789\u2212", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻"))


def never(pattern: str) -> None:
    """What a pattern describes stands on no page."""
    for name in PAGES:
        found = re.finditer(f".{{0,20}}(?:{pattern}).{{0,10}}", html_text(name))
        assert [each.group() for each in found] == [], name


def somewhere(text: str) -> None:
    """A text stands on at least one page, so that a rule is tried at all."""
    assert any(text in html_text(name) for name in PAGES), text


# --- T1 to T4: symbols -------------------------------------------------------------------------


def test_t1_symbols_are_italic_and_units_upright() -> None:
    """T1, SP 811 10.2 and SI Brochure 5: SEEN."""
    assert drawn("R*10 V").count('<mi class="i">') == 1
    assert '<mi class="i">R</mi>' in drawn("R = 10 V".partition(" =")[0])
    for name in PAGES:
        shown = page(name)
        assert "math .i { font-style: italic" in shown
        assert re.findall(rf'<mtext>{NB}</mtext><mi class="i">', shown) == []
        assert re.findall(rf"[0-9]{NB}<i>", shown) == []


def test_t2_descriptive_subscripts_are_upright() -> None:
    """T2, SP 811 10.2: SEEN. A running index is a quantity and italic."""
    assert "<mtext>reg,max</mtext></msub>" in drawn("V_reg_max")
    assert re.search(r'<mi class="i">n</mi></mrow></msub>', drawn("I_h[n]"))
    for name in PAGES:
        below = re.findall(r"<msub><mi[^>]*>(?:<a[^>]*>)?[^<]*(?:</a>)?</mi>(<[^>]*>)", page(name))
        assert len(below) > 20
        assert [each for each in below if 'class="i"' in each] == []
        assert re.findall(r"<sub><i>", page(name)) == []


def test_t3_functions_constants_and_numbers_are_upright() -> None:
    """T3, SP 811 10.2.3: SEEN. A name of several letters in ``mi`` is upright by default."""
    assert "<mi>sin</mi>" in drawn("sin(x)")
    assert '<mi mathvariant="normal">π</mi>' in drawn("2*pi*f")
    assert "<mn>2</mn>" in drawn("2*pi*f")
    assert '<mi class="i">V</mi>' in drawn("ΔV")
    assert '<mi mathvariant="normal">Δ</mi>' in drawn("ΔV")
    italics = {each for name in PAGES for each in re.findall(r'<mi class="i">([^<]*)<', page(name))}
    assert italics.isdisjoint({"sin", "exp", "arccos", "π", "max", "Δ"})


def test_t4_a_symbol_is_one_letter() -> None:
    """T4, SP 811 10.1.1: SEEN. The author chooses symbols; in the demos none is an abbreviation."""
    for name in PAGES:
        tokens = re.findall(r'<mi class="i">(?:<a[^>]*>)?([^<]+)<', page(name))
        tokens += re.findall(r"<i>([^<]+)</i>", page(name))
        relations = {each.name for each in record(name).relations}  # names, no quantities
        assert {each for each in tokens if len(each) != 1} - relations == set()


# --- T5 to T10: numbers and their units --------------------------------------------------------


def test_t5_one_no_break_space_before_the_unit() -> None:
    """T5, SP 811 7.2: SEEN. Also in the author's own words, and never a hyphen."""
    never(rf"[0-9] {UNITS}(?![\w.·/])")
    never(rf"[0-9]{UNITS}(?![\w·/])")
    never(r"[0-9]-(?:V|kΩ|W|mA)\b")
    somewhere(f"rated 4.5{NB}W")
    somewhere(f"of a 120{NB}V supply")
    assert sentence("a 10 kΩ resistor") == f"a 10{NB}kΩ resistor"


def test_t6_degrees_celsius_take_the_space_and_angles_do_not() -> None:
    """T6, SP 811 7.2: SEEN."""
    never("[0-9]°C|° C|[0-9]{NB}°(?!C)")
    somewhere(f"25{NB}°C")
    assert typeset("30.2 °C") == f"30.2{NB}°C"
    assert typeset("30 deg") == "30°"


def test_t7_percent_takes_the_space_and_is_never_qualified() -> None:
    """T7, SP 811 section 11 and ETSI drafting rules: SEEN."""
    never(rf"[0-9]%|%{NB}?\([a-z]/")
    somewhere(f"10{NB}%")


def test_t8_no_information_on_the_unit() -> None:
    """T8, SP 811 7.4 and section 11: SEEN. ``rms`` stands with the description."""
    never(r"[0-9][\s]?(?:V|A|mA|W)[\s]?(?:rms|pk|pp|dc|ac|DC|AC|max|min)\b")
    somewhere("supply voltage, rms")


def test_t9_every_number_has_its_unit() -> None:
    """T9, SP 811 7.7: SEEN. Each limit has its own unit, and so has each substituted value."""
    somewhere(f"207{NB}V to 253{NB}V")
    assert sentence("51 mm × 51 mm × 25 mm") == f"51{NB}mm × 51{NB}mm × 25{NB}mm"
    for name in PAGES:
        for each in record(name).quantities:
            for text in (each.least_text, each.greatest_text, each.result):
                assert (each.unit == "") == (" " not in text)


def test_t10_ranges_say_to() -> None:
    """T10, SP 811 7.7: SEEN. No dash between numbers, no double dot of the language."""
    never(rf"[0-9](?:{NB}[A-Za-zµΩ°%]+)?[ {NB}]?[–—][ {NB}]?[0-9]|[0-9] ?\.\.+ ?[0-9]")
    somewhere(f"\u221220{NB}°C to 45{NB}°C")


# --- T11 to T13: tolerances --------------------------------------------------------------------


def test_t11_an_absolute_tolerance_is_bracketed() -> None:
    """T11, SP 811 7.7: SEEN. Or the unit stands twice."""
    for name in PAGES:
        for found in re.finditer(rf"(.?)[0-9][0-9.{THIN}]*[ {NB}]±", html_text(name)):
            assert re.match(r"[(0-9.]", found[1]), found.group()
    somewhere(f"(40{NB}±{NB}10){NB}K")
    assert clauses("at V = 230 V ± 23 V") == f"at V = 230{NB}V ±{NB}23{NB}V"


def test_t12_a_relative_tolerance_is_a_factor() -> None:
    """T12, SP 811 section 11: SEEN; ISO 80000-1 7.1.4: MEMORY."""
    never(rf"[0-9][ {NB}]{UNITS}[ {NB}]±[ {NB}][0-9.]+{NB}%|\)[ {NB}]?%")
    somewhere(f"230{NB}V{NB}×{NB}(1{NB}±{NB}10{NB}%)")
    somewhere(f"= 230{NB}V{NB}×{NB}(1{NB}±{NB}2{NB}%)")  # in a clause of a criterion


def test_t13_unequal_tolerances_are_stated_as_limits() -> None:
    """T13, house form: MEMORY."""
    somewhere(f"+50{NB}%/\u221220{NB}%: 1.76{NB}×{NB}10⁻⁶{NB}F to 3.3{NB}×{NB}10⁻⁶{NB}F")
    never(r"[0-9]\+[0-9]+/-[0-9]+")


# --- T14 to T17: digits ------------------------------------------------------------------------


def test_t14_digits_in_threes() -> None:
    """T14, SI Brochure, SP 811 10.5.3, IEC and ETSI drafting rules: SEEN."""
    assert typeset("12345.67891") == f"12{THIN}345.678{THIN}91"
    assert typeset("1234") == "1234"
    never(r"(?<![\w])[0-9]{5,}(?= ?[^ a-z])|[0-9],[0-9]{3}\b")
    somewhere(f"0.014{THIN}18{NB}V")


def test_t15_one_decimal_marker_with_a_digit_before_it() -> None:
    """T15, IEC and ETSI drafting rules: SEEN; CGPM 2003: SECONDARY."""
    never(r"[0-9],[0-9]|(?<![\w.])\.[0-9]")


def test_t16_a_cross_and_powers_of_ten() -> None:
    """T16, IEC and ETSI drafting rules: SEEN."""
    assert typeset("1.8e-3 Ω") == f"1.8{NB}×{NB}10⁻³{NB}Ω"
    never(r"[0-9]e-?[0-9]|[0-9] ?\* ?[0-9]|[0-9] ?· ?[0-9]")
    somewhere(f"1{NB}×{NB}10⁻⁹")


def test_t17_a_true_minus_and_no_break_inside() -> None:
    """T17, ETSI drafting rules: SEEN; the code point: MEMORY."""
    never(r"(?<![\w)\]\-])-[0-9]|\u2212 [0-9](?=[^A-Za-z]*\Z)")
    somewhere(f"\u221220{NB}°C")
    for name in PAGES:
        # no line breaks in a formula, a card or a picture
        silent = r"(?s)<(math|svg)\b.*?</\1>|<[^>]*data-card[^>]*>"
        words = re.sub(silent, "", page(name))
        for found in re.finditer(rf"[0-9]{NB}(?:lm/W|K/W|mV/K|A²·s)", words):
            opened = words.rfind('<span class="nb">', 0, found.start())
            assert opened >= 0
            assert "</span>" not in words[opened : found.start()]


# --- T18 to T23: units -------------------------------------------------------------------------


def test_t18_one_prefix_closed_up() -> None:
    """T18, SI Brochure: SEEN."""
    never(rf"[0-9]{NB}[kMGµn](?![\w·/])|mµ|µµ|k{NB}?[ΩVW]\B{NB}")
    somewhere(f"4.7{NB}µF")


def test_t19_at_most_one_solidus() -> None:
    """T19, SI Brochure: SEEN."""
    assert typeset("60 W/m/K") == f"60{NB}W/(m·K)"
    assert typeset("2 m·s") == f"2{NB}m·s"
    never(rf"[0-9]{NB}[^\s/]+/[^\s/(]+/")


def test_t20_unit_symbols_have_no_plural_and_are_no_abbreviations() -> None:
    """T20, SP 811 6.1 and section 11: SEEN."""
    never(rf"[0-9][ {NB}](?:secs?|Amps?|Volts?|hrs?|kgs|Watts?|Ohms?)\b")


def test_t21_ppm_is_printed_as_a_power_of_ten() -> None:
    """T21, SP 811 section 11: SEEN. It may be typed."""
    assert typeset("50 ppm/K") == f"50{NB}×{NB}10⁻⁶/K"
    assert typeset("50 ppm") == f"50{NB}×{NB}10⁻⁶"
    never(r"\bpp[mb]\b")


def test_t22_heads_of_tables_name_no_unit_in_brackets() -> None:
    """T22, SP 811 7.1: SEEN. Units of tables stand with each number, axes name quantity/unit."""
    for name in PAGES:
        heads = re.findall(r'<th scope="col"[^>]*>([^<]*)<', page(name))
        assert len(heads) > 20
        assert [each for each in heads if re.search(rf"\({UNITS}\)|\[{UNITS}\]", each)] == []


def test_t23_symbols_and_names_of_units_are_not_mixed() -> None:
    """T23, SP 811 7.8: SEEN. A unit never stands without a number or symbol."""
    never(r"(?:volt|ampere|ohm|watt|kelvin|second|metre)s?/[A-Za-z]")
    never(rf"\b(?:many|few|some|several) {UNITS}(?![\w])")


# --- T24 to T26: uncertainty -------------------------------------------------------------------


def test_t24_no_brackets_behind_digits() -> None:
    """T24, GUM 7.2.2: MEMORY, notation SEEN. Nothing states a standard uncertainty yet."""
    never(r"[0-9]\([0-9]+\)")


def test_t25_plus_minus_belongs_to_tolerances_only() -> None:
    """T25, GUM 7.2.2 to 7.2.4: MEMORY. Every ± comes from a tolerance the author gave."""
    for name in PAGES:
        shown = record(name)
        given = " ".join(each.tolerance for each in shown.quantities if each.kind != "derived")
        allowed = set(re.findall(r"±\s([0-9.]+)", given))
        clauses_of = " ".join(each.clauses for each in shown.criteria)
        allowed |= set(re.findall(r"± ([0-9.]+)", clauses_of))
        measured = " ".join(each.first_band for each in shown.crosschecks)
        allowed |= set(re.findall(r"±\s([0-9.]+)", measured))
        allowed.add("10")  # the prose of the 120 V design names the band of its supply
        assert set(re.findall(r"±\s([0-9.]+)", html_text(name))) <= allowed
        assert not re.search(r"\bk = [0-9]", html_text(name))


def test_t26_uncertainty_to_two_digits() -> None:
    """T26, GUM 7.2.6: SECONDARY. Standard errors of sampling have two significant digits."""
    said = [each for name in PAGES for c in record(name).criteria for each in c.statistics]
    errors = [
        found[1] for each in said if (found := re.search(rf"standard error ([^{NB}]+)", each))
    ]
    assert errors
    assert all(len(re.sub(r"[^0-9]", "", each).lstrip("0")) == 2 for each in errors), errors
    assert rounding.upward(10.47) == "11"
    assert rounding.significant(28.05, 2) == "28"
    assert str(rounding.to_multiple("10.05762", "0.001")) == "10.058"


# --- T27, T28: characters ----------------------------------------------------------------------


def test_t27_characters() -> None:
    """T27, Unicode: MEMORY. Ω is the letter, µ one code point, ° and C are two, text is NFC."""
    for name in PAGES:
        shown = html_text(name)
        assert {"\u2126", "\u2103", "\u03bc"}.isdisjoint(shown)
        assert unicodedata.is_normalized("NFC", page(name))
    somewhere("kΩ")
    somewhere("µF")


def test_t28_upright_letters_say_so_in_mathml() -> None:
    """T28, MathML Core: MEMORY. A single letter in ``mi`` would be italic by default."""
    assert "<mtext>V</mtext>" in drawn("5 V") or '<mi mathvariant="normal">V</mi>' in drawn("5 V")
    for name in PAGES:
        bare = re.findall(r"<mi>(?:<a[^>]*>)?([^<]+)<", page(name))
        assert [each for each in bare if len(each) == 1] == []


# --- the sheets --------------------------------------------------------------------------------


@pytest.mark.parametrize("name", [pytest.param(name, marks=LAYOUT_ENGINE) for name in DEMOS])
def test_text_of_the_sheets(name: str, tmp_path: Path) -> None:
    """T5 to T8, T10, T12, T14 to T17, T20, T27 (as above) on the text of the PDF."""
    text = NAMES.sub(" ", "\n".join(sheets(name, tmp_path)))
    text = re.sub(r"(?:\s[0-9a-f]{4}){2,}", " ", text)
    text = re.sub(
        r"(?m)^[0-9][VWAK%]$", " ", text
    )  # poppler takes two letters alone for spaced ones
    wrong = (
        rf"[0-9]{UNITS}(?![\w·/.])",  # T5 to T7
        r"[0-9] ?V ?(?:rms|pk|dc|DC)\b",  # T8
        r"[0-9] ?[–—] ?[0-9]",  # T10
        rf"[0-9] {UNITS} ± [0-9.]+ %",  # T12
        r"(?<!\w)[0-9]{5,}|[0-9],[0-9]",  # T14, T15
        r"(?<![\w.])\.[0-9]",  # T15
        r"[0-9]e-?[0-9]|[0-9]\*[0-9]",  # T16
        r"(?<![\w)\]\-])-[0-9]",  # T17
        r"[0-9] (?:secs?|Amps?|Volts?)\b",  # T20
        "[\u2126\u2103\u03bc]",  # T27
    )
    for pattern in wrong:
        assert re.findall(f".*(?:{pattern}).*", text) == [], pattern
    laid_out = "\n".join(sheets(name, tmp_path, "-layout")).replace(NB, " ")
    line, part = ("230 V", "10 K/W × (1") if "230" in name else ("120 V", "(40 ± 10) K")
    bands = (f"{line} × (1 ± 10 %)", f"{line} × (1 ± 2 %)")
    for right in (*bands, part, "lm/W", "\u221220 °C to 45 °C"):
        assert right in laid_out


# --- rounding ----------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("value", "step", "rounded"),
    [
        ("12.223", "0.1", "12.2"),
        ("12.251", "0.1", "12.3"),
        ("12.275", "0.1", "12.3"),
        ("1222.3", "1e1", "1220"),
        ("1225.1", "1e1", "1230"),
        ("1227.5", "1e1", "1230"),
    ],
)
def test_r1_nearest_multiple(value: str, step: str, rounded: str) -> None:
    """R1, JIS Z 8401:1999, equal to ISO 31-0 annex B: SEEN."""
    assert f"{rounding.to_multiple(value, step):f}" == rounded


@pytest.mark.parametrize(
    ("value", "step", "even", "away"),
    [
        ("12.25", "0.1", "12.2", "12.3"),
        ("12.35", "0.1", "12.4", "12.4"),
        ("1225.0", "1e1", "1220", "1230"),
        ("1235.0", "1e1", "1240", "1240"),
    ],
)
def test_r2_ties_go_to_the_even_multiple(value: str, step: str, even: str, away: str) -> None:
    """R2: rule A, even multiple, SEEN and the default; rule B, greater magnitude, SECONDARY."""
    assert f"{rounding.to_multiple(value, step):f}" == even
    assert f"{rounding.to_multiple(value, step, rounding.TIES_AWAY):f}" == away


def test_r3_one_stage_only() -> None:
    """R3, JIS Z 8401: SEEN. Not 5.35 first, then 5.4."""
    assert rounding.significant("5.346", 2) == "5.3"
    assert rounding.significant(5.346, 2) == "5.3"


def test_r4_signs_are_symmetric() -> None:
    """R4: COMPUTED."""
    assert str(rounding.to_multiple("-12.25", "0.1")) == "-12.2"
    assert str(rounding.to_multiple("-12.35", "0.1")) == "-12.4"


def test_r5_ties_are_those_of_the_decimal_value() -> None:
    """R5: COMPUTED. The binary images of 12.35 and 2.675 lie below the tie."""
    assert str(rounding.to_multiple(12.35, "0.1")) == "12.4"
    assert str(rounding.to_multiple(2.675, "0.01")) == "2.68"
    assert (round(12.35, 1), round(2.675, 2)) == (12.3, 2.67)  # what must not be used


def test_r6_enough_digits_to_see_the_verdict() -> None:
    """R6, NIST GLP 9: SEEN. 5.004 against a limit of 5.00 is not printed as 5.00."""
    assert rounding.apart(5.004, 5.0, 3) == ("5.004", "5.000")
    assert rounding.apart(5.0, 5.0, 3) == ("5.00", "5.00")
    for name in PAGES:
        for each in record(name).criteria:
            if each.verdict == "fail":
                assert each.value_text != each.limit_text


def test_r7_margins_in_the_safe_direction() -> None:
    """R7, ISO 80000-1 annex B: MEMORY. And the page says so."""
    assert rounding.downward(4.96) == "4.9"
    assert rounding.downward(-4.96) == "-5.0"
    assert rounding.upward(14.01, 3) == "14.1"
    somewhere("margins are rounded towards less margin, waiting times towards more")
