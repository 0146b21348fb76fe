"""What cannot be computed, as findings at the smallest wrong piece."""

from collections.abc import Mapping, Sequence
from typing import Final

import numpy as np

from calcdoc.analysis.box import Box
from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.domains import JUMP, NO_CHANGE, POLE, SEVERAL
from calcdoc.analysis.hazards import Hazard, hazards
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.tape import needed
from calcdoc.frozen import Frozen, replace
from calcdoc.model.model import Model, Variable
from calcdoc.problems import Finding, Place, error
from calcdoc.source import Span
from calcdoc.text.nodes import Binary, Call, Group, Negate, Node, walk
from calcdoc.text.scan import shown
from calcdoc.text.statements import PointValue
from calcdoc.text.unparse import unparse
from calcdoc.units import Dimension, Unit
from calcdoc.units.choose import choose_unit

_GUARD: Final = "narrow the band, or leave the case out with if(condition, a, b)"
_SHARE: Final = "{piece} becomes zero {where}, and nothing has a share of zero"
_CODES: Final[Mapping[str, tuple[str, str, str]]] = {
    "division by zero": (
        "division-by-zero", "the divisor {piece} becomes zero {where}", _GUARD),
    "square root of a negative": (
        "out-of-domain", "the square root is taken of a negative value of {piece} {where}",
        _GUARD),
    "power of a negative base": (
        "out-of-domain", "the broken power is taken of a negative value of {piece} {where}",
        _GUARD),
    "logarithm of zero or less": (
        "out-of-domain", "the logarithm is taken of zero or less: {piece} {where}", _GUARD),
    "arcsine outside -1..1": (
        "out-of-domain", "{piece} lies outside -1 .. 1 {where}",
        "limit it with max(-1, min(1, x)) where that is right"),
    "tangent at a pole": (
        "out-of-domain", "the tangent has a pole: {piece} {where}", "narrow the band"),
    "overflow": (
        "too-large", "the value of {piece} is too large to compute {where}",
        "check the exponent and the units"),
}  # fmt: skip


class Setter(Frozen, frozen=True):
    """A criterion or measurement that sets values of its own."""

    what: str
    """``criterion`` or ``measurement``."""
    name: str
    points: tuple[PointValue, ...]


def troubles(
    compiled: Compiled,
    model: Model,
    boxes: Sequence[Box],
    targets: Sequence[Sequence[int]],
    setters: Sequence[Setter | None],
) -> tuple[Finding, ...]:
    """Everything that cannot be computed at nominal or within a box, once each.

    Args:
        compiled: The tape and its origins.
        model: For names and units in the messages.
        boxes: Ranges of the input columns.
        targets: For each box the instructions that must be computable in it.
        setters: For each box who sets its values, if any.
    """
    teller = _Teller(compiled, model)
    found: dict[int, Finding] = {}
    for box, wanted, setter in zip(boxes, targets, setters, strict=True):
        for hazard in hazards(compiled.tape, wanted, box.low, box.nominal, box.high):
            at_nominal = bool(np.all(hazard.point == box.nominal))
            finding = teller.finding(hazard, setter, at_nominal=at_nominal)
            found.setdefault(hazard.instruction, finding)
    return tuple(found.values())


def out_of_reach(
    compiled: Compiled, model: Model, box: Box, targets: Sequence[int], setter: Setter | None
) -> Mapping[int, Finding]:
    """The targets that cannot be computed somewhere in a box, with the reason for each.

    Args:
        compiled: The tape and its origins.
        model: For names and units in the reasons.
        box: Ranges of the input columns.
        targets: Instructions.
        setter: Who sets the values of the box, if any.
    """
    found = hazards(compiled.tape, targets, box.low, box.nominal, box.high) if targets else ()
    if not found:
        return {}
    teller = _Teller(compiled, model)
    reasons = {
        each.instruction: teller.finding(
            each, setter, at_nominal=bool(np.all(each.point == box.nominal))
        )
        for each in found
    }
    return {
        target: next(reasons[at] for at in used if at in reasons)
        for target in targets
        if reasons.keys() & set(used := needed(compiled.tape, (target,)))
    }


def said(finding: Finding) -> str:
    """A finding as a reason, on one line."""
    return f"{finding.message} {finding.place.label}".rstrip()


