"""Solved lines put back into their relations, linear networks, derivatives, printed trees.

The judges are mpmath and SymPy, which read our trees through two small readers of this file, and
numpy for networks.
"""

from collections.abc import Callable, Mapping
from typing import Any, Final

import mpmath  # type: ignore[import-untyped]
import numpy as np
import pytest
import sympy  # type: ignore[import-untyped]
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from hypothesis.strategies import SearchStrategy

from calcdoc.model.symbolic import (
    Failure,
    Roots,
    Solution,
    build,
    derivative,
    grouping,
    is_identity,
    simplified,
    solve,
)
from calcdoc.model.symbolic.trees import replaced
from calcdoc.text import literal
from calcdoc.text.formula import parse_text
from calcdoc.text.names import fold
from calcdoc.text.nodes import (
    Binary,
    Call,
    Comparison,
    Group,
    Logic,
    Name,
    Negate,
    Node,
    Number,
    Quantity,
    walk,
)
from calcdoc.text.unparse import unparse
from tests.property.strategies import sums

pytestmark = pytest.mark.property

KNOWN: Final = ("a", "b", "C_res", "R_1", "η")
UNKNOWN: Final = "x"
Values = Mapping[str, Any]


class Undefined(Exception):
    """The formula has no real value here."""


# --- reading our trees with mpmath ----------------------------------------------------------------

_MP: Final[dict[str, Callable[..., Any]]] = {
    "exp": mpmath.exp, "sin": mpmath.sin, "cos": mpmath.cos, "tan": mpmath.tan,
    "atan": mpmath.atan, "abs": abs, "min": min, "max": max,
}  # fmt: skip


def value(node: Node, values: Values) -> Any:  # noqa: ANN401
    """The real value of a formula with 40 digits."""
    match node:
        case Number(digits):
            return mpmath.mpf(digits)
        case Quantity(digits, unit):
            factor = literal.resolve(unit).factor
            return mpmath.mpf(digits) * factor.numerator / factor.denominator
        case Name(name):
            return mpmath.pi if name == "pi" else values[fold(name)]
        case Group(inner):
            return value(inner, values)
        case Negate(operand):
            return -value(operand, values)
        case Binary(op, left, right):
            return _operation(op, value(left, values), value(right, values))
        case Call("if", (condition, one, other)):
            return value(one if holds(condition, values) else other, values)
        case Call(function, arguments):
            return _function(function, [value(each, values) for each in arguments])
        case _:
            raise AssertionError(node)


def holds(node: Node, values: Values) -> bool:
    """Whether a condition of a derivative holds."""
    match node:
        case Comparison((left, right), (sign,)):
            one, other = value(left, values), value(right, values)
            return bool(one <= other if sign == "<=" else one >= other)
        case Logic("and", left, right):
            return holds(left, values) and holds(right, values)
        case _:
            raise AssertionError(node)


def _operation(op: str, one: Any, other: Any) -> Any:  # noqa: ANN401
    match op:
        case "+":
            return one + other
        case "-":
            return one - other
        case "*":
            return one * other
        case "/":
            if other == 0:
                raise Undefined
            return one / other
        case _:
            whole = other == mpmath.nint(other)
            if (one < 0 and not whole) or (one == 0 and other <= 0) or abs(other) > 1000:
                raise Undefined
            return one ** (int(other) if whole else other)


def _function(function: str, arguments: list[Any]) -> Any:  # noqa: ANN401
    first = arguments[0]
    match function:
        case "sqrt":
            if first < 0:
                raise Undefined
            return mpmath.sqrt(first)
        case "ln" | "log10":
            if first <= 0:
                raise Undefined
            return mpmath.log(first) if function == "ln" else mpmath.log10(first)
        case "asin" | "acos":
            if abs(first) > 1:
                raise Undefined
            return mpmath.asin(first) if function == "asin" else mpmath.acos(first)
        case "sum":
            return mpmath.fsum(arguments)
        case "rss":
            return mpmath.sqrt(mpmath.fsum(each**2 for each in arguments))
        case "exp" if abs(first) > 10**4:
            raise Undefined
        case _:
            return _MP[function](*arguments)


def value_or_none(node: Node, values: Values) -> Any:  # noqa: ANN401
    """The value, or None where there is no real one."""
    try:
        with mpmath.workdps(40):
            return value(node, values)
    except (Undefined, OverflowError):
        return None


# --- reading our trees with SymPy -----------------------------------------------------------------

_SYMPY: Final = {"ln": "log", "abs": "Abs"}


def symbol(name: str) -> Any:  # noqa: ANN401
    """A drawn symbol is positive; the unknown and the right side may be anything."""
    return sympy.Symbol(name, positive=True if name in KNOWN else None)


