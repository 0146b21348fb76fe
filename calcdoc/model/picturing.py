"""Figures: what they show exists, is of the right kind, and would not be an empty picture."""

from collections.abc import Iterable, Mapping
from typing import Final, NoReturn

from calcdoc.model import series
from calcdoc.model.model import Pictured, Variable
from calcdoc.model.quantities import typed_as
from calcdoc.model.typing import Checker, Unknown
from calcdoc.problems import Finding, Mistake, Place, error
from calcdoc.source import Span
from calcdoc.text.document import Document
from calcdoc.text.names import fold
from calcdoc.text.nodes import Call, Node, names, walk
from calcdoc.text.scan import not_yet, shown
from calcdoc.text.statements import FigureStatement, Inequality, Label

CONDITION: Final = "condition"
MOST: Final = 50
"""Figures of a design: each is computed at many points."""


def pictured(
    document: Document, checker: Checker, variables: Mapping[str, Variable]
) -> tuple[tuple[Pictured, ...], list[Finding]]:
    """Every figure of a document, and what is wrong with them."""
    checks = _Figures(document, checker, variables)
    made: list[Pictured] = []
    findings: list[Finding] = []
    statements = [each for each in document.statements if isinstance(each, FigureStatement)]
    for statement in statements[:MOST]:
        try:
            made.append(checks.figure(statement))
        except Mistake as mistake:
            findings.append(mistake.finding)
        except Unknown:  # the line it rests on was reported
            pass
    if len(statements) > MOST:
        findings.append(
            error(
                "figure-form",
                f"a design has at most {MOST} figures, this one has {len(statements)}",
                statements[MOST].span,
                help="keep those that say something, or split the design",
            )
        )
    return tuple(made), findings