class _Teller:
    """Says what a hazard is in the words and at the place of the author's text."""

    def __init__(self, compiled: Compiled, model: Model) -> None:
        self.compiled, self.model = compiled, model
        self.shares = [each.share for each in compiled.checks if each.share]
        self.of_root = {at: key for case in compiled.all_cases for key, at in case.roots.items()}

    def finding(self, hazard: Hazard, setter: Setter | None, *, at_nominal: bool) -> Finding:
        """The finding for a hazard."""
        at = f"at {self._combination(hazard.point)}"
        where = "at the nominal values" if at_nominal else "within the band"
        if setter is None:
            return self._found(hazard, where, "" if at_nominal else at)
        name = shown(setter.name)
        sets = f"at the values that {setter.what} {name} sets"
        where = sets if at_nominal else f"{where} {sets}"
        finding = self._found(hazard, where, at)
        advice = finding.help.replace("narrow the band", f"set other values in {name}")
        first, last = setter.points[0].symbol.span, setter.points[-1].given.span
        related = (*finding.related, Place(first.to(last), "set here"))
        return replace(finding, help=advice, related=related)

    def _found(self, hazard: Hazard, where: str, label: str) -> Finding:
        if hazard.kind not in _CODES:
            return self._root(hazard, where, label)
        code, message, advice = _CODES[hazard.kind]
        origin = self._origin(hazard)
        piece = _piece(origin, hazard.kind)
        if hazard.kind == POLE and any(origin is share for share in self.shares):
            message, advice = _SHARE, _share_advice(origin)
        if hazard.inner:
            where = f"between the ends of the bracket, {where}"
        return error(
            code,
            message.format(piece=shown(unparse(piece)), where=where),
            piece.span if piece.span.path else self._solved(origin),
            label=label,
            help=advice,
        )

    def _origin(self, hazard: Hazard) -> Node:
        """The piece of formula an instruction came from, also inside of a residual."""
        origins = self.compiled.origins
        if hazard.inner:
            inside = self.compiled.inside.get(hazard.instruction, {})
            return inside.get(hazard.inner[0], origins[hazard.instruction])
        return origins[hazard.instruction]

    def _solved(self, origin: Node) -> Span:
        """Where the quantity stands whose closed form holds a piece that nobody wrote."""
        for key, root in self.compiled.chosen.items():
            if any(each is origin for each in walk(root.tree)):
                return self.model.variables[key].label.span
        return self.model.document.source.span(0, 1)

    def _root(self, hazard: Hazard, where: str, label: str) -> Finding:
        """A root that is not in its bracket, or not alone in it."""
        variable = self.model.variables[self.of_root[hazard.instruction]]
        implicit = variable.implicit
        assert implicit is not None
        span = variable.label.span if implicit.is_loop else implicit.bracket.span
        low, high = (f"{end} {implicit.bracket.unit.text}".rstrip() for end in
                     implicit.bracket.spread)  # fmt: skip
        name = shown(variable.symbol)
        if hazard.kind == SEVERAL:
            return error(
                "several-roots",
                f"there are several values of {name} between {low} and {high} {where}",
                span,
                label=label,
                help="narrow the bracket to the one that is meant",
            )
        if hazard.kind == JUMP:
            return error(
                "no-root",
                f"left less right jumps over zero between {low} and {high} {where}, at a pole or a"
                f" step, so no value of {name} is a solution",
                span,
                label=label,
                help="narrow the bracket so that the jump lies outside of it",
            )
        ends = ""
        if hazard.kind == NO_CHANGE and hazard.ends is not None and not hazard.inner:
            # Of a loop the author writes the quantity left of its formula.
            sign = -1.0 if implicit.is_loop else 1.0
            one, other = (self._left(sign * end, implicit.dimension) for end in
                          (hazard.ends.low, hazard.ends.high))  # fmt: skip
            ends = f": left less right is {one} at {low} and {other} at {high}"
        message = (
            f"{name} does not settle between {low} and {high} {where}{ends}"
            if implicit.is_loop
            else f"no value of {name} between {low} and {high} solves the relation {where}{ends}"
        )
        return error(
            "no-root",
            message,
            span,
            label=label,
            help="left less right must change its sign between the ends; move the bracket"
            + (", or lower its upper end below the point of running away" * implicit.is_loop),
        )

    def _left(self, value: float, dimension: Dimension) -> str:
        unit = choose_unit(dimension, value)
        return f"{unit.from_si(value):.4g} {unit.text}".rstrip()

    def _combination(self, point: FloatArray) -> str:
        """``V_line = 207 V, C = 8 µF``: the inputs that do not stand at nominal."""
        nominal, variables = self.compiled.box.nominal, self.model.variables
        moved = [
            _value(variables[name], float(point[column]))
            for key, column in self.compiled.columns.items()
            if (name := key.partition("@")[0]) in variables and point[column] != nominal[column]
        ]
        return ", ".join(moved[:6]) or "the nominal values"


def _share_advice(share: Node) -> str:
    """How to compare with a side that may be zero."""
    assert isinstance(share, Binary)
    right = share.right
    is_sum = isinstance(right, Negate) or (isinstance(right, Binary) and right.op in "+-")
    second = f"({unparse(right)})" if is_sum else unparse(right)
    difference = f"{unparse(share.left)} - {second}"
    return f"limit abs({difference}) in a criterion, as a value with its unit instead of a share"


def _piece(node: Node, kind: str) -> Node:
    """The operand that is to blame."""
    if kind == "overflow":
        return node
    if isinstance(node, Binary):
        node = node.right if node.op == "/" else node.left
    elif isinstance(node, Call):
        node = node.arguments[0]
    while isinstance(node, Group):
        node = node.inner
    return node


def _value(variable: Variable, si: float) -> str:
    unit = variable.unit
    assert isinstance(unit, Unit)
    number = f"{unit.from_si(si):.6g}"
    return f"{variable.symbol} = {number} {unit.text}".rstrip()