def expression(node: Node) -> Any:  # noqa: ANN401
    """A formula as SymPy's, every known symbol positive."""
    match node:
        case Number(digits):
            return sympy.Rational(digits)
        case Name(name):
            return sympy.pi if name == "pi" else symbol(name)
        case Group(inner):
            return expression(inner)
        case Negate(operand):
            return -expression(operand)
        case Binary(op, left, right):
            one, other = expression(left), expression(right)
            return {
                "+": lambda: one + other, "-": lambda: one - other, "*": lambda: one * other,
                "/": lambda: one / other, "^": lambda: one**other,
            }[op]()  # fmt: skip
        case Call("log10", (argument,)):
            return sympy.log(expression(argument), 10)
        case Call(function, arguments):
            made = getattr(sympy, _SYMPY.get(function, function))
            return made(*(expression(each) for each in arguments))
        case _:
            raise AssertionError(node)


# --- relations ------------------------------------------------------------------------------------

_LAYERS: Final = (
    "({0} + {1})", "({0} - {1})", "({1} - {0})", "{0}*{1}", "{1}*{0}", "({0}/{1})", "({1}/{0})",
    "(-{0})", "{1}/({0}/{2})", "({0}/{1})/{2}", "1/({1} + 1/{0})", "{0}^2", "{0}^3", "{0}^-1",
    "{0}^(3/2)", "{0}^0.4", "sqrt({0})", "exp({0}/{1})", "exp(-{0})", "ln({0})", "log10({0}/{1})",
    "2^{0}", "{1}^{0}", "10^({0}/20)", "abs({0})", "sin({0})", "cos({0})", "tan({0})", "asin({0})",
    "acos({0}/{1})", "atan({0})", "rss({0}, {1})", "sum({1}, {0}, 2)", "({0} + {1})*({2} + 1)",
)  # fmt: skip
_FACTORS: Final = (*KNOWN, "2", "0.5", "4.70", "sqrt(2)", "(a + b)", "R_1/(R_1 + b)", "exp(-b)")


@st.composite
def once(draw: st.DrawFn) -> Node:
    """A formula in which the unknown stands once, under one to four operations."""
    text = UNKNOWN
    for _ in range(draw(st.integers(1, 4))):
        layer = draw(st.sampled_from(_LAYERS))
        inner = f"({text})" if layer.startswith(("{0}", "({0}^")) or "^{0}" in layer else text
        text = layer.format(inner, draw(st.sampled_from(_FACTORS)), draw(st.sampled_from(KNOWN)))
        text = text.replace("/sqrt(2)*", "/(sqrt(2))*")
    return parse_text(f"({text})")


_COEFFICIENTS: Final = (*KNOWN, "2", "3", "0.5", "(a + b)", "a*b", "C_res/b", "R_1^2", "1/a")


@st.composite
def polynomials(draw: st.DrawFn) -> tuple[Node, Node]:
    """Relations of degree 1 or 2 in the unknown after clearing denominators."""
    k = [draw(st.sampled_from(_COEFFICIENTS)) for _ in range(5)]
    form = draw(
        st.sampled_from(
            (
                "{0}*x + {1}*x = {2}",
                "{0}*x - {1} = {2} - {3}*x",
                "{0}*x/({1} + x) = {2}",
                "{0}/(x + {1}) = {2}/x",
                "1/(1/x + 1/({0})) = {1}*x",
                "({0} + x)/({1} + {2}*x) = {3}",
                "{0}*x^2 + {1}*x = {2}",
                "{0}*x^2 - {1}*x - {2} = {3}*x",
                "({0} + x)*({1} + x) = {0}*({1} + {2})",
                "x + {0}/x = {1} + {2} + {3}",
                "{0}*x*x = {1} + {2}*x^2 + x^2*({0})",
                "1/x + 1/(x + {0}) = {1}",
                "x*({0} - {1}*x) = -({2})",
                "{0}/(x*({1} + {2}/x)) = {3}",
            )
        )
    )
    left, right = form.format(*k).split(" = ")
    return parse_text(left), parse_text(right)


def worlds() -> SearchStrategy[dict[str, Any]]:
    """Values of all symbols."""
    one = st.integers(11, 399).map(lambda n: mpmath.mpf(n) / 97)
    return st.fixed_dictionaries({fold(name): one for name in (*KNOWN, UNKNOWN)})


_ONE_WAY: Final = (
    "minus sign", "square both", "take the sine", "take the cosine", "take the tangent",
)  # fmt: skip


def settles(left: Node, right: Node, values: Values) -> bool | None:
    """Whether the sides agree to 1e-9 of the larger; None where one has no value."""
    one, other = value_or_none(left, values), value_or_none(right, values)
    if one is None or other is None:
        return None
    return bool(abs(one - other) <= mpmath.mpf("1e-9") * max(abs(one), abs(other), 1))


