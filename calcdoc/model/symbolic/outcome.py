"""What solving yields: steps in words with the relation after each, solutions, failures."""

from typing import Final, Literal

from calcdoc.frozen import Frozen
from calcdoc.text.nodes import Node

How = Literal["isolated", "linear", "quadratic", "substituted", "symbolic engine"]
Kind = Literal[
    "contradiction",
    "dependent",
    "unknown not in relation",
    "not solvable",
    "out of time",
    "too large",
    "no derivative",
]

LARGEST: Final = 400
"""Nodes of a tree that is still read by a person."""


class Step(Frozen, frozen=True):
    """One step of a derivation, as a reviewer would say it, and the relation after it."""

    words: str
    left: Node
    right: Node


class Solution(Frozen, frozen=True):
    """One unknown in closed form; ``steps`` lead from the relation to ``unknown = tree``."""

    unknown: str
    """The key that was asked for."""
    tree: Node
    steps: tuple[Step, ...]
    how: How


class Roots(Frozen, frozen=True):
    """All combinations that solve the relations; each has one solution per unknown, in order."""

    combinations: tuple[tuple[Solution, ...], ...]


class Failure(Frozen, frozen=True):
    """Why there is no answer; ``names`` are the relations or quantities it is about."""

    kind: Kind
    message: str
    names: tuple[str, ...] = ()


Outcome = Roots | Failure


class Refused(Exception):
    """Carries a failure out of a recursion; it never leaves this package."""

    def __init__(self, failure: Failure) -> None:
        super().__init__(failure.message)
        self.failure = failure
