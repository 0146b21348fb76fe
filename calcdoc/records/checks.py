"""Cross-checks and relations as the record shows them."""

from calcdoc.analysis.evaluation import AgainstMeasured, Crosschecked
from calcdoc.model.model import Relation
from calcdoc.records import record as r
from calcdoc.records.naming import Naming
from calcdoc.records.numbers import Numbers
from calcdoc.records.rounding import significant, stored
from calcdoc.records.values import computed, difference, given_nominal, with_unit
from calcdoc.records.wording import band_in_words
from calcdoc.text.names import fold
from calcdoc.text.nodes import Group, Name, Node
from calcdoc.text.statements import CrosscheckStatement, Measurement
from calcdoc.text.unparse import unparse
from calcdoc.units import Unit, unit_of
from calcdoc.units.choose import choose_unit

_DIGITS = 3
"""Digits of a difference: it says how far apart, not how much."""


def crosschecks(numbers: Numbers, naming: Naming) -> tuple[r.Crosscheck, ...]:
    """Every cross-check of the record, measurements among them, in the author's order."""
    made = {each.compared.statement.id.key: _crosscheck(numbers, naming, each)
            for each in numbers.evaluation.crosschecks}  # fmt: skip
    made |= {each.measured.statement.id.key: _measurement(numbers, naming, each)
             for each in numbers.evaluation.measurements}  # fmt: skip
    order = numbers.model.document.statements
    ids = (each.id.key for each in order if isinstance(each, CrosscheckStatement | Measurement))
    return tuple(made[key] for key in ids)


def _crosscheck(numbers: Numbers, naming: Naming, done: Crosschecked) -> r.Crosscheck:
    statement = done.compared.statement
    unit = _unit(numbers, done)
    shown_in = unit_of([("%", 1)]) if statement.allowed else unit
    allowed = statement.allowed.nominal if statement.allowed else 0
    in_unit = shown_in.difference_from_si(done.worst)
    text = (
        with_unit(significant(in_unit, _DIGITS), shown_in)
        if statement.allowed
        else difference(done.worst, unit, _DIGITS)
    )
    return r.Crosscheck(
        id=statement.id.name,
        first=unparse(statement.first),
        second=unparse(statement.second),
        unit=shown_in.text if not shown_in.celsius else "K",
        difference=stored(in_unit),
        allowed=float(allowed),
        agrees=done.agrees,
        line=naming.lines[statement.id.key],
        form=statement.form,
        first_text=computed(done.first, unit, numbers.digits),
        second_text=computed(done.second, unit, numbers.digits),
        difference_text=text,
        allowed_text=with_unit(statement.allowed.digits, shown_in) if statement.allowed else "",
        at=numbers.combination(done.combination),
        proof=done.proof.value,
        description=statement.description,
        basis=statement.basis.text,
        first_band="",
        second_band="",
    )


def _measurement(numbers: Numbers, naming: Naming, done: AgainstMeasured) -> r.Crosscheck:
    """A measured value beside the computed one, in the unit it was measured in."""
    statement = done.measured.statement
    unit = statement.given.unit
    points = {each.symbol.name: with_unit(each.given.digits, each.given.unit)
              for each in statement.at}  # fmt: skip
    band = ""
    if done.low < done.high:
        ends = (computed(each, unit, numbers.digits) for each in (done.low, done.high))
        band = " to ".join(ends)
    return r.Crosscheck(
        id=statement.id.name,
        first=statement.symbol.name,
        second=unparse(statement.second),
        unit="K" if unit.celsius else unit.text,
        difference=stored(unit.difference_from_si(done.difference)),
        allowed=stored(unit.difference_from_si(done.allowed)),
        agrees=done.agrees,
        line=naming.lines[statement.id.key],
        form="measured against",
        first_text=given_nominal(statement.given),
        second_text=computed(done.second, unit, numbers.digits),
        difference_text=difference(done.difference, unit, _DIGITS),
        allowed_text=difference(done.allowed, unit, _DIGITS),
        at=points,
        proof=done.proof.value,
        description=statement.description,
        basis=statement.basis.text,
        first_band=band_in_words(statement.given),
        second_band=band,
    )


def _unit(numbers: Numbers, done: Crosschecked) -> Unit:
    """The unit of a side that is a symbol, else a chosen one."""
    for tree in (done.compared.statement.first, done.compared.statement.second):
        bare: Node = tree
        while isinstance(bare, Group):
            bare = bare.inner
        if isinstance(bare, Name) and fold(bare.name) in numbers.units:
            return numbers.units[fold(bare.name)]
    return choose_unit(
        done.compared.typed.dimension,
        done.first or done.second,
        celsius=bool(done.compared.typed.weight),
    )


def relations(numbers: Numbers, naming: Naming) -> tuple[r.Relation, ...]:
    """Every relation of the record, in the author's order."""
    return tuple(_relation(numbers, naming, each) for each in numbers.model.relations.values())


def _relation(numbers: Numbers, naming: Naming, relation: Relation) -> r.Relation:
    statement = relation.statement
    solved_in = [
        naming.lines[key]
        for key, variable in numbers.model.variables.items()
        if (variable.solved and relation.key in variable.solved.relations)
        or (variable.implicit and variable.implicit.relation == relation.key)
    ]
    return r.Relation(
        name=statement.name.name,
        line=naming.lines[relation.key],
        left=unparse(statement.left),
        right=unparse(statement.right),
        description=statement.description,
        basis=statement.basis.text,
        solved_in=tuple(solved_in),
    )
