"""Solutions and failures of single relations by own steps, without the steps."""

import pytest

from tests.unit.model.symbolic.shown import roots


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("abs(x - a) = b", ["x = b + a", "x = -b + a"]),
        ("a^x = b", ["x = ln(b)/ln(a)"]),
        ("x^3 = a", ["x = a^(1/3)"]),
        ("x^-2 = a", ["x = a^(-1/2)", "x = -a^(-1/2)"]),
        ("x^1.5 = a", ["x = a^(2/3)"]),
        ("x^n = a", ["x = a^(1/n)"]),
        ("sqrt(x)/2 = a", ["x = (2*a)^2"]),
        ("cos(x) = a", ["x = acos(a)", "x = -acos(a)"]),
        ("tan(x)*b = a", ["x = atan(a/b)"]),
        ("acos(x/b) = a", ["x = b*cos(a)"]),
        ("a - (b + x) = c", ["x = a - c - b"]),
        ("a/(b/(c/x)) = d", ["x = a*c/(b*d)"]),
        ("-2*x = 6", ["x = -3"]),
        ("4.70*x = a", ["x = a/4.70"]),
        ("x/m = 2 s", ["x = 2 s*m"]),
        ("m*x = 2 s", ["x = (2 s)/m"]),
        ("2 V*x^2 = 8 V", ["x = sqrt(8 V/2 V)", "x = -sqrt(8 V/2 V)"]),
        ("sum(x, a, b) = c", ["x = c - a - b"]),
    ],
)
def test_an_unknown_that_stands_once_is_isolated(text: str, expected: list[str]) -> None:
    """The author's digits, units and order come back; parentheses stand where they must."""
    assert roots(text, "x") == expected


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("2*x + 3*x = 10", ["x = 2"]),
        ("0.5*x + 0.25*x = 3", ["x = 4"]),
        ("x/R_1 + (x - V)/R_2 = I", ["x = (I + V/R_2)/(1/R_1 + 1/R_2)"]),
        ("x^2 - 5*x + 6 = 0", ["x = 3", "x = 2"]),
        ("x^2 = 2*a*x - a^2", ["x = a"]),
        ("x*(x + a) = b*x", ["x = 0", "x = b - a"]),
        ("x*x*R = P", ["x = sqrt(P/R)", "x = -sqrt(P/R)"]),
        ("x + 1/x = a", ["x = (a + sqrt(a^2 - 4))/2", "x = (a - sqrt(a^2 - 4))/2"]),
        ("1/(1/x + 1/R) = x/2", ["x = R"]),
        ("x^2/(x - 1) = 1/(x - 1)", ["x = -1"]),
        ("((a + b)^2 - a^2 - 2*a*b - b^2)*x^2 + b*x = c - x", ["x = c/(b + 1)"]),
    ],
)
def test_linear_and_quadratic_relations_are_solved(text: str, expected: list[str]) -> None:
    """Terms are collected; what vanishes identically does not count, poles are no roots."""
    assert roots(text, "x") == expected


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("y = a", "unknown not in relation: x does not stand in loop"),
        ("x - x = a", "contradiction: x drops out, and the sides that are left are not equal"),
        ("a*x = a*x + 1", "contradiction: x drops out, and the sides that are left are not equal"),
        ("x - x + a = a", "dependent: both sides are always equal, so that x can be anything"),
        ("x^2 + x + 1 = 0", "not solvable: no real number x solves it"),
        ("2*x^2 + x^2 = -3", "not solvable: no real number x solves it"),
        ("sqrt(x) = -1", "not solvable: no value of x satisfies loop"),
        ("x/x = a", "contradiction: x drops out, and the sides that are left are not equal"),
        ("floor(x) + x = 3", "not solvable: the unknown stands inside floor(...)"),
        ("s[x] = 3", "not solvable: the unknown stands inside an element of a series"),
    ],
)
def test_what_has_no_solution_is_refused_with_its_reason(text: str, expected: str) -> None:
    """A refusal has its kind and names the unknown as the author wrote it."""
    assert roots(text, "x") == [expected]


def test_failures_name_the_author_s_spelling() -> None:
    """An unknown is called as it is typed, not by its key."""
    assert roots("theta - theta = a", "θ") == [
        "contradiction: theta drops out, and the sides that are left are not equal"
    ]


def test_a_solution_too_long_to_read_is_refused() -> None:
    """A relation of several hundred parts gives no formula that fills pages."""
    long = " + ".join(f"a_{n}*b_{n}*c_{n}" for n in range(90))
    assert roots(f"x*({long}) = y", "x") == ["too large: the formula of x is too long to read"]
