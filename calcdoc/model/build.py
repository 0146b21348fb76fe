"""From document to model: the checks in order, each reporting all it finds."""

from collections.abc import Callable, Iterator
from fractions import Fraction
from typing import Final

from calcdoc.model import circles, namespace
from calcdoc.model.model import Discharge, Judged, Model, Typed, Variable
from calcdoc.model.namespace import Namespace
from calcdoc.model.typing import Checker, Unknown
from calcdoc.problems import Finding, Mistake, Place, error
from calcdoc.problems.views import has_errors
from calcdoc.text.document import Document, mentions
from calcdoc.text.names import fold, nearest
from calcdoc.text.nodes import names
from calcdoc.text.scan import shown
from calcdoc.text.statements import (
    Basis,
    Definition,
    GivenStatement,
    HazardStatement,
    Inequality,
    Label,
    ReferenceStatement,
    SentenceStatement,
    Statement,
    Uncalculated,
)
from calcdoc.units import Dimension
from calcdoc.units.dimension import CURRENT, TIME, VOLTAGE


def build(document: Document) -> tuple[Model | None, tuple[Finding, ...]]:
    """Check a document; None when a mistake stops it from being computed."""
    space, findings = namespace.collect(document)
    findings += namespace.unknown_names(document, space)
    findings += namespace.two_readings(document, space)
    uses = {key: _uses(statement, space) for key, statement in space.quantities.items()}
    order, found = circles.in_order(uses, space.labels)
    findings += found
    builder = _Builder(document, space, uses, order)
    builder.run()
    findings += builder.findings
    for check in CHECKS:
        findings += check(document, space)
    return (None if has_errors(findings) else builder.model()), tuple(findings)


def _uses(statement: GivenStatement | Definition, space: Namespace) -> tuple[str, ...]:
    return (
        namespace.direct_uses(statement.formula, space) if isinstance(statement, Definition) else ()
    )


class _Builder:
    """Types quantities in order, then criteria and hazards."""

    def __init__(
        self,
        document: Document,
        space: Namespace,
        uses: dict[str, tuple[str, ...]],
        order: tuple[str, ...],
    ) -> None:
        self.document, self.space, self.uses, self.order = document, space, uses, order
        self.findings: list[Finding] = []
        self.types: dict[str, Typed | None] = dict.fromkeys(
            (*space.quantities, *(fold(name) for name in _undefined(document, space)))
        )
        self.checker = Checker(self.types, {k: v.span for k, v in space.labels.items()})
        self.criteria: list[Judged | Uncalculated] = []
        self.discharges: list[Discharge] = []

    def run(self) -> None:
        """Type everything that can be typed."""
        for key in self.order:
            self.types[key] = self._type(self.space.quantities[key])
        for statement in self.document.statements:
            match statement:
                case Inequality():
                    self._criterion(statement)
                case Uncalculated():
                    self.criteria.append(statement)
                case HazardStatement():
                    self._hazard(statement)
                case _:
                    pass

    def _type(self, statement: GivenStatement | Definition) -> Typed | None:
        if isinstance(statement, GivenStatement):
            unit = statement.given.unit
            return Typed(unit.dimension, _weight(unit.celsius))
        shown_in = statement.unit
        try:
            typed = self.checker.quantity(statement.formula)
            _check_whole(statement, typed)
            self._check_unit(statement, typed)
        except Mistake as mistake:
            self.findings.append(mistake.finding)
        except Unknown:
            pass
        else:
            return typed
        # The unit the author expects stands in for what could not be typed, so that lines which
        # rest on this one are still checked.
        return Typed(shown_in.dimension, _weight(shown_in.celsius)) if shown_in else None

    def _check_unit(self, statement: Definition, typed: Typed) -> None:
        unit, text = statement.unit, statement.unit_text
        if unit is None or text is None:
            return
        if unit.dimension != typed.dimension:
            raise Mistake(
                error(
                    "display-unit",
                    f"{shown(statement.symbol.name)} is {typed.dimension.in_words()},"
                    f" {shown(unit.text)} is the unit of {unit.dimension.in_words()}",
                    text.span,
                    related=(Place(statement.formula.span, typed.dimension.in_words()),),
                    help="change the unit in brackets or the formula",
                )
            )
        if unit.celsius and typed.weight != 1:
            raise Mistake(
                error(
                    "temperature",
                    "a difference of temperatures is shown in K",
                    text.span,
                    help="write [K]",
                )
            )

    def _criterion(self, statement: Inequality) -> None:
        try:
            typed = self.checker.comparison(statement.operands)
            self._check_clauses(statement, typed)
        except Mistake as mistake:
            self.findings.append(mistake.finding)
        except Unknown:
            pass
        else:
            used = dict.fromkeys(
                key
                for tree in statement.operands
                for key in namespace.direct_uses(tree, self.space)
            )
            self.criteria.append(Judged(statement, typed, tuple(used)))

    def _check_clauses(self, statement: Inequality, typed: Typed) -> None:
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
        for point in statement.clauses.at:
            self._check_point(
                point.symbol, Typed(point.given.unit.dimension, _weight(point.given.unit.celsius))
            )
        twice = [p.symbol for p in statement.clauses.at]
        for at, symbol in enumerate(twice):
            if symbol.key in [each.key for each in twice[:at]]:
                raise Mistake(
                    error(
                        "operating-point",
                        f"{shown(symbol.name)} has two values here",
                        symbol.span,
                        help="keep one of them",
                    )
                )

    def _check_point(self, symbol: Label, typed: Typed) -> None:
        target = self.space.quantities.get(symbol.key)
        if target is None:
            raise Unknown
        if isinstance(target, Definition):
            raise Mistake(
                error(
                    "operating-point",
                    f"{shown(symbol.name)} is derived, an operating"
                    " point sets conditions and inputs",
                    symbol.span,
                    related=(Place(target.symbol.span, "derived here"),),
                )
            )
        expected = self.types[symbol.key]
        if expected is not None and (expected.dimension, expected.weight) != (
            typed.dimension,
            typed.weight,
        ):
            raise Mistake(
                error(
                    "unit-mismatch",
                    f"{shown(symbol.name)} is {expected.dimension.in_words()}, the value"
                    f" here is {typed.dimension.in_words()}",
                    symbol.span,
                    related=(Place(target.symbol.span, "defined here"),),
                )
            )

    def _hazard(self, statement: HazardStatement) -> None:
        wanted: tuple[tuple[Dimension, str], ...] = (
            ((VOLTAGE, "a voltage"),)
            if statement.kind == "supply"
            else (
                (CURRENT * TIME / VOLTAGE, "a capacitance"),
                (VOLTAGE, "a voltage"),
                (VOLTAGE / CURRENT, "a resistance"),
            )
        )
        for symbol, (dimension, words) in zip(statement.symbols, wanted, strict=False):
            typed = self.types.get(symbol.key)
            if typed and typed.dimension != dimension:
                self.findings.append(
                    error(
                        "unit-mismatch",
                        f"expected {words}, {shown(symbol.name)} is {typed.dimension.in_words()}",
                        symbol.span,
                        help="name the symbol of the " + words.removeprefix("a "),
                    )
                )
        if statement.kind == "stored":
            keys = [symbol.key for symbol in statement.symbols]
            self.discharges.append(Discharge(keys[0], keys[1], (*keys, None)[2], statement))

    def model(self) -> Model:
        """The model, once nothing stops it."""
        variables = {}
        for key, statement in self.space.quantities.items():
            typed = self.types[key]
            assert typed is not None, key
            unit = statement.unit if isinstance(statement, Definition) else statement.given.unit
            variables[key] = Variable(
                key, statement.symbol.name, typed, unit, statement, self.uses[key]
            )
        given = self.document.statements
        return Model(
            self.document,
            variables,
            self.order,
            tuple(self.criteria),
            tuple(each for each in given if isinstance(each, SentenceStatement)),
            tuple(each for each in given if isinstance(each, HazardStatement)),
            tuple(self.discharges),
            tuple(each for each in given if isinstance(each, ReferenceStatement)),
        )


