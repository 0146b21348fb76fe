"""What figures show, in coherent SI; ``calcdoc.analysis.picturing`` computes it."""

from collections.abc import Mapping

from calcdoc.frozen import Frozen
from calcdoc.model.model import Pictured


class Track(Frozen, frozen=True):
    """A quantity along an axis; None where it cannot be computed."""

    nominal: tuple[float | None, ...]
    least: tuple[float | None, ...]
    greatest: tuple[float | None, ...]
    """Over the bands of everything but the axis."""


class Meeting(Frozen, frozen=True):
    """How a curve and its limit lie to each other, at nominal or at one end of their bands."""

    end: str
    """``nominal``, or ``least`` or ``greatest``: curve less limit, both at one combination."""
    at: tuple[float, ...]
    """Where they meet, on the axis."""
    side: str
    """``above`` or ``below`` the limit when they never meet; else empty."""


class Curve(Frozen, frozen=True):
    """A quantity against a given one."""

    pictured: Pictured
    axis: tuple[float, ...]
    drawn: Track
    limit: Track | None
    meetings: tuple[Meeting, ...]
    partial: str
    """Why a part of the bands cannot be computed somewhere along the axis; else empty."""


class Bound(Frozen, frozen=True):
    """A limit in the picture of a spread."""

    criterion: str
    """The id of the criterion it belongs to, or empty for a stated one."""
    value: float


class Spread(Frozen, frozen=True):
    """How a quantity is distributed when parts vary at random."""

    pictured: Pictured
    draws: int
    seed: int
    lost: int
    """Draws for which it cannot be computed."""
    low: float
    high: float
    """The least and greatest of all draws; the bins between them are of one width."""
    counts: tuple[int, ...]
    mean: float
    deviation: float
    nominal: float
    least: float
    greatest: float
    """With parts at nominal, and by extremes over the parts; all else stands still."""
    bounds: tuple[Bound, ...]
    criterion: str
    """The criterion whose governing conditions hold here; empty: all at nominal."""
    fixed: Mapping[str, float]
    """Key of every condition and bias that does not stand at nominal to its value."""
    assumed: tuple[str, ...]
    """Keys of the parts whose distribution the text does not state."""


class Drive(Frozen, frozen=True):
    """The changes that one input makes alone, at its least and at its greatest value."""

    key: str
    at_least: float
    at_greatest: float
    low: float | None
    high: float | None
    """None where it cannot be computed."""


class Drives(Frozen, frozen=True):
    """What drives a quantity, the largest change first."""

    pictured: Pictured
    nominal: float
    rows: tuple[Drive, ...]


class Margins(Frozen, frozen=True):
    """The margins of all criteria, which stand in their judgements."""

    pictured: Pictured


Picture = Curve | Spread | Drives | Margins
