"""Working lines: every quantity with formula, substitution, result, band and who uses it."""

from calcdoc.analysis.evaluation import Band, Combination
from calcdoc.analysis.extremes import Proof
from calcdoc.frozen import Frozen
from calcdoc.model.model import Variable
from calcdoc.records import record as r
from calcdoc.records.carried import units_carried
from calcdoc.records.cases import in_cases
from calcdoc.records.looked import looked_up, unverified_in
from calcdoc.records.makeup import parts_in_words
from calcdoc.records.naming import Naming
from calcdoc.records.numbers import Numbers
from calcdoc.records.rounding import significant, stored
from calcdoc.records.substitute import substituted
from calcdoc.records.values import computed, exact_limit, given_nominal, with_unit
from calcdoc.records.wording import band_in_words, typeset
from calcdoc.text.given import Given, Style
from calcdoc.text.names import owner
from calcdoc.text.nodes import Node
from calcdoc.text.unparse import unparse
from calcdoc.units import PLAIN, Unit


def quantities(numbers: Numbers, naming: Naming) -> tuple[r.Quantity, ...]:
    """Every quantity of the record, in the author's order."""
    return tuple(_quantity(numbers, naming, each) for each in numbers.model.variables.values())


def _quantity(numbers: Numbers, naming: Naming, variable: Variable) -> r.Quantity:
    stated, given = variable.stated, variable.given
    shown = _shown(numbers, variable)
    formula = formula_of(numbers, variable)
    return r.Quantity(
        symbol=variable.symbol,
        line=naming.lines[variable.key],
        kind="method" if owner(variable.key) else variable.kind,
        unit=numbers.units[variable.key].text,
        nominal=shown.nominal,
        least=shown.least,
        greatest=shown.greatest,
        index=variable.index.values if variable.index else None,
        at_least={} if stated else numbers.combination(shown.at_least),
        at_greatest={} if stated else numbers.combination(shown.at_greatest),
        proof=shown.proof,
        formula="" if formula is None else unparse(formula),
        substitution=_substitution(numbers, variable, formula),
        result=shown.result,
        steps=_steps(numbers, variable),
        residual=_residual(numbers, variable),
        depends_on=tuple(numbers.model.variables[key].symbol for key in variable.depends_on),
        used_by=naming.used_by[variable.key],
        description=variable.description,
        basis=variable.basis.text,
        by_case=in_cases(numbers, variable.key),
        id=stated.id.name if stated and stated.id else "",
        state=stated.state if stated else "",
        units_carried=_carried(numbers, variable, formula),
        tolerance=band_in_words(given) if given else "",
        least_text=shown.least_text,
        greatest_text=shown.greatest_text,
        varies=shown.varies,
        from_relation=", ".join(_relations(numbers, variable)),
        unverified=unverified_in(numbers.evaluation, {variable.key}),
        makeup=parts_in_words(numbers.model, variable),
        notes=(
            *shown.notes,
            *_default(numbers, variable),
            *_runaway(numbers, variable),
            *looked_up(numbers.evaluation, variable.key),
        ),
    )


class Shown(Frozen, frozen=True):
    """The numbers of a quantity as they are shown; lists for a series."""

    nominal: float | list[float]
    least: float | list[float]
    greatest: float | list[float]
    at_least: Combination
    at_greatest: Combination
    proof: str
    result: str
    least_text: str
    greatest_text: str
    varies: bool
    notes: tuple[str, ...]


def _shown(numbers: Numbers, variable: Variable) -> Shown:
    unit, given = numbers.units[variable.key], variable.given
    if variable.index is not None:
        return _shown_series(numbers, variable, unit)
    band = numbers.evaluation.bands[variable.key]
    least, nominal, greatest = _in_unit(band, unit, given)
    return Shown(
        nominal,
        least,
        greatest,
        band.at_least,
        band.at_greatest,
        band.proof.value,
        numbers.nominal(variable.key),
        _end(numbers, variable, band.least, low=True),
        _end(numbers, variable, band.greatest, low=False),
        band.varies,
        _notes(band, unit, numbers, given),
    )


