"""The same formulas evaluated independently with mpmath, in fifty digits.

Source: mpmath, an arbitrary-precision library that calcdoc itself does not use. Status: an
independent computation, no published values. What is compared is the record's JSON.
"""

from collections.abc import Mapping
from functools import cache
from itertools import pairwise
from pathlib import Path
from typing import Any

import mpmath  # type: ignore[import-untyped]
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from hypothesis.strategies import SearchStrategy

from calcdoc.pipeline import evaluate, read, record
from calcdoc.records.record import Record
from calcdoc.records.store import from_json, to_json
from calcdoc.text.formula import parse_text
from calcdoc.text.names import fold
from tests.helpers.design import worked
from tests.helpers.independent import CLOSED, PRECISE

CLOSE = 1e-9


@cache
def demo(path: Path) -> Record:
    """The record of a demo as its JSON says."""
    return from_json(to_json(record(evaluate(read(path)))))


def agrees(stated: object, precise: Any, unit: str) -> bool:  # noqa: ANN401
    """Whether a number of the record is the precise one, to 1e-9."""
    assert isinstance(stated, float)
    expected = PRECISE.in_unit(precise, unit)
    return bool(abs(stated - expected) <= CLOSE * abs(expected))


@pytest.mark.parametrize("path", CLOSED, ids=lambda path: path.stem)
def test_nominal_values(path: Path) -> None:
    """Each derived line of a demo has the nominal value that mpmath gives, to 1e-9."""
    made = demo(path)
    with mpmath.workdps(50):
        known = PRECISE.at(made, {})
        derived = [each for each in made.quantities if each.formula]
        assert len(derived) >= 25
        for each in derived:
            assert agrees(each.nominal, known[fold(each.symbol)], each.unit), each.symbol


@pytest.mark.parametrize("path", CLOSED, ids=lambda path: path.stem)
def test_governing_combinations_of_quantities(path: Path) -> None:
    """At the stated combination each line takes its stated least and greatest value, to 1e-9."""
    made = demo(path)
    with mpmath.workdps(50):
        for each in made.quantities:
            if not each.formula:
                continue
            least = PRECISE.at(made, each.at_least)[fold(each.symbol)]
            greatest = PRECISE.at(made, each.at_greatest)[fold(each.symbol)]
            assert agrees(each.least, least, each.unit), each.symbol
            assert agrees(each.greatest, greatest, each.unit), each.symbol


@pytest.mark.parametrize("path", CLOSED, ids=lambda path: path.stem)
def test_governing_combinations_of_criteria(path: Path) -> None:
    """Value and limit of each criterion are what mpmath gives where it is decided, to 1e-9."""
    made = demo(path)
    calculated = [each for each in made.criteria if each.value is not None]
    assert len(calculated) >= 8
    with mpmath.workdps(50):
        for each in calculated:
            sides = PRECISE.sides(each.text, PRECISE.at(made, each.governing))
            pairs = [*pairwise(sides), *pairwise(reversed(sides))]
            assert any(
                agrees(each.value, value, each.unit) and agrees(each.limit, limit, each.unit)
                for value, limit in pairs
            ), each.id


INPUTS = {"a": "0.37", "b": "1.9", "c": "12.5", "d": "-2.75"}


def joined(inner: SearchStrategy[str]) -> SearchStrategy[str]:
    """Formulas one step larger."""
    one = ("sqrt(abs({}))", "exp(-abs({}))", "ln(1 + abs({}))", "log10(2 + abs({}))", "sin({})",
           "cos({})", "tan({})", "asin(sin({}))", "acos(cos({}))", "atan({})", "-({})", "({})^2",
           "abs({})^1.5", "floor({})", "ceil({})", "1/({})")  # fmt: skip
    two = ("({}) + ({})", "({}) - ({})", "({})*({})", "({})/({})", "min({}, {})", "max({}, {})",
           "sum({}, {})", "rss({}, {})", "abs({})^sin({})")  # fmt: skip
    return st.one_of(
        st.builds(str.format, st.sampled_from(one), inner),
        st.builds(str.format, st.sampled_from(two), inner, inner),
    )


FORMULAS = st.recursive(st.sampled_from((*INPUTS, "3", "0.25", "pi")), joined, max_leaves=8)


def precise(formula: str) -> Any:  # noqa: ANN401
    """A formula of the inputs in mpmath's working precision; None where it has no value."""
    values: Mapping[str, Any] = {name: PRECISE.quantity(text) for name, text in INPUTS.items()}
    try:
        found = PRECISE.value(parse_text(formula), values)
    except ZeroDivisionError:
        return None
    return found if mpmath.isfinite(found) and mpmath.im(found) == 0 else None


@pytest.mark.property
@settings(max_examples=100)
@given(FORMULAS)
def test_generated_formulas(formula: str) -> None:
    """A formula has the nominal value that mpmath gives, as far as double precision carries it."""
    with mpmath.workdps(50):
        expected = precise(formula)
    with mpmath.workprec(53):
        rough = precise(formula)
    # What changes much between 53 and 166 bits is a question of rounding, not of calcdoc.
    assume(expected is not None and rough is not None)
    doubt = abs(expected - rough)
    assume(doubt <= CLOSE * abs(expected) and abs(expected) < mpmath.mpf("1e100"))
    inputs = "\n".join(f"{name} = {text}" for name, text in INPUTS.items())
    found = worked(inputs=inputs, derive=f"y = {formula}")["y"].nominal
    assert isinstance(found, float)
    assert abs(found - expected) <= CLOSE * abs(expected) + 1000 * doubt
