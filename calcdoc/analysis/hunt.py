"""The state of one hard question: boxes still open, the best value attained, what was closed.

Everything is turned so that the greatest value is sought: for a least value ``sign`` is -1 and
all values and bounds are kept with the opposite sign. Arrays of boxes have shape (n_free, k): the
inputs that are not free stand still at ``base``.
"""

from dataclasses import dataclass, field
from typing import Final

import numpy as np

from calcdoc.analysis.intervals import neg
from calcdoc.analysis.points import BoolArray, FloatArray, IntArray
from calcdoc.frozen import Frozen

TOLERANCE: Final = 1e-9
"""Gap between bound and attained value, relative to the largest value seen, that counts as none."""
KEEN: Final = 16
"""Boxes looked at before a gap that counts as none is accepted."""
KEEN_INPUTS: Final = 3
MOST_ROUNDS: Final = 120
PATIENCE: Final = 40
"""Rounds after which an infinite bound is accepted."""
N_SCATTER: Final = 64
"""Points tried at the start, so that a hunt that proves little has at least looked around."""
TINY: Final = 1e-300


def scatter(n_free: int) -> FloatArray:
    """Evenly spread points of the unit cube, shape (n_free, 64), always the same."""
    # Multiples of powers of the root of x^(n + 1) = x + 1 fill the cube without clusters.
    root = 2.0
    for _ in range(30):
        root = (1.0 + root) ** (1.0 / (n_free + 1))
    steps = root ** -np.arange(1.0, n_free + 1.0)
    points: FloatArray = (0.5 + steps[:, None] * np.arange(1, N_SCATTER + 1)) % 1.0
    return points


class Trial(Frozen, frozen=True):
    """Boxes of one round after the sweep; sides with a known slope are at their right end."""

    low: FloatArray
    high: FloatArray
    bound: FloatArray
    """Shape (k,): no value in the box is beyond it."""
    open: BoolArray
    """Shape (n_free, k): sides with width whose slope may have either sign."""
    smear: FloatArray
    """Shape (n_free, k): how much the value may move along each open side, -1 elsewhere."""
    candidates: FloatArray
    """Shape (n_free, c): points to evaluate; the first k are one inside each box."""


