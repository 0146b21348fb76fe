"""Figures as the record holds them: numbers in the units that are shown, and what they say."""

from collections.abc import Iterable
from typing import Final

from calcdoc.analysis import pictured as p
from calcdoc.analysis.evaluation import Stand
from calcdoc.records import figure_words as words
from calcdoc.records import record as r
from calcdoc.records.numbers import Numbers
from calcdoc.records.rounding import stored
from calcdoc.records.values import computed, difference, exact_limit, given_nominal
from calcdoc.records.wording import typeset
from calcdoc.text.given import Given
from calcdoc.text.statements import FigureStatement
from calcdoc.text.unparse import unparse
from calcdoc.units import Unit

MOST_BARS: Final = 12
CHANGE_DIGITS: Final = 3
"""Digits of a change: it says what matters, not how much exactly."""


def figures(numbers: Numbers, judged: tuple[r.Criterion, ...]) -> tuple[r.AnyFigure, ...]:
    """Every figure of the record, numbered in the author's order."""
    return tuple(
        _figure(numbers, judged, number, each)
        for number, each in enumerate(numbers.evaluation.figures, 1)
    )


def _figure(
    numbers: Numbers, judged: tuple[r.Criterion, ...], number: int, done: p.Picture
) -> r.AnyFigure:
    in_cases = bool(numbers.model.cases)
    match done:
        case p.Curve():
            return words.said(_curve(numbers, number, done), in_cases=in_cases)
        case p.Spread():
            return words.said(_spread(numbers, number, done), in_cases=in_cases)
        case p.Drives():
            return words.said(_sensitivities(numbers, number, done), in_cases=in_cases)
        case p.Margins():
            return words.said(_margins(judged, number, done), in_cases=in_cases)


def _in_unit(values: Iterable[float | None], unit: Unit) -> tuple[float | None, ...]:
    return tuple(None if each is None else stored(unit.from_si(each)) for each in values)


def _symbol(numbers: Numbers, statement: FigureStatement) -> tuple[str, str, Unit]:
    """Key, symbol as typed where it is defined, and unit of what is drawn."""
    assert statement.symbol is not None
    key = statement.symbol.key
    return key, numbers.model.variables[key].symbol, numbers.units[key]


def _curve(numbers: Numbers, number: int, done: p.Curve) -> r.Curve:
    statement = done.pictured.statement
    key, symbol, unit = _symbol(numbers, statement)
    assert statement.against is not None
    assert statement.low is not None
    given, along = numbers.model.variables[statement.against.key].given, statement.low.unit
    assert given is not None
    drawn, limit = done.drawn, done.limit
    at = None
    if done.axis[0] <= given.si[1] <= done.axis[-1]:
        at = (stored(along.from_si(given.si[1])),
              stored(unit.from_si(numbers.evaluation.bands[key].nominal)))  # fmt: skip
    varies = limit is not None and limit.least != limit.greatest
    return r.Curve(
        number=number,
        caption=statement.caption,
        text=statement.text,
        alternative="",
        notes=(),
        symbol=symbol,
        unit=unit.text,
        against=numbers.model.variables[statement.against.key].symbol,
        against_unit=along.text,
        axis=tuple(stored(along.from_si(each)) for each in done.axis),
        nominal=_in_unit(drawn.nominal, unit),
        least=_in_unit(drawn.least, unit),
        greatest=_in_unit(drawn.greatest, unit),
        limit=() if limit is None else _once(_in_unit(limit.nominal, unit)),
        limit_least=_in_unit(limit.least, unit) if limit and varies else (),
        limit_greatest=_in_unit(limit.greatest, unit) if limit and varies else (),
        limit_text="" if statement.limit is None else unparse(statement.limit),
        meetings=tuple(
            r.Meeting(
                end=each.end,
                at=tuple(stored(along.from_si(one)) for one in each.at),
                side=each.side,
            )
            for each in done.meetings
        ),
        at_nominal=at,
        at_nominal_text=given_nominal(given) if at else "",
        partial=done.partial,
    )