def _shown_series(numbers: Numbers, variable: Variable, unit: Unit) -> Shown:
    bands = numbers.evaluation.series[variable.key]
    rows = [_in_unit(band, unit, None) for band in bands.values()]
    shown = [computed(band.nominal, unit, numbers.digits) for band in bands.values()]
    weakest = min((band.proof for band in bands.values()), key=_PROOFS.index)
    return Shown(
        [row[1] for row in rows],
        [row[0] for row in rows],
        [row[2] for row in rows],
        {},
        {},
        weakest.value,
        "; ".join(f"{n}: {text}" for n, text in zip(bands, shown, strict=True)),
        "",
        "",
        any(band.varies for band in bands.values()),
        (),
    )


_PROOFS = (Proof.SEARCHED, Proof.BOUNDED, Proof.EXACT)


def _in_unit(band: Band, unit: Unit, given: Given | None) -> tuple[float, float, float]:
    """Least, nominal and greatest in the shown unit; a given value keeps the author's digits."""
    if given is not None:
        return float(given.least), float(given.nominal), float(given.greatest)
    least, nominal, greatest = (
        stored(unit.from_si(each)) for each in (band.least, band.nominal, band.greatest)
    )
    return least, nominal, greatest


def formula_of(numbers: Numbers, variable: Variable) -> Node | None:
    """The formula that is shown: as defined, or the root that was left of a relation."""
    root = numbers.evaluation.chosen.get(variable.key)
    return variable.formula if root is None else root.tree


def _relations(numbers: Numbers, variable: Variable) -> tuple[str, ...]:
    keys: tuple[str, ...] = ()
    if variable.solved:
        keys = variable.solved.relations
    elif variable.implicit and variable.implicit.relation:
        keys = (variable.implicit.relation,)
    return tuple(numbers.model.relations[key].statement.name.name for key in keys)


def _steps(numbers: Numbers, variable: Variable) -> tuple[str, ...]:
    """How a solved or settled quantity was found."""
    root = numbers.evaluation.chosen.get(variable.key)
    if root is not None:
        return root.steps
    implicit = variable.implicit
    if implicit is None:
        return ()
    low, high = (with_unit(end, implicit.bracket.unit) for end in implicit.bracket.spread)
    if not implicit.is_loop:
        return (f"solved numerically between {low} and {high}",)
    through = [numbers.model.variables[key].symbol for key in implicit.inner]
    around = f" through {', '.join(through)}" if through else ""
    return (f"depends on itself{around}; settled between {low} and {high}",)


def _residual(numbers: Numbers, variable: Variable) -> str | None:
    """What is left when the solution is put back."""
    found = numbers.evaluation.put_back.get(variable.key)
    if found is None:
        return None
    names = ", ".join(_relations(numbers, variable))
    into = f"put back into {names}" if names else "put back"
    if found.proven or not found.residual:
        left = "both sides are equal"
    else:
        share = typeset(significant(found.residual, 2))
        left = f"the sides differ by at most {share} of the largest term"
    gain = ""
    if found.gain is not None:
        gain = f"; loop gain at most {typeset(significant(found.gain.value, 3))}"
    return f"{into}: {left}{gain}"


def _runaway(numbers: Numbers, variable: Variable) -> tuple[str, ...]:
    """A loop whose gain reaches one does not come to rest: said in plain words."""
    found = numbers.evaluation.put_back.get(variable.key)
    if found is None or found.gain is None or found.gain.settles:
        return ()
    if not found.gain.runs_away:
        return ("it could not be proven that the loop gain stays below one",)
    gain = typeset(significant(found.gain.value, 3))
    note = (
        f"thermal runaway: the loop gain reaches {gain}, so a small rise comes back larger and the"
        " quantity does not come to rest; everything that rests on it fails"
    )
    return (note,)


def _default(numbers: Numbers, variable: Variable) -> tuple[str, ...]:
    """What a method takes and the design does not say."""
    applied = numbers.model.document.applied
    if any(variable.key in each.defaults for each in applied):
        return ("default of the method",)
    return ()


def _substitution(numbers: Numbers, variable: Variable, formula: Node | None) -> str:
    """The formula with nominal values; empty when there is nothing to substitute."""
    if formula is None or not variable.depends_on or variable.index is not None:
        return ""
    return substituted(formula, numbers.value_of)


def _carried(numbers: Numbers, variable: Variable, formula: Node | None) -> str:
    if formula is None:
        return ""
    unit_of = numbers.units
    return units_carried(formula, numbers.units[variable.key], lambda key: unit_of.get(key, PLAIN))


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
