"""Criteria, cross-checks and hazards: what they compare, and that it can be compared."""

from collections.abc import Mapping

from calcdoc.model import blame, series
from calcdoc.model.cases import Stated, judged_in
from calcdoc.model.model import (
    Compared,
    Discharge,
    Judged,
    Measured,
    Model,
    Typed,
    Variable,
)
from calcdoc.model.namespace import Namespace, direct_uses
from calcdoc.model.quantities import typed_as
from calcdoc.model.typing import Checker, Unknown
from calcdoc.problems import Finding, Mistake, Place, error, warning
from calcdoc.text.given import Given
from calcdoc.text.names import fold
from calcdoc.text.nodes import Comparison, Name, Node, names, walk
from calcdoc.text.scan import shown
from calcdoc.text.statements import (
    CrosscheckStatement,
    HazardStatement,
    Index,
    Inequality,
    Measurement,
    PointValue,
)
from calcdoc.units import Dimension
from calcdoc.units.dimension import CURRENT, TIME, VOLTAGE

CAPACITANCE = CURRENT * TIME / VOLTAGE


def outside_band(model: Model) -> tuple[Finding, ...]:
    """Operating points that reach beyond the band a quantity was declared with: maybe a slip."""
    judged = [each for each in model.criteria if isinstance(each, Judged)]
    points = [
        *((point, "criterion") for each in judged for point in each.statement.clauses.at),
        *((point, "measurement") for each in model.measurements for point in each.statement.at),
    ]
    return tuple(
        _beyond(point, given, what)
        for point, what in points
        if (given := model.variables[point.symbol.key].given) is not None
        and given.varies
        and not given.si[0] <= point.given.si[0] <= point.given.si[-1] <= given.si[-1]
    )


def _beyond(point: PointValue, given: Given, what: str) -> Finding:
    least, greatest = (given.unit.from_si(given.si[end]) for end in (0, -1))
    unit = f" {given.unit.text}" if given.unit.text else ""
    return warning(
        "outside-band",
        f"`{point.symbol.name}` is declared from {least:.6g}{unit} to {greatest:.6g}{unit},"
        " this point lies outside",
        point.given.span,
        help=f"correct it, or say in the description why the {what} looks beyond the band",
    )