@dataclass(slots=True)
class Hunt:
    """Branch and bound for one question."""

    target: int
    sign: float
    free: IntArray
    base: FloatArray
    low: FloatArray
    high: FloatArray
    bound: FloatArray
    limit: int
    """Number of boxes that may be looked at."""
    goal: float = np.inf
    """Enough is known when this (signed) value is attained or proven out of reach."""
    box: tuple[FloatArray, FloatArray] = field(init=False)
    """Lower and upper ends (n_free,) of the whole box."""
    width: FloatArray = field(init=False)
    best: float = -np.inf
    at: FloatArray = field(init=False)
    worst: float = np.inf
    closed: float = -np.inf
    """Greatest bound of a box that was given up because the gap was too small to matter."""
    used: int = 0
    """Boxes looked at."""
    rounds: int = 0

    def __post_init__(self) -> None:
        self.box = self.low[:, 0], self.high[:, 0]
        self.width = np.maximum(self.high[:, 0] - self.low[:, 0], TINY)
        self.at = self.base[self.free]

    @property
    def tolerance(self) -> float:
        """Absolute gap that counts as none."""
        if not np.isfinite(self.best):
            return 0.0
        return TOLERANCE * max(abs(self.best), self.best - self.worst)

    @property
    def _slack(self) -> float:
        """Gap at which a box is given up: none at first, so that what can be exact becomes so."""
        if self.goal < np.inf:
            return 0.0
        keen = self.used < KEEN and len(self.free) <= KEEN_INPUTS
        return 0.0 if keen else 0.9 * self.tolerance

    @property
    def top(self) -> float:
        """Proven bound: nothing in the whole box is beyond it."""
        return max(self.best, self.closed, float(self.bound.max(initial=-np.inf)))

    @property
    def done(self) -> bool:
        """Whether nothing is open, the budget is used, or the goal is decided."""
        if self.bound.size == 0 or self.used >= self.limit or self.rounds >= MOST_ROUNDS:
            return True
        if self.best >= self.goal or self.top < self.goal < np.inf:
            return True
        return self.rounds >= PATIENCE and self.top == np.inf

    def take(self, count: int) -> tuple[FloatArray, FloatArray]:
        """Remove the ``count`` boxes with the greatest bounds from the pool."""
        first = np.argsort(-self.bound, kind="stable")
        taken, rest = first[:count], first[count:]
        boxes = self.low[:, taken], self.high[:, taken]
        self.low, self.high, self.bound = self.low[:, rest], self.high[:, rest], self.bound[rest]
        self.used += len(taken)
        return boxes

    def learn(
        self, low: FloatArray, high: FloatArray, value: FloatArray, move: FloatArray
    ) -> Trial:
        """Use the ranges (2, k) and slopes (2, n_free, k) of the target over the boxes taken."""
        if self.sign < 0:
            value, move = neg(value), neg(move)
        width = high - low
        rises, falls = move[0] >= 0.0, move[1] <= 0.0
        free = (width > 0.0) & ~rises & ~falls
        steep = np.maximum(-move[0], move[1])
        share = width / self.width[:, None]
        span = np.minimum(value[1] - value[0], 1.0 / TINY)
        finite = np.isfinite(steep)
        smear = np.where(finite, np.where(finite, steep, 0.0) * width, span * share)
        inside_low, inside_high = np.where(rises, high, low), np.where(falls & ~rises, low, high)
        middle = np.where(free, np.clip(low + 0.5 * width, low, high), inside_low)
        uphill = np.where(free, np.where(move[1] >= -move[0], high, low), inside_low)
        points = [middle, uphill]
        if self.used == 1:
            spread = low + width * scatter(len(low))
            points += [self.at[:, None], inside_low, inside_high, spread]
        return Trial(
            low=inside_low,
            high=inside_high,
            bound=value[1],
            open=free,
            smear=np.where(free, smear, -1.0),
            candidates=np.concatenate(points, axis=1),
        )

    def settle(self, trial: Trial, signed: FloatArray) -> None:
        """Use the signed values of the candidates: drop what cannot be better, halve the rest."""
        self.rounds += 1
        self.offer(trial.candidates, signed)
        if (seen := signed[np.isfinite(signed)]).size:
            self.worst = min(self.worst, float(seen.min()))
        bound = trial.bound
        monotone = ~trial.open.any(axis=0)
        known = monotone & np.isfinite(signed[: len(bound)])  # its end was evaluated: exact
        alive = ~known & (bound > self.best)
        near = alive & ((bound <= self.best + self._slack) | monotone)
        self._close(bound[near])
        alive &= ~near
        if self.used == 1 and not trial.open.all() and alive.any():
            self._push(trial.low, trial.high, bound)  # the box shrank: look again before halving
            self.used += 1
        else:
            self._halve(trial, np.flatnonzero(alive))
        kept = self.bound > self.best + self._slack
        self._close(self.bound[~kept & (self.bound > self.best)])
        self.low, self.high, self.bound = self.low[:, kept], self.high[:, kept], self.bound[kept]

    def offer(self, points: FloatArray, signed: FloatArray) -> bool:
        """Keep the best of some evaluated points (n_free, c); the first wins a tie."""
        leader = int(signed.argmax())
        if signed[leader] <= self.best:
            return False
        self.best, self.at = float(signed[leader]), points[:, leader].copy()
        return True

    def _close(self, bounds: FloatArray) -> None:
        self.closed = max(self.closed, float(bounds.max(initial=-np.inf)))

    def _push(self, low: FloatArray, high: FloatArray, bound: FloatArray) -> None:
        self.low = np.concatenate((self.low, low), axis=1)
        self.high = np.concatenate((self.high, high), axis=1)
        self.bound = np.concatenate((self.bound, bound))

    def _halve(self, trial: Trial, columns: IntArray) -> None:
        """Push both halves of boxes, cut along the side that may move the value most."""
        low, high = trial.low[:, columns], trial.high[:, columns]
        side = trial.smear[:, columns].argmax(axis=0)
        here = np.arange(len(columns))
        middle = low[side, here] + 0.5 * (high[side, here] - low[side, here])
        thin = (middle <= low[side, here]) | (middle >= high[side, here])
        bound = trial.bound[columns]
        self._close(bound[thin])
        lower, upper = high.copy(), low.copy()
        lower[side, here], upper[side, here] = middle, middle
        self._push(low[:, ~thin], lower[:, ~thin], bound[~thin])
        self._push(upper[:, ~thin], high[:, ~thin], bound[~thin])
