"""Quantities one after the other: what each is, from what, and with which dimension."""

from collections.abc import Mapping
from fractions import Fraction

from calcdoc.frozen import replace
from calcdoc.model import series
from calcdoc.model.constant import constant_value
from calcdoc.model.methods import check_taken
from calcdoc.model.model import Case, Implicit, Solved, Typed, Variable
from calcdoc.model.namespace import Namespace
from calcdoc.model.typing import Checker, Unknown
from calcdoc.model.uses import Rests
from calcdoc.problems import Finding, Mistake, Place, error
from calcdoc.source import Span
from calcdoc.tables.table import Table
from calcdoc.text.given import Given
from calcdoc.text.names import fold
from calcdoc.text.nodes import Name
from calcdoc.text.scan import shown
from calcdoc.text.statements import (
    Definition,
    GivenStatement,
    Index,
    Label,
    RelationStatement,
    SettleStatement,
    SolvedStatement,
)
from calcdoc.text.statements import (
    Unknown as Sought,
)
from calcdoc.units import ONE, Unit


def weight(unit: Unit) -> Fraction:
    """The temperature weight of a value in a unit."""
    return Fraction(int(unit.celsius))


def typed_as(unit: Unit) -> Typed:
    """What a value in a unit is."""
    return Typed(unit.dimension, weight(unit))


