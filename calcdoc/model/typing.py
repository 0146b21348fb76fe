"""Dimensions and temperature weights of every expression, with the smallest wrong piece named.

A temperature on the Celsius scale has weight 1, a difference in kelvin weight 0. Sums add weights,
a plain factor scales them, a product of another dimension resets them to 0. What has a name, and
each side of a comparison, must have weight 0 or 1: ``T_a + P*R_th`` has, ``T_a + 10 °C`` has not.
"""

from collections.abc import Callable, Mapping
from fractions import Fraction
from itertools import pairwise
from typing import Final, NoReturn

from calcdoc.model.constants import CONSTANTS
from calcdoc.model.model import Typed
from calcdoc.problems import Mistake, Place, error
from calcdoc.source import Span
from calcdoc.text import literal
from calcdoc.text.names import fold
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
    children,
    walk,
)
from calcdoc.text.scan import shown
from calcdoc.text.unparse import unparse
from calcdoc.units import ONE
from calcdoc.units.dimension import TEMPERATURE

PLAIN: Final = Typed(ONE)
_SAME: Final = frozenset({"min", "max", "sum", "rss", "abs"})
_LARGEST_POWER: Final = 1000


class Unknown(Exception):
    """A name has no type because its own line is wrong; that was reported there."""


Lookup = Callable[[Name], Typed]
Places = Mapping[str, Span]