def put_in(found: Solution, values: Values) -> dict[str, Any] | None:
    """The world with the unknown at a root, or None where the root has no real value."""
    root = value_or_none(found.tree, values)
    return None if root is None else {**values, found.unknown: root}


@settings(max_examples=240)
@given(once(), worlds())
def test_an_isolated_unknown_satisfies_its_relation(left: Node, values: dict[str, Any]) -> None:
    """Roots exist without asking anyone; one of them is the value that made the right side."""
    target = value_or_none(left, values)
    assume(target is not None and abs(target) < 1e6)
    assume(target != 0)
    values["y"] = target
    outcome = solve([("r", left, Name("y", left.span))], [UNKNOWN])
    assert isinstance(outcome, Roots), unparse(left)
    satisfied = []
    for (found,) in outcome.combinations:
        assert found.how == "isolated"
        for step in found.steps:
            assert parse_text(unparse(step.left)) == step.left
            assert parse_text(unparse(step.right)) == step.right
        world = put_in(found, values)
        good = world and settles(left, Name("y", left.span), world)
        if good is False:  # only what a step that cannot be turned back brought in
            assert any(said in step.words for step in found.steps for said in _ONE_WAY)
        satisfied.append(good)
        if good:
            _sympy_agrees(left, found.tree, values)
    periodic = any(f"{name}(" in unparse(left) for name in ("sin", "cos", "tan"))
    negative_base = "^(3" in unparse(left) or "^3" in unparse(left) or "^0.4" in unparse(left)
    assert any(satisfied) or periodic or negative_base, unparse(left)


def _sympy_agrees(left: Node, tree: Node, values: Values) -> None:
    """SymPy, given the root in place of the unknown, finds the same left side."""
    if any(isinstance(n, Call) and n.function in ("rss", "sum") for n in _walk(left)):
        return
    known = {symbol(k): sympy.Float(str(v), 40) for k, v in values.items()}
    unknown = symbol(UNKNOWN)
    root = expression(tree).xreplace(known)
    got = expression(left).xreplace({k: v for k, v in known.items() if k != unknown})
    got = sympy.N(got.xreplace({unknown: root}), 30)
    wanted = sympy.Float(str(values["y"]), 40)
    assert abs(got - wanted) <= 1e-9 * max(abs(wanted), 1), (unparse(left), unparse(tree))


def _walk(node: Node) -> list[Node]:
    return list(walk(node))


@settings(max_examples=150)
@given(polynomials(), worlds(), st.integers(0, 4))
def test_linear_and_quadratic_roots_are_all_roots(
    relation: tuple[Node, Node], values: dict[str, Any], which: int
) -> None:
    """Each root satisfies the relation, by proof where there is one; none is missing."""
    left, right = relation
    outcome = solve([("r", left, right)], [UNKNOWN])
    if isinstance(outcome, Failure):
        assert outcome.kind in ("not solvable", "contradiction", "dependent")
        return
    numeric = []
    for (found,) in outcome.combinations:
        assert found.how in ("linear", "quadratic", "isolated")
        if which == 0:  # a proof takes longer than all the rest
            assert is_identity(*(_put(side, found) for side in relation)) is True
        world = put_in(found, values)
        if world is None:
            continue
        assert settles(left, right, world) is not False, (unparse(left), unparse(found.tree))
        numeric.append(world[UNKNOWN])
    expected = _real_roots(left, right, values)
    if all(each is not None for each in numeric):
        assert len(numeric) >= len(expected)
    for each in expected:
        assert any(abs(each - got) <= 1e-9 * (1 + abs(each)) for got in numeric)


def _put(side: Node, found: Solution) -> Node:
    return replaced(side, {found.unknown: found.tree})


def _real_roots(left: Node, right: Node, values: Values) -> list[Any]:
    """The real zeros of the numerator that are no zeros of the denominator, by SymPy."""
    known = {
        symbol(k): sympy.Rational(int(v * 97 + mpmath.mpf("0.5")), 97)
        for k, v in values.items()
        if k != UNKNOWN
    }
    unknown = symbol(UNKNOWN)
    plain = sympy.Symbol("z")
    difference = (expression(left) - expression(right)).xreplace({**known, unknown: plain})
    top, under = sympy.fraction(sympy.cancel(sympy.together(difference)))
    if not top.has(plain):
        return []
    roots = sympy.Poly(top, plain).nroots(n=30)
    real = [mpmath.mpf(str(each)) for each in roots if each.is_real]
    poles = under.has(plain)
    assert not poles or all(abs(under.subs(plain, sympy.Float(str(r), 30))) > 1e-12 for r in real)
    return [r for r in real if value_or_none(left, {**values, UNKNOWN: r}) is not None]


