"""The formulas of a record computed a second time, without calcdoc's units and its tape.

Only the parsed tree is ours. Numbers come from the record's texts, sizes of units from the table
below, functions from a library that is passed in: mpmath for fifty digits, NumPy for many draws.
"""

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from functools import reduce
from pathlib import Path
from typing import Any, Final

import mpmath  # type: ignore[import-untyped]
import numpy as np

from calcdoc.records.record import Quantity, Record
from calcdoc.text.formula import parse_text
from calcdoc.text.names import fold
from calcdoc.text.nodes import (
    Binary,
    Call,
    Comparison,
    Group,
    Name,
    Negate,
    Node,
    Number,
    UnitText,
    names,
)
from calcdoc.text.nodes import Quantity as Amount

PREFIXES: Final = {"m": "1e-3", "µ": "1e-6", "n": "1e-9", "p": "1e-12", "k": "1e3", "M": "1e6"}
PLAIN: Final = frozenset({"V", "A", "Ω", "F", "s", "Hz", "W", "K", "lm", "J", "m", "rad"})
"""Coherent units with prefixes; the formulas of the demos need no others."""
OTHERS: Final = {
    "deg": "0.01745329251994329576923690768488612713",
    "%": "0.01",
    "°C": "1",
    "min": "60",
    "h": "3600",
}
RAISED: Final = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")

CLOSED: Final = (
    Path(__file__).with_name("designs") / "closed-form.md",
    Path("designs/quay-stair-light-120.md"),
)
"""The demos of 230 V and 120 V with every line a formula; nothing is solved for in them."""

Value = Any  # an mpmath number or a NumPy array


def size_of(word: str) -> Fraction:
    """The size of a unit word in the coherent unit of the SI."""
    if word in PLAIN:
        return Fraction(1)
    if word in OTHERS:
        return Fraction(OTHERS[word])
    assert word[1:] in PLAIN, word
    return Fraction(PREFIXES[word[0]])


def size_of_unit(text: str) -> Fraction:
    """The size of a unit as printed: ``lm/W``, ``A²·s``, ``K/(W·s)``."""
    above, _, below = text.partition("/")
    size = Fraction(1)
    for sign, side in ((1, above), (-1, below.strip("()"))):
        for word in side.split("·") if side not in ("", "1") else ():
            found = re.fullmatch(r"([^⁰¹²³⁴⁵⁶⁷⁸⁹⁻]+)([⁰¹²³⁴⁵⁶⁷⁸⁹⁻]*)", word)
            assert found is not None, word
            size *= size_of(found[1]) ** (sign * int(found[2].translate(RAISED) or 1))
    return size


