"""Law: a method applied is the same lines written by hand, whatever they are."""

import numpy as np
import pytest
from numpy.random import Generator

from calcdoc.records.record import Quantity
from tests.helpers.design import Worked, worked, worked_with

pytestmark = pytest.mark.property

SHEET = """\
```document
title = "A sheet"
revision = "1"
```
```takes
{takes}
```
```gives
u
```
```derive
{derive}
```
```criteria
{criteria}
```
"""
ATOMS = ("a", "b", "c", "2", "0.5")


def formula(random: Generator, names: list[str], depth: int) -> str:
    """A formula of plain numbers that has a value everywhere."""
    kind = int(random.integers(7)) if depth else 6
    if kind == 6:
        return str(random.choice([*names, *ATOMS[3:]]))
    left, right = (formula(random, names, depth - 1) for _ in range(2))
    forms = (
        "({} + {})", "({} - {})", "{}*{}", "{}/(1 + ({})^2)", "sqrt(1 + ({})^2)*{}", "max({}, {})",
    )  # fmt: skip
    return forms[kind].format(left, right)


def lines(random: Generator) -> dict[str, str]:
    """What a sheet says: derivations, one solved for, and criteria."""
    names = list(ATOMS[:3])
    derive = []
    for name in ("u", "v", "w"):
        derive.append(f"{name} = {formula(random, names, 2)} | of {name} and a_1")
        names.append(name)
    derive += ["relation r: 3*x + u = v", "x from r"]
    random.shuffle(derive)
    limit = formula(random, names, 1)
    return {
        "derive": "\n".join(derive),
        "criteria": f"R1: u <= {limit} + 1\nR2: x >= {limit} in every case with margin 1 %",
    }


def band(random: Generator) -> str:
    """A value with a band."""
    low = round(float(random.uniform(-2, 2)), 2)
    return f"{low} .. {round(low + float(random.uniform(0, 2)), 2)}"


def same(one: Quantity, other: Quantity) -> None:
    """Two lines say the same, but for the names of the method."""
    for name in ("nominal", "least", "greatest", "at_least", "at_greatest", "unit", "result"):
        assert getattr(one, name) == getattr(other, name)
    assert one.formula.replace("m.", "") == other.formula
    assert [each.replace("m.", "") for each in one.steps] == list(other.steps)
    assert {name: each.nominal for name, each in one.by_case.items()} == {
        name: each.nominal for name, each in other.by_case.items()
    }


def both(seed: int) -> tuple[Worked, Worked]:
    """A sheet applied, and its lines in the design itself."""
    random = np.random.default_rng(seed)
    said = lines(random)
    inputs = "\n".join(f"p_{n} = {band(random)}" for n in range(3))
    bound = ["p_0", "p_1*p_2", "p_2 + p_0"]
    cases = "fault shift: p_1 = p_1 + 1"
    takes = [f"{name} = {value}" for name, value in zip(ATOMS, bound, strict=False)]
    sheet = SHEET.format(takes="a\nb\nc = 3", **said)
    applied = worked_with(
        {"sheets/own.md": sheet},
        "\n".join(("use ./sheets/own.md as m", *takes)),
        inputs=inputs,
        cases=cases,
    )
    derive = "\n".join((*takes, said["derive"]))
    return applied, worked(inputs=inputs, cases=cases, derive=derive, criteria=said["criteria"])


@pytest.mark.parametrize("seed", range(25))
def test_applied_is_written_by_hand(seed: int) -> None:
    """Numbers, governing combinations, steps and verdicts agree to the last digit."""
    applied, by_hand = both(seed)
    for name in ("a", "b", "c", "u", "v", "w", "x"):
        assert applied[f"m.{name}"].kind == "method"
        same(applied[f"m.{name}"], by_hand[name])
    for name in ("R1", "R2"):
        one, other = applied.criterion(f"m.{name}"), by_hand.criterion(name)
        for field in ("verdict", "value", "limit", "margin", "case", "governing", "clauses"):
            assert getattr(one, field) == getattr(other, field)
