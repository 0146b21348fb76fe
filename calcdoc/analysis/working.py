"""The quantities of a model as instructions, in order of computation."""

from collections.abc import Container, Iterable, Mapping

import numpy as np

from calcdoc.analysis.box import Box
from calcdoc.analysis.choice import choose
from calcdoc.analysis.formulas import Formulas
from calcdoc.analysis.looking_up import LookedUp, argument_range, reached, snapped
from calcdoc.analysis.tape import Implicit, Op
from calcdoc.frozen import Frozen
from calcdoc.model.model import Model, Root, Solved, Variable
from calcdoc.problems import Finding, Mistake, error
from calcdoc.tables.table import OutsideAxis, Table, look_up
from calcdoc.text.cases import NORMAL
from calcdoc.text.given import Given
from calcdoc.text.nodes import Binary, Group, Name, Negate, Node, Text
from calcdoc.text.scan import shown
from calcdoc.text.unparse import unparse


class Sides(Frozen, frozen=True):
    """Both sides of a relation as instructions, and the terms they are sums of."""

    left: int
    right: int
    terms: tuple[int, ...]


class InCase(Frozen, frozen=True):
    """The instructions of every quantity in one case."""

    name: str
    changes: Mapping[str, Given | Node]
    """What the case changes, by key; nothing in the normal case."""
    variables: Mapping[str, int]
    """Key of every quantity that is no series to its instruction."""
    series: Mapping[str, Mapping[int, int]]
    """Key of every series to the instructions of its elements."""
    chosen: Mapping[str, Root]
    """Key of every solved quantity to the root that was left."""
    roots: Mapping[str, int]
    """Key of every quantity found numerically to its instruction."""
    relations: Mapping[str, Sides]
    """Key of every solved or settled quantity that the case moves to the sides of its relation."""
    broken: Mapping[str, Finding]
    """Key of every quantity that cannot be computed in this case, with the reason."""


