"""Units carried through a formula: what is combined as written, and what it reduces to."""

from collections.abc import Callable
from fractions import Fraction

from calcdoc.model.constant import constant_value
from calcdoc.records.rounding import trimmed
from calcdoc.records.wording import NO_BREAK, typeset
from calcdoc.text import literal
from calcdoc.text.names import fold
from calcdoc.text.nodes import Binary, Call, Group, Name, Negate, Node, Quantity
from calcdoc.units import PLAIN, Unit
from calcdoc.units import unit_of as units_of

Combined = dict[str, Fraction]
"""Unit word to exponent; empty for a plain number."""
UnitOf = Callable[[str], Unit]
"""Key of a quantity to the unit its value is written in."""
_ONE_TIMES = f"1{NO_BREAK}×{NO_BREAK}"
_PLAIN_ARGUMENT = frozenset({"exp", "ln", "log10", "sin", "cos", "tan", "asin", "acos", "atan"})


def units_carried(node: Node, result: Unit, unit_of: UnitOf) -> str:
    """``mA·ms/µF = V``; with the factor when it is not one; empty where nothing is reduced."""
    walker = _Walker(unit_of)
    whole = walker.combined(node)
    if whole is not None:
        walker.reduce(whole, result)
    for term in walker.open_terms:
        walker.reduce(term, result)
    return "; ".join(dict.fromkeys(walker.reductions))


class _Walker:
    """Combines unit words upwards; sums of unlike terms are reduced term by term."""

    def __init__(self, unit_of: UnitOf) -> None:
        self.unit_of = unit_of
        self.reductions: list[str] = []
        self.open_terms: list[Combined] = []

    def combined(self, node: Node) -> Combined | None:
        """The unit words of a node, or None when its terms are unlike (they are noted)."""
        match node:
            case Name(name):
                return self._of_unit(self.unit_of(fold(name)))
            case Quantity():
                return self._of_unit(literal.resolve(node.unit))
            case Group(inner) | Negate(inner):
                return self.combined(inner)
            case Binary(op, left, right) if op in "+-":
                return self._alike([left, right])
            case Binary("^", left, _):
                return self._power(left, node)
            case Binary(op, left, right):
                return self._product(left, right, 1 if op == "*" else -1)
            case Call(function, arguments):
                return self._call(function, arguments)
            case _:
                return {}

    def _of_unit(self, unit: Unit) -> Combined:
        if unit.celsius:
            return {"K": Fraction(1)}
        return {word: Fraction(power) for word, power in unit.words}

    def _product(self, left: Node, right: Node, sign: int) -> Combined | None:
        one, other = self.combined(left), self.combined(right)
        if one is None or other is None:
            return None
        merged = dict(one)
        for word, power in other.items():
            merged[word] = merged.get(word, Fraction(0)) + sign * power
        return {word: power for word, power in merged.items() if power}

    def _power(self, base: Node, node: Binary) -> Combined | None:
        inner, exponent = self.combined(base), constant_value(node.right)
        if inner is None or exponent is None:
            return inner if not inner else None
        return {word: power * exponent for word, power in inner.items()}

    def _alike(self, terms: list[Node]) -> Combined | None:
        found = [self.combined(term) for term in terms]
        known = [each for each in found if each is not None]
        if len(known) == len(found) and all(each == known[0] for each in known):
            return known[0]
        self.open_terms += known
        return None

    def _call(self, function: str, arguments: tuple[Node, ...]) -> Combined | None:
        if function in _PLAIN_ARGUMENT:
            inner = self.combined(arguments[0])
            if inner:
                self.reduce(inner, PLAIN)
            return {}
        if function == "sqrt":
            inner = self.combined(arguments[0])
            return inner and {word: power / 2 for word, power in inner.items()}
        if function in ("floor", "ceil"):
            return {}
        return self._alike(list(arguments[1:] if function == "if" else arguments))

    def reduce(self, combined: Combined, result: Unit) -> None:
        """Note ``combined = factor result`` where the two differ."""
        target = {"K": Fraction(1)} if result.celsius else {w: Fraction(p) for w, p in result.words}
        if combined == target or any(power.denominator != 1 for power in combined.values()):
            return
        unit = units_of((word, int(power)) for word, power in combined.items())
        if unit.dimension != result.dimension:
            return
        factor = unit.factor / result.factor
        number = "" if factor == 1 else typeset(trimmed(factor, 6)).removeprefix(_ONE_TIMES)
        if result.text == "deg" and not unit.words:
            self.reductions.append(f"1{NO_BREAK}rad = {number}°")  # an angle is a plain number
            return
        right = NO_BREAK.join(part for part in (number, result.text) if part) or "1"
        self.reductions.append(f"{unit.text or '1'} = {right}")
