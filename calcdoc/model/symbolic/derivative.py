"""Partial derivatives of formulas, written so that they read well."""

from fractions import Fraction
from functools import reduce

from calcdoc.model.constant import constant_value
from calcdoc.model.symbolic.build import (
    add,
    divide,
    multiply,
    negate,
    number,
    power,
    product,
    subtract,
    total,
)
from calcdoc.model.symbolic.grouping import NOWHERE, ONE, SUM, ZERO, bare, binary, call, fit
from calcdoc.model.symbolic.outcome import Failure, Refused
from calcdoc.model.symbolic.simplify import simplified
from calcdoc.model.symbolic.trees import mentions
from calcdoc.text.nodes import Binary, Call, Comparison, Group, Logic, Name, Negate, Node


def derivative(tree: Node, key: str) -> Node | Failure:
    """The derivative of a formula with respect to one symbol, the others held fixed.

    ``abs``, ``min``, ``max`` and ``if`` are differentiated piece by piece; where two pieces meet
    the derivative of one of them is given.

    Returns:
        The formula, ``0`` where the symbol does not stand; a failure of kind ``no derivative``
        when a part has none: ``floor``, ``ceil``, a look-up, the element of a series.
    """
    try:
        return simplified(_slope(tree, key))
    except Refused as refused:
        return refused.failure


def _slope(node: Node, key: str) -> Node:
    if not mentions(node, key):
        return ZERO
    match node:
        case Name():
            return ONE
        case Group(inner):
            return _slope(inner, key)
        case Negate(operand):
            return negate(_slope(operand, key))
        case Binary("+", left, right):
            return add(_slope(left, key), _slope(right, key))
        case Binary("-", left, right):
            return subtract(_slope(left, key), _slope(right, key))
        case Binary("*" | "/"):
            return _slope_of_product(node, key)
        case Binary("^", base, exponent):
            return _slope_of_power(base, exponent, key)
        case Call():
            return _slope_of_call(node, key)
        case _:
            raise _none("an element of a series")


def _none(what: str) -> Refused:
    return Refused(Failure("no derivative", f"{what} has no derivative"))


def _slope_of_product(node: Node, key: str) -> Node:
    """Factors without the symbol stay in front; then the product or the quotient rule."""
    above, below = _fraction(node)
    fixed = divide(
        product(each for each in above if not mentions(each, key)),
        product(each for each in below if not mentions(each, key)),
    )
    above = [each for each in above if mentions(each, key)]
    below = [each for each in below if mentions(each, key)]
    if not below:
        return _in_front(fixed, _slope_of_factors(above, key))
    under = product(below)
    down = _slope_of_factors(below, key)
    if not above:
        # -fixed*down/under^2, with the powers of one symbol merged by the caller
        return negate(divide(multiply(fixed, down), _square(under)))
    over = product(above)
    up = _slope_of_factors(above, key)
    change = simplified(subtract(multiply(up, under), multiply(over, down)))
    return divide(multiply(fixed, change), _square(under))


def _in_front(fixed: Node, slope: Node) -> Node:
    """The product; a number below the slope's fraction bar stays first there."""
    match fixed, slope:
        case Binary("/", above, below), Binary("/", change, under):
            return divide(multiply(above, change), multiply(under, below))
        case _:
            return multiply(fixed, slope)


def _square(node: Node) -> Node:
    inner = bare(node)
    if isinstance(inner, Binary) and inner.op == "^":
        value = constant_value(inner.right)
        if value is not None and value.denominator == 1:
            return power(inner.left, 2 * value)
    return power(node, 2)


def _fraction(node: Node) -> tuple[list[Node], list[Node]]:
    """The factors above and below the fraction bar, in order."""
    match node:
        case Group(inner) if isinstance(inner, Binary | Group | Negate) and _factored(inner):
            return _fraction(inner)
        case Negate(operand):
            above, below = _fraction(operand)
            return [number(-1), *above], below
        case Binary("*" | "/" as op, left, right):
            above, below = _fraction(left)
            more, less = _fraction(right)
            if op == "/":
                more, less = less, more
            return above + more, below + less
        case _:
            return [node], []


