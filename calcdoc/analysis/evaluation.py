"""What was computed: bands of quantities and judgements of criteria, in coherent SI."""

from collections.abc import Callable, Mapping
from enum import Enum
from typing import TYPE_CHECKING

from calcdoc.analysis.extremes import Proof
from calcdoc.analysis.looking_up import LookedUp
from calcdoc.analysis.sides import Side
from calcdoc.frozen import Frozen
from calcdoc.model.model import Compared, Judged, Measured, Model, Root
from calcdoc.text.nodes import Node
from calcdoc.text.statements import RestateStatement, SensitivityStatement

if TYPE_CHECKING:  # most designs need no statistics and no figures
    from calcdoc.analysis.counting import Sampled, Spread
    from calcdoc.analysis.draws import Setting
    from calcdoc.analysis.pictured import Picture
    from calcdoc.analysis.root_sum_square import Combined

Progress = Callable[[int, int], object]
"""Told how many draws of how many are done."""


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

    @property
    def magnitude(self) -> float:
        """The greatest size over the band, whatever its sign."""
        return max(abs(self.least), abs(self.greatest))


class Outcome(Enum):
    """How a calculated criterion came out."""

    PASS = "pass"  # noqa: S105  (a verdict, not a password)
    FAIL = "fail"
    NOT_DECIDED = "not decided"
    NOT_APPLICABLE = "not applicable"


class Row(Frozen, frozen=True):
    """One limit of a criterion, for one element of a series, at the point that governs it."""

    element: int
    value: float
    limit: float
    slack: float
    outcome: "Outcome"


class Drawn(Frozen, frozen=True):
    """What the draws say about one limit of a criterion."""

    share: float
    """Of the draws that must meet the criterion."""
    sampled: "Sampled"
    spread: "Spread"
    """Of the requirement of this limit."""


class Judgement(Frozen, frozen=True):
    """A criterion in one case, at its governing point: where limit less value is least."""

    judged: Judged
    case: str
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
    """Each limit at the point that governs it: both sides, and every element of a series."""
    away: tuple[str, ...]
    """Keys of settled quantities it rests on whose loop gain may reach one: then it fails, or is
    not decided."""
    statistics: "Combined | Drawn | None" = None
    """By root sum square, by sampling, or None by extremes."""


class Unjudged(Frozen, frozen=True):
    """A criterion in one case in which there is nothing to compare."""

    judged: Judged
    case: str
    outcome: Outcome
    reason: str


class Conclusion(Frozen, frozen=True):
    """A criterion over all the cases it is judged in."""

    judged: Judged
    in_case: Mapping[str, Judgement | Unjudged]
    """By case, in order."""
    governing: Judgement | Unjudged
    """The worst outcome, and of those the one with the least requirement."""

    @property
    def outcome(self) -> Outcome:
        """How it came out over all its cases."""
        return self.governing.outcome


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


class AgainstMeasured(Frozen, frozen=True):
    """A measured value against what is computed at the conditions of the measurement."""

    measured: Measured
    first: float
    """Measured."""
    second: float
    """Computed, with every part at nominal."""
    difference: float
    """First less second."""
    allowed: float
    """Root sum square of both bands, each on the side that faces the other value."""
    agrees: bool
    low: float
    high: float
    """The band of the computed value at those conditions."""
    proof: Proof


class Gain(Frozen, frozen=True):
    """The greatest share of a small change that comes back through a settled loop."""

    value: float
    bound: float
    """Proven: it is nowhere greater."""

    @property
    def settles(self) -> bool:
        """Whether it is proven to stay below one."""
        return self.bound < 1

    @property
    def runs_away(self) -> bool:
        """Whether it reaches one; a gain that could not be computed counts as doing so."""
        return not self.value < 1


class PutBack(Frozen, frozen=True):
    """How well a quantity that was solved for satisfies its relation."""

    residual: float
    """Left less right, as a share of the largest term, the worst of all points."""
    proven: bool
    """Whether left less right vanishes identically."""
    gain: Gain | None
    """For a settled loop."""


class Restated(Frozen, frozen=True):
    """A result in terms of chosen quantities."""

    statement: RestateStatement
    tree: Node
    value: float
    """At nominal, computed from the closed form."""
    original: float
    """At nominal, as the line itself computed it."""


class Answer(Frozen, frozen=True):
    """How a quantity answers to one quantity it depends on; in coherent SI."""

    key: str
    slope: Node
    value: float
    """The partial derivative at nominal."""
    per_cent: float
    """The change that one per cent of the nominal value makes, in first order."""
    low: float
    high: float
    """The changes at the least and the greatest value, all others at nominal."""


class Sensitive(Frozen, frozen=True):
    """The sensitivities of a quantity, the greatest effect of a full tolerance first."""

    statement: SensitivityStatement
    rows: tuple[Answer, ...]


class Discharged(Frozen, frozen=True):
    """A stored charge: its greatest voltage of either sign, and the greatest time to 60 V.

    Both over all tolerances, and over all cases that can be computed.
    """

    greatest_voltage: float
    seconds: float | None
    """None without a bleed resistor: the charge stays."""
    combination: Combination
    case: str
    """The case with the greatest time."""
    unknown: tuple[str, ...]
    """Cases in which voltage or time could not be computed."""


class CaseBands(Frozen, frozen=True):
    """The quantities that one case moves."""

    bands: Mapping[str, Band]
    """By key."""
    series: Mapping[str, Mapping[int, Band]]
    """By key and index."""
    broken: Mapping[str, str]
    """Key of every quantity that cannot be computed in this case, with the reason."""
    running: Mapping[str, Gain]
    """The gain of every loop that is not proven to settle in this case, by key."""


class Evaluation(Frozen, frozen=True):
    """A model with its numbers."""

    model: Model
    bands: Mapping[str, Band]
    """By key."""
    series: Mapping[str, Mapping[int, Band]]
    """By key and index."""
    cases: Mapping[str, CaseBands]
    """By name, every case but the normal one."""
    conclusions: tuple[Conclusion, ...]
    """One for each calculated criterion, in order."""
    validity: tuple[Conclusion, ...]
    """One for each limit of validity of a method, in order."""
    crosschecks: tuple[Crosschecked, ...]
    measurements: tuple[AgainstMeasured, ...]
    chosen: Mapping[str, Root]
    """Key of every solved quantity to the root that was left."""
    put_back: Mapping[str, PutBack]
    """Key of every solved or settled quantity to what is left when it is put back."""
    discharged: tuple[Discharged, ...]
    looked: tuple[LookedUp, ...]
    restated: tuple[Restated, ...]
    sensitive: tuple[Sensitive, ...]
    setting: "Setting | None"
    """How parts were drawn; None when no criterion is judged by sampling."""
    figures: "tuple[Picture, ...]" = ()
    """In the author's order."""
