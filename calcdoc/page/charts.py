"""Figures of the record as drawings: curves, spreads, sensitivities, margins.

Ink, one accent and its tint; what must be told apart differs in dash, hatching or fullness too, and
is named beside it, so that no key is needed and the picture reads in grey.
"""

import math
from collections.abc import Sequence
from typing import Final

from calcdoc.page.marks import (
    BAD,
    FINE,
    INK,
    PAPER,
    SEA,
    SOFT,
    TINT,
    Anchor,
    Area,
    Bar,
    Drawing,
    Frame,
    Label,
    Ring,
    Run,
    Stroke,
    apart,
    extent,
    formula_runs,
    named,
    number,
    per_unit,
    spread_out,
    ticks,
    words,
)
from calcdoc.records.pictures import picture
from calcdoc.records.record import AnyFigure, Curve, Margins, Sensitivities, Spread
from calcdoc.records.wording import typeset
from calcdoc.text.formula import parse_text

WIDTH: Final = 372.0
_DASHES: Final = (5.0, 2.5)
_DOTS: Final = (1.2, 2.2)
_ROW: Final = 10.0
"""Height of a row of labels."""
_FAILS: Final = "fail"
_PASSES: Final = "pass"
_LONGEST: Final = 62.0
"""Points that a limit may take beside its line."""
_MOST: Final = 106.0
"""Per cent: longer bars are cut, their number stands beside them."""


def drawing(figure: AnyFigure) -> Drawing:
    """The drawing of a figure."""
    match figure:
        case Curve():
            return _curve(figure)
        case Spread():
            return _spread(figure)
        case Sensitivities():
            return _sensitivities(figure)
        case Margins():
            return _margins(figure)


def _numbers(values: Sequence[float | None]) -> tuple[float, ...]:
    return tuple(math.nan if each is None else each for each in values)


def _padded(values: Sequence[float], share: float) -> tuple[float, float]:
    """An axis that holds all values with a little room."""
    known = [each for each in values if not math.isnan(each)]
    low, high = min(known), max(known)
    room = (high - low or abs(high) or 1.0) * share
    return low - room, high + room


def _scales(drawn: Drawing) -> None:
    """Numbers at the axes."""
    frame = drawn.frame
    for at in frame.ticks_x:
        label = Label(at, frame.y[0], words(number(at)), "middle", up=-11.0, size=FINE)
        drawn.labels.append(label)
    for at in frame.ticks_y:
        label = Label(frame.x[0], at, words(number(at)), "end", right=-5.5, up=-2.6, size=FINE)
        drawn.labels.append(label)


def _titles(drawn: Drawing, x: tuple[Run, ...], y: tuple[Run, ...] = ()) -> None:
    """What stands along the axes: below at the right end, above at the left end."""
    frame = drawn.frame
    drawn.labels.append(Label(frame.x[1], frame.y[0], x, "end", up=-23.0))
    if y:
        left = 4.0 - frame.left
        drawn.labels.append(Label(frame.x[0], frame.y[1], y, "start", right=left, up=9.0))


# --- curves ------------------------------------------------------------------------------------


def _curve(figure: Curve) -> Drawing:
    axis = figure.axis
    nominal, least, greatest = (
        _numbers(each) for each in (figure.nominal, figure.least, figure.greatest)
    )
    limit = _along(figure.limit, len(axis))
    band = (_numbers(figure.limit_least), _numbers(figure.limit_greatest))
    x = (axis[0], axis[-1])
    y = _padded((*nominal, *least, *greatest, *limit, *band[0], *band[1]), 0.06)
    frame = Frame(WIDTH, 190, 40, 96, 28, 24, x, y, ticks(*x, 8), ticks(*y, 6))
    drawn = Drawing(frame)
    varies = figure.least != figure.greatest
    if varies:
        drawn.marks.append(Area(axis, least, greatest))
        drawn.marks += [Stroke(axis, each, SEA, 0.6) for each in (least, greatest)]
    for each in band:
        if each:
            drawn.marks.append(Stroke(axis, each, INK, 0.5, _DOTS))
    if limit:
        drawn.marks.append(Stroke(axis, limit, INK, 0.9, _DASHES))
    drawn.marks.append(Stroke(axis, nominal, SEA, 1.6))
    _at_nominal(figure, drawn)
    _meetings(figure, drawn, limit)
    _ends(figure, drawn, (nominal, least, greatest, limit), varies=varies)
    _scales(drawn)
    _titles(drawn, per_unit(figure.against, figure.against_unit),
            per_unit(figure.symbol, figure.unit))  # fmt: skip
    return drawn


def _along(limit: Sequence[float | None], count: int) -> tuple[float, ...]:
    values = _numbers(limit)
    return values * count if len(values) == 1 else values