@settings(max_examples=40)
@given(st.integers(2, 4), st.randoms(use_true_random=False))
def test_linear_networks_agree_with_numpy(size: int, random: Any) -> None:  # noqa: ANN401
    """Node potentials of a network of conductances, symbols throughout."""
    names = [f"V_{n}" for n in range(size)]
    values: dict[str, Any] = {}
    matrix, currents = np.zeros((size, size)), np.zeros(size)
    relations = []
    for i in range(size):
        terms = [f"G_{i}*{names[i]}"]
        values[f"G_{i}"] = random.randint(1, 9)
        matrix[i, i] += values[f"G_{i}"]
        for j in range(size):
            link = f"G_{min(i, j)}{max(i, j)}"
            if i != j and values.setdefault(link, random.randint(0 if size > 2 else 1, 3)):
                terms.append(f"({names[i]} - {names[j]})*{link}")
                matrix[i, i] += values[link]
                matrix[i, j] -= values[link]
        currents[i] = values[f"I_{i}"] = random.randint(-5, 5)
        text = " + ".join(terms)
        relations.append((f"r{i}", parse_text(text), parse_text(f"I_{i}")))
    outcome = solve(relations, names, 0.01)
    if isinstance(outcome, Failure):  # four meshes of everything to everything fill pages
        assert outcome.kind in ("too large", "out of time")
        assert size == 4
        return
    (combination,) = outcome.combinations
    expected = np.linalg.solve(matrix, currents)
    world = {fold(key): mpmath.mpf(each) for key, each in values.items()}
    for found, wanted in zip(combination, expected, strict=True):
        assert found.how == "linear"
        got = value_or_none(found.tree, world)
        assert abs(float(got) - wanted) < 1e-9 * (1 + abs(wanted))


@settings(max_examples=120)
@given(once(), worlds())
def test_a_derivative_is_the_slope(tree: Node, values: dict[str, Any]) -> None:
    """The formula agrees with the slope that mpmath and SymPy find."""
    found = derivative(tree, UNKNOWN)
    assert not isinstance(found, Failure)
    assert parse_text(unparse(found)) == found
    with mpmath.workdps(40):
        at = values[UNKNOWN]
        step = mpmath.mpf("1e-12")
        around = [value_or_none(tree, {**values, UNKNOWN: at + k * step}) for k in (-1, 1)]
        slope = value_or_none(found, values)
        assume(slope is not None and None not in around)
        numeric = (around[1] - around[0]) / (2 * step)
        assume(abs(slope) < 1e8)
        assert abs(slope - numeric) <= mpmath.mpf("1e-6") * (1 + abs(slope)), unparse(found)
    if not any(isinstance(n, Call) and n.function in ("rss", "sum", "abs") for n in _walk(tree)):
        known = {symbol(k): sympy.Float(str(v), 40) for k, v in values.items()}
        theirs = expression(tree).diff(symbol(UNKNOWN)).xreplace(known)
        assert abs(sympy.N(theirs, 30) - sympy.Float(str(slope), 30)) <= 1e-9 * (1 + abs(slope))


@settings(max_examples=150)
@given(once(), st.lists(st.sampled_from("+-*/^n"), min_size=1, max_size=4), once(), worlds())
def test_simplification_keeps_the_value_and_prints_as_it_is(
    tree: Node, ops: list[str], other: Node, values: dict[str, Any]
) -> None:
    """Simplified trees print what they are and are equal where the given one has a value."""
    makers = {"+": build.add, "-": build.subtract, "*": build.multiply, "/": build.divide}
    for op in ops:
        if op == "n":
            tree = build.negate(tree)
        elif op == "^":
            tree = build.power(tree, 2)
        else:
            tree = makers[op](tree, other)
        assert parse_text(unparse(tree)) == tree
    tidy = simplified(tree)
    assert parse_text(unparse(tidy)) == tidy
    before, after = value_or_none(tree, values), value_or_none(tidy, values)
    if before is not None:
        assert after is not None
        assert abs(before - after) <= mpmath.mpf("1e-20") * (1 + abs(before)) + mpmath.mpf("1e-18")


@settings(max_examples=100)
@given(sums(2), sums(2), st.sampled_from("+-*/^n"))
def test_whatever_is_built_reads_back(left: Node, right: Node, op: str) -> None:
    """Any two formulas of the language joined by a constructor print as the tree that they are."""
    makers: dict[str, Callable[[Node, Node], Node]] = {
        "+": build.add, "-": build.subtract, "*": build.multiply, "/": build.divide,
        "^": build.power, "n": lambda one, _: build.negate(one),
    }  # fmt: skip
    for tree in (makers[op](left, right), grouping.binary(op if op != "n" else "+", left, right)):
        assert parse_text(unparse(tree)) == tree