class Working(Formulas):
    """Adds the quantities of a model in order of computation, case by case."""

    def __init__(self, model: Model, columns: Mapping[str, int], box: Box) -> None:
        super().__init__(len(columns))
        self.model, self.columns, self.box = model, dict(columns), box
        self.case = NORMAL
        self.chosen: dict[str, Root] = {}
        self.roots: dict[str, int] = {}
        self.whole: InCase | None = None
        """The normal case, once it is there."""
        self.inside: dict[int, dict[int, Node]] = {}
        """Instruction of a root to the origins of its residual's instructions."""
        self.looked: list[LookedUp] = []
        self.owner = ""
        """Key of the quantity, criterion or cross-check that is compiled now."""

    def normal(self) -> InCase:
        """Add every quantity as it is given.

        Raises:
            Mistake: when a solved quantity has several roots over the band, or none.
        """
        for key in self.model.order:
            self.variable(self.model.variables[key])
        self.whole = self._case({}, self.model.variables, {})
        return self.whole

    def changed(self, name: str, changes: Mapping[str, Given | Node]) -> InCase:
        """Add what is different in a case; its changes are formulas of the normal values."""
        normal = self.whole
        assert normal is not None
        if not changes:
            return normal
        self.enter(normal)
        new = {key: self._change(name, key, change) for key, change in changes.items()}
        moved = set(changes)
        for key in self.model.order:
            if moved.intersection(self.model.variables[key].depends_on):
                moved.add(key)
        self._start(name, normal, moved)
        self.variables.update(new)
        broken: dict[str, Finding] = {}
        for key in self.model.order:
            if key in moved and key not in changes:
                self._try(self.model.variables[key], broken)
        return self._case(changes, moved - changes.keys() - broken.keys(), broken)

    def enter(self, case: InCase) -> None:
        """Let names mean what they mean in a case."""
        self._start(case.name, case, ())

    def new_column(self, low: float, nominal: float, high: float, key: str = "") -> int:
        """One more input column, known by a key when combinations may name it."""
        column = self.builder.n_inputs
        self.builder.n_inputs += 1
        self.box = self.box.with_column(low, nominal, high)
        if key:
            self.columns[key] = column
        return column

    def _start(self, name: str, case: InCase, without: Container[str]) -> None:
        """Take over everything of a case but some quantities."""
        self.case = name
        self.variables = {key: at for key, at in case.variables.items() if key not in without}
        self.series = {key: dict(at) for key, at in case.series.items() if key not in without}
        self.chosen = {key: root for key, root in case.chosen.items() if key not in without}
        self.roots = {key: at for key, at in case.roots.items() if key not in without}

    def _case(
        self,
        changes: Mapping[str, Given | Node],
        keys: Iterable[str],
        broken: Mapping[str, Finding],
    ) -> InCase:
        relations = {key: sides for key in keys if (sides := self._relation(key)) is not None}
        return InCase(
            self.case,
            changes,
            self.variables,
            self.series,
            self.chosen,
            self.roots,
            relations,
            broken,
        )

    def _change(self, name: str, key: str, change: Given | Node) -> int:
        """The new value of a quantity: a formula of normal values, a constant, or a column."""
        if not isinstance(change, Given):
            return self.node(change)
        if not change.varies:
            return self.constant(change.unit.to_si(change.nominal))
        column = self.columns.get(f"{key}@{name}")
        if column is None:
            column = self.new_column(*change.si, key=f"{key}@{name}")
        return self.builder.add(Op.INPUT, value=column)

    def _try(self, variable: Variable, broken: dict[str, Finding]) -> None:
        """Add a quantity; what rests on one that cannot be computed cannot be computed either."""
        reason = next((broken[key] for key in variable.depends_on if key in broken), None)
        if reason is None:
            try:
                self.variable(variable)
            except Mistake as mistake:
                reason = mistake.finding
        if reason is not None:
            broken[variable.key] = reason

    def variable(self, variable: Variable) -> None:
        """Add one quantity; what it rests on was added before.

        Raises:
            Mistake: when a solved quantity has several roots over the band, or none.
        """
        key = self.owner = variable.key
        if variable.given is not None:
            self.variables[key] = self._given(key, variable.given)
        elif variable.implicit is not None:
            self.variables[key] = self.roots[key] = self._implicit(variable)
        elif variable.solved is not None:
            self._solved(variable.solved)
        elif variable.index is not None:
            assert variable.formula is not None
            running = variable.index.name.key
            self.series[key] = self.elements(variable.formula, variable.index.values, running)
        else:
            assert variable.formula is not None
            self.variables[key] = self.node(variable.formula)

    def _given(self, key: str, given: Given) -> int:
        """A column when the value may vary, else an exact constant."""
        if key in self.columns:
            return self.builder.add(Op.INPUT, value=self.columns[key])
        return self.constant(given.unit.to_si(given.nominal))

    def looked_up(self, arguments: tuple[Node, ...]) -> int:
        """The value of a table: a constant, or a column when a range of arguments has several."""
        name = arguments[0]
        assert isinstance(name, Text)
        table = self.model.tables[name.value]
        ranges = tuple(
            each.value if isinstance(each, Text) else argument_range(self, self.node(each), axis)
            for each, axis in zip(arguments[1:], table.axes, strict=True)
        )
        try:
            found = look_up(table, tuple(snapped(table, n, each) for n, each in enumerate(ranges)))
        except OutsideAxis as outside:
            raise Mistake(_outside(table, arguments[outside.number + 1], outside)) from outside
        least, nominal, greatest = (
            each * table.unit.factor for each in (found.least, found.nominal, found.greatest)
        )
        if least == greatest:
            self.looked.append(LookedUp(self.owner, table, found, None, case=self.case))
            return self.constant(nominal)
        moving = self._moving(arguments[1:])
        column = self.new_column(float(least), float(nominal), float(greatest))
        looked = LookedUp(self.owner, table, found, column, moving, self.case)
        self.columns[looked.key] = column
        self.looked.append(looked)
        return self.builder.add(Op.INPUT, value=column)

    def _moving(self, arguments: tuple[Node, ...]) -> frozenset[int]:
        """Columns that arguments of a table depend on, through tables looked up before."""
        nodes = [self.node(each) for each in arguments if not isinstance(each, Text)]
        tape = self.builder.tape()
        wide = {int(at) for at in np.flatnonzero(self.box.low < self.box.high)}
        columns = {column for each in nodes for column in reached(tape, each)}
        behind = {
            column for each in self.looked if each.column in columns for column in each.moved_by
        }
        return frozenset((columns | behind) & wide)

    def _solved(self, solved: Solved) -> None:
        """All unknowns of a line at once: the combination of roots that is left."""
        if solved.unknowns[0] in self.variables:
            return
        at = choose(self, solved)
        for key, root in zip(solved.unknowns, solved.combinations[at], strict=True):
            self.chosen[key] = root
            self.variables[key] = self.node(root.tree)

    def _relation(self, key: str) -> Sides | None:
        """Both sides of what a quantity was solved from, with the solution in place."""
        variable = self.model.variables[key]
        if variable.implicit is not None:
            pair = (variable.implicit.left, variable.implicit.right)
        elif variable.solved is not None:
            at = variable.solved.unknowns.index(key)
            statement = self.model.relations[variable.solved.relations[at]].statement
            pair = (statement.left, statement.right)
        else:
            return None
        left, right = (self.node(side) for side in pair)
        terms = tuple(self.node(term) for side in pair for term in _terms(side))
        return Sides(left, right, terms)

    def _implicit(self, variable: Variable) -> int:
        """A root between two values, with a residual tape of its own."""
        implicit = variable.implicit
        assert implicit is not None
        inner = Formulas(0)
        inner.variables[variable.key] = inner.builder.add(Op.INPUT, value=0)
        arguments: list[int] = []
        for key in variable.depends_on:
            for index, at in self.series.get(key, {None: self.variables.get(key)}).items():
                assert at is not None
                column = inner.builder.add(Op.INPUT, value=len(arguments) + 1)
                arguments.append(at)
                if index is None:
                    inner.variables[key] = column
                else:
                    inner.series.setdefault(key, {})[index] = column
        for key in implicit.inner:
            _again(inner, self.model.variables[key])
        inner.builder.n_inputs = len(arguments) + 1
        left, right = inner.node(implicit.left), inner.node(implicit.right)
        residual = inner.builder.add(Op.SUB, left, right)
        low, high = (implicit.bracket.unit.to_si(each)
                     for each in (implicit.bracket.least, implicit.bracket.greatest))  # fmt: skip
        loop = left if implicit.is_loop else None
        value = Implicit(inner.builder.tape(), residual, low, high, loop)
        at = self.builder.add(Op.ROOT, *arguments, value=value)
        self.inside[at] = inner.origins
        self.origins.setdefault(at, Name(variable.symbol, variable.label.span))
        return at


def _terms(node: Node) -> list[Node]:
    """What a side is a sum of."""
    match node:
        case Group(inner) | Negate(inner):
            return _terms(inner)
        case Binary("+" | "-", left, right):
            return [*_terms(left), *_terms(right)]
        case _:
            return [node]


def _outside(table: Table, argument: Node, outside: OutsideAxis) -> Finding:
    return error(
        "outside-axis",
        f"{shown(unparse(argument))} lies outside of the table {shown(table.name)}",
        argument.span,
        help=str(outside),
    )


def _again(inner: Formulas, variable: Variable) -> None:
    """A quantity inside a settled loop, computed anew at every trial."""
    if variable.formula is not None and variable.index is not None:
        running = variable.index.name.key
        inner.series[variable.key] = inner.elements(
            variable.formula, variable.index.values, running
        )
    elif variable.formula is not None:
        inner.variables[variable.key] = inner.node(variable.formula)
    else:
        assert variable.solved is not None
        at = variable.solved.unknowns.index(variable.key)
        inner.variables[variable.key] = inner.node(variable.solved.combinations[0][at].tree)
