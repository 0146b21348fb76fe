"""A drawing as plain data: strokes, areas, bars and labels, in the numbers of its axes.

``calcdoc.page.charts`` says what is drawn, ``calcdoc.page.plot`` draws it. Sizes are in points.
"""

import math
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


def ticks(low: float, high: float, most: int) -> tuple[float, ...]:
    """Round numbers within an axis, at most so many: steps of 1, 2 or 5 times a power of ten."""
    step = 10.0 ** math.floor(math.log10((high - low) / most))
    for factor in (1, 2, 5, 10, 20):
        wide = step * factor
        first, last = math.ceil(low / wide - 1e-9), math.floor(high / wide + 1e-9)
        if last - first + 1 <= most:
            break
    return tuple(float(f"{at * wide:.12g}") for at in range(first, last + 1))


def apart(wanted: list[float], room: float) -> list[float]:
    """Places as near as may be to the wanted ones, each ``room`` from the next, order kept."""
    order = sorted(range(len(wanted)), key=wanted.__getitem__)
    groups: list[tuple[float, list[int]]] = []  # centre, members
    for at in order:
        groups.append((wanted[at], [at]))
        while len(groups) > 1 and _touch(groups[-2], groups[-1], room):
            (_, lower), (_, upper) = groups[-2], groups[-1]
            both = [*lower, *upper]
            groups[-2:] = [(sum(wanted[each] for each in both) / len(both), both)]
    found = [0.0] * len(wanted)
    for centre, members in groups:
        for place, at in enumerate(members):
            found[at] = centre + (place - (len(members) - 1) / 2) * room
    return found


def _touch(lower: tuple[float, list[int]], upper: tuple[float, list[int]], room: float) -> bool:
    reach = (len(lower[1]) + len(upper[1])) / 2 * room
    return upper[0] - lower[0] < reach


@dataclass(frozen=True, slots=True)
class Place:
    """Where the name of an upright rule stands: its row, and on which side of the rule."""

    row: int
    anchor: Anchor
    right: float


SIDES: Final = (Place(0, "middle", 0.0), Place(0, "end", -3.0), Place(0, "start", 3.0))
GAP: Final = 6.0
"""Between two names in a row."""
ROWS: Final = 6


def spread_out(rules: list[tuple[float, float]], least: float, most: float) -> list[Place]:
    """Places for the names of upright rules that touch neither each other nor a rule.

    Args:
        rules: Where each rule stands, in points from left to right, and how wide its name is.
        least: The left end of the paper.
        most: The right end.

    Returns:
        A place for each, in as few rows as it takes; each in a row of its own when none fits.
    """
    for rows in range(1, ROWS + 1):
        found = _fitted(rules, least, most, rows, [])
        if found is not None:
            return found
    return [Place(at, "middle", 0.0) for at in range(len(rules))]


def _fitted(
    rules: list[tuple[float, float]], least: float, most: float, rows: int, placed: list[Place]
) -> list[Place] | None:
    if len(placed) == len(rules):
        return placed
    at = len(placed)
    for row in range(rows):
        for side in SIDES:
            place = Place(row, side.anchor, side.right)
            left, right = _reach(rules[at], place)
            if left < least or right > most:
                continue
            if all(_clear(rules[n], each, rules[at], place) for n, each in enumerate(placed)):
                found = _fitted(rules, least, most, rows, [*placed, place])
                if found is not None:
                    return found
    return None


def _reach(rule: tuple[float, float], place: Place) -> tuple[float, float]:
    """The left and the right end of a name."""
    at, width = rule
    left = at + place.right - {"start": 0.0, "middle": 0.5, "end": 1.0}[place.anchor] * width
    return left, left + width


def _clear(
    first: tuple[float, float], one: Place, second: tuple[float, float], other: Place
) -> bool:
    """Whether two names stand apart, and neither rule runs through the other's name."""
    (left, right), (start, end) = _reach(first, one), _reach(second, other)
    if one.row == other.row and left < end + GAP and start < right + GAP:
        return False
    if one.row > other.row and start - 2 < first[0] < end + 2:
        return False
    return not (other.row > one.row and left - 2 < second[0] < right + 2)
