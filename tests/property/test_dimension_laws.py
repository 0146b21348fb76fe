"""Laws of dimensions: they are a group, and units carry them along."""

from fractions import Fraction

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from calcdoc.text.literal import resolve
from calcdoc.text.nodes import UnitText, UnitWord
from calcdoc.units import ONE, Dimension
from tests.property.strategies import dimensions, units

pytestmark = pytest.mark.property

POWERS = st.fractions(-3, 3, max_denominator=4)


@given(dimensions(), dimensions(), dimensions())
def test_product_is_a_commutative_group(a: Dimension, b: Dimension, c: Dimension) -> None:
    """Associative and commutative, with one and inverses; a quotient undoes a product."""
    assert (a * b) * c == a * (b * c)
    assert a * b == b * a
    assert a * ONE == a
    assert a / a == ONE
    assert (a * b) / b == a
    assert ONE / (ONE / a) == a


@given(dimensions(), dimensions(), POWERS, POWERS)
def test_powers(a: Dimension, b: Dimension, p: Fraction, q: Fraction) -> None:
    """Powers add, multiply and distribute."""
    assert a**p * a**q == a ** (p + q)
    assert (a**p) ** q == a ** (p * q)
    assert (a * b) ** p == a**p * b**p
    assert a**1 == a
    assert a**0 == ONE


@given(dimensions())
def test_equal_dimensions_are_one_key(a: Dimension) -> None:
    """Whole exponents as integers or fractions make no difference."""
    same = Dimension(tuple(Fraction(each) for each in a.exponents))
    assert same == a
    assert hash(same) == hash(a)
    assert same.in_words() == a.in_words()


@given(dimensions(), dimensions())
def test_words_tell_dimensions_apart(a: Dimension, b: Dimension) -> None:
    """Different dimensions are never described alike."""
    assert (a == b) == (a.in_base_units() == b.in_base_units())
    assert (a == b) == (a.in_words() == b.in_words())


@given(dimensions())
def test_one_is_plain(a: Dimension) -> None:
    """Only the dimension without exponents is a plain number."""
    assert a.is_one == (a == ONE)
    assert (a.in_words() == "a plain number") == a.is_one


@given(units(), units())
def test_units_multiply_like_their_dimensions(a: UnitText, b: UnitText) -> None:
    """Joining two units multiplies factors and dimensions."""
    assume(b.words[0].joint == "")
    head = UnitWord(b.words[0].word, b.words[0].exponent, "·", a.span)
    both = resolve(UnitText((*a.words, head, *b.words[1:]), a.span))
    assert both.factor == resolve(a).factor * resolve(b).factor
    assert both.dimension == resolve(a).dimension * resolve(b).dimension


@given(units(), st.fractions(-1000, 1000, max_denominator=1000))
def test_conversion_goes_there_and_back(text: UnitText, number: Fraction) -> None:
    """A number in a unit, to SI and back, is the number within rounding."""
    unit = resolve(text)
    exact = unit.to_si(number)
    back = unit.from_si(float(exact))
    scale = max(1.0, abs(float(number)), 273.15 if unit.celsius else 0.0)
    assert back == pytest.approx(float(number), abs=1e-12 * scale)


@given(units())
def test_printed_unit_has_one_solidus(text: UnitText) -> None:
    """However it was written, a printed unit has at most one solidus."""
    assert resolve(text).text.count("/") <= 1
