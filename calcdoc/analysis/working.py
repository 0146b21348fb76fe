"""The quantities of a model as instructions, in order of computation."""

from collections.abc import Mapping

from calcdoc.analysis.box import Box
from calcdoc.analysis.choice import choose
from calcdoc.analysis.formulas import Formulas
from calcdoc.analysis.tape import Implicit, Op
from calcdoc.model.model import Model, Root, Solved, Variable
from calcdoc.text.given import Given
from calcdoc.text.nodes import Name


class Working(Formulas):
    """Adds the quantities of a model in order of computation."""

    def __init__(self, model: Model, columns: Mapping[str, int], box: Box) -> None:
        super().__init__(len(columns))
        self.model, self.columns, self.box = model, columns, box
        self.chosen: dict[str, Root] = {}
        self.roots: dict[str, int] = {}

    def variable(self, variable: Variable) -> None:
        """Add one quantity; what it rests on was added before.

        Raises:
            Mistake: when a solved quantity has several roots over the band, or none.
        """
        key = variable.key
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

    def _solved(self, solved: Solved) -> None:
        """All unknowns of a line at once: the combination of roots that is left."""
        if solved.unknowns[0] in self.variables:
            return
        at = choose(self, solved)
        for key, root in zip(solved.unknowns, solved.combinations[at], strict=True):
            self.chosen[key] = root
            self.variables[key] = self.node(root.tree)

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
        self.origins.setdefault(at, Name(variable.symbol, variable.label.span))
        return at


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
