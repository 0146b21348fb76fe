"""Figures of a record: the numbers that a page draws, and what it says about them."""

from calcdoc.records.plain import Plain


class Figure(Plain, frozen=True, tag_field="kind"):
    """What all figures have. Numbers are in the units named; no figure holds a drawing."""

    number: int
    """They are counted through the record."""
    caption: str
    text: str
    """The statement as written."""
    alternative: str
    """What the picture shows, in full sentences; numbers are typeset."""
    notes: tuple[str, ...]
    """What a reader must know of it, one sentence each; numbers are typeset."""


class Meeting(Plain, frozen=True):
    """How a curve and its limit lie to each other."""

    end: str
    """``nominal``, ``least`` or ``greatest``: of the curve less its limit."""
    at: tuple[float, ...]
    """Where they meet along the axis."""
    side: str
    """``above`` or ``below`` the limit when they never meet; else empty."""


class Curve(Figure, frozen=True, tag="curve"):
    """A quantity against an input, with its band over all else; None where it has no value."""

    symbol: str
    unit: str
    against: str
    against_unit: str
    axis: tuple[float, ...]
    nominal: tuple[float | None, ...]
    least: tuple[float | None, ...]
    greatest: tuple[float | None, ...]
    limit: tuple[float | None, ...]
    """At nominal: one value when it is the same everywhere, none when there is no limit."""
    limit_least: tuple[float | None, ...]
    limit_greatest: tuple[float | None, ...]
    """Its band; empty when it has none."""
    limit_text: str
    """The limit as written."""
    meetings: tuple[Meeting, ...]
    at_nominal: tuple[float, float] | None
    """The nominal value of the input and of the quantity, where the axis holds it."""
    at_nominal_text: str
    partial: str
    """Why a part of the bands cannot be computed somewhere along the axis; else empty."""


class SpreadLimit(Plain, frozen=True):
    """A limit in a spread."""

    criterion: str
    """Empty for one that the figure states itself."""
    value: float
    text: str


class Spread(Figure, frozen=True, tag="spread"):
    """How a quantity is distributed when parts vary at random and conditions stand still."""

    symbol: str
    unit: str
    draws: int
    seed: int
    lost: int
    """Draws that could not be computed."""
    low: float
    high: float
    counts: tuple[int, ...]
    """Draws in bins of one width from ``low`` to ``high``."""
    mean: float
    deviation: float
    """In the unit of a difference: K for temperatures."""
    nominal: float
    least: float
    greatest: float
    nominal_text: str
    least_text: str
    greatest_text: str
    limits: tuple[SpreadLimit, ...]
    criterion: str
    """The criterion whose governing conditions hold here; may be empty."""
    fixed: dict[str, str]
    """Conditions and biased parts that do not stand at nominal."""
    assumed: tuple[str, ...]
    """Parts whose distribution is assumed."""


class Drive(Plain, frozen=True):
    """The changes that one input makes alone, in ``unit`` of the figure."""

    symbol: str
    at_least: str
    at_greatest: str
    """The least and the greatest value of the input."""
    low: float | None
    high: float | None
    """The changes there; None where they cannot be computed."""
    low_text: str
    high_text: str


class Sensitivities(Figure, frozen=True, tag="sensitivities"):
    """What drives a quantity, the largest change first."""

    symbol: str
    unit: str
    """Of a change: K for temperatures."""
    nominal: float
    nominal_text: str
    rows: tuple[Drive, ...]
    left_out: int
    """Inputs with smaller changes that are not shown."""


class MarginRow(Plain, frozen=True):
    """The margin of one criterion."""

    id: str
    description: str
    margin: float | None
    """As a share of the limit; None when the limit is zero or a temperature."""
    margin_text: str
    verdict: str
    remark: str


class Margins(Figure, frozen=True, tag="margins"):
    """The distance of every calculated criterion to its limit."""

    rows: tuple[MarginRow, ...]


AnyFigure = Curve | Spread | Sensitivities | Margins
