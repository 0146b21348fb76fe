"""The lexing cases everything else rests on: where a number, its unit and its band end."""

import pytest

from calcdoc.problems import Mistake
from calcdoc.text.derivation import derivation
from calcdoc.text.formula import formula, whole_formula
from calcdoc.text.given import Style, given
from calcdoc.text.nodes import (
    Binary,
    Call,
    Element,
    Group,
    Name,
    Negate,
    Node,
    Number,
    Quantity,
    UnitText,
    UnitWord,
)
from calcdoc.text.passage import passage_of
from calcdoc.text.scan import Scanner
from calcdoc.text.statements import Definition
from calcdoc.text.unparse import unparse

HERE = passage_of("", "x").whole
"""A place for nodes built by hand; places take no part in comparing."""


def unit(*words: tuple[str, str, int]) -> UnitText:
    """A unit of (joint, word, exponent)."""
    return UnitText(tuple(UnitWord(word, power, joint, HERE) for joint, word, power in words), HERE)


def quantity(digits: str, *words: tuple[str, str, int]) -> Quantity:
    """A number with its unit."""
    return Quantity(digits, unit(*words), HERE)


def binary(left: Node, op: str, right: Node) -> Binary:
    """Two operands with a sign between."""
    return Binary(op, left, right, HERE, HERE)


def name(text: str) -> Name:
    """A symbol."""
    return Name(text, HERE)


ONE_SECOND = quantity("1", ("", "s", 1))

FORMULAS: list[tuple[str, Node]] = [
    ("230 V", quantity("230", ("", "V", 1))),
    ("1 s/tau", binary(ONE_SECOND, "/", name("tau"))),
    (
        "60 s/(R*C)",
        binary(
            quantity("60", ("", "s", 1)),
            "/",
            Group(binary(name("R"), "*", name("C")), HERE),
        ),
    ),
    ("1 s/m", quantity("1", ("", "s", 1), ("/", "m", 1))),
    ("(1 s)/m", binary(Group(ONE_SECOND, HERE), "/", name("m"))),
    ("1 s/ m", binary(ONE_SECOND, "/", name("m"))),
    ("1 s*m", binary(ONE_SECOND, "*", name("m"))),
    ("1 s/m_a", binary(ONE_SECOND, "/", name("m_a"))),
    ("1 s/min(m, n)", binary(ONE_SECOND, "/", Call("min", (name("m"), name("n")), HERE, HERE))),
    ("1 s·R", binary(ONE_SECOND, "*", name("R"))),
    ("1 V·s", quantity("1", ("", "V", 1), ("·", "s", 1))),
    ("1 V·s/m^2", quantity("1", ("", "V", 1), ("·", "s", 1), ("/", "m", 2))),
    ("1 m²·K⁻¹", quantity("1", ("", "m", 2), ("·", "K", -1))),
    ("50 1/h", quantity("50", ("/", "h", 1))),
    ("50 1/h^2/m", quantity("50", ("/", "h", 2), ("/", "m", 1))),
    ("50*1/h", binary(binary(Number("50", HERE), "*", Number("1", HERE)), "/", name("h"))),
    ("3 min", quantity("3", ("", "min", 1))),
    ("3*min(x)", binary(Number("3", HERE), "*", Call("min", (name("x"),), HERE, HERE))),
    ("-3 mV/K", Negate(quantity("3", ("", "mV", 1), ("/", "K", 1)), HERE)),
    ("10 % + x", binary(quantity("10", ("", "%", 1)), "+", name("x"))),
    ("40 °C", quantity("40", ("", "°C", 1))),
    ("1.2e-3", Number("1.2e-3", HERE)),
    ("1e3 V", quantity("1e3", ("", "V", 1))),
    ("2*e", binary(Number("2", HERE), "*", name("e"))),
    ("2 - 1", binary(Number("2", HERE), "-", Number("1", HERE))),
    ("2-1", binary(Number("2", HERE), "-", Number("1", HERE))),
    (
        "-2^2",
        Negate(binary(Number("2", HERE), "^", Number("2", HERE)), HERE),
    ),
    (
        "2^3^4",
        binary(Number("2", HERE), "^", binary(Number("3", HERE), "^", Number("4", HERE))),
    ),
    ("2^-x", binary(Number("2", HERE), "^", Negate(name("x"), HERE))),
    (
        "a/b/c",
        binary(binary(name("a"), "/", name("b")), "/", name("c")),
    ),
    ("min(1,5)", Call("min", (Number("1", HERE), Number("5", HERE)), HERE, HERE)),
    ("a × b · c", binary(binary(name("a"), "*", name("b")), "*", name("c"))),
]


@pytest.mark.parametrize(("text", "tree"), FORMULAS, ids=[text for text, _ in FORMULAS])
def test_formula(text: str, tree: Node) -> None:
    """The text is read as exactly this tree."""
    assert whole_formula(passage_of("", text)) == tree


