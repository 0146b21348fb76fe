"""Working lines: every quantity with formula, substitution, result, band and who uses it."""

from collections.abc import Mapping
from functools import cached_property

from calcdoc.analysis.evaluation import Band, Combination, Evaluation
from calcdoc.analysis.extremes import Proof
from calcdoc.frozen import Frozen
from calcdoc.model.model import Model, Variable
from calcdoc.records import record as r
from calcdoc.records.carried import units_carried
from calcdoc.records.display import choose_unit
from calcdoc.records.naming import Naming
from calcdoc.records.rounding import stored
from calcdoc.records.substitute import substituted
from calcdoc.records.values import computed, exact_limit, given_nominal, stands_at
from calcdoc.records.wording import band_in_words, typeset
from calcdoc.text.given import Given, Style
from calcdoc.text.names import fold
from calcdoc.text.unparse import unparse
from calcdoc.units import PLAIN, Unit


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
    def _stands(self) -> dict[tuple[str, float], str]:
        """Inputs at a value, as text: all combinations hold the same few ends."""
        return {}

    def _unit(self, variable: Variable) -> Unit:
        if variable.unit is not None:
            return variable.unit
        band = self.evaluation.bands[variable.key]
        size = band.nominal or max(abs(band.least), abs(band.greatest))
        return choose_unit(variable.typed, size)

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

    def combination(self, combination: Combination) -> dict[str, str]:
        """Where inputs stand, by symbol, in the author's order."""
        return {
            self.model.variables[key].symbol: self.at(key, stand.value)
            for key, stand in combination.items()
        }


def quantities(numbers: Numbers, naming: Naming) -> tuple[r.Quantity, ...]:
    """Every quantity of the record, in the author's order."""
    return tuple(_quantity(numbers, naming, each) for each in numbers.model.variables.values())


def _quantity(numbers: Numbers, naming: Naming, variable: Variable) -> r.Quantity:
    band, unit = numbers.evaluation.bands[variable.key], numbers.units[variable.key]
    stated, given = variable.stated, variable.given
    least, nominal, greatest = _in_unit(band, unit, given)
    return r.Quantity(
        symbol=variable.symbol,
        line=naming.lines[variable.key],
        kind=variable.kind,
        unit=unit.text,
        nominal=nominal,
        least=least,
        greatest=greatest,
        index=None,
        at_least={} if stated else numbers.combination(band.at_least),
        at_greatest={} if stated else numbers.combination(band.at_greatest),
        proof=band.proof.value,
        formula="" if variable.formula is None else unparse(variable.formula),
        substitution=_substitution(numbers, variable),
        result=numbers.nominal(variable.key),
        steps=(),
        residual=None,
        depends_on=tuple(numbers.model.variables[key].symbol for key in variable.depends_on),
        used_by=naming.used_by[variable.key],
        description=variable.description,
        basis=variable.basis.text,
        by_case={},
        id=stated.id.name if stated and stated.id else "",
        state=stated.state if stated else "",
        units_carried=_carried(numbers, variable),
        tolerance=band_in_words(given) if given else "",
        least_text=_end(numbers, variable, band.least, low=True),
        greatest_text=_end(numbers, variable, band.greatest, low=False),
        varies=band.varies,
        notes=_notes(band, unit, numbers, given),
    )


def _in_unit(band: Band, unit: Unit, given: Given | None) -> tuple[float, float, float]:
    """Least, nominal and greatest in the shown unit; a given value keeps the author's digits."""
    if given is not None:
        return float(given.least), float(given.nominal), float(given.greatest)
    least, nominal, greatest = (
        stored(unit.from_si(each)) for each in (band.least, band.nominal, band.greatest)
    )
    return least, nominal, greatest


def _substitution(numbers: Numbers, variable: Variable) -> str:
    """The formula with nominal values; empty when there is nothing to substitute."""
    if variable.formula is None or not variable.depends_on:
        return ""

    def value_of(name: str) -> str | None:
        key = fold(name)
        return numbers.nominal(key) if key in numbers.model.variables else None

    return substituted(variable.formula, value_of)


def _carried(numbers: Numbers, variable: Variable) -> str:
    if variable.formula is None:
        return ""
    unit_of = numbers.units
    return units_carried(
        variable.formula, numbers.units[variable.key], lambda key: unit_of.get(key, PLAIN)
    )


def _end(numbers: Numbers, variable: Variable, si: float, *, low: bool) -> str:
    given = variable.given
    if given is not None:
        return exact_limit(given.least if low else given.greatest, given.unit)
    return computed(si, numbers.units[variable.key], numbers.digits)


def _notes(band: Band, unit: Unit, numbers: Numbers, given: Given | None) -> tuple[str, ...]:
    """What a reader must know about the band."""
    notes = []
    if given is not None:
        if given.style is Style.RANGE:
            notes.append(f"nominal {typeset(given_nominal(given))}, the middle of the limits")
        return tuple(notes)
    for name, combination in (("least", band.at_least), ("greatest", band.at_greatest)):
        inside = [numbers.model.variables[k].symbol for k, s in combination.items() if s.inside]
        if inside:
            notes.append(f"the {name} value lies inside the band of {', '.join(inside)}")
    if band.proof is Proof.SEARCHED:
        low, high = (
            computed(each, unit, numbers.digits) if abs(each) != float("inf") else "no bound"
            for each in band.bounds
        )
        notes.append(f"the extremes were searched; proven is only {low} to {high}")
    return tuple(notes)
