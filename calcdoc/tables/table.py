"""A table and how it is read: which row an argument means, or all rows a range touches."""

from collections.abc import Iterable
from fractions import Fraction
from itertools import pairwise
from typing import Final

from calcdoc.frozen import Frozen
from calcdoc.units import Unit

EXACT: Final = "exact"
NEXT_HIGHER: Final = "next higher"
LINEAR: Final = "linear"
RULES: Final = (EXACT, NEXT_HIGHER, LINEAR)
_POINT: Final = Fraction(1, 10**9)
"""Share of an axis up to which a range is a point that rounding has widened."""
_MOST_SHOWN: Final = 8


class Axis(Frozen, frozen=True):
    """One argument of a table."""

    name: str
    unit: Unit | None
    """None for an axis of texts."""
    rule: str
    """Between rows: ``exact``, ``next higher`` or ``linear``."""


class Row(Frozen, frozen=True):
    """One row: where it stands on every axis, and its value."""

    at: tuple[Fraction | str, ...]
    value: Fraction
    verified: bool


class Table(Frozen, frozen=True):
    """A table with its source; numbers are in the units of axes and value."""

    name: str
    title: str
    edition: str
    clause: str
    axes: tuple[Axis, ...]
    unit: Unit
    rows: tuple[Row, ...]

    @property
    def source(self) -> str:
        """Where the values come from, in one line."""
        return ", ".join(part for part in (self.title, self.edition, self.clause) if part)


class Found(Frozen, frozen=True):
    """What a look-up gives: least, nominal and greatest value, and the rows that were used."""

    least: Fraction
    nominal: Fraction
    greatest: Fraction
    rows: tuple[Row, ...]


class OutsideAxis(Exception):
    """An argument lies outside of what the table holds; ``number`` is the argument's."""

    def __init__(self, number: int, message: str) -> None:
        super().__init__(message)
        self.number = number


Range = tuple[Fraction, Fraction, Fraction]
"""Least, nominal and greatest of an argument, in the unit of its axis."""


def look_up(table: Table, arguments: tuple[Range | str, ...]) -> Found:
    """The value for arguments; for a range, the extremes over all rows and points in it.

    Raises:
        OutsideAxis: when an argument has no row.
    """
    corners = [_at(table, corner) for corner in _corners(table, arguments)]
    nominal_at = tuple(each if isinstance(each, str) else each[1] for each in arguments)
    nominal, used = _at(table, nominal_at)
    values = [nominal, *(value for value, _ in corners)]
    rows = dict.fromkeys((*used, *(row for _, found in corners for row in found)))
    return Found(min(values), nominal, max(values), tuple(rows))


def _corners(table: Table, arguments: tuple[Range | str, ...]) -> list[tuple[Fraction | str, ...]]:
    """Points that between them reach every row and every end of the ranges."""
    corners: list[tuple[Fraction | str, ...]] = [()]
    for number, (axis, argument) in enumerate(zip(table.axes, arguments, strict=True)):
        stops = [argument] if isinstance(argument, str) else _stops(table, number, axis, argument)
        corners = [(*corner, stop) for corner in corners for stop in stops]
    return corners


def _stops(table: Table, number: int, axis: Axis, argument: Range) -> list[Fraction | str]:
    """The ends of a range and every row of the axis that lies in it."""
    low, nominal, high = argument
    rows = {each for row in table.rows if isinstance(each := row.at[number], Fraction)}
    if axis.rule == EXACT:
        if high - low <= _POINT * max(abs(each) for each in (*rows, low, high)):
            return [nominal]
        # Between its rows an exact axis says nothing, so a range goes from row to row.
        if not {low, nominal, high} <= rows:
            raise OutsideAxis(number, _off_rows(axis, rows, low, high))
        return [*sorted(each for each in rows if low <= each <= high)]
    between = sorted(at for at in rows if low < at < high)
    return [*dict.fromkeys([low, *between, high])]


def _at(table: Table, point: tuple[Fraction | str, ...]) -> tuple[Fraction, tuple[Row, ...]]:
    """The value at one point, and the row or the two rows it comes from."""
    rows = table.rows
    linear: tuple[int, Fraction] | None = None
    for number, (axis, at) in enumerate(zip(table.axes, point, strict=True)):
        if axis.rule == LINEAR and isinstance(at, Fraction):
            linear = (number, at)
            continue
        rows = _rows_at(rows, number, axis, at)
    if linear is None:
        return rows[0].value, rows[:1]
    return _between(rows, table.axes[linear[0]], *linear)


def _rows_at(rows: tuple[Row, ...], number: int, axis: Axis, at: Fraction | str) -> tuple[Row, ...]:
    exact = tuple(row for row in rows if row.at[number] == at)
    if exact:
        return exact
    if axis.rule == NEXT_HIGHER and isinstance(at, Fraction):
        above = [each for row in rows if isinstance(each := row.at[number], Fraction) and each > at]
        if above:
            return tuple(row for row in rows if row.at[number] == min(above))
    raise OutsideAxis(number, _outside(rows, number, axis, at))


def _between(
    rows: tuple[Row, ...], axis: Axis, number: int, at: Fraction
) -> tuple[Fraction, tuple[Row, ...]]:
    """Linear between the two rows around a point."""
    ordered = sorted(rows, key=lambda row: Fraction(row.at[number]))
    for row in ordered:
        if row.at[number] == at:
            return row.value, (row,)
    for below, above in pairwise(ordered):
        low, high = Fraction(below.at[number]), Fraction(above.at[number])
        if low < at < high:
            share = (at - low) / (high - low)
            return below.value + share * (above.value - below.value), (below, above)
    raise OutsideAxis(number, _outside(rows, number, axis, at))


def _outside(rows: tuple[Row, ...], number: int, axis: Axis, at: Fraction | str) -> str:
    if isinstance(at, str) or axis.rule == EXACT:
        return f"{axis.name} has the rows {_listed(axis, (row.at[number] for row in rows))}"
    numbers = sorted(Fraction(each.at[number]) for each in rows)
    return f"{axis.name} goes from {_shown(numbers[0])} to {_shown(numbers[-1])}{_unit(axis)}"


def _off_rows(axis: Axis, rows: Iterable[Fraction], low: Fraction, high: Fraction) -> str:
    return (
        f"{axis.name} is exact: the ends and the nominal value of a range must stand on the rows"
        f" {_listed(axis, sorted(rows))}; this one goes from {_shown(low)} to {_shown(high)}"
        f"{_unit(axis)}"
    )


def _listed(axis: Axis, places: Iterable[Fraction | str]) -> str:
    shown = [_shown(each) for each in dict.fromkeys(places)]
    more = ", ..." if len(shown) > _MOST_SHOWN else ""
    return ", ".join(shown[:_MOST_SHOWN]) + more + _unit(axis)


def _shown(place: Fraction | str) -> str:
    return place if isinstance(place, str) else f"{float(place):.6g}"


def _unit(axis: Axis) -> str:
    return f" {axis.unit.text}" if axis.unit and axis.unit.words else ""