def _weight(celsius: bool) -> Fraction:
    return Fraction(int(celsius))


def _check_whole(statement: Definition, typed: Typed) -> None:
    """A quantity has a unit of whole powers; a broken one stays inside a formula."""
    if any(Fraction(each).denominator != 1 for each in typed.dimension.exponents):
        raise Mistake(
            error(
                "unit-mismatch",
                f"{shown(statement.symbol.name)} would be {typed.dimension.in_words()}",
                statement.formula.span,
                help="a quantity with a name has whole powers of units; square it, or go on in the"
                " same formula",
            )
        )


def _undefined(document: Document, space: Namespace) -> Iterator[str]:
    for statement in document.statements:
        for tree in namespace.trees(statement):
            for name in names(tree):
                if fold(name.name) not in space.quantities:
                    yield name.name


def check_references(document: Document, _: Namespace) -> list[Finding]:
    """Keys are unique, and every citation has its reference."""
    keys: dict[str, ReferenceStatement] = {}
    findings = []
    for each in document.statements:
        if isinstance(each, ReferenceStatement):
            if each.key in keys:
                findings.append(
                    error(
                        "defined-twice",
                        f"the reference {shown(each.key)} stands here twice",
                        each.span,
                        related=(Place(keys[each.key].span, "first here"),),
                        help="keep one of them",
                    )
                )
            keys.setdefault(each.key, each)
    for basis in _bases(document.statements):
        for citation in basis.citations:
            if citation.key not in keys:
                near = nearest(citation.key, keys)
                findings.append(
                    error(
                        "unknown-citation",
                        f"there is no reference {shown(citation.key)}",
                        citation.span,
                        help=f"did you mean [{near}]?"
                        if near
                        else "add it to a `references` block: KEY | title | edition | where held",
                    )
                )
    return findings


def _bases(statements: tuple[Statement, ...]) -> Iterator[Basis]:
    for each in statements:
        if isinstance(
            each, GivenStatement | SentenceStatement | Definition | Inequality | Uncalculated
        ):
            yield each.basis


def check_mentions(document: Document, space: Namespace) -> list[Finding]:
    """Every ``{name}`` in prose is a symbol, or without a form the id of a criterion."""
    ids = {
        each.id.key for each in document.statements if isinstance(each, Inequality | Uncalculated)
    }
    findings = []
    for mention in mentions(document.body):
        key = fold(mention.name)
        if key in space.quantities or (key in ids and not mention.form):
            continue
        if key in ids:
            findings.append(
                error(
                    "unknown-name",
                    f"{shown(mention.name)} is a criterion, it has no {mention.form}",
                    mention.span,
                    help=f"write {{{mention.name}}}",
                )
            )
            continue
        spelled = [
            *space.spelled(),
            *(space.labels[each].name for each in ids if each in space.labels),
        ]
        near = nearest(mention.name, spelled)
        findings.append(
            error(
                "unknown-name",
                f"there is no symbol or criterion {shown(mention.name)}",
                mention.span,
                help=f"did you mean {{{near}}}?" if near else "for a plain brace write \\{",
            )
        )
    return findings


Check = Callable[[Document, Namespace], list[Finding]]
CHECKS: Final[tuple[Check, ...]] = (check_references, check_mentions)
"""Checks that need no types; extend by adding a line."""
