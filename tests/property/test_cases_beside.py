"""Law: a case beside the normal one is the design with the change written into its inputs."""

import re

import numpy as np
import pytest
from numpy.random import Generator

from calcdoc.analysis.evaluation import Band, Conclusion, Judgement, Unjudged
from calcdoc.analysis.extremes import Proof
from tests.helpers.trials import Trial, evaluation_of, given, trial

CHANGES = (
    "{x} + 0.3", "2*{x}", "{x}*{y}", "{y} - {x}^2", "{y}", "0.5*{z} + {x}", "{x}/({y}^2 + 0.5)",
)  # fmt: skip
pytestmark = pytest.mark.property


def changed(random: Generator, design: Trial) -> dict[str, str]:
    """One to three changes: a value, a value with a band, or a formula of normal values."""
    names = [*design.conditions, *design.inputs]
    found = {}
    for name in random.permutation(names)[: int(random.integers(1, 4))]:
        kind = random.integers(3)
        if kind == 0:
            found[str(name)] = given(random).partition(" ")[0]
        elif kind == 1:
            found[str(name)] = given(random).partition(" as ")[0].partition(" bias ")[0]
        else:
            y, z = (names[int(at)] for at in random.integers(0, len(names), 2))
            form = CHANGES[int(random.integers(len(CHANGES)))]
            found[str(name)] = form.format(x=name, y=y, z=z)
    return found


def written_in(design: Trial, changes: dict[str, str], criteria: str) -> dict[str, str]:
    """The same design with what is changed as lines or inputs of their own, ``x_1n`` for ``x_1``.

    The normal inputs stay, for what reads them; all else reads the changed ones.
    """

    def renamed(text: str) -> str:
        return re.sub(
            r"\b[cx](_\d)?\b", lambda at: f"{at[0]}n" if at[0] in changes else at[0], text
        )

    new: dict[str, list[str]] = {"conditions": [], "inputs": [], "derive": []}
    for name, text in changes.items():
        word = "conditions" if name in design.conditions else "inputs"
        new["derive" if re.search("[a-z]", text) else word].append(f"{renamed(name)} = {text}")
    blocks = design.blocks()
    return {
        "conditions": "\n".join([blocks["conditions"], *new["conditions"]]),
        "inputs": "\n".join([blocks["inputs"], *new["inputs"]]),
        "derive": "\n".join([*map(renamed, design.derive), *new["derive"]]),
        "criteria": renamed(criteria),
    }


def same(one: float, other: float, size: float, share: float = 1e-12) -> bool:
    """Equal to a share of the largest of some numbers."""
    return abs(one - other) <= share * max(abs(one), abs(other), size)


def check_bands(one: Band, other: Band, name: str) -> None:
    """Nominal and both ends are equal; those that were searched to the width of the search."""
    size = max(one.magnitude, other.magnitude)
    assert same(one.nominal, other.nominal, size), name
    proofs = {one.proof, other.proof}
    share = 1e-12 if proofs == {Proof.EXACT} else 1e-8
    if Proof.SEARCHED in proofs:
        share = 1e-3
    assert same(one.least, other.least, size, share), name
    assert same(one.greatest, other.greatest, size, share), name


def check_judged(one: Judgement | Unjudged, other: Judgement | Unjudged, name: str) -> None:
    """Verdicts are equal, and so are value, limit and distance."""
    assert one.outcome is other.outcome, name
    if not (isinstance(one, Judgement) and isinstance(other, Judgement)):
        assert isinstance(one, Unjudged) is isinstance(other, Unjudged), name
        return
    size = max(abs(one.value), abs(one.limit))
    share = 1e-12 if {one.proof, other.proof} == {Proof.EXACT} else 1e-8
    assert same(one.requirement, other.requirement, size, share), name
    assert same(one.slack, other.slack, size, share), name


def by_id(conclusions: tuple[Conclusion, ...]) -> dict[str, Conclusion]:
    """Conclusions by the id of their criterion."""
    return {each.judged.statement.id.name: each for each in conclusions}


@pytest.mark.parametrize("seed", range(60))
def test_a_case_is_the_design_with_its_change(seed: int) -> None:
    """Numbers and verdicts of a case are those of the design that has the change in its inputs."""
    random = np.random.default_rng(seed)
    design = trial(random)
    changes = changed(random, design)
    last, first = design.symbols[-1], design.symbols[0]
    plain = evaluation_of(**design.blocks())
    limit = round(plain.bands[last].greatest + float(random.normal(0, 0.3)), 3)
    criteria = (
        f"A: {last} <= {limit} in CASE\n"
        f"B: {last} <= {limit} by root sum square in CASE\n"
        f"C: {last} <= {limit} in CASE when {first} >= {round(plain.bands[first].nominal, 3)}\n"
        f"D: {first} - 5 <= {last} <= {limit} + abs({first}) with margin 2 % at nominal in CASE"
    )
    text = ", ".join(f"{name} = {change}" for name, change in changes.items())
    beside = evaluation_of(
        **design.blocks(cases=f"fault f: {text}", criteria=criteria.replace("CASE", "f"))
    )
    alone = evaluation_of(**written_in(design, changes, criteria.replace("CASE", "normal")))
    for key in design.symbols:
        check_bands(beside.bands[key], plain.bands[key], f"normal {key}")
        here = beside.cases["f"].bands.get(key, beside.bands[key])
        check_bands(here, alone.bands[key], key)
    there = by_id(alone.conclusions)
    for name, found in by_id(beside.conclusions).items():
        check_judged(found.in_case["f"], there[name].in_case["normal"], name)
