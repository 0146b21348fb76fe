"""From tree to text, and what a record puts in the place of a symbol."""

import pytest

from calcdoc.text.formula import grammar, parse_text
from calcdoc.text.nodes import Name, Node
from calcdoc.text.unparse import unparse

TEXTS = [
    "sqrt(2)*V_line - 2*V_D",
    "60 s/(R*C)",
    "-(a + b)^-2",
    "3 V·K^-1/m^2",
    "50 1/h",
    "if(a < b and not c >= d or e > f, 1, min(2, x))",
    "1 <= x <= 3",
    "I_h[3] + I_h[2*n]",
    'lookup("table a", 3)',
]


@pytest.mark.parametrize("text", TEXTS)
def test_as_the_author_wrote(text: str) -> None:
    """A formula in house style is written back letter for letter."""
    assert unparse(parse_text(text)) == text


def test_house_style() -> None:
    """Blanks and signs that mean the same are made alike; digits and units are kept."""
    assert unparse(parse_text("( 1.50+x )·y×2 m²")) == "(1.50 + x)*y*2 m^2"


def test_a_leaf_may_be_replaced() -> None:
    """Values take the place of symbols, the rest is kept."""

    def values(node: Node) -> str | None:
        return "325 V" if node == Name("V", node.span) else None

    assert unparse(parse_text("2*V/R"), values) == "2*325 V/R"


@pytest.mark.parametrize("text", ["1 +", "", "2 x", "a b", "f(x)"])
def test_parse_text_refuses(text: str) -> None:
    """What is no formula is a ValueError with the finding's headline."""
    with pytest.raises(ValueError, match=r"expected|after a number|no function"):
        parse_text(text)


def test_grammar_is_collected() -> None:
    """The grammar shown to users has every rule once, in order."""
    rules = [rule.split(" = ")[0] for rule in grammar()]
    assert rules == [
        "condition",
        "conjunction",
        "negation",
        "comparison",
        "sum",
        "product",
        "sign",
        "power",
        "atom",
        "call",
        "element",
    ]
