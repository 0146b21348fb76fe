"""What charts share: axes with round numbers, and names that keep apart."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

from calcdoc.page.marks import FINE, Anchor, Drawing, Frame, Label, Run, extent, number, words

NARROW: Final = 1e-3
"""An axis is no shorter than this share of its numbers, which have six digits."""


def numbers(values: Sequence[float | None]) -> tuple[float, ...]:
    """Values of the record; NaN where there is none."""
    return tuple(math.nan if each is None else each for each in values)


def padded(values: Sequence[float], share: float) -> tuple[float, float]:
    """An axis that holds all values with a little room."""
    known = [each for each in values if not math.isnan(each)]
    low, high = min(known), max(known)
    size = max(abs(low), abs(high)) or 1.0
    middle, half = (low + high) / 2, max(high - low, NARROW * size) / 2
    return middle - half * (1 + 2 * share), middle + half * (1 + 2 * share)


def gutter(marks: tuple[float, ...]) -> float:
    """Room for the numbers at the left."""
    return max([40.0, *(12 + extent(words(number(at)), FINE) for at in marks)])


def scales(drawn: Drawing) -> None:
    """Numbers at the axes."""
    frame = drawn.frame
    for at in frame.ticks_x:
        label = Label(at, frame.y[0], words(number(at)), "middle", up=-11.0, size=FINE)
        drawn.labels.append(label)
    for at in frame.ticks_y:
        label = Label(frame.x[0], at, words(number(at)), "end", right=-5.5, up=-2.6, size=FINE)
        drawn.labels.append(label)


def titles(drawn: Drawing, x: tuple[Run, ...], y: tuple[Run, ...] = ()) -> None:
    """What stands along the axes: below at the right end, above at the left end."""
    frame = drawn.frame
    drawn.labels.append(Label(frame.x[1], frame.y[0], x, "end", up=-23.0))
    if y:
        left = 4.0 - frame.left
        drawn.labels.append(Label(frame.x[0], frame.y[1], y, "start", right=left, up=9.0))


def beside(frame: Frame, at: float, width: float) -> Anchor:
    """A label above a place stays over the axes."""
    left, whole = frame.points_x(at), frame.points_x(frame.x[1])
    if left < width / 2:
        return "start"
    return "end" if left > whole - width / 2 else "middle"


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
