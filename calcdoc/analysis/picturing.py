"""The numbers of figures: curves, spreads, sensitivities."""

from collections.abc import Sequence
from typing import Final

import numpy as np

from calcdoc.analysis.box import Box
from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.evaluation import Evaluation
from calcdoc.analysis.extremes import Question, extremes
from calcdoc.analysis.looking_up import reached
from calcdoc.analysis.pictured import (
    Curve,
    Drive,
    Drives,
    Margins,
    Meeting,
    Picture,
    Spread,
    Track,
)
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.program import plain
from calcdoc.analysis.spreading import spread
from calcdoc.analysis.trouble import out_of_reach, said
from calcdoc.frozen import replace
from calcdoc.model.model import Pictured
from calcdoc.problems import Mistake, error
from calcdoc.text.scan import shown
from calcdoc.text.statements import FigureStatement

POINTS: Final = 61
"""Of a curve."""
FINER: Final = 9
"""Points between two of them, to find where a limit is crossed."""
ROUNDS: Final = 5
"""How often it is looked at closer."""
_ENDS: Final = ("nominal", "least", "greatest")


def with_figures(compiled: Compiled, evaluation: Evaluation) -> Evaluation:
    """The evaluation with the numbers of all figures.

    Raises:
        Mistake: when nothing of a figure can be computed.
    """
    figures = tuple(
        _picture(compiled, evaluation, number) for number in range(len(evaluation.model.figures))
    )
    return replace(evaluation, figures=figures)


def _picture(compiled: Compiled, evaluation: Evaluation, number: int) -> Picture:
    pictured = evaluation.model.figures[number]
    match pictured.statement.kind:
        case "curve":
            return _curve(compiled, evaluation, number)
        case "spread":
            return _spread(compiled, evaluation, number)
        case "sensitivities":
            return _drives(compiled, pictured)
        case _:
            return Margins(pictured)


def _spread(compiled: Compiled, evaluation: Evaluation, number: int) -> Spread:
    return spread(compiled, evaluation, evaluation.model.figures[number], compiled.figures[number])


# --- curves ------------------------------------------------------------------------------------


class _Axis:
    """Moves one input along an axis, all others over their bands."""

    def __init__(self, compiled: Compiled, column: int) -> None:
        self.compiled, self.column = compiled, column

    def _at(self, values: FloatArray, at: float) -> FloatArray:
        moved = values.copy()
        moved[self.column] = at
        return moved

    def nominal(self, target: int, axis: FloatArray) -> FloatArray:
        """Values at nominal, shape (n,); NaN where they cannot be computed."""
        program = plain(self.compiled.tape, (target,))
        points = np.repeat(self.compiled.box.nominal[:, None], len(axis), axis=1)
        points[self.column] = axis
        found = program.evaluate(points)[program.row[target]]
        return np.where(np.isfinite(found), found, np.nan)

    def extreme(self, target: int, axis: FloatArray, *, greatest: bool) -> FloatArray:
        """Least or greatest over the other bands, shape (n,); NaN where it is not known."""
        box = self.compiled.box
        questions = []
        for at in axis:
            low, mid, high = (self._at(each, at) for each in (box.low, box.nominal, box.high))
            questions.append(Question(target, greatest, low, mid, high))
        answers = extremes(self.compiled.tape, questions)
        values = [
            each.value if np.isfinite(each.value) and np.isfinite(each.bound) else np.nan
            for each in answers
        ]
        return np.array(values)

    def all(self, target: int, axis: FloatArray) -> FloatArray:
        """Nominal, least and greatest, shape (3, n)."""
        reaches = reached(self.compiled.tape, target)
        if self.column not in reaches:  # level: one point says it all
            return np.repeat(self._all(target, axis[:1]), len(axis), axis=1)
        return self._all(target, axis)

    def _all(self, target: int, axis: FloatArray) -> FloatArray:
        nominal = self.nominal(target, axis)
        least, greatest = (self.extreme(target, axis, greatest=end) for end in (False, True))
        # Rounding may put an attained end a hair on the wrong side of the nominal value.
        return np.stack((nominal, np.minimum(least, nominal), np.maximum(greatest, nominal)))

    def still(self, target: int) -> bool:
        """Whether nothing but the axis moves it."""
        box = self.compiled.box
        others = reached(self.compiled.tape, target) - {self.column}
        return not any(box.low[column] < box.high[column] for column in others)

    def row(self, target: int, axis: FloatArray, end: int) -> FloatArray:
        """One row of :meth:`all`."""
        if end == 0:
            return self.nominal(target, axis)
        return self.extreme(target, axis, greatest=end == 2)  # noqa: PLR2004  the last of three

    def meeting(self, target: int, axis: FloatArray, end: int, between: tuple[int, int]) -> float:
        """Where one row of :meth:`all` is zero: between two points, looked at closer and closer.

        A formula may jump over zero, so a straight line between two points is not enough.
        """
        left, right = between
        for _ in range(ROUNDS):
            if left == right:
                break
            axis = np.linspace(axis[left], axis[right], FINER)
            row = self.row(target, axis, end)
            left, right = next(iter(_changes(row)), (0, 0))
        return float(axis[left]) if left == right else _zero(axis, row, left, right)


