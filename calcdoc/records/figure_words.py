"""What figures show, in sentences: for those who cannot see them, and for searching."""

from collections.abc import Sequence
from typing import TypeVar

from msgspec.structs import replace

from calcdoc.records import record as r
from calcdoc.records.rounding import significant, trimmed
from calcdoc.records.shapes import NO_BREAK
from calcdoc.records.wording import counted, ranges, typeset

_DIGITS = 4
_FEW = 3
_FAR = 6
"""Widths of a spread."""
Some = TypeVar("Some", r.Curve, r.Spread, r.Sensitivities, r.Margins)


def said(figure: Some, *, in_cases: bool) -> Some:
    """The figure with its text alternative and its notes.

    Args:
        figure: With its numbers.
        in_cases: Whether the design has modes or faults, of which figures show none.
    """
    text: list[str]
    notes: list[str] = []
    match figure:
        case r.Curve():
            text, notes = _curve(figure), _curve_notes(figure)
        case r.Spread():
            text, notes = _spread(figure), _assumed(figure)
        case r.Sensitivities():
            text, notes = _sensitivities(figure), _left_out(figure)
        case r.Margins():
            text = _margins(figure)
    if in_cases and not isinstance(figure, r.Margins):
        notes.append("The normal case is shown, no mode or fault.")
    return replace(figure, alternative=" ".join((*text, *notes)), notes=tuple(notes))


def _value(number: float | None, unit: str, digits: int = _DIGITS) -> str:
    if number is None:
        return "no value"
    text = typeset(significant(number, digits))
    return f"{text}{NO_BREAK}{unit}" if unit else text


def _place(number: float, unit: str) -> str:
    """A place on an axis, without zeros that say nothing."""
    text = typeset(trimmed(number, _DIGITS))
    return f"{text}{NO_BREAK}{unit}" if unit else text


def _list(parts: Sequence[str]) -> str:
    if len(parts) < 2:  # noqa: PLR2004
        return "".join(parts)
    return f"{', '.join(parts[:-1])} and {parts[-1]}"


# --- curves ------------------------------------------------------------------------------------


def _curve(figure: r.Curve) -> list[str]:
    low, high = (_place(end, figure.against_unit) for end in (figure.axis[0], figure.axis[-1]))
    text = [f"Curve of {figure.symbol} against {figure.against} from {low} to {high}."]
    if figure.least != figure.greatest:
        text.append("A band around it reaches from the least to the greatest value over all else.")
    text.append(_course(figure))
    if figure.at_nominal:
        _, value = figure.at_nominal
        text.append(
            f"The nominal {figure.against} of {typeset(figure.at_nominal_text)} is marked:"
            f" {figure.symbol} is {_value(value, figure.unit)} there."
        )
    return text


def _curve_notes(figure: r.Curve) -> list[str]:
    return [*_meeting(figure), *_gaps(figure), *_partial(figure)]


def _partial(figure: r.Curve) -> list[str]:
    """A band of which a part cannot be computed is narrower than it seems."""
    if not figure.partial:
        return []
    why = wording_of(figure.partial)
    said = f"For some values within the bands {figure.symbol} cannot be computed ({why})"
    return [f"{said}: the band is that of the others."]


def wording_of(reason: str) -> str:
    """A reason without the marks of a formula."""
    return ranges(reason).replace("`", "")


def _course(figure: r.Curve) -> str:
    """Both ends of the curve, and the turn between them when there is one."""
    known = [at for at, each in enumerate(figure.nominal) if each is not None]
    values = [each for each in figure.nominal if each is not None]
    first, last = (_point(figure, at) for at in (known[0], known[-1]))
    verb = "goes" if values[0] == values[-1] else "rises" if values[-1] > values[0] else "falls"
    text = f"At nominal {figure.symbol} {verb} from {first} to {last}"
    for name, turn in (("least", min(values)), ("greatest", max(values))):
        if turn not in (values[0], values[-1]):
            text += f"; between them it is {name}, {_point(figure, figure.nominal.index(turn))}"
    return f"{text}."


def _point(figure: r.Curve, at: int) -> str:
    band = ""
    ends = (figure.least[at], figure.greatest[at])
    if None not in ends and ends[0] != ends[1]:
        least, greatest = (_value(row[at], figure.unit) for row in (figure.least, figure.greatest))
        band = f" (least {least}, greatest {greatest})"
    place = _place(figure.axis[at], figure.against_unit)
    return f"{_value(figure.nominal[at], figure.unit)}{band} at {place}"


def _gaps(figure: r.Curve) -> list[str]:
    """Where nothing, or no band, can be computed."""
    text = []
    for row, what in ((figure.nominal, figure.symbol), (figure.least, "its band")):
        lost = [at for at, each in enumerate(row) if each is None]
        if lost and row is figure.least:
            lost = [at for at in lost if figure.nominal[at] is not None]
        if lost:
            low, high = (_place(figure.axis[at], figure.against_unit) for at in (lost[0], lost[-1]))
            where = f"at {low}" if len(lost) == 1 else f"between {low} and {high}"
            text.append(f"At {len(lost)} of {len(row)} points {what} cannot be computed, {where}.")
    return text


