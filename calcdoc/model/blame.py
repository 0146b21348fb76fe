"""Where unlike quantities meet: the smallest wrong piece, and what set the expectation."""

from collections.abc import Mapping
from fractions import Fraction
from typing import Final, NoReturn

from calcdoc.model.model import Typed, Variable
from calcdoc.problems import Mistake, Place, error
from calcdoc.source import Span
from calcdoc.text import literal
from calcdoc.text.names import fold
from calcdoc.text.nodes import Binary, Group, Name, Negate, Node, Number, Quantity, walk
from calcdoc.text.scan import shown
from calcdoc.text.statements import Label
from calcdoc.text.unparse import unit_text, unparse
from calcdoc.units import ONE
from calcdoc.units.choose import choose_unit
from calcdoc.units.dimension import TEMPERATURE

Places = Mapping[str, Span]
"""Where every name is defined, by key."""
Side = tuple[Node, Typed]


def unlike_sum(node: Binary, left: Typed, right: Typed, places: Places) -> NoReturn:
    """The two sides of a sum are of different kinds."""
    one, other = left.dimension.in_words(), right.dimension.in_words()
    message = (
        f"cannot add {one} and {other}" if node.op == "+" else f"cannot subtract {other} from {one}"
    )
    chained = isinstance(node.left, Binary) and node.left.op in "+-"
    at = node.right.span if chained else None
    unlike(message, (node.left, left), (node.right, right), node.op, places, at=at)


def unlike(  # noqa: PLR0913  (both sides, and how to say it)
    message: str, left: Side, right: Side, joint: str, places: Places, *, at: Span | None = None
) -> NoReturn:
    """Two quantities of different kinds stand where one kind is needed."""
    one, other = left[1], right[1]
    advice = ""
    needed = one.dimension / other.dimension
    if not needed.in_words().startswith("a quantity in") and needed != ONE:
        advice = (
            f"multiply {shown(unparse(right[0]))} by {needed.in_words()} to get"
            f" {one.dimension.in_words()}"
        )
    for (node, _), (_, typed) in ((left, right), (right, left)):
        number = bare(node)
        if isinstance(number, Number):
            unit = choose_unit(typed.dimension, 1.0, celsius=bool(typed.weight)).text
            advice = f"write {number.digits} with its unit, as in {number.digits} {unit}"
    raise Mistake(
        error(
            "unit-mismatch",
            message,
            at or left[0].span.to(right[0].span),
            label=f"{_bare(one)} {joint} {_bare(other)}",
            related=(*defined(*left, places), *defined(*right, places)),
            help=advice,
        )
    )


def bare(node: Node) -> Node:
    """What stands inside of parentheses and behind a minus."""
    while isinstance(node, Group | Negate):
        node = node.inner if isinstance(node, Group) else node.operand
    return node


_COLDEST: Final = 100
"""Kelvin; what is less is meant as a difference."""


def unlike_temperatures(left: Side, right: Side) -> NoReturn:
    """A temperature on the Celsius scale stands against a difference."""
    advice = "a temperature is in °C, a difference in K"
    for node, typed in (left, right):
        value = bare(node)
        if isinstance(value, Quantity) and not typed.weight:
            kelvin = literal.resolve(value.unit).to_si(Fraction(value.digits))
            if kelvin >= _COLDEST:
                celsius = float(kelvin - Fraction("273.15"))
                written = f"{value.digits} {unit_text(value.unit)}"
                advice = f"write {celsius:.10g} °C, which is {written}; a difference is in K"
    raise Mistake(
        error(
            "temperature",
            "cannot compare a temperature with a difference of temperatures",
            left[0].span.to(right[0].span),
            help=advice,
        )
    )


def defined(node: Node, typed: Typed, places: Places) -> tuple[Place, ...]:
    """Where the name that is the whole of an operand was defined."""
    while isinstance(node, Group):
        node = node.inner
    if not isinstance(node, Name) or fold(node.name) not in places:
        return ()
    return (Place(places[fold(node.name)], f"{node.name} is {typed.dimension.in_words()}"),)


def other_kind(symbol: Label, target: Variable, typed: Typed) -> None:
    """Refuse a value of another kind than the given quantity that it is for."""
    if target.typed == typed:
        return
    related = (Place(target.label.span, "defined here"),)
    one, other = target.typed.dimension.in_words(), typed.dimension.in_words()
    if one != other:
        raise Mistake(
            error(
                "unit-mismatch",
                f"{shown(symbol.name)} is {one}, the value here is {other}",
                symbol.span,
                related=related,
            )
        )
    one, other = "a temperature in °C", "a difference in K"
    if typed.weight:
        one, other = other, one
    raise Mistake(
        error(
            "temperature",
            f"{shown(symbol.name)} is {one}, the value here is {other}",
            symbol.span,
            related=related,
            help="write it on the same scale",
        )
    )


def weight(node: Node, known: Mapping[int, Typed]) -> NoReturn:
    """Point at the smallest piece that is neither a temperature nor a difference.

    Args:
        node: An expression whose temperature weight is neither 0 nor 1.
        known: The type of every piece of it, by identity.
    """
    culprit = node
    for each in walk(node):
        typed = known.get(id(each))
        if typed and typed.dimension == TEMPERATURE and typed.weight not in (0, 1):
            culprit = each
    while isinstance(culprit, Group):
        culprit = culprit.inner
    if isinstance(culprit, Binary) and culprit.op == "+":
        right = culprit.right
        advice = (
            f"write {right.digits} K for a difference"
            if isinstance(right, Quantity)
            else "subtract 0 °C from one of them to make it a difference"
        )
        raise Mistake(
            error(
                "temperature",
                "this adds two temperatures on the Celsius scale; a difference is in kelvin",
                right.span,
                help=advice,
            )
        )
    raise Mistake(
        error(
            "temperature",
            "a share of a temperature on the Celsius scale means nothing"
            if isinstance(culprit, Binary) and culprit.op in "*/"
            else "this is neither a temperature nor a difference of temperatures",
            culprit.span,
            help="take shares of differences: T_1 + 0.9*(T_2 - T_1)",
        )
    )


def _bare(typed: Typed) -> str:
    return typed.dimension.in_words().removeprefix("a ").removeprefix("an ")
