"""The sheets of the library: each is proven, and valid on one side of its limits only."""

from pathlib import Path

import pytest

from calcdoc.methods.library import method, method_names
from tests.helpers.design import worked

PUBLISHED = Path(__file__).parents[2] / "published"
GOOD = {
    "residual-voltage": {"C": "1 µF", "R": "1 MΩ", "V_0": "100 V", "V_safe": "34 V",
                         "t_wait": "1 s"},
    "inrush": {"V_pk": "100 V", "R_s": "10 Ω", "C": "10 µF", "k_life": "0.5", "f_line": "50 Hz"},
    "charge-balance": {"V_pk": "300 V", "I": "40 mA", "C": "10 µF", "f_line": "50 Hz"},
    "component-stress": {"s": "50 %", "k": "60 %"},
}  # fmt: skip
INSIDE = [
    ("residual-voltage", {"V_0": "34.001 V"}),
    ("inrush", {"k_life": "1"}),
    ("inrush", {"R_s": "200 Ω"}),
    ("charge-balance", {"V_pk": "80.1 V"}),
    ("charge-balance", {"V_pk": "39.99 kV"}),
    ("component-stress", {"s": "0 %"}),
    ("component-stress", {"k": "100 %"}),
]
OUTSIDE = [
    ("residual-voltage", {"V_0": "33 V"}),
    ("residual-voltage", {"C": "0 µF - 1 µF"}),
    ("residual-voltage", {"R": "0 MΩ - 1 MΩ"}),
    ("residual-voltage", {"t_wait": "0 s - 1 s"}),
    ("inrush", {"k_life": "1.01"}),
    ("inrush", {"k_life": "-0.1"}),
    ("inrush", {"R_s": "201 Ω"}),
    ("inrush", {"V_pk": "0 V"}),
    ("charge-balance", {"V_pk": "79.9 V"}),
    ("charge-balance", {"V_pk": "40.01 kV"}),
    ("component-stress", {"s": "-1 %"}),
    ("component-stress", {"k": "101 %"}),
    ("component-stress", {"k": "-1 %"}),
]


def validity(name: str, changes: dict[str, str]) -> str:
    """What the record says of a method that is applied to these values."""
    lines = [f"{symbol} = {value}" for symbol, value in {**GOOD[name], **changes}.items()]
    found = worked("\n".join((f"use {name} as m", *lines)))
    (applied,) = found.record.applied
    codes = [each.code for each in found.record.problems]
    assert ("outside-validity" in codes) == (applied.verdict != "within")
    assert any("outside its limits" in each for each in found.record.notices) == (
        applied.verdict == "outside"
    )
    return applied.verdict


def test_every_method_is_proven() -> None:
    """Each method has a file of published checks, and values here."""
    names = method_names()
    assert names
    for name in names:
        assert (PUBLISHED / f"test_{name.replace('-', '_')}.py").exists()
    assert set(names) == set(GOOD) == {name for name, _ in INSIDE} == {name for name, _ in OUTSIDE}


@pytest.mark.parametrize("name", method_names())
def test_within(name: str) -> None:
    """At ordinary values every method is within its limits, and has some."""
    assert method(name).limits
    assert validity(name, {}) == "within"


@pytest.mark.parametrize(("name", "changes"), INSIDE)
def test_just_within(name: str, changes: dict[str, str]) -> None:
    """Just on this side of a limit a method is valid."""
    assert validity(name, changes) == "within"


@pytest.mark.parametrize(("name", "changes"), OUTSIDE)
def test_outside(name: str, changes: dict[str, str]) -> None:
    """Beyond a limit the record is written and says so."""
    assert validity(name, changes) == "outside"


def test_numbers_have_a_source() -> None:
    """A default of the library says where it comes from, or is a condition of the supply."""
    without = {
        (name, take.symbol.name)
        for name in method_names()
        for take in method(name).takes
        if take.default is not None and not take.basis.text
    }
    assert without == {("inrush", "f_line")}
