"""Results in terms of chosen quantities, and how they answer to each of them."""

import math
from collections.abc import Collection, Mapping

import numpy as np

from calcdoc.analysis.evaluation import Answer, Band, Restated, Sensitive
from calcdoc.analysis.formulas import Formulas
from calcdoc.analysis.points import evaluate_points
from calcdoc.analysis.tape import Op
from calcdoc.frozen import Frozen
from calcdoc.model.model import Model, Root
from calcdoc.model.symbolic import Blocked, Failure, derivative, eliminate, mentions, simplified
from calcdoc.problems import Mistake, error
from calcdoc.source import Span
from calcdoc.text.nodes import Node
from calcdoc.text.scan import shown
from calcdoc.text.statements import Label, RestateStatement, SensitivityStatement


class Known(Frozen, frozen=True):
    """What is known of a computed model: its bands, and the roots that were left."""

    model: Model
    bands: Mapping[str, Band]
    chosen: Mapping[str, Root]

    def formulas(self) -> dict[str, Node]:
        """The closed formula of every quantity that has one."""
        found = {}
        for key, variable in self.model.variables.items():
            if key in self.chosen:
                found[key] = self.chosen[key].tree
            elif variable.formula is not None and variable.index is None and not variable.implicit:
                found[key] = variable.formula
        return found


def restated(known: Known, statement: RestateStatement) -> Restated:
    """The closed form of a quantity in the quantities to keep.

    Raises:
        Mistake: when another quantity stands in the way.
    """
    keep = {label.key for label in statement.terms}
    key = statement.symbol.key
    formulas = known.formulas()
    _check_derived(formulas, statement.symbol)
    tree = _eliminated(known, formulas[key], formulas, keep, statement.symbol, statement.span)
    value = _Point(known, tree, []).nominal
    if not math.isfinite(value):
        raise Mistake(
            error(
                "restate",
                f"{shown(statement.symbol.name)} in these quantities cannot be computed at the"
                " nominal values",
                statement.span,
                help="keep other quantities; something is divided by zero that was not before",
            )
        )
    return Restated(statement, tree, value, known.bands[key].nominal)


def sensitive(known: Known, statement: SensitivityStatement) -> Sensitive:
    """Partial derivatives of a quantity, the effects of one per cent and of the full tolerance.

    What depends on the named quantities is put in; everything else is held at nominal.

    Raises:
        Mistake: when there is no closed form to differentiate.
    """
    inputs = [label.key for label in statement.inputs]
    formulas = known.formulas()
    _check_derived(formulas, statement.symbol)
    _check_others(statement)
    depends = _resting_on(known.model, inputs)
    moved = {key: tree for key, tree in formulas.items() if key in depends}
    keep = (known.model.variables.keys() - depends) | set(inputs)
    key = statement.symbol.key
    tree = _eliminated(known, formulas[key], moved, keep, statement.symbol, statement.span)
    tree = simplified(tree)
    rows = [_answer(known, tree, statement, label) for label in statement.inputs]
    rows.sort(key=lambda row: -max(abs(row.low), abs(row.high)))
    return Sensitive(statement, tuple(rows))


def _check_others(statement: SensitivityStatement) -> None:
    """A quantity answers to others, not to itself."""
    for label in statement.inputs:
        if label.key == statement.symbol.key:
            raise Mistake(
                error(
                    "restate",
                    f"{shown(label.name)} is asked how it answers to itself",
                    label.span,
                    help="name quantities that it depends on",
                )
            )


def _check_dependence(
    known: Known, tree: Node, statement: SensitivityStatement, label: Label
) -> None:
    if mentions(tree, label.key):
        return
    name, other = shown(statement.symbol.name), shown(label.name)
    behind = _resting_on(known.model, [label.key])
    held = ", ".join(shown(each.name) for each in statement.inputs if each.key in behind)
    while_held = f"while {held} is held " if held else ""
    raise Mistake(
        error(
            "restate",
            f"{while_held}{name} does not depend on {other}",
            label.span,
            help="leave it out",
        )
    )


