"""Figures of the record as drawings; those made of bars stand in ``calcdoc.page.bars``.

Ink, one accent and its tint; what must be told apart differs in dash, hatching or fullness too, and
is named beside it, so that no key is needed and the picture reads in grey.
"""

import math
from collections.abc import Sequence
from typing import Final

from calcdoc.page.axes import (
    apart,
    beside,
    gutter,
    numbers,
    padded,
    scales,
    spread_out,
    ticks,
    titles,
)
from calcdoc.page.bars import margins, sensitivities
from calcdoc.page.marks import (
    INK,
    SEA,
    SOFT,
    WIDTH,
    Area,
    Drawing,
    Frame,
    Label,
    Ring,
    Run,
    Stroke,
    extent,
    formula_runs,
    per_unit,
    words,
)
from calcdoc.records.figure_words import beyond
from calcdoc.records.pictures import picture
from calcdoc.records.record import AnyFigure, Curve, Margins, Sensitivities, Spread
from calcdoc.records.wording import typeset
from calcdoc.text.formula import parse_text

_DASHES: Final = (5.0, 2.5)
_DOTS: Final = (1.2, 2.2)
_ROW: Final = 10.0
"""Height of a row of labels."""
_ROWS: Final = 40
"""Rows of bars that a sheet holds."""
_LONGEST: Final = 62.0
"""Points that a limit may take beside its line."""


def drawings(figure: AnyFigure) -> tuple[Drawing, ...]:
    """The drawing of a figure; rows that no sheet could hold go on in further ones."""
    match figure:
        case Curve():
            return (_curve(figure),)
        case Spread():
            return (_spread(figure),)
        case Sensitivities():
            return (sensitivities(figure),)
        case Margins(rows=rows):
            parts = range(0, len(rows), _ROWS)
            return tuple(margins(rows, rows[at : at + _ROWS]) for at in parts)


# --- curves ------------------------------------------------------------------------------------


def _curve(figure: Curve) -> Drawing:
    axis = figure.axis
    nominal, least, greatest = (
        numbers(each) for each in (figure.nominal, figure.least, figure.greatest)
    )
    limit = _along(figure.limit, len(axis))
    band = (numbers(figure.limit_least), numbers(figure.limit_greatest))
    x = (axis[0], axis[-1])
    y = padded((*nominal, *least, *greatest, *limit, *band[0], *band[1]), 0.06)
    scale = ticks(*y, 6)
    frame = Frame(WIDTH, 190, gutter(scale), 96, 28, 24, x, y, ticks(*x, 8), scale)
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
    scales(drawn)
    titles(drawn, per_unit(figure.against, figure.against_unit),
            per_unit(figure.symbol, figure.unit))  # fmt: skip
    return drawn


def _along(limit: Sequence[float | None], count: int) -> tuple[float, ...]:
    values = numbers(limit)
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
    anchor = beside(drawn.frame, at, extent(text))
    drawn.labels.append(Label(at, high, text, anchor, up=3.0, ink=SOFT))


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
    named_rows = [each for each in named_rows if not all(map(math.isnan, each[1]))]
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
    limits = [each.value for each in figure.limits if not beyond(figure, each)]
    x = padded((figure.low, figure.high, figure.least, figure.greatest, *limits), 0.03)
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
    scales(drawn)
    titles(drawn, per_unit(figure.symbol, figure.unit))
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
        if beyond(figure, each):
            continue
        text = words(f"limit {each.criterion} {typeset(each.text)}".replace("  ", " "))
        found.append((each.value, text, INK, _DASHES))
    return sorted(found, key=lambda mark: mark[0])