def _once(values: tuple[float | None, ...]) -> tuple[float | None, ...]:
    return values[:1] if len(set(values)) == 1 else values


def _spread(numbers: Numbers, number: int, done: p.Spread) -> r.Spread:
    statement = done.pictured.statement
    _, symbol, unit = _symbol(numbers, statement)
    fixed = {key: Stand(value, inside=False) for key, value in done.fixed.items()}
    nominal, least, greatest = (
        computed(each, unit, numbers.digits) for each in (done.nominal, done.least, done.greatest)
    )
    return r.Spread(
        number=number,
        caption=statement.caption,
        text=statement.text,
        alternative="",
        notes=(),
        symbol=symbol,
        unit=unit.text,
        draws=done.draws,
        seed=done.seed,
        lost=done.lost,
        low=stored(unit.from_si(done.low)),
        high=stored(unit.from_si(done.high)),
        counts=done.counts,
        mean=stored(unit.from_si(done.mean)),
        deviation=stored(unit.difference_from_si(done.deviation)),
        nominal=stored(unit.from_si(done.nominal)),
        least=stored(unit.from_si(done.least)),
        greatest=stored(unit.from_si(done.greatest)),
        nominal_text=nominal,
        least_text=least,
        greatest_text=greatest,
        limits=tuple(
            r.SpreadLimit(
                criterion=each.criterion,
                value=stored(unit.from_si(each.value)),
                text=computed(each.value, unit, numbers.digits),
            )
            for each in done.bounds
        ),
        criterion=done.criterion,
        fixed=numbers.combination(fixed),
        assumed=tuple(numbers.model.variables[key].symbol for key in done.assumed),
    )


def _sensitivities(numbers: Numbers, number: int, done: p.Drives) -> r.Sensitivities:
    statement = done.pictured.statement
    _, symbol, unit = _symbol(numbers, statement)
    return r.Sensitivities(
        number=number,
        caption=statement.caption,
        text=statement.text,
        alternative="",
        notes=(),
        symbol=symbol,
        unit="K" if unit.celsius else unit.text,
        nominal=stored(unit.from_si(done.nominal)),
        nominal_text=computed(done.nominal, unit, numbers.digits),
        rows=tuple(_drive(numbers, unit, each) for each in done.rows[:MOST_BARS]),
        left_out=max(0, len(done.rows) - MOST_BARS),
    )


def _drive(numbers: Numbers, unit: Unit, row: p.Drive) -> r.Drive:
    ends = {"least": row.at_least, "greatest": row.at_greatest}
    variable = numbers.model.variables.get(row.key)
    if variable is not None and variable.given is not None:
        symbol, (least, greatest) = variable.symbol, _limits(variable.given)
    else:  # a table that is read over a range
        ((symbol, least),) = numbers.combination({row.key: Stand(ends["least"], False)}).items()
        ((_, greatest),) = numbers.combination({row.key: Stand(ends["greatest"], False)}).items()
    low, high = (
        None if each is None else stored(unit.difference_from_si(each))
        for each in (row.low, row.high)
    )
    return r.Drive(
        symbol=symbol,
        at_least=least,
        at_greatest=greatest,
        low=low,
        high=high,
        low_text=_change(row.low, unit),
        high_text=_change(row.high, unit),
    )


def _limits(given: Given) -> tuple[str, str]:
    return exact_limit(given.least, given.unit), exact_limit(given.greatest, given.unit)


def _change(si: float | None, unit: Unit) -> str:
    if si is None:
        return "no value"
    text = typeset(difference(si, unit, CHANGE_DIGITS))
    return f"+{text}" if si > 0 else text


def _margins(judged: tuple[r.Criterion, ...], number: int, done: p.Margins) -> r.Margins:
    statement = done.pictured.statement
    return r.Margins(
        number=number,
        caption=statement.caption,
        text=statement.text,
        alternative="",
        notes=(),
        rows=tuple(
            r.MarginRow(
                id=each.id,
                description=each.description,
                margin=each.margin,
                margin_text=each.margin_text,
                verdict=each.verdict,
                remark=each.remark,
            )
            for each in judged
            if each.margin_abs is not None
        ),
    )
