"""Figures made of rows of bars: sensitivities and margins."""

from collections.abc import Sequence
from typing import Final

from calcdoc.page.axes import beside, padded, scales, ticks, titles
from calcdoc.page.marks import (
    BAD,
    INK,
    PAPER,
    SEA,
    SIZE,
    SOFT,
    TINT,
    WIDTH,
    Bar,
    Drawing,
    Frame,
    Label,
    Run,
    Stroke,
    extent,
    named,
    per_unit,
    words,
)
from calcdoc.records.record import MarginRow, Sensitivities
from calcdoc.records.wording import typeset

_FAILS: Final = "fail"
_LOOKS: Final = {"pass": (TINT, SEA, ""), _FAILS: (PAPER, BAD, "/////")}
"""Fill, ink and hatching of a margin; what is not decided is left open."""
_NAME: Final = 100.0
_NUMBER: Final = 84.0
"""Points that a name and a number may take."""
_MOST: Final = 106.0
"""Per cent: longer bars are cut, their number stands beside them."""


def sensitivities(figure: Sensitivities) -> Drawing:
    """Two bars for each input: its change at the least and at the greatest value."""
    rows = figure.rows
    changes = [each for row in rows for each in (row.low, row.high) if each is not None]
    x = padded((0.0, *changes), 0.04)
    left = _gutter([named(each.symbol) for each in rows])
    texts = (
        ("open: at least", *(each.low_text for each in rows)),
        ("full: at greatest", *(each.high_text for each in rows)),
    )
    wide = [_column(66.0, column) for column in texts]
    columns = (wide[0] + 4, wide[0] + wide[1] + 4)
    drawn = Drawing(_listed(len(rows), x, left=left, right=columns[1] + 2))
    for at, row in enumerate(rows):
        middle = len(rows) - at - 0.5
        for change, bottom, fill in ((row.low, 0.03, PAPER), (row.high, -0.3, SEA)):
            if change:
                ends = sorted((0.0, change))
                bar = Bar(ends[0], ends[1], middle + bottom, middle + bottom + 0.27, fill)
                drawn.marks.append(bar)
        drawn.labels.append(_name(x[0], middle, named(row.symbol)))
    for column, right in zip(texts, columns, strict=True):
        head, *values = map(words, column)
        top = drawn.frame.y[1]
        drawn.labels.append(Label(x[1], top, head, "end", right=right, up=5.0, ink=SOFT))
        drawn.labels += [
            Label(x[1], top - at - 0.5, text, "end", right=right, up=-2.7)
            for at, text in enumerate(values)
        ]
    _zero(drawn, len(rows))
    scales(drawn)
    titles(drawn, (Run("change of "), *per_unit(figure.symbol, figure.unit)))
    return drawn


def _listed(count: int, x: tuple[float, float], *, left: float, right: float) -> Frame:
    """A frame for rows of bars with words on both sides."""
    height = 15.0 * count + 48
    return Frame(WIDTH, height, left, right, 28, 20, x, (0.0, float(count)), ticks(*x, 5))


def _gutter(names: Sequence[tuple[Run, ...]]) -> float:
    """Room for the names at the left."""
    return 16 + min(_NAME, max(extent(each) for each in names))


def _column(least: float, texts: Sequence[str]) -> float:
    """Room for a column of numbers."""
    return max(least, *(6 + min(_NUMBER, extent(words(each))) for each in texts))


def _name(x: float, y: float, runs: tuple[Run, ...]) -> Label:
    """The name of a row; a long one is set smaller."""
    size = SIZE * min(1.0, _NAME / extent(runs))
    return Label(x, y, runs, "end", right=-6.0, up=-2.7, size=round(size, 2))


def _zero(drawn: Drawing, count: int) -> None:
    drawn.marks.append(Stroke((0.0, 0.0), (0.0, float(count)), INK, 0.7))


def margins(every: Sequence[MarginRow], rows: Sequence[MarginRow]) -> Drawing:
    """Some rows, on the scale of all."""
    shares = [100 * each.margin for each in every if each.margin is not None]
    low, high = min([0.0, *shares]), max([0.0, *shares]) or 10.0
    x = (max(1.06 * low, -_MOST), min(1.06 * high, _MOST))
    left = _gutter([words(each.id) for each in every])
    wide = _column(46.0, [typeset(each.margin_text) for each in every])
    drawn = Drawing(_listed(len(rows), x, left=left, right=wide + 78))
    for at, row in enumerate(rows):
        middle = len(rows) - at - 0.5
        if row.margin is not None:
            ends = sorted((0.0, min(max(100 * row.margin, 2 * x[0]), 2 * x[1])))
            fill, ink, hatch = _LOOKS.get(row.verdict, (PAPER, SEA, ""))
            bar = Bar(ends[0], ends[1], middle - 0.28, middle + 0.28, fill, ink, hatch)
            drawn.marks.append(bar)
        ink = BAD if row.verdict == _FAILS else INK
        text = typeset(row.margin_text)
        drawn.labels += [
            _name(x[0], middle, words(row.id)),
            Label(x[1], middle, words(text), "end", right=wide + 6, up=-2.7),
            Label(x[1], middle, words(row.verdict), right=wide + 14, up=-2.7, ink=ink),
        ]
    _zero(drawn, len(rows))
    top = drawn.frame.y[1]
    side = beside(drawn.frame, 0.0, 18.0)
    drawn.labels.append(Label(0.0, top, words("limit"), side, up=5.0, ink=SOFT))
    scales(drawn)
    titles(drawn, words("margin as a share of the limit/%"))
    return drawn