@dataclass(frozen=True)
class Library:
    """Where numbers and functions come from."""

    number: Callable[[Fraction], Value]
    functions: Mapping[str, Callable[..., Value]]
    constants: Mapping[str, Value]
    choose: Callable[[Value, Value, Value], Value]
    """The second where the first holds, else the third."""

    def quantity(self, text: str) -> Value:
        """A text of the record with its unit, in coherent SI: ``230 V``, ``-14.4 mV/K``."""
        tree = parse_text(text)
        if isinstance(tree, Negate) and isinstance(tree.operand, Amount):
            return self._amount(-Fraction(tree.operand.digits), tree.operand.unit)  # -20 °C
        return self.value(tree, {})

    def in_unit(self, si: Value, unit: str) -> Value:
        """A value in coherent SI, expressed in a unit as printed."""
        offset = Fraction("273.15") if unit == "°C" else Fraction(0)
        return (si - self.number(offset)) / self.number(size_of_unit(unit))

    def value(self, node: Node, known: Mapping[str, Value]) -> Value:
        """The value of a formula in coherent SI."""
        match node:
            case Number(digits):
                return self.number(Fraction(digits))
            case Amount(digits, unit):
                return self._amount(Fraction(digits), unit)
            case Name(name):
                return known[fold(name)] if fold(name) in known else self.constants[name]
            case Negate(operand):
                return -self.value(operand, known)
            case Group(inner):
                return self.value(inner, known)
            case Binary(op, left, right):
                return _OPERATIONS[op](self.value(left, known), self.value(right, known))
            case Call(function, arguments):
                return self.functions[function](*(self.value(each, known) for each in arguments))
            case _:
                raise AssertionError(node)

    def _amount(self, number: Fraction, unit: UnitText) -> Value:
        for each in unit.words:
            power = -each.exponent if each.joint == "/" else each.exponent
            number *= size_of(each.word) ** power
        celsius = [(each.word, each.exponent) for each in unit.words] == [("°C", 1)]
        return self.number(number + (Fraction("273.15") if celsius else 0))

    def lines(self, record: Record, inputs: Mapping[str, Value]) -> dict[str, Value]:
        """Every quantity of a record in coherent SI, by folded symbol, from its inputs."""
        known = dict(inputs)
        waiting = [each for each in record.quantities if fold(each.symbol) not in known]
        while waiting:
            ready = [e for e in waiting if all(fold(name) in known for name in e.depends_on)]
            assert ready, "a circle"
            for each in ready:
                known[fold(each.symbol)] = self._line(record, each, known)
            waiting = [each for each in waiting if fold(each.symbol) not in known]
        return known

    def _line(self, record: Record, line: Quantity, known: Mapping[str, Value]) -> Value:
        """One line from the lines before it."""
        if line.kind == "settled":
            return self._settled(record, line, known)
        if line.formula:
            return self.value(parse_text(line.formula), known)
        return self._between(record, line, known)

    def _settled(self, record: Record, line: Quantity, known: Mapping[str, Value]) -> Value:
        """What comes out when the loop is gone round until it stands still."""
        formulas = {fold(each.symbol): each.formula for each in record.quantities}
        value = self.quantity(line.result)
        for _ in range(_ROUNDS):
            inside = {**known, fold(line.symbol): value}

            def reached(node: Node, inside: dict[str, Value] = inside) -> Value:
                for name in names(node):
                    if fold(name.name) not in inside and fold(name.name) in formulas:
                        inner = parse_text(formulas[fold(name.name)])
                        inside[fold(name.name)] = reached(inner, inside)
                return self.value(node, inside)

            value = reached(parse_text(line.formula))
        return value

    def _between(self, record: Record, line: Quantity, known: Mapping[str, Value]) -> Value:
        """The root of the line's relation by plain halving of the bracket it states."""
        relation = next(each for each in record.relations if each.name == line.from_relation)
        left, right = parse_text(relation.left), parse_text(relation.right)
        low, high = (self.quantity(each) for each in _BRACKET.findall(line.steps[0])[0])

        def difference(at: Value) -> Value:
            inside = {**known, fold(line.symbol): at}
            return self.value(left, inside) - self.value(right, inside)

        rising = difference(high) > 0
        for _ in range(_ROUNDS):
            middle = (low + high) / 2
            above = (difference(middle) > 0) == rising
            low, high = self.choose(above, low, middle), self.choose(above, middle, high)
        return (low + high) / 2

    def nominal(self, record: Record) -> dict[str, Value]:
        """The given quantities at nominal."""
        return {fold(e.symbol): self.quantity(e.result) for e in given(record)}

    def at(self, record: Record, combination: Mapping[str, str]) -> dict[str, Value]:
        """Every quantity where the inputs stand as a combination says, others at nominal."""
        stands = {fold(symbol): self.quantity(text) for symbol, text in combination.items()}
        return self.lines(record, self.nominal(record) | stands)

    def sides(self, text: str, known: Mapping[str, Value]) -> list[Value]:
        """The sides of a criterion, from left to right."""
        tree = parse_text(text)
        assert isinstance(tree, Comparison)
        return [self.value(each, known) for each in tree.operands]


def given(record: Record) -> list[Quantity]:
    """The quantities that are not computed."""
    return [each for each in record.quantities if each.kind in _GIVEN]


_GIVEN: Final = ("condition", "input", "assumption")
_ROUNDS: Final = 200
_BRACKET: Final = re.compile(r"between (.+) and (.+)")
_OPERATIONS: Final[dict[str, Callable[[Value, Value], Value]]] = {
    "+": lambda a, b: a + b,
    "-": lambda a, b: a - b,
    "*": lambda a, b: a * b,
    "/": lambda a, b: a / b,
    "^": lambda a, b: a**b,
}

PRECISE: Final = Library(
    number=lambda value: mpmath.mpf(value.numerator) / value.denominator,
    functions={
        **{
            name: getattr(mpmath, name)
            for name in ("sqrt", "exp", "ln", "log10", "sin", "cos", "tan", "asin", "acos", "atan")
        },
        "abs": abs,
        "min": min,
        "max": max,
        "floor": mpmath.floor,
        "ceil": mpmath.ceil,
        "sum": lambda *values: mpmath.fsum(values),
        "rss": lambda *values: mpmath.sqrt(mpmath.fsum(each**2 for each in values)),
    },
    constants={"pi": mpmath.pi},
    choose=lambda holds, one, other: one if holds else other,
)
"""mpmath, in its working precision."""

QUICK: Final = Library(
    number=float,
    functions={
        "sqrt": np.sqrt, "exp": np.exp, "ln": np.log, "log10": np.log10, "sin": np.sin,
        "cos": np.cos, "tan": np.tan, "asin": np.arcsin, "acos": np.arccos, "atan": np.arctan,
        "abs": np.abs, "floor": np.floor, "ceil": np.ceil,
        "min": lambda *values: reduce(np.minimum, values),
        "max": lambda *values: reduce(np.maximum, values),
        "sum": lambda *values: sum(values),
        "rss": lambda *values: np.sqrt(sum(each**2 for each in values)),
    },
    constants={"pi": np.pi},
    choose=np.where,
)  # fmt: skip
"""NumPy, for many draws at once."""
