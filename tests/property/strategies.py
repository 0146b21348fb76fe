"""Formula trees, units, dimensions and texts, as hypothesis draws them."""

from fractions import Fraction
from typing import Final

from hypothesis import strategies as st
from hypothesis.strategies import SearchStrategy

from calcdoc.frozen import replace
from calcdoc.source import Span
from calcdoc.text.names import FUNCTIONS
from calcdoc.text.nodes import (
    Binary,
    Call,
    Comparison,
    Element,
    Group,
    Logic,
    Name,
    Negate,
    Node,
    Not,
    Number,
    Quantity,
    Text,
    UnitText,
    UnitWord,
)
from calcdoc.units import Dimension

HERE: Final = Span("", 0, 0)
DEEP: Final = 3

DIGITS: Final = st.one_of(
    st.integers(0, 10**6).map(str),
    st.decimals(0, 10**4, places=3, allow_nan=False).map(str),
    st.sampled_from(("0.5", "1e3", "2.50", "1.2e-3", "6E+2", "007")),
)
NAMES: Final = st.sampled_from(
    ("V_line", "I_reg", "R_th_JA", "η", "ΔV", "x", "theta_JA", "e\u0301_x", "C2", "pi")
)
UNIT_WORDS: Final = ("V", "mA", "µF", "uF", "kΩ", "ohm", "s", "min", "K", "°C", "%", "lm", "m")


def units() -> SearchStrategy[UnitText]:
    """Units of one to four words with small exponents; what divides stands after what does not."""
    exponents = st.sampled_from((1, 1, 1, 2, -1, 3, -2))
    first = st.builds(
        UnitWord,
        st.sampled_from(UNIT_WORDS),
        exponents,
        st.sampled_from(("", "", "/")),
        st.just(HERE),
    )
    more = st.builds(
        UnitWord, st.sampled_from(UNIT_WORDS), exponents, st.sampled_from("·/"), st.just(HERE)
    )
    return st.builds(_unit_text, first, st.lists(more, max_size=3))


def _unit_text(head: UnitWord, rest: list[UnitWord]) -> UnitText:
    if head.joint == "/":
        rest = [replace(each, joint="/") for each in rest]
    return UnitText((head, *sorted(rest, key=lambda each: each.joint == "/")), HERE)


def _binary(op: str, left: Node, right: Node) -> Node:
    return Binary(op, left, right, HERE, HERE)


@st.composite
def _atoms(draw: st.DrawFn, depth: int, *, base: bool = False) -> Node:
    """An atom; as the base of a power it is no quantity, for that power would be the unit's."""
    kinds = ["number", "name"] if base else ["number", "quantity", "name"]
    if depth > 0:
        kinds += ["group", "call", "element"]
    match draw(st.sampled_from(kinds)):
        case "number":
            return Number(draw(DIGITS), HERE)
        case "quantity":
            return Quantity(draw(DIGITS), draw(units()), HERE)
        case "name":
            return Name(draw(NAMES), HERE)
        case "group":
            return Group(draw(_conditions(depth - 1)), HERE)
        case "element":
            return Element(draw(NAMES), draw(sums(depth - 1)), HERE)
        case _:
            return draw(_calls(depth))


@st.composite
def _calls(draw: st.DrawFn, depth: int) -> Node:
    name = draw(st.sampled_from(sorted(FUNCTIONS)))
    least, most = FUNCTIONS[name]
    values = st.lists(_conditions(depth - 1), min_size=least, max_size=min(most, 3))
    arguments = draw(values)
    if name == "lookup":
        arguments[0] = Text(draw(st.sampled_from(("table", "", "a b"))), HERE)
    return Call(name, tuple(arguments), HERE, HERE)


@st.composite
def _signs(draw: st.DrawFn, depth: int) -> Node:
    kind = draw(st.sampled_from(("atom", "atom", "negate", "power"))) if depth else "atom"
    if kind == "negate":
        return Negate(draw(_signs(depth - 1)), HERE)
    if kind == "power":
        return _binary("^", draw(_atoms(depth - 1, base=True)), draw(_signs(depth - 1)))
    return draw(_atoms(depth))


@st.composite
def _products(draw: st.DrawFn, depth: int) -> Node:
    tree = draw(_signs(depth))
    for op in draw(st.lists(st.sampled_from("*/"), max_size=2)) if depth else ():
        tree = _binary(op, tree, draw(_signs(depth - 1)))
    return tree


