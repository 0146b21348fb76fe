"""Parts as they vary: random limits, biases and like parts, one row for each input column."""

import hashlib
from collections.abc import Sequence

import numpy as np

from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.points import FloatArray
from calcdoc.frozen import Frozen
from calcdoc.model.model import Model, Variable
from calcdoc.text.names import fold
from calcdoc.text.nodes import Name


class Part(Frozen, frozen=True):
    """One input column whose parts vary at random; values in coherent SI."""

    key: str
    column: int
    nominal: float
    low: float
    high: float
    """Limits of the random part alone."""
    bias_low: float
    bias_high: float
    """Changes by all biases together at their ends."""
    shape: str
    k: float
    count: int
    """How many like parts vary on their own; the column is their mean."""
    shared: float
    """The share of the band they have in common."""

    @property
    def independent(self) -> float:
        """The share of a like part's band that is left in the mean of all of them."""
        return float(np.hypot(self.shared, (1 - self.shared) / np.sqrt(self.count)))


def random_parts(compiled: Compiled, model: Model) -> tuple[Part, ...]:
    """Every column that is a part and not a condition or a look-up."""
    found = []
    for key, column in compiled.columns.items():
        variable = model.variables.get(key)
        if variable is None or variable.kind == "condition" or variable.given is None:
            continue
        found.append(_part(model, variable, column))
    return tuple(found)


def _part(model: Model, variable: Variable, column: int) -> Part:
    given = variable.given
    assert given is not None
    made, unit = given.parts, given.unit
    count = 1
    if made.like is not None:
        counted = made.like.count
        if isinstance(counted, Name):
            number = model.variables[fold(counted.name)].given
            assert number is not None
            count = int(number.nominal)
        else:
            count = int(counted.digits)
    scale = unit.factor
    return Part(
        variable.key,
        column,
        float(unit.to_si(given.nominal)),
        float(unit.to_si(made.low)),
        float(unit.to_si(made.high)),
        float(sum(bias.low for bias in made.biases) * scale),
        float(sum(bias.high for bias in made.biases) * scale),
        made.shape,
        float(made.k or 0),
        count,
        float(made.like.shared) if made.like else 0.0,
    )


def base_point(parts: Sequence[Part], governing: FloatArray) -> FloatArray:
    """Conditions where they govern, parts at nominal with their biases at the worse end.

    Args:
        parts: The columns that vary at random.
        governing: Shape (n_columns,): the combination that governs at the extremes.
    """
    point = governing.copy()
    for part in parts:
        worse_high = governing[part.column] > part.nominal
        point[part.column] = part.nominal + (part.bias_high if worse_high else part.bias_low)
        if governing[part.column] == part.nominal:
            point[part.column] = part.nominal
    return point


def stream(seed: int, key: str) -> np.random.Generator:
    """A stream of its own for each input, keyed by seed and symbol."""
    word = hashlib.sha256(f"{seed}:{key}".encode()).digest()
    return np.random.Generator(np.random.PCG64(int.from_bytes(word[:16], "big")))


def draw(part: Part, generator: np.random.Generator, count: int) -> FloatArray:
    """Deviations of a part from its nominal value, shape (count,), biases left out."""
    if part.count == 1:
        return _deviations(part, generator, count)
    common = _deviations(part, generator, count)
    own = _deviations(part, generator, count * part.count).reshape(count, part.count)
    mean: FloatArray = part.shared * common + (1 - part.shared) * own.mean(axis=1)
    return mean


def _deviations(part: Part, generator: np.random.Generator, count: int) -> FloatArray:
    low, high = part.low - part.nominal, part.high - part.nominal
    if part.shape == "normal":
        return generator.normal(0.0, high / part.k, count)
    if part.shape == "triangular" and low < high:
        return generator.triangular(low, 0.0, high, count)
    return generator.uniform(low, high, count)
