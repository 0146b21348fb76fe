"""A given value: nominal with least and greatest, exactly as the author's digits say.

``230 V``, ``230 V ± 10 %``, ``230 V ± 23 V``, ``10 µF -20 % +50 %``, ``28.5 .. 30.0 .. 31.8 V``,
``-20 .. 45 °C``. Limits are fractions here and are rounded once, when they become floats.
"""

import re
from collections.abc import Iterable
from enum import Enum
from fractions import Fraction
from typing import Final, NoReturn

from calcdoc.frozen import Frozen
from calcdoc.problems import Mistake, error
from calcdoc.source import Span
from calcdoc.text import literal
from calcdoc.text.nodes import Name, Number, Quantity, UnitText
from calcdoc.text.scan import Scanner, shown
from calcdoc.text.unparse import unit_text
from calcdoc.units import ONE, PLAIN, Unit

_SIGN: Final = re.compile(r"[+-]")
_PLUS_MINUS: Final = re.compile(r"±|\+/-")
_SIGNS: Final = re.compile(r"\+[ ]?-")
_RANGE: Final = re.compile(r"\.\.")
_LARGEST: Final = 10**300
_INSTEAD: Final = (
    "write the limits, as in 85 .. 90 .. 95 %",
    "write the limits, as in 0.8 .. 0.9 .. 1.0",
)
MAKEUP_WORD: Final = re.compile(r"(as|bias|each)\b")


class Style(Enum):
    """How the author stated the band; it decides how the record prints it."""

    FIXED = "fixed"
    RELATIVE = "relative"  # ± 10 %
    ABSOLUTE = "absolute"  # ± 23 V
    UNEQUAL = "unequal"  # -20 % +50 %
    LIMITS = "limits"  # three values
    RANGE = "range"  # two values; the nominal is the middle


class Bias(Frozen, frozen=True):
    """A part of a tolerance that is not random: it stands at its worse end in every method."""

    low: Fraction
    high: Fraction
    """Changes of the value, in its unit."""
    text: str
    """As written: ``-12 % .. 0 % (temperature)``."""


class Like(Frozen, frozen=True):
    """Like parts that vary on their own; the symbol means their mean."""

    count: Name | Number
    shared: Fraction
    """The share of the band that they have in common."""


class MakeUp(Frozen, frozen=True):
    """What a tolerance is made of, for parts."""

    shape: str
    """``rectangular``, ``triangular`` or ``normal``."""
    k: Fraction | None
    """How many standard deviations the limits of a normal part stand for."""
    assumed: bool
    """Whether the author left the distribution open."""
    low: Fraction
    high: Fraction
    """The limits of the random part alone, in the unit of the value."""
    biases: tuple[Bias, ...] = ()
    like: Like | None = None


class Given(Frozen, frozen=True):
    """A value with its band, as numbers in ``unit``; always least <= nominal <= greatest."""

    unit: Unit
    nominal: Fraction
    least: Fraction
    greatest: Fraction
    style: Style
    digits: str
    """The nominal as written (for a range: the middle, in plain digits)."""
    spread: tuple[str, ...]
    """The parts of the tolerance as written: ``("10 %",)``, ``("-20 %", "+50 %")``, ..."""
    units: tuple[UnitText, ...]
    """Every unit as written; a joined word may be mistaken for a symbol."""
    span: Span
    makeup: MakeUp | None = None
    """None where only the band is stated: then it is one random part, assumed rectangular."""

    @property
    def parts(self) -> MakeUp:
        """What the tolerance is made of, also when only the band is stated."""
        return self.makeup or MakeUp("rectangular", None, True, self.least, self.greatest)

    @property
    def si(self) -> tuple[float, float, float]:
        """Least, nominal and greatest in the coherent SI unit (kelvin for a temperature)."""
        least, nominal, greatest = (
            float(self.unit.to_si(each)) for each in (self.least, self.nominal, self.greatest)
        )
        return least, nominal, greatest

    @property
    def varies(self) -> bool:
        """Whether the value has a band."""
        return self.least < self.greatest


