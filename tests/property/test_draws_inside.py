"""Law: no draw of a bounded part is beyond the extremes, and an exact extreme is attained."""

import numpy as np
import pytest

from calcdoc.analysis.compile import Compiled, compile_model
from calcdoc.analysis.evaluation import Band, Evaluation
from calcdoc.analysis.extremes import Proof
from calcdoc.analysis.parts import Part, random_parts
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.sampling import Setting, drawn
from calcdoc.text.names import fold
from tests.helpers.design import worked
from tests.helpers.trials import Trial, evaluation_of, trial
from tests.property.test_cases_beside import changed

N_MODELS = 500
BUNCH = 10
"""Models of one test."""
CLOSE = 1e-9
pytestmark = pytest.mark.property


def base_of(random: np.random.Generator, compiled: Compiled, parts: tuple[Part, ...]) -> FloatArray:
    """Conditions and biases at an end each, parts around them."""
    box = compiled.box
    base = np.where(random.random(box.low.size) < 0.5, box.low, box.high)
    for part in parts:
        base[part.column] = part.nominal + random.choice([part.bias_low, part.bias_high])
    return base


def check_inside(band: Band, values: FloatArray, name: str) -> int:
    """Every value is inside; whether there was anything to see."""
    hair = 1e-12 * max(band.magnitude, abs(values).max())
    assert np.isfinite(values).all(), name
    least, greatest = band.bounds
    if band.proof is Proof.EXACT:
        least, greatest = band.least, band.greatest
    assert values.min() >= least - hair, f"{name} is less than proven"
    assert values.max() <= greatest + hair, f"{name} is more than proven"
    return int(np.ptp(values) > hair)


def lines(evaluation: Evaluation, compiled: Compiled) -> list[tuple[str, Band, int]]:
    """Every computed line in every case with its band and its instruction."""
    found = [
        (key, evaluation.bands[key], at)
        for key, at in compiled.variables.items()
        if evaluation.model.variables[key].given is None
    ]
    for name, case in evaluation.cases.items():
        instructions = compiled.cases[name].variables
        found += [(f"{key} in {name}", band, instructions[key]) for key, band in case.bands.items()]
    return found


@pytest.mark.parametrize("bunch", range(N_MODELS // BUNCH))
def test_no_draw_is_beyond_the_extremes(bunch: int) -> None:
    """Draws of rectangular and triangular parts stay inside, also in a case and through roots."""
    moved = 0
    for seed in range(bunch * BUNCH, (bunch + 1) * BUNCH):
        random = np.random.default_rng([seed, 7])
        design = trial(random)
        text = ", ".join(f"{name} = {change}" for name, change in changed(random, design).items())
        evaluation = evaluation_of(**design.blocks(cases=f"fault f: {text}"))
        compiled = compile_model(evaluation.model)
        parts = random_parts(compiled.columns, evaluation.model)
        base = base_of(random, compiled, parts)
        for name, band, at in lines(evaluation, compiled):
            values = drawn(compiled.tape, at, parts, base, Setting(200, seed))
            moved += check_inside(band, values, f"{name} of model {seed}")
    assert moved >= BUNCH, "the draws must move the lines, or nothing was tried"


def standing(design: Trial, combination: dict[str, str]) -> dict[str, str]:
    """The design with inputs where a combination says, all others at nominal."""

    def at(symbol: str, text: str) -> str:
        return combination.get(symbol, text.partition(" ")[0])

    return Trial(
        {symbol: at(symbol, text) for symbol, text in design.inputs.items()},
        design.derive,
        design.symbols,
        {symbol: at(symbol, text) for symbol, text in design.conditions.items()},
    ).blocks()


@pytest.mark.parametrize("seed", range(40))
def test_an_exact_extreme_is_attained_where_it_says(seed: int) -> None:
    """The design computed anew at the printed combination has the extreme as its nominal value."""
    random = np.random.default_rng([seed, 8])
    design = trial(random)
    made = worked(**design.blocks())
    for symbol in design.symbols:
        line = made[symbol]
        assert isinstance(line.least, float)
        assert isinstance(line.greatest, float)
        if line.proof != "exact":
            continue
        size = max(abs(line.least), abs(line.greatest))
        for stated, combination in ((line.least, line.at_least), (line.greatest, line.at_greatest)):
            again = evaluation_of(**standing(design, combination)).bands[fold(symbol)].nominal
            assert abs(again - stated) <= CLOSE * size, symbol
