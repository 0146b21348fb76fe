"""What can be asked about the range of a quantity, and the answer."""

from enum import Enum

from calcdoc.analysis.points import BoolArray, FloatArray
from calcdoc.frozen import Frozen


class Proof(Enum):
    """How sure an extreme is."""

    EXACT = "exact"  # attained, and nothing in the box is beyond it
    BOUNDED = "bounded"  # attained, and nothing is beyond it by more than 1e-9 of its size
    SEARCHED = "searched"  # attained; a bound is proven, but the two are apart


class Question(Frozen, frozen=True):
    """What is asked: one end of one instruction's range over one box."""

    target: int
    greatest: bool
    low: FloatArray
    """Shape (n_inputs,), in coherent SI; low <= nominal <= high."""
    nominal: FloatArray
    high: FloatArray


class Extreme(Frozen, frozen=True):
    """The answer to one question."""

    value: float
    """Attained at ``point``. When the range runs to infinity it is the value at nominal, or some
    finite value; NaN where nothing was found that can be computed."""
    bound: float
    """Proven: nothing in the box is beyond it. Equal to ``value`` when exact."""
    point: FloatArray
    """Shape (n_inputs,); inputs without effect stand at nominal."""
    matters: BoolArray
    """Shape (n_inputs,): inputs that have width and effect."""
    interior: BoolArray
    """Shape (n_inputs,): inputs that matter and stand strictly inside their range."""
    proof: Proof