class Part(Frozen, frozen=True):
    """A signed number, with a unit or without."""

    value: Fraction
    digits: str
    unit: UnitText | None
    span: Span


def given(scanner: Scanner) -> Given:
    """``given = part [".." part [".." part]] | part tolerance``"""
    first = signed(scanner)
    if scanner.take(_RANGE):
        parts = [first, signed(scanner)]
        if scanner.take(_RANGE):
            parts.append(signed(scanner))
        value = _limits(parts)
    else:
        value = _with_tolerance(scanner, first)
    check_size(value, (value.least, value.greatest))
    return value


def check_size(value: Given, ends: Iterable[Fraction]) -> None:
    """Refuse a value that reaches beyond what floats can hold; ``ends`` are in its unit."""
    if any(abs(value.unit.to_si(each)) >= _LARGEST for each in ends):
        raise Mistake(
            error(
                "number-form",
                "this value is too large to compute with",
                value.span,
                help="values stay under a one with 300 zeros in SI units",
            )
        )


def no_makeup(scanner: Scanner) -> None:
    """Refuse a make-up where only a band can stand."""
    if found := scanner.look(MAKEUP_WORD):
        raise Mistake(
            error(
                "tolerance",
                f"`{found.group()}` is stated where the part itself is given",
                scanner.span(*found.span()),
                help="write only the band here",
            )
        )


def signed(scanner: Scanner) -> Part:
    """``part = ["+" | "-"] quantity``"""
    sign = scanner.take(_SIGN)
    if sign is None and not scanner.look(literal.NUMBER):
        scanner.refuse("a value with its unit, as in 230 V")
    scanner.blanks()
    start = sign.start() if sign else scanner.at
    node = literal.quantity(scanner)
    minus = sign is not None and sign.group() == "-"
    unit = node.unit if isinstance(node, Quantity) else None
    value = Fraction(node.digits)
    digits = f"-{node.digits}" if minus else node.digits
    return Part(-value if minus else value, digits, unit, scanner.span(start, scanner.at))


def _unit(part: Part) -> Unit:
    return literal.resolve(part.unit) if part.unit else PLAIN


def _with_tolerance(scanner: Scanner, first: Part) -> Given:
    """``tolerance = ("±" | "+/-") part | sign part sign part``"""
    if found := scanner.look(_SIGNS):
        _refuse(
            f"{shown(found.group())} is no sign of a tolerance",
            scanner.span(*found.span()),
            "write ± or +/-, as in 230 V ± 10 %",
        )
    if found := scanner.take(_PLUS_MINUS):
        part = signed(scanner)
        if part.value <= 0 or scanner.passage.text[found.end() :].lstrip()[:1] in ("+", "-"):
            _refuse(
                "a tolerance after ± is more than zero and has no sign",
                part.span,
                "write ± 10 %, or -20 % +50 % for unequal parts",
            )
        change = change_of(first, part)
        return _value(
            first,
            (first.value - change, first.value + change),
            Style.RELATIVE if _is_share(part) else Style.ABSOLUTE,
            (part,),
        )
    if scanner.look(_SIGN):
        parts = [signed(scanner)]
        if scanner.look(_SIGN) is None:
            scanner.refuse("the other part of the tolerance, as in -20 % +50 %")
        parts.append(signed(scanner))
        changes = sorted(change_of(first, part) for part in parts)
        spread = tuple(sorted(parts, key=lambda part: part.value))
        return _value(
            first, (first.value + changes[0], first.value + changes[1]), Style.UNEQUAL, spread
        )
    return _value(first, (first.value, first.value), Style.FIXED, ())


def _is_share(part: Part) -> bool:
    """Whether a tolerance is a share of the value (per cent or ppm)."""
    return part.unit is not None and [w.word for w in part.unit.words] in (["%"], ["ppm"])