class _Figures:
    """Checks figures against typed quantities."""

    def __init__(
        self, document: Document, checker: Checker, variables: Mapping[str, Variable]
    ) -> None:
        self.document, self.checker, self.variables = document, checker, variables

    def figure(self, statement: FigureStatement) -> Pictured:
        """A figure; raises Mistake, or Unknown when it rests on a line that is wrong itself."""
        match statement.kind:
            case "curve":
                self._curve(statement)
            case "spread":
                self._spread(statement)
            case "sensitivities":
                self._sensitivities(statement)
            case _:
                self._margins(statement)
        symbol = statement.symbol
        return Pictured(statement, () if symbol is None else self._given(symbol.key))

    def _variable(self, label: Label) -> Variable:
        """A quantity that is one number."""
        variable = self.variables.get(label.key)
        if variable is None:
            raise Unknown
        if variable.index is not None:
            _refuse(
                f"{shown(label.name)} is a whole series, a figure shows one quantity",
                label.span,
                "define one element, or max(...), as a quantity of its own",
                Place(variable.label.span, "defined here"),
            )
        return variable

    def _rests_on(self, keys: Iterable[str]) -> frozenset[str]:
        """Everything that quantities rest on, through all steps, themselves included."""
        found: set[str] = set()
        waiting = list(keys)
        while waiting:
            key = waiting.pop()
            if key not in found:
                found.add(key)
                if (variable := self.variables.get(key)) is None:
                    raise Unknown
                waiting.extend(variable.depends_on)
        return frozenset(found)

    def _given(self, key: str) -> tuple[str, ...]:
        """The given quantities that one rests on, in the author's order."""
        rests = self._rests_on((key,))
        return tuple(
            each
            for each, variable in self.variables.items()
            if each in rests and variable.given is not None
        )

    def _curve(self, statement: FigureStatement) -> None:
        assert statement.symbol is not None
        assert statement.against is not None
        drawn, axis = self._variable(statement.symbol), self._variable(statement.against)
        if axis.given is None:
            _refuse(
                f"{shown(statement.against.name)} is computed, the axis of a curve is an input, a"
                " condition or an assumption",
                statement.against.span,
                f"name a given quantity that {statement.symbol.name} depends on",
                Place(axis.label.span, "defined here"),
            )
        self._check_axis(statement, axis)
        if drawn.given is not None:
            _refuse(
                f"{shown(statement.symbol.name)} is given, a curve shows a computed quantity",
                statement.symbol.span,
                f"name a quantity that depends on {axis.symbol}",
                Place(drawn.label.span, "given here"),
            )
        if axis.key not in self._rests_on((drawn.key,)):
            _refuse(
                f"{shown(statement.symbol.name)} does not depend on"
                f" {shown(statement.against.name)}, so the curve would be a level line",
                statement.symbol.span.to(statement.against.span),
                "name a quantity along the axis that it depends on",
            )
        self._check_limit(statement, drawn)
        self._check_tables(statement, axis)

    def _check_axis(self, statement: FigureStatement, axis: Variable) -> None:
        """Both ends are of the kind of the axis, the least first."""
        assert statement.low is not None
        assert statement.high is not None
        for end in (statement.low, statement.high):
            found = typed_as(end.unit)
            if found.dimension != axis.typed.dimension:
                raise Mistake(
                    error(
                        "unit-mismatch",
                        f"{shown(axis.symbol)} is {axis.typed.dimension.in_words()}, this end of"
                        f" its axis is {found.dimension.in_words()}",
                        end.span,
                        related=(Place(axis.label.span, "defined here"),),
                    )
                )
            if found.weight != axis.typed.weight:
                raise Mistake(
                    error(
                        "temperature",
                        "the ends of the axis are temperatures, in °C"
                        if axis.typed.weight
                        else "the ends of the axis are differences of temperatures, in K",
                        end.span,
                        related=(Place(axis.label.span, "defined here"),),
                    )
                )
        low, high = (end.unit.to_si(end.nominal) for end in (statement.low, statement.high))
        if low >= high:
            _refuse(
                "the end of this axis is not beyond its beginning",
                statement.low.span.to(statement.high.span),
                "write the lesser value first",
            )

    def _check_limit(self, statement: FigureStatement, drawn: Variable) -> None:
        """The limit is one value of the kind of what is drawn."""
        limit = statement.limit
        if limit is None:
            return
        typed = self.checker.quantity(limit)
        if series.over(limit, self.checker.sets):
            _refuse(
                "the limit is a whole series, a figure compares with one value",
                limit.span,
                "take max(...) or min(...) of it",
            )
        if typed.dimension != drawn.typed.dimension:
            raise Mistake(
                error(
                    "unit-mismatch",
                    f"{shown(drawn.symbol)} is {drawn.typed.dimension.in_words()}, the limit is"
                    f" {typed.dimension.in_words()}",
                    limit.span,
                    related=(Place(drawn.label.span, "defined here"),),
                )
            )
        if typed.weight != drawn.typed.weight:
            raise Mistake(
                error(
                    "temperature",
                    "cannot compare a temperature with a difference of temperatures",
                    limit.span,
                    related=(Place(drawn.label.span, "defined here"),),
                    help="a temperature is in °C, a difference in K",
                )
            )

    def _check_tables(self, statement: FigureStatement, axis: Variable) -> None:
        """A table is looked up once for the whole band, so it cannot follow the axis yet."""
        assert statement.symbol is not None
        within = [] if statement.limit is None else [fold(n.name) for n in names(statement.limit)]
        known = [key for key in within if key in self.variables]
        trees = [] if statement.limit is None else [statement.limit]
        for key in self._rests_on((statement.symbol.key, *known)):
            trees += _trees(self.variables[key])
        for call in (node for tree in trees for node in walk(tree)):
            if isinstance(call, Call) and call.function == "lookup":
                asked = {fold(each.name) for part in call.arguments for each in names(part)}
                if axis.key in self._rests_on(asked & self.variables.keys()):
                    what = f"a curve against {shown(axis.symbol)}, through which a table is read,"
                    assert statement.against is not None
                    raise Mistake(
                        not_yet(
                            what,
                            statement.against.span,
                            "draw it against a quantity the table is not read by",
                        )
                    )

    def _spread(self, statement: FigureStatement) -> None:
        assert statement.symbol is not None
        drawn = self._variable(statement.symbol)
        self._check_limit(statement, drawn)
        varied = [self.variables[key] for key in self._given(drawn.key)]
        if not any(each.given.varies for each in varied if each.given and each.kind != CONDITION):
            _refuse(
                f"{shown(statement.symbol.name)} rests on no part that varies, so it has no spread",
                statement.symbol.span,
                "state the tolerance of an input it depends on; conditions are not random",
            )

    def _sensitivities(self, statement: FigureStatement) -> None:
        assert statement.symbol is not None
        drawn = self._variable(statement.symbol)
        if drawn.given is not None:
            _refuse(
                f"{shown(statement.symbol.name)} is given, so nothing drives it",
                statement.symbol.span,
                "name a quantity that is computed",
                Place(drawn.label.span, "given here"),
            )
        varied = (self.variables[key].given for key in self._given(drawn.key))
        if not any(each.varies for each in varied if each):
            _refuse(
                f"{shown(statement.symbol.name)} rests on nothing that varies",
                statement.symbol.span,
                "state the band of an input or a condition it depends on",
            )

    def _margins(self, statement: FigureStatement) -> None:
        if not any(isinstance(each, Inequality) for each in self.document.statements):
            _refuse(
                "no criterion of this design is calculated, so there are no margins",
                statement.span,
                "write one in a `criteria` block, as in R1: V_max <= 200 V",
            )


def _trees(variable: Variable) -> list[Node]:
    """Every formula that a quantity may be computed by."""
    trees = [] if variable.formula is None else [variable.formula]
    if variable.solved is not None:
        trees += [root.tree for each in variable.solved.combinations for root in each]
    if variable.implicit is not None:
        trees += [variable.implicit.left, variable.implicit.right]
    return trees


def _refuse(message: str, span: Span, advice: str, *related: Place) -> NoReturn:
    raise Mistake(error("figure-form", message, span, related=related, help=advice))
