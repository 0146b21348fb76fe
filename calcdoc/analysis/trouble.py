"""What cannot be computed, as findings at the smallest wrong piece."""

from collections.abc import Mapping, Sequence
from typing import Final

import numpy as np

from calcdoc.analysis.box import Box
from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.hazards import Hazard, hazards
from calcdoc.analysis.points import FloatArray
from calcdoc.model.model import Model, Variable
from calcdoc.problems import Finding, error
from calcdoc.text.nodes import Binary, Call, Group, Node
from calcdoc.text.scan import shown
from calcdoc.text.unparse import unparse
from calcdoc.units import Unit

_CODES: Final[Mapping[str, tuple[str, str, str]]] = {
    "division by zero": (
        "division-by-zero", "the divisor {piece} becomes zero {where}",
        "narrow the band, or leave the case out with if(condition, a, b)"),
    "square root of a negative": (
        "out-of-domain", "the square root is taken of a negative value of {piece} {where}",
        "narrow the band, or leave the case out with if(condition, a, b)"),
    "power of a negative base": (
        "out-of-domain", "the broken power is taken of a negative value of {piece} {where}",
        "narrow the band, or leave the case out with if(condition, a, b)"),
    "logarithm of zero or less": (
        "out-of-domain", "the logarithm is taken of zero or less: {piece} {where}",
        "narrow the band, or leave the case out with if(condition, a, b)"),
    "arcsine outside -1..1": (
        "out-of-domain", "{piece} lies outside -1 .. 1 {where}",
        "limit it with max(-1, min(1, x)) where that is right"),
    "tangent at a pole": (
        "out-of-domain", "the tangent has a pole: {piece} {where}", "narrow the band"),
    "overflow": (
        "too-large", "the value of {piece} is too large to compute {where}",
        "check the exponent and the units"),
}  # fmt: skip


def troubles(
    compiled: Compiled, model: Model, boxes: Sequence[Box], targets: Sequence[Sequence[int]]
) -> tuple[Finding, ...]:
    """Everything that cannot be computed at nominal or within a box, once each.

    Args:
        compiled: The tape and its origins.
        model: For names and units in the messages.
        boxes: Ranges of the input columns.
        targets: For each box the instructions that must be computable in it.
    """
    found: dict[int, Finding] = {}
    for box, wanted in zip(boxes, targets, strict=True):
        for hazard in hazards(compiled.tape, wanted, box.low, box.nominal, box.high):
            at_nominal = bool(np.all(hazard.point == box.nominal))
            found.setdefault(hazard.instruction, _finding(compiled, model, hazard, at_nominal))
    return tuple(found.values())


def _finding(compiled: Compiled, model: Model, hazard: Hazard, at_nominal: bool) -> Finding:
    code, message, advice = _CODES[hazard.kind]
    piece = _piece(compiled.origins[hazard.instruction], hazard.kind)
    where = "at the nominal values" if at_nominal else "within the band"
    label = "" if at_nominal else f"at {_combination(compiled, model, hazard.point)}"
    return error(code, message.format(piece=shown(unparse(piece)), where=where), piece.span,
                 label=label, help=advice)  # fmt: skip


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


def _combination(compiled: Compiled, model: Model, point: FloatArray) -> str:
    """``V_line = 207 V, C = 8 µF``: the inputs that do not stand at nominal."""
    moved = [
        _value(model.variables[key], float(point[column]))
        for key, column in compiled.columns.items()
        if key in model.variables and point[column] != compiled.box.nominal[column]
    ]
    return ", ".join(moved[:6]) or "the nominal values"


def _value(variable: Variable, si: float) -> str:
    unit = variable.unit
    assert isinstance(unit, Unit)
    number = f"{unit.from_si(si):.6g}"
    return f"{variable.symbol} = {number} {unit.text}".rstrip()
