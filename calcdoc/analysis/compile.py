"""From the checked model to one tape in coherent SI units."""

import math
from collections.abc import Iterable, Mapping
from fractions import Fraction
from typing import Final

import numpy as np

from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.tape import Op, Tape, TapeBuilder
from calcdoc.frozen import Frozen
from calcdoc.model.constants import CONSTANTS
from calcdoc.model.model import Discharge, Judged, Model
from calcdoc.model.typing import constant_value
from calcdoc.text import literal
from calcdoc.text.given import Given
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
    Not,
    Number,
    Quantity,
    names,
)

SAFE_VOLTAGE: Final = Fraction(60)
"""Volts a stored charge may keep: 60 V d.c., the residual voltage of IEC 60204-1 (6.2.4)."""
_BINARY: Final = {"+": Op.ADD, "-": Op.SUB, "*": Op.MUL, "/": Op.DIV}
_ONE_ARGUMENT: Final = {
    op.value: op
    for op in (Op.SQRT, Op.EXP, Op.LN, Op.LOG10, Op.SIN, Op.COS, Op.TAN, Op.ASIN, Op.ACOS,
               Op.ATAN, Op.ABS, Op.FLOOR, Op.CEIL)
}  # fmt: skip


class Side(Frozen, frozen=True):
    """One limit of a criterion, as instructions of the tape."""

    value: int
    limit: int
    requirement: int
    """Limit less value, counted so that it must not be negative, less the margin asked for."""
    relation: str
    """Between value and limit, value first."""
    value_tree: Node
    limit_tree: Node


class Compiled(Frozen, frozen=True):
    """A tape with the way back to the names."""

    tape: Tape
    columns: Mapping[str, int]
    """Key of a given quantity that varies, or that an operating point sets, to its column."""
    variables: Mapping[str, int]
    """Key of every quantity to its instruction."""
    low: FloatArray
    """Shape (n_columns,), coherent SI."""
    nominal: FloatArray
    high: FloatArray
    sides: tuple[tuple[Side, ...], ...]
    """For every calculated criterion, its one or two limits."""
    discharges: tuple[int | None, ...]
    """For every stored charge the instruction of its time to a safe voltage, in seconds."""
    origins: Mapping[int, Node]
    """Instruction to the piece of formula it came from first."""


def compile_model(model: Model) -> Compiled:
    """Put every quantity, criterion and discharge of a model on one tape."""
    columns = _columns(model)
    compiler = _Compiler(columns)
    for key in model.order:
        variable = model.variables[key]
        if variable.given is not None:
            compiler.variables[key] = compiler.given(key, variable.given)
        else:
            assert variable.formula is not None
            compiler.variables[key] = compiler.node(variable.formula)
    judged = [each for each in model.criteria if isinstance(each, Judged)]
    sides = tuple(compiler.criterion(each) for each in judged)
    discharges = tuple(compiler.discharge(each) for each in model.discharges)
    bands = np.array([_si(model, key) for key in columns]).reshape(-1, 3).T
    return Compiled(
        compiler.builder.tape(), columns, compiler.variables, bands[0], bands[1], bands[2],
        sides, discharges, compiler.origins,
    )  # fmt: skip


def _columns(model: Model) -> dict[str, int]:
    """A column for every given quantity that varies or that an operating point sets."""
    set_by_points = {
        point.symbol.key
        for each in model.criteria
        if isinstance(each, Judged)
        for point in each.statement.clauses.at
    }
    keys = [
        key
        for key, variable in model.variables.items()
        if variable.given and (variable.given.varies or key in set_by_points)
    ]
    return {key: at for at, key in enumerate(keys)}


def _si(model: Model, key: str) -> tuple[float, float, float]:
    given = model.variables[key].given
    assert given is not None
    return given.si


def is_constant(node: Node) -> bool:
    """Whether a formula names no quantity."""
    return all(fold(each.name) in CONSTANTS for each in names(node))


