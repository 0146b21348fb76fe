"""The numbers of an evaluation in the units and digits they are shown in."""

from collections.abc import Mapping
from functools import cached_property

from calcdoc.analysis.evaluation import Combination, Evaluation
from calcdoc.frozen import Frozen
from calcdoc.model.constant import constant_value
from calcdoc.model.model import Model, Variable
from calcdoc.records.values import computed, given_nominal, stands_at
from calcdoc.text.given import Given
from calcdoc.text.names import fold
from calcdoc.text.nodes import Element, Name, Node
from calcdoc.units import Unit
from calcdoc.units.choose import choose_unit


class Numbers(Frozen, frozen=True, dict=True):
    """An evaluation with the units and digits its numbers are shown in."""

    evaluation: Evaluation
    digits: int

    @property
    def model(self) -> Model:
        """The model that was evaluated."""
        return self.evaluation.model

    @cached_property
    def units(self) -> Mapping[str, Unit]:
        """The unit of every quantity, by key."""
        return {key: self._unit(variable) for key, variable in self.model.variables.items()}

    @cached_property
    def changed(self) -> Mapping[str, Mapping[str, Given | Node]]:
        """What each case changes, by its name and by key."""
        return {case.name: case.changes for case in self.model.cases}

    @cached_property
    def _stands(self) -> dict[tuple[str, float], str]:
        """Inputs at a value, as text: all combinations hold the same few ends."""
        return {}

    def _unit(self, variable: Variable) -> Unit:
        if variable.unit is not None:
            return variable.unit
        bands = self.evaluation.series.get(variable.key)
        if bands is None:
            band = self.evaluation.bands[variable.key]
            size = band.nominal or max(abs(band.least), abs(band.greatest))
        else:
            size = max(abs(band.nominal) for band in bands.values())
        return choose_unit(variable.typed.dimension, size, celsius=bool(variable.typed.weight))

    def nominal(self, key: str) -> str:
        """The nominal value as text: in the author's digits when it is given."""
        given = self.model.variables[key].given
        if given is not None:
            return given_nominal(given)
        return computed(self.evaluation.bands[key].nominal, self.units[key], self.digits)

    def at(self, key: str, si: float) -> str:
        """A value of a quantity other than the nominal one."""
        given = self.model.variables[key].given
        if given is None:
            return computed(si, self.units[key], self.digits)
        if (key, si) not in self._stands:
            self._stands[key, si] = stands_at(given, si)
        return self._stands[key, si]

    def value_of(self, node: Name | Element) -> str | None:
        """The nominal value of a symbol or element; None for a constant and a whole series."""
        key = fold(node.name)
        if isinstance(node, Name):
            return self.nominal(key) if key in self.evaluation.bands else None
        index = constant_value(node.index)
        if index is None:
            return None
        band = self.evaluation.series[key][int(index)]
        return computed(band.nominal, self.units[key], self.digits)

    def combination(self, combination: Combination) -> dict[str, str]:
        """Where inputs stand, by symbol, in the author's order."""
        return dict(self._stand(key, stand.value) for key, stand in combination.items())

    def _stand(self, key: str, si: float) -> tuple[str, str]:
        """An input, an input as a case has it (``V_line@dim``), or a look-up (``@7``)."""
        name, _, case = key.partition("@")
        if name:
            changed = self.changed[case].get(name) if case else None
            text = stands_at(changed, si) if isinstance(changed, Given) else self.at(name, si)
            return self.model.variables[name].symbol, text
        looked = next(each for each in self.evaluation.looked if each.key == key)
        return f'lookup("{looked.table.name}")', computed(si, looked.table.unit, self.digits)