def _at_nominal(figure: Curve, drawn: Drawing) -> None:
    """The nominal value of the input: an upright rule, and a dot on the curve."""
    if figure.at_nominal is None:
        return
    at, value = figure.at_nominal
    low, high = drawn.frame.y
    drawn.marks.append(Stroke((at, at), (low, high), SOFT, 0.5))
    drawn.rings.append(Ring(at, value, SEA, SEA))
    text = words(f"nominal {typeset(figure.at_nominal_text)}")
    anchor = _beside(drawn.frame, at, extent(text))
    drawn.labels.append(Label(at, high, text, anchor, up=3.0, ink=SOFT))


def _beside(frame: Frame, at: float, width: float) -> Anchor:
    """A label above a place stays over the axes."""
    left, whole = frame.points_x(at), frame.points_x(frame.x[1])
    if left < width / 2:
        return "start"
    return "end" if left > whole - width / 2 else "middle"


def _meetings(figure: Curve, drawn: Drawing, limit: tuple[float, ...]) -> None:
    """Rings where the curve, or an edge of its band, meets a limit."""
    if figure.limit_least:
        return  # curve and limit move together: the picture shows each alone
    for each in figure.meetings:
        drawn.rings += [Ring(at, _between(figure.axis, limit, at)) for at in each.at]


def _between(axis: tuple[float, ...], row: tuple[float, ...], at: float) -> float:
    """The row at a place between two points."""
    right = next(n for n, each in enumerate(axis) if each >= at or n == len(axis) - 1)
    left = max(right - 1, 0)
    if left == right:
        return row[right]
    share = (at - axis[left]) / (axis[right] - axis[left])
    return row[left] + share * (row[right] - row[left])


def _ends(
    figure: Curve, drawn: Drawing, rows: tuple[tuple[float, ...], ...], *, varies: bool
) -> None:
    """Each line is named at its right end."""
    nominal, least, greatest, limit = rows
    named_rows = [(words("nominal"), nominal)]
    if varies:
        named_rows += [(words("least"), least), (words("greatest"), greatest)]
    if limit:
        text = (Run("limit "), *_formula(figure.limit_text))
        named_rows.append((text, limit))
    frame = drawn.frame
    scale = (frame.height - frame.bottom - frame.top) / (frame.y[1] - frame.y[0])
    last = [_last(row) for _, row in named_rows]
    places = apart([value * scale for value in last], _ROW)
    for (text, _), value, place in zip(named_rows, last, places, strict=True):
        drawn.labels.append(
            Label(frame.x[1], value, text, right=5.0, up=place - value * scale - 2.7)
        )


def _last(row: tuple[float, ...]) -> float:
    return next(each for each in reversed(row) if not math.isnan(each))


def _formula(text: str) -> tuple[Run, ...]:
    """A limit on one line; what is too long for its place is named in the text."""
    shown = tuple(formula_runs(picture(parse_text(text), flat=True)))
    return shown if extent(shown) < _LONGEST else ()


# --- spreads -----------------------------------------------------------------------------------