class Quantities:
    """Types the quantities of a document in order of computation.

    Args:
        space: Every name.
        rests: What rests on what.
        relations: Relations by key.
        settled: Settle statements by the key of their symbol.
        tables: Tables by name.
    """

    def __init__(
        self,
        space: Namespace,
        rests: Rests,
        relations: Mapping[str, RelationStatement],
        settled: Mapping[str, SettleStatement],
        tables: Mapping[str, Table],
    ) -> None:
        self.space, self.rests, self.relations, self.settled = space, rests, relations, settled
        self.types: dict[str, Typed | None] = dict.fromkeys(space.quantities)
        places = {key: label.span for key, label in space.labels.items()}
        self.checker = Checker(self.types, places, tables)
        self.variables: dict[str, Variable] = {}
        self.findings: list[Finding] = []
        self._solved: dict[int, Solved | Implicit | None] = {}

    def run(self) -> None:
        """Type everything that can be typed; a wrong line does not stop the others."""
        for key, settle in self.settled.items():
            if key in self.types:
                self.types[key] = typed_as(settle.bracket.unit)
        for key in self.rests.order:
            statement = self.space.quantities[key]
            try:
                variable = self._variable(key, statement)
            except Mistake as mistake:
                self.findings.append(mistake.finding)
                self.types[key] = self.types[key] or _as_declared(key, statement)
            except Unknown:
                self.types[key] = self.types[key] or _as_declared(key, statement)
            else:
                self.variables[key] = variable
                self.types[key] = variable.typed
        for key in self.settled:
            self._check_loop(key)

    def _variable(
        self, key: str, statement: GivenStatement | Definition | SolvedStatement
    ) -> Variable:
        match statement:
            case GivenStatement():
                return _given(key, statement)
            case Definition():
                return self._defined(key, statement)
            case SolvedStatement():
                return self._found(key, statement)

    # --- definitions ---------------------------------------------------------------------------

    def _defined(self, key: str, statement: Definition) -> Variable:
        loop = self._loop(key, statement)
        index = statement.index if loop else self._index(statement)
        if loop:
            typed = typed_as(loop.bracket.unit)
        else:
            typed = self.checker.quantity(statement.formula, index)
            _check_whole(statement.symbol, typed, statement.formula.span)
        if statement.taken:
            check_taken(statement, typed.dimension, typed.weight)
        else:
            _check_unit(statement.symbol, statement, typed, statement.formula.span)
        if index:
            self.checker.sets[key] = index.values
        return Variable(
            key=key,
            label=statement.symbol,
            kind="settled" if loop else "derived",
            typed=typed,
            unit=statement.unit or (loop.bracket.unit if loop else None),
            description=statement.description,
            basis=statement.basis,
            depends_on=self.rests.uses[key],
            formula=statement.formula,
            implicit=loop,
            index=index,
        )

    def _index(self, statement: Definition) -> Index | None:
        """The indices of a series: as stated, or those of the whole series it is made of."""
        over = series.over(statement.formula, self.checker.sets)
        if statement.index:
            if over and over != statement.index.values:
                raise Mistake(
                    error(
                        "series-form",
                        f"{shown(statement.symbol.name)} runs over {statement.index.text}, the"
                        " series in its formula has other indices",
                        statement.formula.span,
                        help="take single elements, as in X[n]",
                    )
                )
            return statement.index
        if not over:
            return None
        name = Label("n", statement.symbol.span)
        return Index(name, over, f"{over[0]}..{over[-1]}")

    def _loop(self, key: str, statement: Definition) -> Implicit | None:
        settle = self.settled.get(key)
        if settle is None or key not in self.rests.inner:
            return None
        return Implicit(
            statement.formula,
            Name(statement.symbol.name, statement.symbol.span),
            settle.bracket.unit.dimension,
            settle.bracket,
            self.rests.inner[key],
            is_loop=True,
            relation="",
        )

    def _check_loop(self, key: str) -> None:
        """The formula of a settled quantity is of its kind; its loop was typed by its bracket."""
        variable = self.variables.get(key)
        if variable is None or variable.formula is None:
            return
        try:
            found = self.checker.quantity(variable.formula)
        except Mistake as mistake:
            self.findings.append(mistake.finding)
        except Unknown:
            pass
        else:
            if found != variable.typed:
                self.findings.append(
                    _bracket_mismatch(self.settled[key].bracket, variable.typed, found, variable)
                )

    def check_counts(self, cases: tuple[Case, ...]) -> None:
        """``each of n``: n is a given plain number, whole and at least one, also in a case."""
        stated = [each.given for each in self.variables.values() if each.given is not None]
        changed = [each for case in cases for each in case.changes.values()]
        for given in (*stated, *(each for each in changed if isinstance(each, Given))):
            like = given.parts.like
            if like is not None and isinstance(like.count, Name):
                self._check_count(like.count)

    def _check_count(self, name: Name) -> None:
        count = self.variables.get(fold(name.name))
        if count is None:
            return
        if not _is_count(count.given):
            self.findings.append(
                error(
                    "tolerance",
                    f"{shown(name.name)} is no fixed number of parts",
                    name.span,
                    related=(Place(count.label.span, "defined here"),),
                    help="name an input that is a whole number",
                )
            )

    # --- solved lines --------------------------------------------------------------------------

    def _found(self, key: str, statement: SolvedStatement) -> Variable:
        sought = next(each for each in statement.unknowns if each.symbol.key == key)
        if id(statement) not in self._solved:
            from calcdoc.model.solving import solved_for  # noqa: PLC0415  (few designs need it)

            self._solved[id(statement)] = None
            self._solved[id(statement)] = solved_for(statement, self.relations)
        way = self._solved[id(statement)]
        if way is None:
            raise Unknown
        typed = self._type_of_root(key, way, sought)
        _check_whole(sought.symbol, typed, statement.span)
        place = way.bracket.span if isinstance(way, Implicit) else statement.span
        _check_unit(sought.symbol, sought, typed, place)
        if isinstance(way, Implicit):
            way = self._check_relation(way, {key: typed})
        self._check_where(statement, key, typed)
        return Variable(
            key=key,
            label=sought.symbol,
            kind="solved",
            typed=typed,
            unit=sought.unit or (way.bracket.unit if isinstance(way, Implicit) else None),
            description=statement.description,
            basis=statement.basis,
            depends_on=self.rests.uses[key],
            solved=way if isinstance(way, Solved) else None,
            implicit=way if isinstance(way, Implicit) else None,
        )

    def _type_of_root(self, key: str, way: Solved | Implicit, sought: Sought) -> Typed:
        if isinstance(way, Implicit):
            return typed_as(way.bracket.unit)
        at = way.unknowns.index(key)
        # A root that is plainly zero has no unit of its own; the others say what it is.
        trees = [roots[at].tree for roots in way.combinations]
        telling = [tree for tree in trees if constant_value(tree) != 0] or trees
        try:
            return self.checker.quantity(telling[0])
        except Mistake as mistake:
            raise Mistake(
                error(
                    "solve",
                    f"{shown(sought.symbol.name)} cannot be solved for: in the relation"
                    f" {mistake.finding.message}",
                    sought.symbol.span,
                    related=(mistake.finding.place,),
                    help=mistake.finding.help,
                )
            ) from mistake

    def _check_relation(self, way: Implicit, own: Mapping[str, Typed]) -> Implicit:
        """Both sides of a relation are of one kind, with the unknown as its bracket says."""
        self.types.update(own)
        typed = self.checker.comparison((way.left, way.right))
        return replace(way, dimension=typed.dimension)

    def _check_where(self, statement: SolvedStatement, key: str, typed: Typed) -> None:
        if statement.where is None or statement.unknowns[-1].symbol.key != key:
            return
        self.types[key] = typed
        self.checker.condition(statement.where)