class _Compiler:
    """Adds instructions for trees; equal operations share one instruction."""

    def __init__(self, columns: Mapping[str, int]) -> None:
        self.columns = columns
        self.builder = TapeBuilder(len(columns))
        self.variables: dict[str, int] = {}
        self.origins: dict[int, Node] = {}

    def given(self, key: str, given: Given) -> int:
        """A column when the value may vary, else an exact constant."""
        if key in self.columns:
            return self.builder.add(Op.INPUT, value=self.columns[key])
        return self._constant(given.unit.to_si(given.nominal))

    def node(self, node: Node) -> int:
        """The instruction of an expression."""
        at = self._node(node)
        self.origins.setdefault(at, node)
        return at

    def _node(self, node: Node) -> int:  # noqa: PLR0911  (one return for each kind of node)
        match node:
            case Number(digits):
                return self._constant(Fraction(digits))
            case Quantity(digits):
                return self._constant(literal.resolve(node.unit).to_si(Fraction(digits)))
            case Name(name):
                return self._name(fold(name))
            case Group(inner):
                return self.node(inner)
            case Negate(operand):
                return self.builder.add(Op.NEG, self.node(operand))
            case Not(operand):
                return self.builder.add(Op.NOT, self.node(operand))
            case Binary(op, left, right):
                if op == "^":
                    return self._power(left, right)
                return self.builder.add(_BINARY[op], self.node(left), self.node(right))
            case Logic(word, left, right):
                op_ = Op.AND if word == "and" else Op.OR
                return self.builder.add(op_, self.node(left), self.node(right))
            case Comparison(operands, operators):
                return self._comparison([self.node(each) for each in operands], operators)
            case Call(function, arguments):
                return self._call(function, [self.node(each) for each in arguments])
            case _:
                raise AssertionError(node)

    def _constant(self, value: Fraction | float) -> int:
        return self.builder.add(Op.CONST, value=value)

    def _name(self, key: str) -> int:
        if key not in CONSTANTS:
            return self.variables[key]
        value = CONSTANTS[key].value
        return self._constant(math.pi if value is None else value)

    def _power(self, base: Node, exponent: Node) -> int:
        value = constant_value(exponent)
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

    def _call(self, function: str, arguments: list[int]) -> int:
        if function in _ONE_ARGUMENT:
            return self.builder.add(_ONE_ARGUMENT[function], arguments[0])
        match function:
            case "min":
                return self._folded(Op.MIN, arguments)
            case "max":
                return self._folded(Op.MAX, arguments)
            case "sum":
                return self._folded(Op.ADD, arguments)
            case "rss":
                squares = [self.builder.add(Op.POWER, a, value=Fraction(2)) for a in arguments]
                return self.builder.add(Op.SQRT, self._folded(Op.ADD, squares))
            case "if":
                return self.builder.add(Op.IF, *arguments)
            case _:
                raise AssertionError(function)

    def _folded(self, op: Op, parts: Iterable[int]) -> int:
        first, *rest = parts
        for part in rest:
            first = self.builder.add(op, first, part)
        return first

    def criterion(self, judged: Judged) -> tuple[Side, ...]:
        """The limits of a criterion: the lower one first when there are two."""
        statement = judged.statement
        trees, operators = statement.operands, statement.operators
        if len(trees) == 3:  # noqa: PLR2004  (two limits)
            low, value, high = trees
            return (
                self._side(judged, value, low, _turned(operators[0])),
                self._side(judged, value, high, operators[1]),
            )
        left, right = trees
        if is_constant(left) and not is_constant(right):
            return (self._side(judged, right, left, _turned(operators[0])),)
        return (self._side(judged, left, right, operators[0]),)

    def _side(self, judged: Judged, value: Node, limit: Node, relation: str) -> Side:
        value_at, limit_at = self.node(value), self.node(limit)
        pair = (limit_at, value_at) if relation[0] == "<" else (value_at, limit_at)
        slack = self.builder.add(Op.SUB, *pair)
        return Side(value_at, limit_at, self._less_margin(judged, slack, limit_at), relation,
                    value, limit)  # fmt: skip

    def _less_margin(self, judged: Judged, slack: int, limit: int) -> int:
        margin = judged.statement.clauses.margin
        if margin is None:
            return slack
        asked = self._constant(margin.value.nominal * margin.value.unit.factor)
        if margin.is_share:
            asked = self.builder.add(Op.MUL, asked, self.builder.add(Op.ABS, limit))
        return self.builder.add(Op.SUB, slack, asked)

    def discharge(self, discharge: Discharge) -> int | None:
        """Seconds until a stored charge is down to a safe voltage; None without a bleed."""
        if discharge.resistance is None:
            return None
        add = self.builder.add
        safe = self._constant(SAFE_VOLTAGE)
        start = add(Op.MAX, self.variables[discharge.voltage], safe)
        constant = add(
            Op.MUL, self.variables[discharge.resistance], self.variables[discharge.capacitance]
        )
        return add(Op.MUL, constant, add(Op.LN, add(Op.DIV, start, safe)))


def _turned(operator: str) -> str:
    """The same comparison read from the other side."""
    return operator.replace("<", "\0").replace(">", "<").replace("\0", ">")