class Checker:
    """Types the expressions of one document.

    Args:
        types: The type of every name so far, by key; None for a name whose own line is wrong.
        places: Where every name is defined, by key.
    """

    def __init__(self, types: Mapping[str, Typed | None], places: Places) -> None:
        self.types = types
        self.places = places
        self._known: dict[int, Typed] = {}

    def quantity(self, node: Node) -> Typed:
        """The type of what gets a name.

        Raises:
            Mistake: at the smallest wrong piece.
            Unknown: when it rests on a name whose own line is wrong.
        """
        typed = self.of(node)
        if typed.weight not in (0, 1):
            self._blame_weight(node)
        return typed

    def comparison(self, operands: tuple[Node, ...]) -> Typed:
        """The common type of the sides of a comparison."""
        typed = self.quantity(operands[0])
        for before, side in pairwise(operands):
            other = self.quantity(side)
            if other.dimension != typed.dimension:
                self._mismatch(
                    f"cannot compare {typed.dimension.in_words()} with"
                    f" {other.dimension.in_words()}",
                    before,
                    side,
                    typed,
                    other,
                    "and",
                )
            if other.weight != typed.weight:
                raise Mistake(
                    error(
                        "temperature",
                        "cannot compare a temperature with a difference of temperatures",
                        before.span.to(side.span),
                        help="a temperature is in °C, a difference in K",
                    )
                )
        return typed

    def of(self, node: Node) -> Typed:
        """The type of an expression, each node once."""
        known = self._known.get(id(node))
        if known is None:
            known = self._known[id(node)] = self._find(node)
        return known

    def _find(self, node: Node) -> Typed:
        match node:
            case Number():
                return PLAIN
            case Quantity():
                unit = literal.resolve(node.unit)
                return Typed(unit.dimension, Fraction(int(unit.celsius)))
            case Name():
                return self._name(node)
            case Group(inner):
                return self.of(inner)
            case Negate(operand):
                typed = self.of(operand)
                return Typed(typed.dimension, -typed.weight)
            case Binary():
                return self._binary(node)
            case Call():
                return self._call(node)
            case Comparison() | Logic() | Not():
                raise Mistake(
                    error(
                        "condition-as-value",
                        "a condition is no value",
                        node.span,
                        help="use it as the first argument of if(condition, a, b)",
                    )
                )
            case Text():
                raise Mistake(error("syntax", "a text in quotes is for look-ups only", node.span))
            case Element():
                raise Mistake(
                    error(
                        "not-available-yet",
                        "an element of a series is not available yet",
                        node.span,
                        help="it is reserved for a coming version",
                    )
                )

    def _name(self, node: Name) -> Typed:
        key = fold(node.name)
        if key in CONSTANTS:
            return Typed(CONSTANTS[key].dimension)
        typed = self.types[key]
        if typed is None:
            raise Unknown
        return typed

    def _binary(self, node: Binary) -> Typed:
        left = self.of(node.left)
        if node.op == "^":
            return self._power(node, left)
        right = self.of(node.right)
        if node.op in "+-":
            if left.dimension != right.dimension:
                self._sum_mismatch(node, left, right)
            sign = 1 if node.op == "+" else -1
            return Typed(left.dimension, left.weight + sign * right.weight)
        if node.op == "*":
            return self._product(node, left, right)
        dimension = left.dimension / right.dimension
        if right.dimension != ONE or not left.weight:
            return Typed(dimension)
        return Typed(dimension, left.weight / self._factor(node, node.right))

    def _product(self, node: Binary, left: Typed, right: Typed) -> Typed:
        dimension = left.dimension * right.dimension
        if left.dimension == ONE and right.weight:
            return Typed(dimension, right.weight * self._factor(node, node.left))
        if right.dimension == ONE and left.weight:
            return Typed(dimension, left.weight * self._factor(node, node.right))
        return Typed(dimension)

    def _factor(self, product: Binary, factor: Node) -> Fraction:
        """The value of a plain factor of a temperature, which must be a number in the text."""
        value = constant_value(factor)
        if not value:
            raise Mistake(
                error(
                    "temperature",
                    "a share of a temperature on the Celsius scale means nothing",
                    product.span,
                    help="take shares of differences: T_1 + k*(T_2 - T_1)",
                )
            )
        return value

    def _power(self, node: Binary, base: Typed) -> Typed:
        exponent = self.of(node.right)
        if exponent.dimension != ONE:
            raise Mistake(
                error(
                    "unit-mismatch",
                    f"an exponent is a plain number, this is {exponent.dimension.in_words()}",
                    node.right.span,
                    related=self._related(node.right),
                    help="divide it by a quantity of its kind",
                )
            )
        if base.dimension == ONE:
            return PLAIN
        value = constant_value(node.right)
        if value is None or abs(value) > _LARGEST_POWER:
            raise Mistake(
                error(
                    "unit-mismatch",
                    f"the exponent of {base.dimension.in_words()} is a rational number in the text",
                    node.right.span,
                    help="write it as a number, or divide the base by a quantity of its kind first",
                )
            )
        return Typed(base.dimension**value, base.weight if value == 1 else Fraction(0))

    def _call(self, node: Call) -> Typed:
        name, arguments = node.function, node.arguments
        if name == "lookup":
            raise Mistake(
                error(
                    "not-available-yet",
                    "`lookup` is not available yet",
                    node.name_span,
                    help="it is reserved for a coming version",
                )
            )
        if name == "if":
            self.condition(arguments[0])
            return self._alike(node, arguments[1:])
        if name in _SAME:
            typed = self._alike(node, arguments)
            if name == "sum":
                return Typed(typed.dimension, typed.weight * len(arguments))
            if name == "rss" and typed.weight:
                raise Mistake(
                    error(
                        "temperature",
                        "rss of temperatures on the Celsius scale means nothing",
                        node.span,
                        help="take it of differences in K",
                    )
                )
            return typed
        if name == "sqrt":
            typed = self.of(arguments[0])
            return Typed(typed.dimension ** Fraction(1, 2))
        self._plain_argument(node, arguments[0])
        return PLAIN

    def _alike(self, node: Call, arguments: tuple[Node, ...]) -> Typed:
        first = self.of(arguments[0])
        for argument in arguments[1:]:
            other = self.of(argument)
            if other.dimension != first.dimension:
                self._mismatch(
                    f"{node.function} needs values of one kind, not"
                    f" {first.dimension.in_words()} and {other.dimension.in_words()}",
                    arguments[0],
                    argument,
                    first,
                    other,
                    "and",
                    at=argument.span,
                )
            if other.weight != first.weight:
                raise Mistake(
                    error(
                        "temperature",
                        f"{node.function} needs temperatures or differences, not both",
                        argument.span,
                        help="a temperature is in °C, a difference in K",
                    )
                )
        return first

    def _plain_argument(self, node: Call, argument: Node) -> None:
        typed = self.of(argument)
        if typed.dimension != ONE:
            raise Mistake(
                error(
                    "unit-mismatch",
                    f"{node.function} needs a plain number, this is {typed.dimension.in_words()}",
                    argument.span,
                    related=self._related(argument),
                    help=f"divide it by a quantity of its kind, as in {node.function}(V/(1 V))",
                )
            )

    def condition(self, node: Node) -> None:
        """Check a condition: comparisons joined by ``and``, ``or``, ``not``."""
        match node:
            case Comparison(operands):
                self.comparison(operands)
            case Logic() | Not() | Group():
                for each in children(node):
                    self.condition(each)
            case _:
                raise Mistake(
                    error(
                        "condition-as-value",
                        "expected a condition, found a value",
                        node.span,
                        help="compare it, as in x > 0 V",
                    )
                )

    # --- what is wrong, and where -------------------------------------------------------------

    def _sum_mismatch(self, node: Binary, left: Typed, right: Typed) -> NoReturn:
        one, other = left.dimension.in_words(), right.dimension.in_words()
        message = (
            f"cannot add {one} and {other}"
            if node.op == "+"
            else f"cannot subtract {other} from {one}"
        )
        chained = isinstance(node.left, Binary) and node.left.op in "+-"
        self._mismatch(
            message,
            node.left,
            node.right,
            left,
            right,
            node.op,
            at=node.right.span if chained else None,
        )

    def _mismatch(  # noqa: PLR0913  (both sides, and how to say it)
        self,
        message: str,
        left: Node,
        right: Node,
        one: Typed,
        other: Typed,
        joint: str,
        at: Span | None = None,
    ) -> NoReturn:
        label = f"{_bare(one)} {joint} {_bare(other)}"
        advice = ""
        needed = one.dimension / other.dimension
        if not needed.in_words().startswith("a quantity in") and needed != ONE:
            advice = (
                f"multiply {shown(unparse(right))} by {needed.in_words()} to get"
                f" {one.dimension.in_words()}"
            )
        raise Mistake(
            error(
                "unit-mismatch",
                message,
                at or left.span.to(right.span),
                label=label,
                related=self._related(left) + self._related(right),
                help=advice,
            )
        )

    def _related(self, node: Node) -> tuple[Place, ...]:
        """Where the name that is the whole of an operand was defined."""
        while isinstance(node, Group):
            node = node.inner
        if not isinstance(node, Name) or fold(node.name) not in self.places:
            return ()
        words = self.of(node).dimension.in_words()
        return (Place(self.places[fold(node.name)], f"{node.name} is {words}"),)

    def _blame_weight(self, node: Node) -> NoReturn:
        """Point at the smallest piece that is neither a temperature nor a difference."""
        culprit = node
        for each in walk(node):
            known = self._known.get(id(each))
            if known and known.dimension == TEMPERATURE and known.weight not in (0, 1):
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


def constant_value(node: Node) -> Fraction | None:
    """The exact value of an expression of plain numbers, or None; bounded in time."""
    match node:
        case Number(digits):
            return Fraction(digits)
        case Quantity(digits):
            unit = literal.resolve(node.unit)
            return Fraction(digits) * unit.factor if unit.dimension == ONE else None
        case Group(inner):
            return constant_value(inner)
        case Negate(operand):
            value = constant_value(operand)
            return None if value is None else -value
        case Binary(op, left, right):
            one, other = constant_value(left), constant_value(right)
            return None if one is None or other is None else _fold(op, one, other)
        case _:
            return None


def _fold(op: str, one: Fraction, other: Fraction) -> Fraction | None:
    match op:
        case "+":
            return one + other
        case "-":
            return one - other
        case "*":
            return one * other
        case "/":
            return one / other if other else None
        case _:
            small = other.denominator == 1 and abs(other) <= 20  # noqa: PLR2004  (keeps it quick)
            short = max(one.numerator.bit_length(), one.denominator.bit_length()) < 64  # noqa: PLR2004
            return one ** int(other) if small and short and (one or other > 0) else None
