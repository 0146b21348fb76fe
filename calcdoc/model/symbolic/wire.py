"""Formulas as plain lists, for the process that runs the symbolic engine.

What does not mention an unknown goes as one opaque symbol, so that it comes back as the author
wrote it: quantities with their digits and units, constants, whole coefficients. Only numbers go as
numbers, because exponents and counts have to be exact.
"""

from collections.abc import Sequence
from fractions import Fraction
from typing import Final

from calcdoc.model.symbolic.build import add, divide, multiply, number, power, writable
from calcdoc.model.symbolic.grouping import bare, call, name, plain
from calcdoc.model.symbolic.outcome import Failure, Refused
from calcdoc.model.symbolic.trees import mentions
from calcdoc.text.names import fold
from calcdoc.text.nodes import Binary, Call, Group, Name, Negate, Node, Number, walk

Plain = list[object]
_SENT: Final = frozenset(
    {"sqrt", "exp", "ln", "log10", "sin", "cos", "tan", "asin", "acos", "atan", "abs", "min", "max"}
)
_LAST: Final = 10**6


class Table:
    """The symbols of one question: unknowns first, then opaque pieces in order of appearance."""

    def __init__(self, unknowns: Sequence[str]) -> None:
        self.unknowns = tuple(unknowns)
        self.pieces: list[Node] = [name(each) for each in unknowns]
        self.decimal = False
        """Whether the author wrote numbers with a decimal point: so will the answer be."""

    def encode(self, node: Node) -> Plain:
        """A formula as lists.

        Raises:
            Refused: when the unknown stands in what the engine is not asked about.
        """
        node = bare(node)
        value = plain(node)
        if value is not None:
            self.decimal |= any(isinstance(n, Number) and "." in n.digits for n in walk(node))
            return ["number", str(value.numerator), str(value.denominator)]
        if not any(mentions(node, key) for key in self.unknowns):
            return ["symbol", self._place(node)]
        match node:
            case Name(text):
                return ["symbol", self.unknowns.index(fold(text))]
            case Negate(operand):
                return ["neg", self.encode(operand)]
            case Binary(op, left, right):
                return [op, self.encode(left), self.encode(right)]
            case Group(inner):
                return self.encode(inner)
            case Call("sum", arguments):
                return ["sum", *(self.encode(each) for each in arguments)]
            case Call("rss", arguments):
                return ["rss", *(self.encode(each) for each in arguments)]
            case Call(function, arguments) if function in _SENT:
                return [function, *(self.encode(each) for each in arguments)]
            case Call(function):
                what = f"{function}(...)"
            case _:
                what = "an element of a series"
        raise Refused(Failure("not solvable", f"the unknown stands inside {what}"))

    def _place(self, node: Node) -> int:
        if node not in self.pieces:
            self.pieces.append(node)
        return self.pieces.index(node)

    def decode(self, lists: object) -> Node:
        """A formula from lists, in the order in which its symbols first stood in the question."""
        assert isinstance(lists, list)
        head, *rest = lists
        match head:
            case "number":
                return self._number(rest)
            case "symbol":
                return self.pieces[int(rest[0])]
            case "pi":
                return name("pi")
            case "+":
                whole, *others = (self.decode(each) for each in sorted(rest, key=_term_order))
                for each in others:
                    whole = add(whole, each)
                return whole
            case "*":
                return self._product(sorted(rest, key=_factor_order))
            case "^":
                return self._power(*rest)
            case _:
                return call(str(head), *(self.decode(each) for each in rest))

    def _number(self, rest: Sequence[str]) -> Node:
        value = Fraction(int(rest[0]), int(rest[1]))
        if not writable(value):
            raise Refused(Failure("too large", "a number in the solution is too long to write"))
        return number(value, decimal=self.decimal)

    def _product(self, rest: Sequence[list[object]]) -> Node:
        """Factors with a negative power go below one fraction bar."""
        above: Node = number(1)
        below: Node = number(1)
        for each in rest:
            if (turned := _turned(each)) is not None:
                below = multiply(below, self.decode(turned))
            elif each[0] == "number" and not self.decimal:
                above = multiply(above, number(int(str(each[1]))))
                below = multiply(below, number(int(str(each[2]))))
            else:
                above = multiply(above, self.decode(each))
        return divide(above, below)

    def _power(self, base: list[object], exponent: list[object]) -> Node:
        if exponent[0] == "number":
            value = Fraction(int(str(exponent[1])), int(str(exponent[2])))
            if value < 0:
                return divide(number(1), power(self.decode(base), -value))
            return power(self.decode(base), value)
        return power(self.decode(base), self.decode(exponent))


def _turned(lists: list[object]) -> list[object] | None:
    """The reciprocal of a power with a negative number as exponent."""
    if lists[0] != "^":
        return None
    exponent = lists[2]
    assert isinstance(exponent, list)
    if exponent[0] != "number" or not str(exponent[1]).startswith("-"):
        return None
    return ["^", lists[1], ["number", str(exponent[1])[1:], exponent[2]]]


def _least_symbol(lists: object) -> int:
    if not isinstance(lists, list):
        return _LAST
    if lists[0] == "symbol":
        return int(lists[1])
    return min((_least_symbol(each) for each in lists[1:]), default=_LAST)


def _is_negative(lists: object) -> bool:
    assert isinstance(lists, list)
    if lists[0] == "*":
        return any(_is_negative(each) for each in lists[1:])
    return bool(lists[0] == "number" and str(lists[1]).startswith("-"))


def _term_order(lists: object) -> tuple[bool, int]:
    return _is_negative(lists), _least_symbol(lists)


def _factor_order(lists: object) -> tuple[int, int]:
    """Numbers, then symbols and their powers, then sums and functions."""
    assert isinstance(lists, list)
    base = lists[1] if lists[0] == "^" else lists
    assert isinstance(base, list)
    rank = {"number": 0, "symbol": 1}.get(str(base[0]), 2)
    return rank, _least_symbol(lists)