GIVEN: list[tuple[str, str, Style, tuple[str, str, str]]] = [
    ("230 V ± 10 %", "V", Style.RELATIVE, ("207", "230", "253")),
    ("230 V +/- 10 %", "V", Style.RELATIVE, ("207", "230", "253")),
    ("-5 V ± 10 %", "V", Style.RELATIVE, ("-5.5", "-5", "-4.5")),
    ("230 V ± 23 V", "V", Style.ABSOLUTE, ("207", "230", "253")),
    ("1 kV ± 20 V", "kV", Style.ABSOLUTE, ("0.98", "1", "1.02")),
    ("0.5 -10 % +8 %", "", Style.UNEQUAL, ("0.45", "0.5", "0.54")),
    ("0.5 +8 % -10 %", "", Style.UNEQUAL, ("0.45", "0.5", "0.54")),
    ("10 µF -20 % +50 %", "µF", Style.UNEQUAL, ("8", "10", "15")),
    ("-20 .. 45 °C", "°C", Style.RANGE, ("-20", "12.5", "45")),
    ("-20 °C .. 45 °C", "°C", Style.RANGE, ("-20", "12.5", "45")),
    ("1..2", "", Style.RANGE, ("1", "1.5", "2")),
    ("1 .. 2", "", Style.RANGE, ("1", "1.5", "2")),
    ("28.5 .. 30.0 .. 31.8 V", "V", Style.LIMITS, ("28.5", "30", "31.8")),
    ("1.5..2.5..3.5 V", "V", Style.LIMITS, ("1.5", "2.5", "3.5")),
    ("-3 mV/K", "mV/K", Style.FIXED, ("-3", "-3", "-3")),
    ("45 °C -5 K +10 K", "°C", Style.UNEQUAL, ("40", "45", "55")),
    ("5 V ± 100 ppm", "V", Style.RELATIVE, ("4.9995", "5", "5.0005")),
]


@pytest.mark.parametrize(("text", "shown", "style", "values"), GIVEN, ids=[g[0] for g in GIVEN])
def test_given(text: str, shown: str, style: Style, values: tuple[str, str, str]) -> None:
    """The band is read as stated, and its limits are exact decimal fractions."""
    scanner = Scanner(passage_of("", text))
    value = given(scanner)
    assert scanner.ended
    assert (value.unit.text, value.style) == (shown, style)
    assert [str(float(each)) for each in (value.least, value.nominal, value.greatest)] == [
        str(float(each)) for each in values
    ]


STOPS = [
    ("3.9 by sampling", "3.9", "by sampling"),
    ("3.9 V by sampling", "3.9 V", "by sampling"),
    ("3.9 at nominal", "3.9", "at nominal"),
    ("3.9 with margin 10 %", "3.9", "with margin 10 %"),
    ("3.9 % in dim", "3.9 %", "in dim"),
    ("x and y", "x", "and y"),
]


@pytest.mark.parametrize(("text", "taken", "left"), STOPS, ids=[each[0] for each in STOPS])
def test_clause_words_are_no_units(text: str, taken: str, left: str) -> None:
    """A formula ends before a clause word, also where a unit could follow."""
    scanner = Scanner(passage_of("", text))
    assert unparse(formula(scanner)) == taken
    scanner.blanks()
    assert text[scanner.at :] == left


REFUSED = [
    ("2 x", "after a number a word is a unit, and `x` is not one"),
    ("3 min(a, b)", "after a number `min` is the unit, not the function"),
    ("1,5 V", "the decimal marker is a point, not a comma"),
    ("1 000 V", "a number is written without blanks"),
    ("4k7", "`4k7` is neither a number nor a symbol"),
    ("5.", "`5.` is not a number"),
    ("5V", "a blank is missing between number and unit"),
    ("5  V", "one blank stands between a number and its unit"),
    ("1e100", "this number is too long or too large"),
    ("2 V^2.5", "the power of a unit is a whole number from -9 to 9"),
    ("1 s/m(3)", "there is no function `m`"),
    ("3(2)", "expected an operator or the end of the formula, found `(`"),
    ("٣", "expected a value, found `٣`"),
    ("1 + 2 3", "a number is written without blanks"),
]


@pytest.mark.parametrize(("text", "message"), REFUSED, ids=[each[0] for each in REFUSED])
def test_refused(text: str, message: str) -> None:
    """The text is refused with this headline."""
    with pytest.raises(Mistake) as caught:
        whole_formula(passage_of("", text))
    assert caught.value.finding.message == message


def test_a_unit_in_brackets_needs_a_blank_before_it() -> None:
    """``X [V]`` is a symbol and a unit, ``X[3]`` an element of a series."""
    statement = derivation(passage_of("", "X [V] = 3 V"))
    assert isinstance(statement, Definition)
    assert statement.unit is not None
    assert (statement.symbol.name, statement.unit.text) == ("X", "V")
    with pytest.raises(Mistake, match="expected the name of the running index"):
        derivation(passage_of("", "X[3] = 3 V"))
    assert isinstance(whole_formula(passage_of("", "X[3]")), Element)