def _spread(figure: Spread) -> Drawing:
    counts, total = figure.counts, sum(figure.counts)
    limits = [each.value for each in figure.limits]
    x = _padded((figure.low, figure.high, figure.least, figure.greatest, *limits), 0.03)
    shares = [100 * each / total for each in counts]
    y = (0.0, max(shares) * 1.08)
    marks = _marks(figure)
    flat = Frame(WIDTH, 1, 40, 20, 0, 0, x, y)
    places = spread_out([(flat.points_x(at), extent(text)) for at, text, _, _ in marks],
                        -36.0, WIDTH - 44.0)  # fmt: skip
    top = 18 + _ROW * (max(each.row for each in places) + 1)
    frame = Frame(WIDTH, 132 + top, 40, 20, 28, top, x, y, ticks(*x, 8), ticks(*y, 4))
    drawn = Drawing(frame)
    wide = (figure.high - figure.low) / len(counts) or (x[1] - x[0]) / 200
    edges = tuple(figure.low + (at + 1) // 2 * wide for at in range(1, 2 * len(shares) + 1))
    edges = (figure.low, *edges[:-1])
    steps = tuple(share for share in shares for _ in range(2))
    drawn.marks.append(Area(edges, (0.0,) * len(edges), steps))
    outline = (0.0, *steps, 0.0)
    drawn.marks.append(Stroke((edges[0], *edges, edges[-1]), outline, SEA, 0.7))
    for (at, text, ink, dashes), place in zip(marks, places, strict=True):
        up = 4 + _ROW * place.row
        height = y[1] + (up - 1.5) * (y[1] - y[0]) / (frame.height - frame.bottom - frame.top)
        width = 1.0 if ink == INK else 0.7
        drawn.marks.append(Stroke((at, at), (0.0, height), ink, width, dashes, over=True))
        drawn.labels.append(Label(at, y[1], text, place.anchor, place.right, up, ink=ink))
    _scales(drawn)
    _titles(drawn, per_unit(figure.symbol, figure.unit))
    above = top - 9
    drawn.labels.append(Label(x[0], y[1], words("share of draws/%"), right=-36.0, up=above))
    return drawn


Mark = tuple[float, tuple[Run, ...], str, tuple[float, ...]]


def _marks(figure: Spread) -> list[Mark]:
    """Upright rules with their names, from left to right."""
    found: list[Mark] = [
        (figure.nominal, words(f"parts nominal {typeset(figure.nominal_text)}"), SOFT, ()),
        (figure.least, words(f"least {typeset(figure.least_text)}"), SOFT, _DOTS),
        (figure.greatest, words(f"greatest {typeset(figure.greatest_text)}"), SOFT, _DOTS),
    ]
    for each in figure.limits:
        text = words(f"limit {each.criterion} {typeset(each.text)}".replace("  ", " "))
        found.append((each.value, text, INK, _DASHES))
    return sorted(found, key=lambda mark: mark[0])


# --- sensitivities and margins -----------------------------------------------------------------


def _sensitivities(figure: Sensitivities) -> Drawing:
    rows = figure.rows
    changes = [each for row in rows for each in (row.low, row.high) if each is not None]
    x = _padded((0.0, *changes), 0.04)
    left = 16 + max(extent(named(each.symbol)) for each in rows)
    frame = _listed(len(rows), x, left=left, right=142)
    drawn = Drawing(frame)
    for at, row in enumerate(rows):
        middle = len(rows) - at - 0.5
        for change, bottom, fill in ((row.low, 0.03, PAPER), (row.high, -0.3, SEA)):
            if change:
                ends = sorted((0.0, change))
                bar = Bar(ends[0], ends[1], middle + bottom, middle + bottom + 0.27, fill)
                drawn.marks.append(bar)
        drawn.labels.append(Label(x[0], middle, named(row.symbol), "end", right=-6.0, up=-2.7))
        for text, right in ((row.low_text, 68.0), (row.high_text, 134.0)):
            drawn.labels.append(Label(x[1], middle, words(text), "end", right=right, up=-2.7))
    _zero(drawn, len(rows))
    for text, right in (("open: at least", 68.0), ("full: at greatest", 134.0)):
        drawn.labels.append(
            Label(x[1], frame.y[1], words(text), "end", right=right, up=5.0, ink=SOFT)
        )
    _scales(drawn)
    title = per_unit(figure.symbol, figure.unit)
    _titles(drawn, (Run("change of "), *title))
    return drawn


def _listed(count: int, x: tuple[float, float], *, left: float, right: float) -> Frame:
    """A frame for rows of bars with words on both sides."""
    height = 15.0 * count + 48
    return Frame(WIDTH, height, left, right, 28, 20, x, (0.0, float(count)), ticks(*x, 5))


def _zero(drawn: Drawing, count: int) -> None:
    drawn.marks.append(Stroke((0.0, 0.0), (0.0, float(count)), INK, 0.7))


def _margins(figure: Margins) -> Drawing:
    rows = figure.rows
    shares = [100 * each.margin for each in rows if each.margin is not None]
    low, high = min([0.0, *shares]), max([0.0, *shares]) or 10.0
    x = (max(1.06 * low, -_MOST), min(1.06 * high, _MOST))
    left = 16 + max(extent(words(each.id)) for each in rows)
    frame = _listed(len(rows), x, left=left, right=124)
    drawn = Drawing(frame)
    for at, row in enumerate(rows):
        middle = len(rows) - at - 0.5
        fails = row.verdict == _FAILS
        if row.margin is not None:
            share = 100 * row.margin
            ends = sorted((0.0, min(max(share, 2 * x[0]), 2 * x[1])))
            fill, ink, hatch = (PAPER, BAD, "/////") if fails else (TINT, SEA, "")
            fill = TINT if row.verdict == _PASSES else PAPER
            low_edge, high_edge = middle - 0.28, middle + 0.28
            drawn.marks.append(Bar(ends[0], ends[1], low_edge, high_edge, fill, ink, hatch))
        drawn.labels.append(Label(x[0], middle, words(row.id), "end", right=-6.0, up=-2.7))
        text = typeset(row.margin_text)
        drawn.labels.append(Label(x[1], middle, words(text), "end", right=52.0, up=-2.7))
        ink = BAD if fails else INK
        drawn.labels.append(Label(x[1], middle, words(row.verdict), right=60.0, up=-2.7, ink=ink))
    _zero(drawn, len(rows))
    drawn.labels.append(
        Label(0.0, frame.y[1], words("limit"), _beside(frame, 0.0, 18.0), up=5.0, ink=SOFT)
    )
    _scales(drawn)
    _titles(drawn, words("margin as a share of the limit/%"))
    return drawn
