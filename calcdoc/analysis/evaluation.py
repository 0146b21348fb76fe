"""What was computed: bands of quantities and judgements of criteria, in coherent SI."""

from collections.abc import Mapping
from enum import Enum

from calcdoc.analysis.compile import Side
from calcdoc.analysis.extremes import Proof
from calcdoc.frozen import Frozen
from calcdoc.model.model import Compared, Judged, Model, Root


class Stand(Frozen, frozen=True):
    """Where an input stands in a combination."""

    value: float
    """In coherent SI."""
    inside: bool
    """Strictly inside its band."""


Combination = Mapping[str, Stand]
"""By key: the inputs that matter, and where they stand."""


class Band(Frozen, frozen=True):
    """A quantity at nominal and at its extremes."""

    nominal: float
    least: float
    greatest: float
    at_least: Combination
    at_greatest: Combination
    proof: Proof
    bounds: tuple[float, float]
    """Proven: nothing in the band is beyond these. Equal to the extremes when exact."""

    @property
    def varies(self) -> bool:
        """Whether it has a band at all."""
        return self.least < self.greatest


class Outcome(Enum):
    """How a calculated criterion came out."""

    PASS = "pass"  # noqa: S105  (a verdict, not a password)
    FAIL = "fail"
    NOT_DECIDED = "not decided"


class Row(Frozen, frozen=True):
    """One element of a criterion over a series, at the point that governs it."""

    element: int
    value: float
    limit: float
    slack: float
    outcome: "Outcome"


class Judgement(Frozen, frozen=True):
    """A criterion at its governing point: where limit less value is least."""

    judged: Judged
    side: Side
    """The limit that governs; the nearer one when there are two."""
    value: float
    limit: float
    slack: float
    """Limit less value, positive on the good side; zero when the two count as equal."""
    requirement: float
    """Slack less the margin asked for; the verdict rests on it."""
    equal: bool
    """Whether the requirement is met with equality, within 1e-12 of the largest term."""
    outcome: Outcome
    governing: Combination
    values: Mapping[str, float]
    """Every quantity the criterion names, at the governing point."""
    proof: Proof
    bound: float
    """Proven: the requirement is nowhere below this."""
    rows: tuple[Row, ...]
    """For a criterion over a series, one for each element."""


class Crosschecked(Frozen, frozen=True):
    """A cross-check at nominal and over all bands."""

    compared: Compared
    first: float
    second: float
    """Both sides at nominal."""
    worst: float
    """The difference farthest from agreement, at nominal or over the bands: first less second,
    or as a share of the second where a share is allowed."""
    agrees: bool
    combination: Combination
    proof: Proof


class Numeric(Frozen, frozen=True):
    """How a quantity was found between two values."""

    residual: float
    """Left less right at the root, as a share of the largest term, the worst of all points."""
    gain: float | None
    """For a settled loop, the greatest loop gain over the band; one or more runs away."""


class Discharged(Frozen, frozen=True):
    """A stored charge: its greatest voltage, and the greatest time to a safe voltage."""

    greatest_voltage: float
    seconds: float | None
    """None without a bleed resistor: the charge stays."""
    combination: Combination


class Evaluation(Frozen, frozen=True):
    """A model with its numbers."""

    model: Model
    bands: Mapping[str, Band]
    """By key."""
    series: Mapping[str, Mapping[int, Band]]
    """By key and index."""
    judgements: tuple[Judgement, ...]
    """One for each calculated criterion, in order."""
    crosschecks: tuple[Crosschecked, ...]
    chosen: Mapping[str, Root]
    """Key of every solved quantity to the root that was left."""
    numeric: Mapping[str, Numeric]
    """Key of every quantity found between two values to how well it was found."""
    discharged: tuple[Discharged, ...]
