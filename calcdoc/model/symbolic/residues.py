"""Formulas evaluated in exact arithmetic modulo a prime, for proofs that need no luck.

Every prime p here is one below a multiple of 8·3·5·7·11·...·47. Then −1 has no square root, so
exactly one of a and −a has one: having a square root behaves like being positive. Every number
made of small primes is positive in this sense, products of positives are, and each positive a has
one positive root of any small degree. So ``sqrt(a)^2`` is a, ``sqrt(a*b)`` is ``sqrt(a)*sqrt(b)``,
``sqrt(x^2)`` is x at half of the points and −x at the others, as for real numbers; a point at which
a root of a negative would be needed does not count.

Other functions are drawn by a keyed digest from their argument: equal for equal arguments, and
independent otherwise. What a drawn value came from is kept, so that exp(ln(a)) is a.
"""

from fractions import Fraction
from functools import lru_cache
from hashlib import blake2b
from math import gcd
from typing import Final

from calcdoc.model.constant import constant_value
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

PRIMES: Final = tuple(k * 2459559130353965640 - 1 for k in (1, 2, 7, 16))
_HALF: Final = Fraction(1, 2)
_CELSIUS: Final = Fraction("273.15")
_UNDONE: Final = {
    "exp": "ln", "ln": "exp", "log10": "ten", "ten": "log10",
    "sin": "asin", "cos": "acos", "tan": "atan",
}  # fmt: skip
"""Function and the one that it undoes for every argument that this one takes."""
_ODD: Final = frozenset({"sin", "tan", "asin", "atan"})


@lru_cache(maxsize=1024)
def _residue(digits: str, prime: int) -> int:
    value = Fraction(digits)
    return value.numerator * pow(value.denominator, -1, prime) % prime


@lru_cache(maxsize=256)
def _turns(exponent: Fraction, half: int) -> int | None:
    """The whole power that does the same as a fractional one in a group of this odd order."""
    if gcd(exponent.denominator, half) != 1:
        return None
    return exponent.numerator * pow(exponent.denominator, -1, half) % half


class Unusable(Exception):
    """At this point the formula has no value: a division by zero, the root of a negative."""


class Pole(Unusable):
    """A division by zero."""


class Point:
    """One choice of values for all symbols; ``index`` counts the choices.

    Attributes:
        drawn: A function was drawn, so values that differ prove nothing.
        rooted: A root was taken, so one point proves little.
    """

    def __init__(self, index: int) -> None:
        self.index = index
        self.prime = PRIMES[index % len(PRIMES)]
        self.drawn = False
        self.rooted = False
        self._origins: dict[tuple[str, int], int] = {}

    def value(self, node: Node) -> int:
        """The residue of a formula.

        Raises:
            Unusable: when it has none here.
        """
        match node:
            case Number(digits):
                return _residue(digits, self.prime)
            case Quantity(digits, written):
                unit = literal.resolve(written)
                value = Fraction(digits) * unit.factor
                return self._exact(value + _CELSIUS * unit.celsius)
            case Name(name):
                return self._draw("name", fold(name))
            case Element(name, index):
                return self._draw("element", fold(name), self.value(index))
            case Text(value=text):
                return self._draw("text", text)
            case Group(inner):
                return self.value(inner)
            case Negate(operand):
                return -self.value(operand) % self.prime
            case Binary(op, left, right):
                return self._binary(op, left, right)
            case Call(function, arguments):
                return self._call(function, arguments)
            case _:
                return self._condition(node)

    def _exact(self, value: Fraction) -> int:
        return value.numerator * self._inverse(value.denominator) % self.prime

    def _draw(self, *key: object) -> int:
        digest = blake2b(repr((key, self.index)).encode(), digest_size=16).digest()
        return int.from_bytes(digest, "big") % self.prime

    def _inverse(self, a: int) -> int:
        if a % self.prime == 0:
            raise Pole
        return pow(a, -1, self.prime)

    def _binary(self, op: str, left: Node, right: Node) -> int:
        if op == "^":
            return self._power(left, right)
        one, other = self.value(left), self.value(right)
        match op:
            case "+":
                return (one + other) % self.prime
            case "-":
                return (one - other) % self.prime
            case "*":
                return one * other % self.prime
            case _:
                return one * self._inverse(other) % self.prime

    def _power(self, base: Node, exponent: Node) -> int:
        value = constant_value(exponent)
        if value is not None:
            return self._rational_power(self.value(base), value)
        if constant_value(base) == 10:  # noqa: PLR2004
            return self._function("ten", self.value(exponent))
        self.drawn = True
        return self._draw("power", self.value(base), self.value(exponent))

    def _rational_power(self, a: int, exponent: Fraction) -> int:
        if exponent.denominator == 1:
            if a == 0 and exponent < 0:
                raise Pole
            return pow(a, exponent.numerator, self.prime)
        half = (self.prime - 1) // 2  # the order of the group of positives, which is odd
        self.rooted = True
        if a == 0 and exponent > 0:
            return 0
        turns = _turns(exponent, half)
        if turns is None or pow(a, half, self.prime) != 1:
            raise Unusable
        return pow(a, turns, self.prime)

    def _call(self, function: str, arguments: tuple[Node, ...]) -> int:
        if function == "if":
            self.drawn = True
            return self._draw("if", *(self.value(each) for each in arguments))
        values = [self.value(each) for each in arguments]
        match function:
            case "sqrt":
                return self._rational_power(values[0], _HALF)
            case "sum":
                return sum(values) % self.prime
            case "rss":
                squares = sum(each**2 for each in values) % self.prime
                return self._rational_power(squares, _HALF)
            case "abs":
                self.rooted = True
                half = (self.prime - 1) // 2
                positive = pow(values[0], half, self.prime) == 1
                return values[0] if positive else -values[0] % self.prime
            case "min" | "max" if len(arguments) == 1:
                return values[0]
            case "min" | "max":
                self.drawn = True
                return self._draw(function, *sorted(values))
            case "lookup":
                self.drawn = True
                return self._draw(function, *values)
            case _:
                return self._function(function, values[0])

    def _function(self, function: str, a: int) -> int:
        """A function of one argument that no root is."""
        self.drawn = True
        undone = _UNDONE.get(function)
        if undone and (undone, a) in self._origins:
            return self._origins[undone, a]
        if function == "exp" and (undone, -a % self.prime) in self._origins:
            return self._inverse(self._origins["ln", -a % self.prime])
        mirrored = a > self.prime // 2
        if mirrored and (function in _ODD or function == "cos"):
            value = self._draw(function, self.prime - a)
            value = -value % self.prime if function in _ODD else value
        else:
            value = self._draw(function, a)
        self._remember(function, value, a)
        return value

    def _remember(self, function: str, value: int, a: int) -> None:
        """Keep what a drawn value came from, also on the other branch of an inverse."""
        self._origins[function, value] = a
        if function == "acos":
            self._origins[function, -value % self.prime] = a
        if function == "asin":
            self._origins[function, (self._draw("name", "π") - value) % self.prime] = a

    def _condition(self, node: Node) -> int:
        self.drawn = True
        operands = tuple(self.value(each) for each in children(node))
        word = ""
        match node:
            case Comparison(_, operators):
                word = " ".join(operators)
            case Logic(word=logic):
                word = logic
            case Not():
                word = "not"
        return self._draw("condition", word, operands)