def _answer(known: Known, tree: Node, statement: SensitivityStatement, label: Label) -> Answer:
    _check_dependence(known, tree, statement, label)
    slope = derivative(tree, label.key)
    if isinstance(slope, Failure):
        raise Mistake(
            error(
                "restate",
                f"there is no derivative with respect to {shown(label.name)}: {slope.message}",
                label.span,
                help="leave it out, or write the formula without steps",
            )
        )
    band = known.bands[label.key]
    value = _Point(known, slope, []).nominal
    whole = _Point(known, tree, [label.key])
    low, high = (whole.at(end) - whole.nominal for end in (band.least, band.greatest))
    per_cent = 0.01 * band.nominal * value
    if not all(map(math.isfinite, (value, per_cent))):
        raise Mistake(
            error(
                "restate",
                f"{shown(statement.symbol.name)} has no derivative by {shown(label.name)} at the"
                " nominal values",
                label.span,
                help="leave it out, or choose a nominal value off the kink or the pole",
            )
        )
    if not all(map(math.isfinite, (low, high))):
        raise Mistake(
            error(
                "restate",
                f"{shown(statement.symbol.name)} cannot be computed at the ends of"
                f" {shown(label.name)} with all others at nominal",
                label.span,
                help="leave it out, or narrow its band",
            )
        )
    return Answer(label.key, slope, value, per_cent, low, high)


class _Point:
    """A closed formula at nominal, with at most one quantity that may move."""

    def __init__(self, known: Known, tree: Node, moving: list[str]) -> None:
        formulas = Formulas(len(moving))
        for key, band in known.bands.items():
            formulas.variables[key] = (
                formulas.builder.add(Op.INPUT, value=moving.index(key))
                if key in moving
                else formulas.constant(band.nominal)
            )
        self._target = formulas.node(tree)
        self._tape = formulas.builder.tape()
        self.nominal = self.at(*(known.bands[key].nominal for key in moving))

    def at(self, *values: float) -> float:
        """The value with the moving quantity elsewhere."""
        points = np.array(values, dtype=float).reshape(-1, 1)
        if not values:
            points = np.empty((0, 1))
        return float(evaluate_points(self._tape, points)[self._target, 0])


def _check_derived(formulas: Mapping[str, Node], symbol: Label) -> None:
    if symbol.key not in formulas:
        raise Mistake(
            error(
                "restate",
                f"{shown(symbol.name)} has no closed formula to restate",
                symbol.span,
                help="name a derived or solved quantity that is no series",
            )
        )


def _eliminated(  # noqa: PLR0913  (a formula, what replaces what, and where to point)
    known: Known,
    tree: Node,
    formulas: Mapping[str, Node],
    keep: Collection[str],
    symbol: Label,
    span: Span,
) -> Node:
    outcome = eliminate(tree, formulas, set(keep))
    if isinstance(outcome, Blocked):
        blocking = known.model.variables[outcome.key]
        name = blocking.symbol
        how = "found numerically" if blocking.implicit else "given"
        raise Mistake(
            error(
                "restate",
                f"{shown(symbol.name)} has no such closed form: {shown(name)} stands in the way, it"
                f" is {how}",
                span,
                help=f"name {name} too; it is then kept as it is",
            )
        )
    if isinstance(outcome, Failure):
        raise Mistake(
            error(
                "restate",
                f"the closed form of {shown(symbol.name)} is too long to read",
                span,
                help="keep some of the quantities between",
            )
        )
    return outcome


def _resting_on(model: Model, inputs: Collection[str]) -> set[str]:
    """Keys of quantities that depend on any of the inputs, which are held on their own."""
    reached = set(inputs)
    for key in model.order:
        if key not in inputs and any(u in reached for u in model.variables[key].depends_on):
            reached.add(key)
    return reached - set(inputs)