def _is_count(given: Given | None) -> bool:
    """Whether a value is a fixed, whole, plain number of at least one."""
    return (
        given is not None
        and not given.varies
        and given.unit.dimension == ONE
        and given.nominal.denominator == 1
        and given.nominal >= 1
    )


def _given(key: str, statement: GivenStatement) -> Variable:
    unit = statement.given.unit
    return Variable(
        key=key,
        label=statement.symbol,
        kind=statement.kind.value,
        typed=typed_as(unit),
        unit=unit,
        description=statement.description,
        basis=statement.basis,
        depends_on=(),
        given=statement.given,
        stated=statement,
    )


def _as_declared(
    key: str, statement: GivenStatement | Definition | SolvedStatement
) -> Typed | None:
    """What the author expects a wrong line to be, so that lines which rest on it are checked."""
    match statement:
        case Definition():
            unit = statement.unit
        case SolvedStatement():
            unit = next(each.unit for each in statement.unknowns if each.symbol.key == key)
        case GivenStatement():
            unit = statement.given.unit
    return typed_as(unit) if unit else None


def _check_unit(label: Label, shown_in: Definition | Sought, typed: Typed, place: Span) -> None:
    """The unit in brackets is one of the result's kind."""
    unit, text = shown_in.unit, shown_in.unit_text
    if unit is None or text is None:
        return
    if unit.dimension != typed.dimension:
        raise Mistake(
            error(
                "display-unit",
                f"{shown(label.name)} is {typed.dimension.in_words()},"
                f" {shown(unit.text)} is the unit of {unit.dimension.in_words()}",
                text.span,
                related=(Place(place, typed.dimension.in_words()),),
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


def _check_whole(label: Label, typed: Typed, place: Span) -> None:
    """A quantity has a unit of whole powers; a broken one stays inside a formula."""
    if any(Fraction(each).denominator != 1 for each in typed.dimension.exponents):
        raise Mistake(
            error(
                "unit-mismatch",
                f"{shown(label.name)} would be {typed.dimension.in_words()}",
                place,
                help="a quantity with a name has whole powers of units; square it, or go on in the"
                " same formula",
            )
        )


def _bracket_mismatch(bracket: Given, typed: Typed, found: Typed, variable: Variable) -> Finding:
    one, other = typed.dimension.in_words(), found.dimension.in_words()
    if one == other:
        one, other = "a temperature in °C", "a difference in K"
        if found.weight:
            one, other = other, one
    return error(
        "unit-mismatch",
        f"the bracket is {one}, {shown(variable.symbol)} is {other}",
        bracket.span,
        related=(Place(variable.label.span, "defined here"),),
        help="give the bracket in the unit of the quantity",
    )
