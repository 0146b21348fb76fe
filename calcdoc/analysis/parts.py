"""Parts as they vary: random limits, biases and like parts, one for each input column."""

from collections.abc import Mapping
from math import hypot, sqrt

from calcdoc.frozen import Frozen
from calcdoc.model.model import Model
from calcdoc.text.given import Given
from calcdoc.text.names import fold
from calcdoc.text.nodes import Name, Number


class Variate(Frozen, frozen=True):
    """What is drawn for a part: equal for all parts that are drawn alike.

    The unit of a normal part is its standard deviation, of others the width of the band: those
    lie between 0 (the least value) and 1.
    """

    stream: str
    """Key of the stream: the symbol alone."""
    shape: str
    mode: float
    """Where a triangle has its top, between 0 and 1; 0 for other shapes."""
    count: int
    """How many like parts are drawn for each mean; 1 for normal parts, whose mean is normal."""
    shared: float


class Part(Frozen, frozen=True):
    """One input column that varies; values in coherent SI."""

    key: str
    """Of the column."""
    stream: str
    """Of the stream of random numbers: the symbol, so that every case sees the same draws."""
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
    """How many standard deviations the limits of a normal part stand for; 0 for other shapes."""
    count: int
    """How many like parts vary on their own; the column is their mean."""
    shared: float
    """The share of the band they have in common."""

    @property
    def reduction(self) -> float:
        """What share of a like part's deviation is left in the mean of all of them."""
        return hypot(self.shared, (1.0 - self.shared) / sqrt(self.count))

    @property
    def is_random(self) -> bool:
        """Whether there is anything to draw; else it has biases alone."""
        return self.low < self.high

    @property
    def deviation(self) -> float:
        """The standard deviation of the column."""
        if self.shape == "normal":
            return (self.high - self.nominal) / self.k * self.reduction
        width = (self.high - self.low) * self.reduction
        if self.shape == "triangular":
            return width * sqrt((1.0 - self.mode + self.mode**2) / 18.0)
        return width / sqrt(12.0)

    @property
    def mode(self) -> float:
        """Where the nominal value stands in the band, between 0 and 1."""
        return (self.nominal - self.low) / (self.high - self.low)

    @property
    def limits(self) -> tuple[float, float]:
        """Changes from nominal at the limits of the mean of the like parts.

        Where the limits are unequal their middle is off nominal for all like parts together: the
        mean of many comes closer to that middle, not to nominal.
        """
        low, high = self.low - self.nominal, self.high - self.nominal
        middle, half = (low + high) / 2.0, (high - low) / 2.0 * self.reduction
        return (low, high) if self.reduction == 1.0 else (middle - half, middle + half)

    @property
    def variate(self) -> Variate:
        """What is drawn for it."""
        if self.shape == "normal":
            return Variate(self.stream, self.shape, 0.0, 1, 0.0)
        mode = self.mode if self.shape == "triangular" else 0.0
        return Variate(self.stream, self.shape, mode, self.count, self.shared)

    @property
    def placed(self) -> tuple[float, float]:
        """Offset from nominal and scale: the deviation is offset + scale * variate."""
        if self.shape == "normal":
            return 0.0, self.deviation
        return self.low - self.nominal, self.high - self.low


def random_parts(
    columns: Mapping[str, int], model: Model, counts: Mapping[str, int] | None = None
) -> tuple[Part, ...]:
    """Every column that is an input or an assumption and varies.

    Conditions and look-ups are not random.

    Args:
        columns: Key to input column; ``V_ref@dim`` is the value of ``V_ref`` in the case ``dim``.
        model: The model; a column whose key is not among its variables is no part.
        counts: By the key of the symbol that counts them, numbers of like parts that differ from
            the given ones (in a case).
    """
    found = []
    for key, column in columns.items():
        given = _given(key, model)
        if given is not None and given.varies:
            found.append(part_of(key, column, given, counted(given, model, counts or {})))
    return tuple(found)


def _given(key: str, model: Model) -> Given | None:
    """The value in a column; None when it is a condition, or none that is given."""
    symbol, _, name = key.partition("@")
    variable = model.variables.get(symbol)
    if variable is None or variable.kind == "condition":
        return None
    if not name:
        return variable.given
    changed = next((case.changes[symbol] for case in model.cases if case.name == name), None)
    return changed if isinstance(changed, Given) else None


def part_of(key: str, column: int, given: Given, count: int = 1) -> Part:
    """The part in a column.

    Args:
        key: Of the column: the key of a symbol, or ``KEY@CASE`` for its value in a case.
        column: The input column.
        given: The value with its make-up.
        count: How many like parts there are, where it says ``each of``.
    """
    made, unit = given.parts, given.unit
    return Part(
        key=key,
        stream=key.partition("@")[0],
        column=column,
        nominal=float(unit.to_si(given.nominal)),
        low=float(unit.to_si(made.low)),
        high=float(unit.to_si(made.high)),
        bias_low=float(sum(bias.low for bias in made.biases) * unit.factor),
        bias_high=float(sum(bias.high for bias in made.biases) * unit.factor),
        shape=made.shape,
        k=float(made.k or 0),
        count=count if made.like else 1,
        shared=float(made.like.shared) if made.like else 0.0,
    )


def counted(given: Given, model: Model, counts: Mapping[str, int]) -> int:
    """How many like parts a given value stands for."""
    like = given.parts.like
    if like is None:
        return 1
    if isinstance(like.count, Number):
        return int(like.count.digits)
    assert isinstance(like.count, Name)
    key = fold(like.count.name)
    if key in counts:
        return counts[key]
    number = model.variables[key].given
    assert number is not None
    return int(number.nominal)
