"""Sensitivities that are not there are refused, so that no record holds what is no number."""

import math

import pytest

from calcdoc.records.rounding import stored
from tests.helpers.checking import TITLE, rendered

GIVEN = "```inputs\nk = 1 ± 0.5\nm = 2 ± 1\n```\n"
LEAVE_OUT = "help: leave it out"
OFF = f"{LEAVE_OUT}, or choose a nominal value off the kink or the pole"


def said(*lines: str) -> list[str]:
    """Headline, caret and help of the finding at the last line of a derivation."""
    derive = "\n".join(lines)
    found = rendered(f"{TITLE}{GIVEN}```derive\n{derive}\n```\n").splitlines()
    return [found[0], found[3], found[-1]] if found else []


@pytest.mark.parametrize(
    "formula", ["abs(k - 1)", "sqrt(max(k - 1, 0))", "max(k - 1, 0)^0.5", "m*abs(k - 1)"]
)
def test_no_derivative_at_the_nominal_values(formula: str) -> None:
    """A derivative that is no number at the nominal values is refused at the quantity."""
    assert said(f"x = {formula}", "sensitivity of x to k") == [
        "lamp.md:12:21: error[restate]: `x` has no derivative by `k` at the nominal values",
        "   |                     ^",
        OFF,
    ]


def test_off_the_kink() -> None:
    """The same formula has a derivative beside its kink."""
    assert said("x = abs(k - 0.9)", "sensitivity of x to k") == []


def test_of_itself() -> None:
    """A quantity does not answer to itself."""
    assert said("z = 2*k", "sensitivity of z to k, z") == [
        "lamp.md:12:24: error[restate]: `z` is asked how it answers to itself",
        "   |                        ^",
        "help: name quantities that it depends on",
    ]


@pytest.mark.parametrize("formula", ["2*k", "2*k + m - m"])
def test_no_dependence(formula: str) -> None:
    """A quantity that does not depend on another is not listed with a zero."""
    assert said(f"z = {formula}", "sensitivity of z to k, m") == [
        "lamp.md:12:24: error[restate]: `z` does not depend on `m`",
        "   |                        ^",
        LEAVE_OUT,
    ]


def test_no_dependence_on_what_is_behind_another() -> None:
    """A quantity that acts through another one alone has no effect while that one is held."""
    assert said("y = 2*m", "z = k*y", "sensitivity of z to y, m") == [
        "lamp.md:13:24: error[restate]: while `y` is held `z` does not depend on `m`",
        "   |                        ^",
        LEAVE_OUT,
    ]


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
def test_what_is_no_number_is_never_stored(value: float) -> None:
    """A record cannot be made with what is no number."""
    with pytest.raises(ValueError, match=str(value)):
        stored(value)