def _curve(compiled: Compiled, evaluation: Evaluation, number: int) -> Curve:
    pictured, against = evaluation.model.figures[number], compiled.figures[number]
    statement = pictured.statement
    assert statement.symbol is not None
    assert statement.against is not None
    assert statement.low is not None
    assert statement.high is not None
    low, high = statement.low.si[1], statement.high.si[1]
    axis = low + (high - low) * np.arange(POINTS) / (POINTS - 1)
    axis[-1] = high
    moved = _Axis(compiled, compiled.columns[statement.against.key])
    drawn = moved.all(compiled.variables[statement.symbol.key], axis)
    _check(drawn, f"{shown(statement.symbol.name)} cannot", statement)
    limit: Track | None = None
    meetings: tuple[Meeting, ...] = ()
    if against is not None:
        along = moved.all(against.limit, axis)
        _check(along, "the limit cannot", statement)
        limit = _track(along)
        rows = drawn - along if moved.still(against.limit) else moved.all(against.difference, axis)
        meetings = _meetings(moved, against.difference, axis, rows)
    places = tuple(float(each) for each in axis)
    partial = _partial(compiled, evaluation, moved, compiled.variables[statement.symbol.key], axis)
    return Curve(pictured, places, _track(drawn), limit, meetings, partial)


def _partial(
    compiled: Compiled, evaluation: Evaluation, moved: "_Axis", target: int, axis: FloatArray
) -> str:
    """Why a part of the bands cannot be computed somewhere along the axis."""
    box = compiled.box
    low, nominal, high = box.low.copy(), box.nominal.copy(), box.high.copy()
    low[moved.column], high[moved.column] = axis[0], axis[-1]
    nominal[moved.column] = np.clip(nominal[moved.column], axis[0], axis[-1])
    found = out_of_reach(compiled, evaluation.model, Box(low, nominal, high), [target], None)
    return said(found[target]) if target in found else ""


def _check(values: FloatArray, what: str, statement: FigureStatement) -> None:
    """A line without any value is a slip."""
    if np.isnan(values[0]).all():
        assert statement.low is not None
        assert statement.high is not None
        raise Mistake(
            error(
                "figure-form",
                f"{what} be computed anywhere along this axis",
                statement.low.span.to(statement.high.span),
                help="choose values for which its formula has a value",
            )
        )


def _track(values: FloatArray) -> Track:
    nominal, least, greatest = (
        tuple(None if np.isnan(each) else float(each) for each in row) for row in values
    )
    return Track(nominal, least, greatest)


def _meetings(
    moved: _Axis, difference: int, axis: FloatArray, rows: FloatArray
) -> tuple[Meeting, ...]:
    """Where curve less limit, given in ``rows``, changes its sign, at nominal and both ends."""
    found: list[Meeting] = []
    for end, name in enumerate(_ENDS):
        row = rows[end]
        if np.isnan(row).all() or (end and np.array_equal(row, rows[0], equal_nan=True)):
            continue  # nothing else varies
        places = tuple(moved.meeting(difference, axis, end, each) for each in _changes(row))
        side = "" if places else ("above" if np.nanmin(row) > 0.0 else "below")
        found.append(Meeting(name, places, side))
    return tuple(found)


def _changes(row: FloatArray) -> list[tuple[int, int]]:
    """Neighbours between which a sign changes; the same place twice where it is zero."""
    found = [(at, at) for at in np.flatnonzero(row == 0.0)]
    with np.errstate(invalid="ignore"):
        found += [(at, at + 1) for at in np.flatnonzero(row[:-1] * row[1:] < 0.0)]
    return sorted((int(left), int(right)) for left, right in found)


def _zero(axis: FloatArray, row: FloatArray, left: int, right: int) -> float:
    """Where the straight line between two neighbours is zero."""
    if left == right:
        return float(axis[left])
    share = row[left] / (row[left] - row[right])
    return float(axis[left] + share * (axis[right] - axis[left]))


# --- sensitivities -----------------------------------------------------------------------------


def _drives(compiled: Compiled, pictured: Pictured) -> Drives:
    """Each input alone at its least and greatest value."""
    assert pictured.statement.symbol is not None
    target, box = compiled.variables[pictured.statement.symbol.key], compiled.box
    rests = reached(compiled.tape, target)
    moving = [
        (key, column)
        for key, column in compiled.columns.items()
        if column in rests and box.low[column] < box.high[column]
    ]
    values = _moved_alone(compiled, target, box, [column for _, column in moving])
    changes = [_change(each - values[0]) for each in values[1:]]
    rows = [
        Drive(key, float(box.low[column]), float(box.high[column]),
              changes[2 * at], changes[2 * at + 1])
        for at, (key, column) in enumerate(moving)
    ]  # fmt: skip
    rows.sort(key=_size, reverse=True)
    return Drives(pictured, float(values[0]), tuple(rows))


def _moved_alone(compiled: Compiled, target: int, box: Box, columns: Sequence[int]) -> FloatArray:
    """The target at nominal, then for each column at its least and at its greatest value."""
    program = plain(compiled.tape, (target,))
    points = [box.nominal]
    for column in columns:
        for end in (box.low, box.high):
            moved = box.nominal.copy()
            moved[column] = end[column]
            points.append(moved)
    found: FloatArray = program.evaluate(np.stack(points, axis=1))[program.row[target]]
    return found


def _change(value: float) -> float | None:
    return float(value) if np.isfinite(value) else None


def _size(row: Drive) -> float:
    """The larger change; what cannot be computed comes first."""
    return max(float("inf") if each is None else abs(each) for each in (row.low, row.high))
