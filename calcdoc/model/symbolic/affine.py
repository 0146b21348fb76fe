"""Relations that are linear in several unknowns, as rows of coefficients."""

from collections.abc import Callable, Mapping, Sequence
from typing import Final

from calcdoc.frozen import Frozen
from calcdoc.model.symbolic.build import (
    add,
    divide,
    multiply,
    negate,
    positive_first,
    subtract,
    total,
)
from calcdoc.model.symbolic.grouping import ONE, ZERO, bare, name
from calcdoc.model.symbolic.simplify import simplified
from calcdoc.model.symbolic.trees import mentions
from calcdoc.model.symbolic.verify import is_zero
from calcdoc.text.names import fold
from calcdoc.text.nodes import Binary, Call, Group, Name, Negate, Node

_KNOWN: Final = ""
"""The key of the part without an unknown."""
_Parts = dict[str, Node]


class Row(Frozen, frozen=True):
    """``sum of coefficient*unknown = rest``; no coefficient is certainly zero."""

    relation: str
    coefficients: Mapping[str, Node]
    rest: Node

    def shown(self, spellings: Mapping[str, str]) -> Node:
        """The side with the unknowns."""
        return total(multiply(c, name(spellings[key])) for key, c in self.coefficients.items())

    def scaled(self, factor: Node) -> "Row":
        """Both sides multiplied."""
        scaled = {key: multiply(factor, each) for key, each in self.coefficients.items()}
        return Row(self.relation, scaled, multiply(factor, self.rest))

    def without(self, key: str, pivot: "Row") -> "Row":
        """This row less as much of another as makes the coefficient of an unknown zero."""
        own, other = self.coefficients[key], pivot.coefficients[key]
        if len(pivot.coefficients) == 1:  # its value is known
            left = {each: c for each, c in self.coefficients.items() if each != key}
            value = divide(pivot.rest, other)
            return tidy(self.relation, left, subtract(self.rest, multiply(own, value)))
        mine, theirs = self.scaled(other), pivot.scaled(own)
        keys = [*mine.coefficients, *(k for k in theirs.coefficients if k not in mine.coefficients)]
        left = {
            each: subtract(mine.coefficients.get(each, ZERO), theirs.coefficients.get(each, ZERO))
            for each in keys
            if each != key
        }
        return tidy(self.relation, left, subtract(mine.rest, theirs.rest))


def tidy(relation: str, coefficients: Mapping[str, Node], rest: Node) -> Row:
    """A row with its formulas simplified and what is certainly zero left out."""
    kept = {key: simplified(c) for key, c in coefficients.items() if not is_zero(c)}
    return Row(relation, kept, ZERO if is_zero(rest) else positive_first(simplified(rest)))


def row(relation: tuple[str, Node, Node], keys: Sequence[str]) -> Row | None:
    """A relation as a row, or None when it is not linear in the unknowns together."""
    label, left, right = relation
    one, other = _parts(left, keys), _parts(right, keys)
    if one is None or other is None:
        return None
    there = [key for key in keys if key in one or key in other]
    coefficients = {k: subtract(one.get(k, ZERO), other.get(k, ZERO)) for k in there}
    rest = subtract(other.get(_KNOWN, ZERO), one.get(_KNOWN, ZERO))
    return tidy(label, coefficients, rest)


def _parts(node: Node, keys: Sequence[str]) -> _Parts | None:
    """Coefficient of each unknown and the rest."""
    if not any(mentions(node, key) for key in keys):
        return {_KNOWN: bare(node)}
    match node:
        case Name(text):
            return {fold(text): ONE}
        case Group(inner):
            return _parts(inner, keys)
        case Negate(operand):
            return _changed(_parts(operand, keys), negate)
        case Binary("+" | "-" as op, left, right):
            other = _parts(right, keys)
            return _added(_parts(left, keys), other if op == "+" else _changed(other, negate))
        case Binary("*", left, right):
            return _times(left, right, keys)
        case Binary("/", left, right) if not any(mentions(right, key) for key in keys):
            return _changed(_parts(left, keys), lambda each: divide(each, right))
        case Call("sum", arguments):
            whole: _Parts | None = {}
            for each in arguments:
                whole = _added(whole, _parts(each, keys))
            return whole
        case _:
            return None


def _times(left: Node, right: Node, keys: Sequence[str]) -> _Parts | None:
    if not any(mentions(left, key) for key in keys):
        return _changed(_parts(right, keys), lambda each: multiply(left, each))
    if not any(mentions(right, key) for key in keys):
        return _changed(_parts(left, keys), lambda each: multiply(each, right))
    return None


def _changed(parts: _Parts | None, change: Callable[[Node], Node]) -> _Parts | None:
    return None if parts is None else {key: change(each) for key, each in parts.items()}


def _added(one: _Parts | None, other: _Parts | None) -> _Parts | None:
    if one is None or other is None:
        return None
    return {
        key: add(one.get(key, ZERO), other.get(key, ZERO)) for key in dict.fromkeys([*one, *other])
    }
