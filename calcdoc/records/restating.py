"""Results in terms of chosen quantities, and sensitivities, as the record shows them."""

from calcdoc.analysis.evaluation import Answer, Restated, Sensitive
from calcdoc.model.model import Variable
from calcdoc.records import record as r
from calcdoc.records.naming import Naming, keys_of
from calcdoc.records.numbers import Numbers
from calcdoc.records.rounding import significant, stored
from calcdoc.records.substitute import substituted
from calcdoc.records.values import computed, difference, with_unit
from calcdoc.text.unparse import unparse
from calcdoc.units import Unit, unit_of

_DIGITS = 3
"""Digits of an effect."""


def restated(numbers: Numbers, naming: Naming) -> tuple[r.Restated, ...]:
    """Every restated result, in the author's order."""
    return tuple(_restated(numbers, naming, each) for each in numbers.evaluation.restated)


def _restated(numbers: Numbers, naming: Naming, done: Restated) -> r.Restated:
    statement = done.statement
    variable = numbers.model.variables[statement.symbol.key]
    size = max(abs(done.value), abs(done.original))
    share = abs(done.value - done.original) / size if size else 0.0
    agrees = "0" if not share else f"{significant(share, 2)} of the larger"
    return r.Restated(
        line=naming.lines[keys_of(statement)[0]],
        symbol=variable.symbol,
        terms=tuple(numbers.model.variables[label.key].symbol for label in statement.terms),
        formula=unparse(done.tree),
        substitution=substituted(done.tree, numbers.value_of),
        result=computed(done.value, numbers.units[variable.key], numbers.digits),
        residual=f"difference to line {naming.lines[variable.key]}: {agrees}",
        description=statement.description,
    )


def sensitivities(numbers: Numbers, naming: Naming) -> tuple[r.Sensitivity, ...]:
    """Every line of sensitivities, in the author's order."""
    return tuple(_sensitivity(numbers, naming, each) for each in numbers.evaluation.sensitive)


def _sensitivity(numbers: Numbers, naming: Naming, done: Sensitive) -> r.Sensitivity:
    statement = done.statement
    variable = numbers.model.variables[statement.symbol.key]
    return r.Sensitivity(
        line=naming.lines[keys_of(statement)[0]],
        symbol=variable.symbol,
        description=statement.description,
        rows=tuple(_row(numbers, variable, each) for each in done.rows),
    )


def _row(numbers: Numbers, variable: Variable, answer: Answer) -> r.SensitivityRow:
    of, to = numbers.units[variable.key], numbers.units[answer.key]
    unit = _quotient(of, to)
    value = answer.value / float(unit.factor)
    per_cent = numbers.model.variables[answer.key].typed.weight == 0
    return r.SensitivityRow(
        symbol=numbers.model.variables[answer.key].symbol,
        formula=unparse(answer.slope),
        value=stored(value),
        unit=unit.text,
        value_text=with_unit(significant(value, numbers.digits), unit),
        per_cent_text=difference(answer.per_cent, of, _DIGITS) if per_cent else "",
        full=stored(of.difference_from_si(max(answer.low, answer.high, key=abs))),
        low_text=difference(answer.low, of, _DIGITS),
        high_text=difference(answer.high, of, _DIGITS),
    )


def _quotient(of: Unit, to: Unit) -> Unit:
    """The unit of a derivative; a temperature counts in kelvin."""
    above = (("K", 1),) if of.celsius else of.words
    below = (("K", 1),) if to.celsius else to.words
    return unit_of((*above, *((word, -power) for word, power in below)))
