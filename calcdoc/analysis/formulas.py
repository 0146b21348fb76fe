"""From formula trees to instructions: equal operations share one."""

import math
from collections.abc import Iterable, Mapping
from fractions import Fraction
from typing import Final

from calcdoc.analysis.tape import Op, TapeBuilder
from calcdoc.model import series
from calcdoc.model.constant import Running, constant_value
from calcdoc.model.constants import CONSTANTS
from calcdoc.problems import Mistake, error
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
    names,
)

_BINARY: Final = {"+": Op.ADD, "-": Op.SUB, "*": Op.MUL, "/": Op.DIV}
_ONE_ARGUMENT: Final = {
    op.value: op
    for op in (Op.SQRT, Op.EXP, Op.LN, Op.LOG10, Op.SIN, Op.COS, Op.TAN, Op.ASIN, Op.ACOS,
               Op.ATAN, Op.ABS, Op.FLOOR, Op.CEIL)
}  # fmt: skip
_FOLDED: Final = {"min": Op.MIN, "max": Op.MAX, "sum": Op.ADD, "rss": Op.ADD}


class Formulas:
    """Adds instructions for trees; equal operations share one instruction."""

    def __init__(self, n_columns: int) -> None:
        self.builder = TapeBuilder(n_columns)
        self.variables: dict[str, int] = {}
        self.series: dict[str, dict[int, int]] = {}
        self.origins: dict[int, Node] = {}
        self.running: Running = {}
        """The running index, by key, while a series is compiled element by element."""
        self.element: int | None = None
        """The element that a whole series stands for now."""

    def node(self, node: Node) -> int:
        """The instruction of an expression."""
        begin = len(self.builder)
        at = self._node(node)
        self.origins.setdefault(at, node)
        if isinstance(node, Call):  # what min, max, sum and rss are folded from
            for step in range(begin, at):
                self.origins.setdefault(step, node)
        return at

    def _node(self, node: Node) -> int:
        match node:
            case Number(digits):
                return self.constant(Fraction(digits))
            case Quantity(digits):
                return self.constant(literal.resolve(node.unit).to_si(Fraction(digits)))
            case Name(name):
                return self._name(fold(name))
            case Element(name):
                return self.series[fold(name)][series.element(node, self.sets, self.running)]
            case Group(inner):
                return self.node(inner)
            case Negate(operand):
                return self.builder.add(Op.NEG, self.node(operand))
            case Binary(op, left, right):
                if op == "^":
                    return self._power(left, right)
                return self.builder.add(_BINARY[op], self.node(left), self.node(right))
            case Call(function, arguments):
                return self._call(function, arguments)
            case _:
                return self._condition(node)

    def _condition(self, node: Node) -> int:
        match node:
            case Not(operand):
                return self.builder.add(Op.NOT, self.node(operand))
            case Logic(word, left, right):
                op = Op.AND if word == "and" else Op.OR
                return self.builder.add(op, self.node(left), self.node(right))
            case Comparison(operands, operators):
                return self._comparison([self.node(each) for each in operands], operators)
            case _:
                raise AssertionError(node)

    @property
    def sets(self) -> Mapping[str, tuple[int, ...]]:
        """Indices of every series so far, by key."""
        return {key: tuple(elements) for key, elements in self.series.items()}

    def constant(self, value: Fraction | float) -> int:
        """An instruction for a value that stands in the text."""
        return self.builder.add(Op.CONST, value=value)

    def _name(self, key: str) -> int:
        if key in self.running:
            return self.constant(Fraction(self.running[key]))
        if key in CONSTANTS:
            value = CONSTANTS[key].value
            return self.constant(math.pi if value is None else value)
        if key in self.series:
            assert self.element is not None, key
            return self.series[key][self.element]
        return self.variables[key]

    def _power(self, base: Node, exponent: Node) -> int:
        value = constant_value(exponent, self.running)
        if value is None:
            return self.builder.add(Op.POW, self.node(base), self.node(exponent))
        return self.builder.add(Op.POWER, self.node(base), value=value)

    def _comparison(self, sides: list[int], operators: tuple[str, ...]) -> int:
        parts = [
            self._compare(operator, left, right)
            for operator, left, right in zip(operators, sides, sides[1:], strict=False)
        ]
        return self._folded(Op.AND, parts)

    def _compare(self, operator: str, left: int, right: int) -> int:
        op = Op.LE if "=" in operator else Op.LT
        return self.builder.add(op, *((left, right) if operator[0] == "<" else (right, left)))

    def _call(self, function: str, arguments: tuple[Node, ...]) -> int:
        if function == "lookup":
            return self.looked_up(arguments)
        if function in _ONE_ARGUMENT:
            return self.builder.add(_ONE_ARGUMENT[function], self.node(arguments[0]))
        if function == "if":
            return self.builder.add(Op.IF, *(self.node(each) for each in arguments))
        values = self._values(arguments)
        if function != "rss":
            return self._folded(_FOLDED[function], values)
        squares = [self.builder.add(Op.POWER, each, value=Fraction(2)) for each in values]
        return self.builder.add(Op.SQRT, self._folded(Op.ADD, squares))

    def _values(self, arguments: tuple[Node, ...]) -> list[int]:
        """The values a function is taken of: all elements, when its one argument is a series."""
        over = series.over(arguments[0], self.sets) if len(arguments) == 1 else ()
        if not over:
            return [self.node(each) for each in arguments]
        outside = self.element
        values = []
        for self.element in over:
            values.append(self.node(arguments[0]))
        self.element = outside
        return values

    def _folded(self, op: Op, parts: Iterable[int]) -> int:
        first, *rest = parts
        for part in rest:
            first = self.builder.add(op, first, part)
        return first

    def looked_up(self, arguments: tuple[Node, ...]) -> int:
        """The value of a table; where a table cannot be read its arguments are to blame."""
        raise Mistake(
            error(
                "table",
                "a table cannot be looked up inside a loop, a numeric solution or a restatement",
                arguments[0].span,
                help="look it up on a line of its own, outside",
            )
        )

    def elements(self, tree: Node, indices: tuple[int, ...], running: str) -> dict[int, int]:
        """The instructions of a series, element by element."""
        found = {}
        for index in indices:
            self.running, self.element = {running: index}, index
            found[index] = self.node(tree)
        self.running, self.element = {}, None
        return found


def is_constant(node: Node) -> bool:
    """Whether a formula names no quantity."""
    return all(fold(each.name) in CONSTANTS for each in names(node))