@st.composite
def sums(draw: st.DrawFn, depth: int = DEEP) -> Node:
    """Sums of products, as a formula is one."""
    tree = draw(_products(depth))
    for op in draw(st.lists(st.sampled_from("+-"), max_size=2)) if depth else ():
        tree = _binary(op, tree, draw(_products(depth - 1)))
    return tree


@st.composite
def _comparisons(draw: st.DrawFn, depth: int) -> Node:
    signs = draw(st.lists(st.sampled_from(("<", "<=", ">", ">=")), max_size=2)) if depth else []
    operands = tuple(draw(sums(depth - 1 if signs else depth)) for _ in range(len(signs) + 1))
    return Comparison(operands, tuple(signs), HERE) if signs else operands[0]


@st.composite
def _negations(draw: st.DrawFn, depth: int) -> Node:
    if depth and draw(st.integers(0, 5)) == 0:
        return Not(draw(_negations(depth - 1)), HERE)
    return draw(_comparisons(depth))


@st.composite
def _conditions(draw: st.DrawFn, depth: int) -> Node:
    """Sums most of the time; comparisons joined by words otherwise."""
    if not depth or draw(st.integers(0, 2)):
        return draw(sums(depth))
    either = draw(_conjunctions(depth - 1))
    for _ in range(draw(st.integers(0, 1))):
        either = Logic("or", either, draw(_conjunctions(depth - 1)), HERE)
    return either


@st.composite
def _conjunctions(draw: st.DrawFn, depth: int) -> Node:
    both = draw(_negations(depth))
    for _ in range(draw(st.integers(0, 1))):
        both = Logic("and", both, draw(_negations(depth)), HERE)
    return both


def formulas() -> SearchStrategy[Node]:
    """Every tree the grammar allows, also conditions."""
    return st.one_of(sums(), _conditions(DEEP))


def dimensions() -> SearchStrategy[Dimension]:
    """Dimensions with small rational exponents."""
    exponents = st.sampled_from([Fraction(n, d) for n in range(-4, 5) for d in (1, 2, 3)])
    return st.builds(Dimension, st.tuples(*[exponents] * 7))


PIECES: Final = (
    "```", "~~~", "````", "document", "inputs", "derive", "criteria", "caution", "hazards",
    "assumptions", "references", "use", "\n", "\n\n", " ", "  ", "\t", "    ", "|", "\\|", '"', "#",
    "- ", "> ", "1. ", "[", "]", "(", ")", "{", "}", ":", "=", "<=", "<", "+", "-", "*", "/", "^",
    "·", "±", "+/-", "..", ".", ",", "%", "°C", "µF", "V", "m", "s", "min", "max(", "if(", "V_a",
    "η", "e\u0301", "1", "0.5", "1e9", "230 V", "1/", "by", "at", "nominal", "with margin", "in",
    "open:", "closed:", "supply", "stored", "through", "by test:", "{V_a:least}", "[A, 2]",
    "cases", "mode dim: ", "fault ", "crosschecks", "K: measured ", "against", "any of ",
    "accept R ", "until 2027-06-30", "in every fault", "when ", "dim", "as normal k=3", "bias ",
    "takes", "gives", "use residual-voltage as m", "m.tau", "m.", "C = ", "R = ", "V_0 = ",
    "each of ", "shared ", "R: V_a <= 5 V ", "R: ", "normal", "not below",
    "\u2028", "\u00a0", "\x00", "\x1b", "\u202e", "\U0001f600", 'number = "1"', "[[history]]",
)  # fmt: skip
"""What texts are made of, in and out of place."""


def texts() -> SearchStrategy[str]:
    """Texts that look like designs now and then, and anything else."""
    soup = st.lists(st.sampled_from(PIECES), max_size=60).map("".join)
    block = st.builds(
        lambda word, inner: f"```{word}\n{inner}\n```\n",
        st.sampled_from(
            (
                "inputs",
                "derive",
                "criteria",
                "assumptions",
                "hazards",
                "references",
                "cases",
                "crosschecks",
                "conditions",
                "takes",
                "gives",
                "use residual-voltage as m",
            )
        ),
        soup,
    )
    return st.one_of(soup, st.lists(block, max_size=3).map("".join), st.text(max_size=80))
