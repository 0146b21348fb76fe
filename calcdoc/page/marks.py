"""A drawing as plain data: strokes, areas, bars and labels, in the numbers of its axes.

``calcdoc.page.charts`` says what is drawn, ``calcdoc.page.plot`` draws it. Sizes are in points.
"""

from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import Final, Literal

from calcdoc.records.pictures import symbol
from calcdoc.records.rounding import trimmed
from calcdoc.records.shapes import Glyphs, Picture, Script, inside
from calcdoc.records.wording import typeset

INK: Final = "#1b1f24"
SOFT: Final = "#57606a"
RULE: Final = "#c9cfd4"
SEA: Final = "#0f5f5c"
TINT: Final = "#dbe8e6"
BAD: Final = "#8f2f1b"
PAPER: Final = "#ffffff"
WIDTH: Final = 372.0
"""Of a figure."""
SIZE: Final = 8.0
"""Of labels."""
FINE: Final = 7.4
"""Of the numbers at an axis."""
Anchor = Literal["start", "middle", "end"]


@dataclass(frozen=True, slots=True)
class Run:
    """Characters of one face: serif for symbols, italic for their base, lowered for subscripts."""

    text: str
    serif: bool = False
    italic: bool = False
    low: bool = False


@dataclass(frozen=True, slots=True)
class Label:
    """Words at a place; ``right`` and ``up`` move it by points."""

    x: float
    y: float
    runs: tuple[Run, ...]
    anchor: Anchor = "start"
    right: float = 0.0
    up: float = 0.0
    size: float = SIZE
    ink: str = INK


@dataclass(frozen=True, slots=True)
class Stroke:
    """A line through places; NaN breaks it."""

    x: tuple[float, ...]
    y: tuple[float, ...]
    ink: str = INK
    width: float = 0.7
    dashes: tuple[float, ...] = ()
    over: bool = False
    """Whether it may leave the area of the axes."""


@dataclass(frozen=True, slots=True)
class Area:
    """What lies between two lines."""

    x: tuple[float, ...]
    low: tuple[float, ...]
    high: tuple[float, ...]
    fill: str = TINT


@dataclass(frozen=True, slots=True)
class Bar:
    """A rectangle from ``left`` to ``right`` and ``bottom`` to ``top``."""

    left: float
    right: float
    bottom: float
    top: float
    fill: str = TINT
    ink: str = SEA
    hatch: str = ""


@dataclass(frozen=True, slots=True)
class Ring:
    """A small circle at a place; a full dot when ``fill`` is an ink."""

    x: float
    y: float
    fill: str = PAPER
    ink: str = INK


@dataclass(frozen=True, slots=True)
class Frame:
    """The paper around the axes in points, and the numbers at the ends of the axes."""

    width: float
    height: float
    left: float
    right: float
    bottom: float
    top: float
    x: tuple[float, float]
    y: tuple[float, float]
    ticks_x: tuple[float, ...] = ()
    ticks_y: tuple[float, ...] = ()

    def points_x(self, value: float) -> float:
        """Where a number of the horizontal axis stands, in points from the left end of it."""
        low, high = self.x
        return (value - low) / (high - low) * (self.width - self.left - self.right)


@dataclass(slots=True)
class Drawing:
    """What is drawn, in order."""

    frame: Frame
    marks: list[Stroke | Area | Bar] = field(default_factory=list)
    rings: list[Ring] = field(default_factory=list)
    labels: list[Label] = field(default_factory=list)


def words(text: str) -> tuple[Run, ...]:
    """Words in the sans serif face."""
    return (Run(text),)


def named(name: str) -> tuple[Run, ...]:
    """A symbol: italic base, upright subscript; a table is named in words."""
    if name.startswith("lookup("):
        return words(name.removeprefix("lookup(").strip('")'))
    return tuple(formula_runs(symbol(name)))


def formula_runs(shown: Picture, *, low: bool = False) -> Iterable[Run]:
    """A formula on one line."""
    match shown:
        case Glyphs(text, kind):
            if kind in ("operator", "relation"):
                text = f" {text} "
            yield Run(text, serif=True, italic=kind == "italic", low=low)
        case Script(base, sub, None) if sub is not None:
            yield from formula_runs(base, low=low)
            yield from formula_runs(sub, low=True)
        case _:
            for each in inside(shown):
                yield from formula_runs(each, low=low)


def per_unit(name: str, unit: str) -> tuple[Run, ...]:
    """Quantity divided by unit, as an axis is labelled; a plain number has no unit."""
    if not unit:
        return named(name)
    bracketed = f"({unit})" if set("/·") & set(unit) else unit
    return (*named(name), Run(f"/{bracketed}", serif=True))


def extent(runs: Iterable[Run], size: float = SIZE) -> float:
    """How wide words are at the most, in points: to keep labels apart."""
    return sum(len(run.text) * size * (0.42 if run.low else 0.56) for run in runs)


def number(value: float) -> str:
    """A number at an axis: true minus, thin groups."""
    return typeset(trimmed(value, 6))