def change_of(first: Part, part: Part, instead: tuple[str, str] = _INSTEAD) -> Fraction:
    """The change a part of a tolerance makes, in the unit of the value.

    ``instead`` says what to write for per cent of per cent, and for a unit on a plain number.
    """
    unit = _unit(first)
    span = first.span.to(part.span)
    if _is_share(part):
        if _is_share(first):
            _refuse(
                f"{unparsed(first)} with a tolerance in per cent can be read in two ways",
                span,
                instead[0],
            )
        if unit.celsius:
            _refuse(
                "a share of a temperature on the Celsius scale means nothing",
                span,
                "write the tolerance as a difference in kelvin, as in ± 5 K",
            )
        if first.value == 0:
            _refuse(
                "a share of zero is zero", span, "write the tolerance with a unit, or as limits"
            )
        return abs(first.value) * part.value * _unit(part).factor
    other = _unit(part)
    if unit.celsius and other.celsius:
        _refuse("a difference of temperatures is in kelvin", part.span, f"write {part.digits} K")
    if other.dimension != unit.dimension:
        _refuse(
            f"the tolerance is {other.dimension.in_words()}, the value {unit.dimension.in_words()}",
            part.span,
            "give the tolerance in per cent or in the unit of the value",
        )
    if unit.dimension == ONE and (_is_share(first) or part.unit):
        _refuse(
            "a plain number with a tolerance in another unit can be read in two ways",
            span,
            instead[1],
        )
    return part.value * other.factor / unit.factor


def _value(
    first: Part, limits: tuple[Fraction, Fraction], style: Style, parts: tuple[Part, ...]
) -> Given:
    least, greatest = limits
    span = first.span.to(parts[-1].span) if parts else first.span
    for part in parts:
        if part.span.end > span.end:
            span = first.span.to(part.span)
    if not least <= first.value <= greatest:
        _refuse(
            "the tolerance leaves out the value itself",
            span,
            "one part is below (-20 %), the other above (+50 %)",
        )
    signed = tuple(
        p.digits if style is not Style.UNEQUAL or p.value < 0 else f"+{p.digits}" for p in parts
    )
    spread = tuple(
        f"{d} {unit_text(p.unit)}" if p.unit else d for d, p in zip(signed, parts, strict=True)
    )
    units = tuple(part.unit for part in (first, *parts) if part.unit)
    return Given(
        _unit(first), first.value, least, greatest, style, first.digits, spread, units, span
    )


def _limits(parts: list[Part]) -> Given:
    """Two or three values; a unit may follow each, all equal, or the last only."""
    span = parts[0].span.to(parts[-1].span)
    unit_part = parts[-1]
    unit = _unit(unit_part)
    for part in parts[:-1]:
        if part.unit and _unit(part) != unit:
            _refuse(
                f"the limits are in different units, {unit_text(part.unit)} and"
                f" {unit_text(unit_part.unit) if unit_part.unit else 'none'}",
                span,
                "write one unit, after the last value or after each",
            )
    values = [part.value for part in parts]
    if sorted(values) != values:
        wanted = " .. ".join(p.digits for p in sorted(parts, key=lambda part: part.value))
        _refuse(
            "the limits are not in rising order",
            span,
            f"write the least first: {wanted}{' ' + unit.text if unit.text else ''}",
        )
    three = len(parts) == 3  # noqa: PLR2004  (least, nominal, greatest)
    nominal = values[1] if three else (values[0] + values[1]) / 2
    digits = parts[1].digits if three else _decimal(nominal)
    units = tuple(part.unit for part in parts if part.unit)
    return Given(
        unit,
        nominal,
        values[0],
        values[-1],
        Style.LIMITS if three else Style.RANGE,
        digits,
        (parts[0].digits, parts[-1].digits),
        units,
        span,
    )


def _decimal(value: Fraction) -> str:
    """A fraction with a finite decimal expansion, in plain digits."""
    whole, power = value, 0
    while whole.denominator != 1:
        whole, power = whole * 10, power + 1
    text = f"{abs(whole.numerator):0{power + 1}d}"
    body = f"{text[:-power]}.{text[-power:]}" if power else text
    return f"-{body}" if value < 0 else body


def unparsed(part: Part) -> str:
    """A part as written."""
    return f"{part.digits} {unit_text(part.unit)}" if part.unit else part.digits


def _refuse(message: str, span: Span, advice: str) -> NoReturn:
    raise Mistake(error("tolerance", message, span, help=advice))