def _meeting(figure: r.Curve) -> list[str]:
    """Where the curve meets its limit, or on which side of it it stays."""
    limit = typeset(figure.limit_text)
    text = []
    sides = {each.end: each.side for each in figure.meetings}
    known = ", where it can be computed" if None in (*figure.nominal, *figure.least) else ""
    implied = {"above": "greatest", "below": "least"}.get(sides.get("nominal", ""), "")
    for each in figure.meetings:
        if each.end == implied:
            continue
        where = known if each.side else f" at {figure.against} = {_places(figure, each)}"
        verb = f"stays {each.side}" if each.side else "meets"
        if each.end == "nominal":
            text.append(f"At nominal {figure.symbol} {verb} the limit {limit}{where}.")
        elif not figure.limit_least:
            text.append(f"The {each.end} value {verb} the limit{where}.")
        else:
            verb = f"stays {each.side} zero" if each.side else "vanishes"
            text.append(f"Over all bands the {each.end} difference of the two {verb}{where}.")
    return text


def _places(figure: r.Curve, meeting: r.Meeting) -> str:
    places = [_place(at, figure.against_unit) for at in meeting.at[:_FEW]]
    if len(meeting.at) > _FEW:
        places.append(f"{len(meeting.at) - _FEW} more places")
    return _list(places)


# --- spreads -----------------------------------------------------------------------------------


def _spread(figure: r.Spread) -> list[str]:
    unit, difference = figure.unit, "K" if figure.unit == "°C" else figure.unit
    low, high, mean = (_value(each, unit) for each in (figure.low, figure.high, figure.mean))
    text = [
        (
            f"Histogram of {figure.symbol} when parts vary at random: {_count(figure.draws)} draws"
            f" in {len(figure.counts)} bins from {low} to {high}, mean {mean}, standard deviation"
            f" {_value(figure.deviation, difference, _FEW)}."
        ),
        (
            f"Marked are the value with all parts at nominal, {typeset(figure.nominal_text)}, and"
            f" the extremes over the parts, least {typeset(figure.least_text)} and greatest"
            f" {typeset(figure.greatest_text)}."
        ),
    ]
    for each in figure.limits:
        if beyond(figure, each):
            continue
        name = f"The limit of {each.criterion}" if each.criterion else "The limit"
        where = ""
        if figure.low > each.value:
            where = "; all draws lie above it"
        elif figure.high < each.value:
            where = "; all draws lie below it"
        text.append(f"{name} is {typeset(each.text)}{where}.")
    if figure.lost:
        lost = _count(figure.lost)
        text.append(f"{lost} draws could not be computed and are left out.")
    return text


def beyond(figure: r.Spread, limit: r.SpreadLimit) -> bool:
    """Whether a limit is so far away that the spread would shrink to a line beside it."""
    reach = _FAR * (figure.greatest - figure.least)
    return not figure.least - reach <= limit.value <= figure.greatest + reach


def _count(number: int) -> str:
    return typeset(str(number))


def _assumed(figure: r.Spread) -> list[str]:
    notes = [f"{_count(figure.draws)} draws, seed {figure.seed}."]
    if figure.fixed:
        setting = _list([f"{name} {typeset(value)}" for name, value in figure.fixed.items()])
        why = f", as they govern {figure.criterion}" if figure.criterion else ""
        notes.append(f"Conditions and biases are not random; they stand at {setting}{why}.")
    else:
        notes.append("Conditions are not random; they stand at nominal.")
    for each in figure.limits:
        if beyond(figure, each):
            name = f"The limit of {each.criterion}" if each.criterion else "The limit"
            notes.append(f"{name}, {typeset(each.text)}, lies far outside of the picture.")
    if figure.assumed:
        notes.append(f"Distributions assumed to be rectangular: {', '.join(figure.assumed)}.")
    return notes


# --- sensitivities and margins -----------------------------------------------------------------


def _sensitivities(figure: r.Sensitivities) -> list[str]:
    rows = [_drive(each) for each in figure.rows]
    return [
        (
            f"Bars of the change of {figure.symbol} from its nominal value"
            f" {typeset(figure.nominal_text)} when one input alone moves to its least and to its"
            f" greatest value, the largest first. {'; '.join(rows)}."
        )
    ]


def _drive(row: r.Drive) -> str:
    return (
        f"{row.symbol} from {typeset(row.at_least)} to {typeset(row.at_greatest)} changes it by"
        f" {row.low_text} to {row.high_text}"
    )


def _left_out(figure: r.Sensitivities) -> list[str]:
    notes = []
    if figure.left_out:
        notes.append(f"{counted(figure.left_out, 'input')} with smaller changes left out.")
    if any(each.symbol.startswith("lookup(") for each in figure.rows):
        notes.append("A table that is read over a range counts as an input of its own.")
    return notes


def _margins(figure: r.Margins) -> list[str]:
    bars = [_row(each) for each in figure.rows if each.margin is not None]
    others = [_row(each) for each in figure.rows if each.margin is None]
    text = []
    if bars:
        text.append(f"Bars of the margin as a share of the limit. {'; '.join(bars)}.")
    if others:
        text.append(f"Without a share, as the limit is zero or a temperature: {'; '.join(others)}.")
    return text


def _row(row: r.MarginRow) -> str:
    return f"{row.id} {typeset(row.margin_text)}, {row.verdict}"
