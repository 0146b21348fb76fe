"""Rounding, in one place: nearest, ties to the even multiple, decided on the decimal value.

Rules R1 to R7 of the house: one stage only, sign symmetric, ties decided on the decimal digits
(2.675 is a tie, whatever its binary image is), verdicts never on a rounded value, margins in the
safe direction.
"""

import math
from decimal import ROUND_CEILING, ROUND_FLOOR, ROUND_HALF_EVEN, ROUND_HALF_UP, Context, Decimal
from fractions import Fraction
from typing import Final

TIES_TO_EVEN: Final = ROUND_HALF_EVEN
TIES_AWAY: Final = ROUND_HALF_UP
_WIDE: Final = Context(prec=400)
STORED: Final = 12
"""Significant digits of a stored number, so that records agree between processors."""
SMALL: Final = -4
"""Power of ten below which a number is written with an exponent."""
LARGE: Final = 7
"""Power of ten from which a number is written with an exponent."""


def exactly(value: float | str | Decimal | Fraction) -> Decimal:
    """The decimal value that is rounded: a float by its shortest digits, text as written."""
    if isinstance(value, Fraction):
        return _WIDE.divide(Decimal(value.numerator), Decimal(value.denominator))
    return Decimal(repr(value)) if isinstance(value, float) else Decimal(value)


def to_multiple(value: float | str, step: str, ties: str = TIES_TO_EVEN) -> Decimal:
    """The nearest multiple of a power of ten.

    >>> str(to_multiple("12.35", "0.1")), str(to_multiple(2.675, "0.01"))
    ('12.4', '2.68')
    """
    unit = Decimal(step)
    whole = (exactly(value) / unit).quantize(Decimal(1), rounding=ties, context=_WIDE)
    return whole * unit


def to_digits(value: float | str | Decimal | Fraction, digits: int,
              rounding: str = TIES_TO_EVEN) -> Decimal:  # fmt: skip
    """The value with so many significant digits; whole digits before the point are kept."""
    exact = exactly(value)
    if not exact:
        return Decimal(0)
    places = digits - 1 - exact.adjusted()
    if exact.adjusted() < LARGE:
        places = max(places, 0)
    unit = Decimal(1).scaleb(-places)
    rounded = exact.quantize(unit, rounding=rounding, context=_WIDE)
    if rounded.adjusted() > exact.adjusted() and places > 0:
        # 9.996 to three digits is 10.0, not 10.00.
        rounded = rounded.quantize(unit.scaleb(1), rounding=rounding, context=_WIDE)
    return rounded


def written(value: Decimal) -> str:
    """A decimal in the language of the text: ``0.00123`` plain, ``1.2e-7`` with an exponent."""
    if not value:
        return "0"
    power = value.adjusted()
    if SMALL <= power < LARGE:
        return f"{value:f}"
    return f"{value.scaleb(-power):f}e{power}"


def significant(value: float | str | Fraction, digits: int) -> str:
    """A number with so many significant digits, in the language of the text.

    >>> significant(325.269, 4), significant(-0.5, 4), significant(0.0, 4)
    ('325.3', '-0.5000', '0')
    """
    return written(to_digits(value, digits))


def trimmed(value: float | str | Fraction, digits: int) -> str:
    """The same without zeros behind the last digit that says something."""
    shorter = to_digits(value, digits).normalize()
    whole = _exponent(shorter) > 0 and shorter.adjusted() < LARGE
    return written(shorter.quantize(Decimal(1)) if whole else shorter)


def downward(value: float, digits: int = 2) -> str:
    """A margin: rounded towards less margin, which is the safe direction.

    >>> downward(4.96), downward(-180.3)
    ('4.9', '-190')
    """
    return _one_way(value, digits, ROUND_FLOOR)


def upward(value: float, digits: int = 2) -> str:
    """A time to wait: rounded towards more, which is the safe direction.

    >>> upward(14.01, 3)
    '14.1'
    """
    return _one_way(value, digits, ROUND_CEILING)


def _one_way(value: float, digits: int, rounding: str) -> str:
    # What a float adds beyond twelve digits is no reason to give up a digit.
    exact = exactly(stored(value))
    if not exact:
        return "0"
    unit = Decimal(1).scaleb(exact.adjusted() - digits + 1)
    rounded = (exact / unit).quantize(Decimal(1), rounding=rounding, context=_WIDE) * unit
    return written(rounded.quantize(min(unit, Decimal(1))))


def stored(value: float) -> float:
    """A number as it is stored: 12 significant digits, no negative zero.

    Raises:
        ValueError: for what is no number; no record may hold it.
    """
    if not math.isfinite(value):
        raise ValueError(value)
    return float(f"{value:.{STORED}g}") + 0.0


def apart(value: float, limit: float, digits: int, most: int = STORED) -> tuple[str, str]:
    """Value and limit with as many digits as it takes to tell them apart.

    >>> apart(5.004, 5.0, 3)
    ('5.004', '5.000')
    """
    for count in range(digits, most + 1):
        shown, bound = to_digits(value, count), to_digits(limit, count)
        if shown != bound or value == limit:
            return written(_places(value, shown, bound)), written(_places(limit, bound, shown))
    return significant(value, digits), significant(limit, digits)


def _places(exact: float, own: Decimal, other: Decimal) -> Decimal:
    """Both with the places of the finer one when they are of one size."""
    if own.adjusted() != other.adjusted():
        return own
    unit = Decimal(1).scaleb(min(_exponent(own), _exponent(other)))
    return exactly(exact).quantize(unit, rounding=TIES_TO_EVEN, context=_WIDE)


def _exponent(value: Decimal) -> int:
    exponent = value.as_tuple().exponent
    assert isinstance(exponent, int)
    return exponent
