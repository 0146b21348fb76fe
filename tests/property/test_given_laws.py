"""Laws of given values: limits follow the author's decimal digits exactly."""

from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from calcdoc.text.given import Given
from calcdoc.text.given import given as read_given
from calcdoc.text.passage import passage_of
from calcdoc.text.scan import Scanner

pytestmark = pytest.mark.property

NUMBERS = st.decimals(-1000, 1000, places=3, allow_nan=False, allow_infinity=False)
SHARES = st.decimals("0.01", 100, places=2, allow_nan=False, allow_infinity=False)
UNITS = st.sampled_from(("V", "mA", "µF", "kΩ", "K/W", "lm/W"))


def read(text: str) -> Given:
    """The value that fills a text."""
    scanner = Scanner(passage_of("", text))
    value = read_given(scanner)
    assert scanner.ended
    return value


@given(NUMBERS, SHARES, UNITS)
def test_a_share(number: Decimal, share: Decimal, unit: str) -> None:
    """± p % is p hundredths of the magnitude, as exact fractions."""
    assume(number)
    value = read(f"{number:f} {unit} ± {share:f} %")
    change = abs(Fraction(number)) * Fraction(share) / 100
    assert (value.least, value.greatest) == (Fraction(number) - change, Fraction(number) + change)
    assert value.nominal == Fraction(number)


@given(NUMBERS, SHARES, UNITS)
def test_a_difference(number: Decimal, change: Decimal, unit: str) -> None:
    """± d in the unit of the value is d to both sides."""
    value = read(f"{number:f} {unit} ± {change:f} {unit}")
    assert value.greatest - value.nominal == value.nominal - value.least == Fraction(change)


@given(st.tuples(NUMBERS, NUMBERS, NUMBERS), UNITS)
def test_limits(numbers: tuple[Decimal, Decimal, Decimal], unit: str) -> None:
    """Three values in rising order are least, nominal and greatest as they stand."""
    low, middle, high = sorted(numbers)
    value = read(f"{low:f} .. {middle:f} .. {high:f} {unit}")
    found = (value.least, value.nominal, value.greatest)
    assert found == (Fraction(low), Fraction(middle), Fraction(high))
    assert value.digits == f"{middle:f}"


@given(NUMBERS, NUMBERS, UNITS)
def test_a_range(one: Decimal, other: Decimal, unit: str) -> None:
    """The nominal of a range is its middle, said in digits that are exact."""
    low, high = sorted((one, other))
    value = read(f"{low:f} {unit} .. {high:f} {unit}")
    assert value.nominal == (Fraction(low) + Fraction(high)) / 2
    assert Fraction(value.digits) == value.nominal


@given(NUMBERS, SHARES, SHARES, UNITS)
def test_floats_are_rounded_once(
    number: Decimal, below: Decimal, above: Decimal, unit: str
) -> None:
    """In SI, each limit is the float nearest to the exact fraction, and they keep their order."""
    assume(number)
    value = read(f"{number:f} {unit} -{below:f} % +{above:f} %")
    exact = [each * value.unit.factor for each in (value.least, value.nominal, value.greatest)]
    assert list(value.si) == [float(each) for each in exact]
    assert value.si[0] <= value.si[1] <= value.si[2]
