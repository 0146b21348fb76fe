"""Derivatives, simplification, elimination and proofs of identity, as text."""

import pytest

from calcdoc.model.symbolic import (
    Blocked,
    Failure,
    derivative,
    eliminate,
    is_identity,
    simplified,
)
from calcdoc.text.formula import parse_text
from tests.unit.model.symbolic.shown import printed


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("a*b", "0"),
        ("x", "1"),
        ("a*x", "a"),
        ("C/x", "-C/x^2"),
        ("a/(b*x)", "-a/(b*x^2)"),
        ("a/(b*x^2)", "-2*a/(b*x^3)"),
        ("x/(R_1 + x)", "R_1/(R_1 + x)^2"),
        ("V*x/(R_1 + x)", "V*R_1/(R_1 + x)^2"),
        ("(V - x)^2/R", "-2*(V - x)/R"),
        ("V_0*exp(-x/(R*C))", "-V_0*exp(-x/(R*C))/(R*C)"),
        ("I*sqrt(x)/sqrt(a)", "I/(2*sqrt(x)*sqrt(a))"),
        ("x^n", "n*x^(n - 1)"),
        ("a^x", "a^x*ln(a)"),
        ("ln(x/a)", "1/x"),
        ("log10(x)", "1/(x*ln(10))"),
        ("tan(2*x)", "2/cos(2*x)^2"),
        ("atan(x/a)", "1/(a*(1 + (x/a)^2))"),
        ("rss(x, a)", "x/rss(x, a)"),
        ("sum(x, a, x)", "2"),
        ("abs(x - a)", "(x - a)/abs(x - a)"),
        ("min(x, a, b)", "if(x <= a and x <= b, 1, 0)"),
        ("max(x*R, V)", "if(x*R >= V, R, 0*R)"),
        ("if(x > 1 V, x^2, a*x)", "if(x > 1 V, 2*x, a)"),
    ],
)
def test_a_derivative_reads_well(text: str, expected: str) -> None:
    """Factors stay in the author's order; pieces of one kind keep their unit."""
    found = derivative(parse_text(text), "x")
    assert not isinstance(found, Failure)
    assert printed(found) == expected


@pytest.mark.parametrize(
    ("text", "what"),
    [("floor(x)", "floor"), ("a*ceil(2*x)", "ceil"), ("s[x]", "an element of a series")],
)
def test_a_jump_has_no_derivative(text: str, what: str) -> None:
    """The failure names the function, and a formula without the symbol is fine."""
    expected = Failure("no derivative", f"{what} has no derivative")
    assert derivative(parse_text(text), "x") == expected
    assert derivative(parse_text(text), "y") == parse_text("0")


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("0*x + 1*y", "y"),
        ("2*3*x", "6*x"),
        ("1.5*x*2", "3*x"),
        ("0.1 + 0.2", "0.3"),
        ("1/2 + 1/3", "5/6"),
        ("a/2/3", "a/6"),
        ("a*b/b", "a"),
        ("(a/b)/c", "a/(b*c)"),
        ("a/(b/c)", "a*c/b"),
        ("a*(-b)", "-a*b"),
        ("--x", "x"),
        ("a - (b - a)", "2*a - b"),
        ("R*V - V*R", "0"),
        ("sqrt(x)*sqrt(x)", "x"),
        ("x/sqrt(x)", "sqrt(x)"),
        ("x^2/x", "x"),
        ("(1 s)/m*m", "1 s"),
    ],
)
def test_simplification_tidies(text: str, expected: str) -> None:
    """Zeros, ones, signs, numbers, like terms and common factors."""
    assert printed(simplified(parse_text(text))) == expected


@pytest.mark.parametrize(
    "text", ["V + I*R", "0.50*x", "a - (b - c)", "(a + b)*(c + d)", "sqrt(x^2)", "2 s/tau"]
)
def test_simplification_leaves_the_author_s_form(text: str) -> None:
    """Where nothing is to be tidied the very tree comes back."""
    tree = parse_text(text)
    assert simplified(tree) is tree


DEFINITIONS = {
    key: parse_text(text)
    for key, text in {
        "P": "V*I",
        "I": "(V - V_D)/R",
        "T": "T_a + P*R_th",
        "u": "v + 1",
        "v": "u/2",
    }.items()
}


def test_quantities_between_are_put_in_as_written() -> None:
    """Formulas stand in parentheses where they must, and are not rearranged."""
    found = eliminate(parse_text("T - 2*P"), DEFINITIONS, {"T_a", "R_th", "V", "V_D", "R"})
    assert not isinstance(found, Blocked | Failure)
    assert printed(found) == "T_a + V*((V - V_D)/R)*R_th - 2*(V*((V - V_D)/R))"


def test_a_kept_quantity_is_not_put_in() -> None:
    """What is to be kept stays, though it has a formula."""
    found = eliminate(parse_text("T"), DEFINITIONS, {"T_a", "R_th", "P"})
    assert found == parse_text("T_a + P*R_th")


def test_the_first_quantity_in_the_way_is_named() -> None:
    """A given quantity that is not kept blocks; so does a circle, which is said."""
    assert eliminate(parse_text("T"), DEFINITIONS, {"T_a", "R_th", "V"}) == Blocked("V_D")
    assert eliminate(parse_text("u"), DEFINITIONS, set()) == Blocked("u", circle=True)
    assert eliminate(parse_text("s[2]"), DEFINITIONS, set()) == Blocked("s")


def test_a_restatement_that_explodes_is_too_large() -> None:
    """Forty doublings are refused at once instead of filling the memory."""
    doubled = {f"a_{n}": parse_text(f"a_{n + 1}*a_{n + 1}") for n in range(40)}
    found = eliminate(parse_text("a_0"), doubled, {"a_40"})
    assert isinstance(found, Failure)
    assert (found.kind, found.message) == ("too large", "the formula has more than 400 parts")


@pytest.mark.parametrize(
    ("left", "right", "expected"),
    [
        ("a*(b + c)", "a*b + a*c", True),
        ("a + b", "a - b", False),
        ("1 V", "1000 mV", True),
        ("20 °C", "293.15 K", True),
        ("sqrt(x)^2", "x", True),
        ("sqrt(x^2)", "x", None),
        ("sqrt(12)", "2*sqrt(3)", True),
        ("sqrt(a*b)", "sqrt(a)*sqrt(b)", True),
        ("abs(x)", "x", None),
        ("(a^(1/3))^3", "a", True),
        ("exp(-(-R*C*ln(V/V_0))/(R*C))", "V/V_0", True),
        ("sin(pi - asin(r))", "r", True),
        ("cos(-acos(r))", "r", True),
        ("asin(sin(x))", "x", None),
        ("10^log10(x)", "x", True),
        ("floor(x)", "x", None),
        ("max(a, b)", "max(b, a)", True),
        ("sqrt(-4)", "x", None),
        ("(sqrt(x^2) - x)*(sqrt(y^2) - y)", "0", None),
    ],
)
def test_identities_are_proved_or_left_open(left: str, right: str, expected: bool | None) -> None:
    """True only for what holds for real numbers too; False only without functions and roots."""
    assert is_identity(parse_text(left), parse_text(right)) is expected