class Judging:
    """Checks what stands on typed quantities."""

    def __init__(
        self,
        space: Namespace,
        checker: Checker,
        variables: Mapping[str, Variable],
        cases: Stated,
    ) -> None:
        self.space, self.checker, self.variables = space, checker, variables
        self.cases = cases

    def criterion(self, statement: Inequality) -> Judged:
        """A calculated criterion.

        Raises:
            Mistake: at the smallest wrong piece.
            Unknown: when it rests on a line that is wrong itself.
        """
        clauses = statement.clauses
        index, trees = clauses.index, list(statement.operands)
        typed = self.checker.comparison(statement.operands, index)
        self._check_series(statement.operands, index)
        if clauses.when is not None:
            trees.append(clauses.when)
            self.checker.condition(clauses.when, index)
            for each in walk(clauses.when):
                if isinstance(each, Comparison):
                    self._check_series(each.operands, index)
        if index is not None:
            self._check_index(trees, index)
        self._check_margin(statement, typed)
        self._check_points(clauses.at)
        cases = judged_in(clauses.scope, self.cases, {p.symbol.key for p in clauses.at})
        running = {index.name.key} if index else set()
        return Judged(statement, typed, direct_uses(trees, self.space, running), cases)

    def crosscheck(self, statement: CrosscheckStatement) -> Compared:
        """A cross-check; raises as :meth:`criterion` does."""
        sides = (statement.first, statement.second)
        typed = self.checker.comparison(sides)
        self._check_series(sides, None)
        if statement.allowed and typed.weight:
            raise Mistake(
                error(
                    "temperature",
                    "a share of a temperature on the Celsius scale means nothing",
                    statement.allowed.span,
                    help="compare differences of temperatures, or use `not below`",
                )
            )
        return Compared(statement, typed, direct_uses(sides, self.space))

    def measurement(self, statement: Measurement) -> Measured:
        """A cross-check with a measured value; raises as :meth:`criterion` does."""
        typed = self.checker.quantity(statement.second)
        self._check_series((statement.second,), None)
        measured = typed_as(statement.given.unit)
        if measured.dimension != typed.dimension:
            raise Mistake(
                error(
                    "unit-mismatch",
                    f"cannot compare {measured.dimension.in_words()} with"
                    f" {typed.dimension.in_words()}",
                    statement.given.span.to(statement.second.span),
                    related=blame.defined(statement.second, typed, self.checker.places),
                )
            )
        if measured != typed:
            raise Mistake(
                error(
                    "temperature",
                    "cannot compare a temperature with a difference of temperatures",
                    statement.given.span.to(statement.second.span),
                    help="a temperature is in °C, a difference in K",
                )
            )
        self._check_points(statement.at)
        return Measured(statement, typed, direct_uses((statement.second,), self.space))

    def _check_series(self, sides: tuple[Node, ...], index: Index | None) -> None:
        """A whole series is judged element by element."""
        for side in sides:
            over = series.over(side, self.checker.sets)
            if over and (index is None or over != index.values):
                raise Mistake(
                    error(
                        "series-form",
                        "this is a whole series, a limit holds for each element"
                        if index is None
                        else f"this series has other indices than {index.text}",
                        side.span,
                        help="name the element and add `for n in ...`, or take max(...)",
                    )
                )

    def _check_index(self, trees: list[Node], index: Index) -> None:
        """A criterion over a series depends on its index, or judges one thing many times."""
        used = any(fold(each.name) == index.name.key for tree in trees for each in names(tree))
        sides = (side for tree in trees for side in (tree, *walk(tree)))
        if used or any(isinstance(each, Name) and self._is_series(each) for each in sides):
            return
        raise Mistake(
            error(
                "series-form",
                f"{shown(index.name.name)} stands nowhere in this criterion, which would be judged"
                f" {len(index.values)} times alike",
                index.name.span,
                help=f"name an element, as in limit[{index.name.name}], or leave `for` out",
            )
        )

    def _is_series(self, name: Name) -> bool:
        variable = self.variables.get(fold(name.name))
        return variable is not None and variable.index is not None

    def _check_margin(self, statement: Inequality, typed: Typed) -> None:
        margin = statement.clauses.margin
        if margin and margin.is_share and typed.weight:
            raise Mistake(
                error(
                    "temperature",
                    "a share of a temperature on the Celsius scale means nothing",
                    margin.span,
                    help="write the margin in K",
                )
            )
        if margin and not margin.is_share and margin.value.unit.dimension != typed.dimension:
            raise Mistake(
                error(
                    "unit-mismatch",
                    f"the margin is {margin.value.unit.dimension.in_words()}, the"
                    f" criterion compares {typed.dimension.in_words()}",
                    margin.span,
                    help="give the margin in per cent of the limit or in its unit",
                )
            )

    def _check_points(self, points: tuple[PointValue, ...]) -> None:
        """An operating point sets given quantities, each once and to a value of its kind."""
        for point in points:
            symbol = point.symbol
            target = self.variables.get(symbol.key)
            if target is None:
                raise Unknown
            if target.given is None:
                raise Mistake(
                    error(
                        "operating-point",
                        f"{shown(symbol.name)} is derived, an operating"
                        " point sets conditions and inputs",
                        symbol.span,
                        related=(Place(target.label.span, "derived here"),),
                    )
                )
            blame.other_kind(symbol, target, typed_as(point.given.unit))
        _check_once(points)

    def hazard(self, statement: HazardStatement) -> list[Finding]:
        """What is wrong with the symbols of a hazard."""
        wanted: tuple[tuple[Dimension, str], ...] = (
            (CAPACITANCE, "a capacitance"),
            (VOLTAGE, "a voltage"),
            (VOLTAGE / CURRENT, "a resistance"),
        )
        if statement.kind == "supply":
            wanted = wanted[1:2]
        findings = []
        for symbol, (dimension, words) in zip(statement.symbols, wanted, strict=False):
            variable = self.variables.get(symbol.key)
            if variable and (variable.typed.dimension != dimension or variable.index):
                kind = "a series" if variable.index else variable.typed.dimension.in_words()
                findings.append(
                    error(
                        "unit-mismatch",
                        f"expected {words}, {shown(symbol.name)} is {kind}",
                        symbol.span,
                        help="name the symbol of the " + words.removeprefix("a "),
                    )
                )
        return findings


def discharge(statement: HazardStatement) -> Discharge:
    """The keys of a stored charge."""
    keys = [symbol.key for symbol in statement.symbols]
    return Discharge(keys[0], keys[1], (*keys, None)[2], statement)


def _check_once(points: tuple[PointValue, ...]) -> None:
    for at, point in enumerate(points):
        if point.symbol.key in [each.symbol.key for each in points[:at]]:
            raise Mistake(
                error(
                    "operating-point",
                    f"{shown(point.symbol.name)} has two values here",
                    point.symbol.span,
                    help="keep one of them",
                )
            )
