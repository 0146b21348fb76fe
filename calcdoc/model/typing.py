"""Dimensions and temperature weights of every expression, with the smallest wrong piece named.

A temperature on the Celsius scale has weight 1, a difference in kelvin weight 0. Sums add weights,
a plain factor scales them, a product of another dimension resets them to 0. What has a name, and
each side of a comparison, must have weight 0 or 1: ``T_a + P*R_th`` has, ``T_a + 10 °C`` has not.
"""

from collections.abc import Mapping
from fractions import Fraction
from itertools import pairwise
from typing import Final

from calcdoc.model import blame, series
from calcdoc.model.blame import Places
from calcdoc.model.constant import constant_value
from calcdoc.model.constants import CONSTANTS
from calcdoc.model.lookups import typed_lookup
from calcdoc.model.model import Typed
from calcdoc.problems import Mistake, error
from calcdoc.tables.table import Table
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
)
from calcdoc.text.statements import Index
from calcdoc.units import ONE

PLAIN: Final = Typed(ONE)
_SAME: Final = frozenset({"min", "max", "sum", "rss", "abs"})
_LARGEST_POWER: Final = 1000


class Unknown(Exception):
    """A name has no type because its own line is wrong; that was reported there."""


class Checker:
    """Types the expressions of one document.

    Args:
        types: The type of every name so far, by key; None for a name whose own line is wrong.
        places: Where every name is defined, by key.
        tables: Tables that formulas look up, by name.
    """

    def __init__(
        self, types: Mapping[str, Typed | None], places: Places, tables: Mapping[str, Table]
    ) -> None:
        self.types = types
        self.places = places
        self.tables = tables
        self.sets: dict[str, tuple[int, ...]] = {}
        """Indices of every series so far, by key."""
        self._known: dict[int, Typed] = {}
        self._running: Index | None = None

    def quantity(self, node: Node, running: Index | None = None) -> Typed:
        """The type of what gets a name; ``running`` is the running index of a series.

        Raises:
            Mistake: at the smallest wrong piece.
            Unknown: when it rests on a name whose own line is wrong.
        """
        self._running = running
        typed = self.of(node)
        if typed.weight not in (0, 1):
            blame.weight(node, self._known)
        return typed

    def comparison(self, operands: tuple[Node, ...], running: Index | None = None) -> Typed:
        """The common type of the sides of a comparison."""
        typed = self.quantity(operands[0], running)
        for before, side in pairwise(operands):
            other = self.quantity(side, running)
            if other.dimension != typed.dimension:
                blame.unlike(
                    f"cannot compare {typed.dimension.in_words()} with"
                    f" {other.dimension.in_words()}",
                    (before, typed),
                    (side, other),
                    "and",
                    self.places,
                )
            if other.weight != typed.weight:
                blame.unlike_temperatures((before, typed), (side, other))
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
                return self._element(node)

    def _element(self, node: Element) -> Typed:
        """An element of a series is of the kind of the series."""
        of_series = self._of_key(fold(node.name))
        index = self.of(node.index)
        if index.dimension != ONE:
            raise Mistake(
                error(
                    "unit-mismatch",
                    f"an index is a plain number, this is {index.dimension.in_words()}",
                    node.index.span,
                )
            )
        running = self._running
        for value in running.values if running else (0,):
            series.element(node, self.sets, {running.name.key: value} if running else {})
        return of_series

    def _name(self, node: Name) -> Typed:
        key = fold(node.name)
        if self._running and key == self._running.name.key:
            return PLAIN
        return Typed(CONSTANTS[key].dimension) if key in CONSTANTS else self._of_key(key)

    def _of_key(self, key: str) -> Typed:
        typed = self.types.get(key)
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
                blame.unlike_sum(node, left, right, self.places)
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
                    related=blame.defined(node.right, exponent, self.places),
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
            found = typed_lookup(node, self.tables, self.of)
            if found is None:
                raise Unknown
            return found
        if name == "if":
            self.condition(arguments[0], self._running)
            return self._alike(node, arguments[1:])
        if name in _SAME:
            typed = self._alike(node, arguments)
            if name == "sum":
                counted = max(len(arguments), len(series.over(arguments[0], self.sets)))
                return Typed(typed.dimension, typed.weight * counted)
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
                blame.unlike(
                    f"{node.function} needs values of one kind, not"
                    f" {first.dimension.in_words()} and {other.dimension.in_words()}",
                    (arguments[0], first),
                    (argument, other),
                    "and",
                    self.places,
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
                    related=blame.defined(argument, typed, self.places),
                    help=f"divide it by a quantity of its kind, as in {node.function}(V/(1 V))",
                )
            )

    def condition(self, node: Node, running: Index | None = None) -> None:
        """Check a condition: comparisons joined by ``and``, ``or``, ``not``."""
        match node:
            case Comparison(operands):
                self.comparison(operands, running)
            case Logic() | Not() | Group():
                for each in children(node):
                    self.condition(each, running)
            case _:
                raise Mistake(
                    error(
                        "condition-as-value",
                        "expected a condition, found a value",
                        node.span,
                        help="compare it, as in x > 0 V",
                    )
                )