def _factored(node: Node) -> bool:
    return isinstance(node, Group | Negate) or (isinstance(node, Binary) and node.op in "*/")


def _slope_of_factors(nodes: list[Node], key: str) -> Node:
    """The product rule."""
    return total(
        product([*nodes[:at], _slope(each, key), *nodes[at + 1 :]]) for at, each in enumerate(nodes)
    )


def _slope_of_power(base: Node, exponent: Node, key: str) -> Node:
    if not mentions(exponent, key):
        value = constant_value(exponent)
        reduced = (
            power(base, value - 1)
            if value is not None
            else binary("^", base, subtract(exponent, ONE))
        )
        if value is not None and value - 1 < 0:
            reduced = divide(ONE, power(base, 1 - value))
        return multiply(multiply(_factor(exponent, value), reduced), _slope(base, key))
    whole = binary("^", base, exponent)
    growth = multiply(call("ln", base), _slope(exponent, key))
    if mentions(base, key):
        growth = add(growth, divide(multiply(exponent, _slope(base, key)), base))
    return multiply(whole, growth)


def _factor(exponent: Node, value: Fraction | None) -> Node:
    """An exponent as a factor: as written when it is symbolic, else as a number."""
    return exponent if value is None else number(value)


def _slope_of_call(node: Call, key: str) -> Node:
    arguments = node.arguments
    match node.function:
        case "if":
            return _choice(arguments[0], _slope(arguments[1], key), _slope(arguments[2], key))
        case "sum":
            return total(_slope(each, key) for each in arguments)
        case "rss":
            change = total(multiply(each, _slope(each, key)) for each in arguments)
            return divide(change, node)
        case "min" | "max":
            return _extreme(node.function, arguments, key)
        case "floor" | "ceil" | "lookup":
            raise _none(node.function)
        case _:
            return _chain(node, arguments[0], key)


def _chain(node: Call, inner: Node, key: str) -> Node:
    """The chain rule for a function of one argument."""
    change = _slope(inner, key)
    match node.function:
        case "sqrt":
            return divide(change, multiply(number(2), node))
        case "exp":
            return multiply(node, change)
        case "ln":
            return divide(change, inner)
        case "log10":
            return divide(change, multiply(inner, call("ln", number(10))))
        case "sin":
            return multiply(call("cos", inner), change)
        case "cos":
            return negate(multiply(call("sin", inner), change))
        case "tan":
            return divide(change, power(call("cos", inner), 2))
        case "asin" | "acos":
            slope = divide(change, call("sqrt", subtract(ONE, power(inner, 2))))
            return slope if node.function == "asin" else negate(slope)
        case "atan":
            return divide(change, add(ONE, power(inner, 2)))
        case _:
            assert node.function == "abs"
            return divide(multiply(change, inner), node)


def _choice(condition: Node, one: Node, other: Node) -> Node:
    """``if`` with both values of one kind: a zero of volts is written as 0 times the volts."""
    if one == other:
        return one
    return call("if", condition, _like(one, other), _like(other, one))


def _like(node: Node, other: Node) -> Node:
    zero_of_a_kind = node == ZERO and constant_value(other) is None
    return binary("*", ZERO, other) if zero_of_a_kind else node


def _extreme(function: str, arguments: tuple[Node, ...], key: str) -> Node:
    """The slope of the argument that is the least or the greatest."""
    if not any(mentions(each, key) for each in arguments):
        return ZERO
    first, *rest = arguments
    if not rest:
        return _slope(first, key)
    sign = "<=" if function == "min" else ">="
    beats: list[Node] = [
        Comparison((fit(first, SUM), fit(each, SUM)), (sign,), NOWHERE) for each in rest
    ]
    condition = reduce(lambda one, other: Logic("and", one, other, NOWHERE), beats)
    return _choice(condition, _slope(first, key), _extreme(function, tuple(rest), key))
