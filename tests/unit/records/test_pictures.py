"""Formula tree -> picture tree, one construct after the other."""

import pytest

from calcdoc.records.pictures import grouped, picture, symbol
from calcdoc.records.shapes import (
    Cases,
    Fence,
    Fraction,
    Glyphs,
    Root,
    Row,
    Script,
    Symbol,
    linear,
)
from calcdoc.source import Span
from calcdoc.text.formula import parse_text
from calcdoc.text.nodes import Binary, Group, Name, Negate, Node, Number

HERE = Span("", 0, 0)


def shown(text: str) -> str:
    """The picture of a formula on one line."""
    return linear(picture(parse_text(text)))


def italic(letter: str) -> Glyphs:
    return Glyphs(letter, "italic")


def test_symbol_has_an_italic_base_and_an_upright_subscript() -> None:
    """Underscores inside a subscript print as commas, and the name stays for linking."""
    below = Glyphs("reg,max", "upright")
    assert symbol("V_reg_max") == Symbol("V_reg_max", Script(italic("V"), sub=below))


@pytest.mark.parametrize(
    ("name", "shape"),
    [
        ("eta", Glyphs("η", "italic")),
        ("ΔV", Row((Glyphs("Δ", "upright"), Glyphs("V", "italic")))),
        ("Δ", Glyphs("Δ", "italic")),
        ("R1", Row((Glyphs("R", "italic"), Glyphs("1", "number")))),
        ("bridge.V", Row((Glyphs("bridge.", "upright"), Glyphs("V", "italic")))),
    ],
)
def test_bases(name: str, shape: object) -> None:
    """Spelled Greek is Greek, Δ before a letter is upright, digits are upright, methods lead."""
    assert symbol(name).shape == shape


def test_element_of_a_series_has_its_index_below() -> None:
    """A running index is italic, a number upright, after what stands there already."""
    index = Row((Glyphs("h", "upright"), Glyphs(",", "upright"), Glyphs("n", "italic")))
    assert picture(parse_text("I_h[n]")) == Symbol("I_h", Script(italic("I"), sub=index))
    assert shown("s[3]") == "s_3"


def test_division_is_a_bar_and_its_outer_brackets_drop() -> None:
    """The bar groups; brackets inside stay."""
    assert picture(parse_text("(a + b)/(2)")) == Fraction(
        Row((Symbol("a", italic("a")), Glyphs("+", "operator"), Symbol("b", italic("b")))),
        Glyphs("2", "number"),
    )
    assert shown("((a + b)*c)/d") == "((a + b)\u2009c)/(d)"


def test_root_and_power_drop_brackets_that_the_shape_makes_needless() -> None:
    """The radical and the raised exponent group; a quotient in an exponent keeps on its line."""
    assert picture(parse_text("sqrt(2)")) == Root(Glyphs("2", "number"))
    exponent = Row((Glyphs("1", "number"), Glyphs("/", "upright"), Glyphs("2", "number")))
    assert picture(parse_text("x^(1/2)")) == Script(Symbol("x", italic("x")), sup=exponent)
    assert shown("(a + b)^2") == "(a + b)^2"


@pytest.mark.parametrize(
    ("text", "line"),
    [
        ("2*V_D", "2\u2009V_D"),
        ("C_res*ΔV", "C_res\u2009ΔV"),
        ("2*3", "2 × 3"),
        ("30 mA*8.3 ms", "30\u00a0mA × 8.3\u00a0ms"),
        ("230 V*x", "230\u00a0V × x"),
        ("2*pi*f", "2\u2009π\u2009f"),
        ("sqrt(2)*230 V", "√(2) × 230\u00a0V"),
        ("2*(3 + 4)", "2 × (3 + 4)"),
    ],
)
def test_products(text: str, line: str) -> None:
    """Symbols stand beside each other; numbers and units take a cross."""
    assert shown(text) == line


@pytest.mark.parametrize(
    ("text", "line"),
    [
        ("-40 °C", "\u221240\u00a0°C"),
        ("1.2e-3 ohm", "1.2\u00a0×\u00a010^\u22123\u00a0Ω"),
        ("12345.67891", "12\u202f345.678\u202f91"),
        ("1234 uF", "1234\u00a0µF"),
        ("30 deg", "30°"),
        ("60 W/m/K", "60\u00a0W/(m·K)"),
        ("3 W/m^2", "3\u00a0W/m^2"),
        ("50 1/h", "50\u00a01/h"),
        ("10 %", "10\u00a0%"),
    ],
)
def test_numbers_and_units(text: str, line: str) -> None:
    """True minus, thin groups, × 10ⁿ, a no-break space, one solidus."""
    assert shown(text) == line


@pytest.mark.parametrize(
    ("text", "line"),
    [
        ("exp(-t/tau)", "exp((\u2212t)/(τ))"),
        ("log10(x)", "log_10(x)"),
        ("asin(x)", "arcsin(x)"),
        ("abs(a - b)", "|a \u2212 b|"),
        ("floor(x)", "⌊x⌋"),
        ("min(a, b, c)", "min(a, b, c)"),
        ("rss(a, b)", "rss(a, b)"),
    ],
)
def test_functions(text: str, line: str) -> None:
    """Names upright, absolute value as bars."""
    assert shown(text) == line


def test_choice_is_rows_behind_a_brace() -> None:
    """A choice in the last place adds its rows to the same brace."""
    chosen = picture(parse_text("if(x > 1, a, if(x <= 0, b, c))"))
    assert isinstance(chosen, Cases)
    assert [linear(row) for row in chosen.rows] == ["a if x > 1", "b if x ≤ 0", "c otherwise"]


def test_brackets_are_added_where_only_the_tree_groups() -> None:
    """A tree without the author's brackets (a solved relation) must not change its meaning."""
    a, b = Name("a", HERE), Name("b", HERE)
    total = Binary("+", a, b, HERE, HERE)
    product = Binary("*", total, b, HERE, HERE)
    difference: Node = Binary("-", a, total, HERE, HERE)
    assert linear(picture(product)) == "(a + b)\u2009b"
    assert linear(picture(difference)) == "a \u2212 (a + b)"
    assert linear(picture(Negate(total, HERE))) == "\u2212(a + b)"
    assert linear(picture(Binary("^", Number("1.2e-3", HERE), b, HERE, HERE))).startswith("(1.2")
    assert picture(Group(a, HERE)) == Fence("(", ")", Symbol("a", italic("a")))


def test_short_numbers_stay_closed() -> None:
    """Four digits are not grouped, five are."""
    assert (grouped("1234"), grouped("12345"), grouped("-0.12345")) == (
        "1234",
        "12\u202f345",
        "\u22120.123\u202f45",
    )
