"""The model: every name resolved, every formula with its dimension, in order of computation."""

from collections.abc import Mapping
from fractions import Fraction

from calcdoc.frozen import Frozen
from calcdoc.text.document import Document
from calcdoc.text.given import Given
from calcdoc.text.nodes import Node
from calcdoc.text.statements import (
    Definition,
    GivenStatement,
    HazardStatement,
    Inequality,
    ReferenceStatement,
    SentenceStatement,
    Uncalculated,
)
from calcdoc.units import Dimension, Unit


class Typed(Frozen, frozen=True):
    """What is known of an expression before any number is computed."""

    dimension: Dimension
    weight: Fraction = Fraction(0)
    """How many temperatures on the Celsius scale are in it: 1 for a temperature, 0 for a
    difference and for everything else."""


class Variable(Frozen, frozen=True):
    """A quantity with a name: given, or defined by a formula."""

    key: str
    """The spelling all spellings share."""
    symbol: str
    """As typed where it is defined."""
    typed: Typed
    unit: Unit | None
    """The unit it is shown in; None when one is to be chosen."""
    statement: GivenStatement | Definition
    depends_on: tuple[str, ...]
    """Keys of the quantities its formula mentions, in order."""

    @property
    def given(self) -> Given | None:
        """Its value, when it is given and not defined."""
        return self.statement.given if isinstance(self.statement, GivenStatement) else None

    @property
    def formula(self) -> Node | None:
        """Its formula, when it is defined."""
        return self.statement.formula if isinstance(self.statement, Definition) else None


class Judged(Frozen, frozen=True):
    """A criterion that is calculated, with the kind of quantity it compares."""

    statement: Inequality
    typed: Typed
    depends_on: tuple[str, ...]


class Discharge(Frozen, frozen=True):
    """``stored C at V through R``: keys of capacitor, voltage and bleed resistor (None: none)."""

    capacitance: str
    voltage: str
    resistance: str | None
    statement: HazardStatement


class Model(Frozen, frozen=True):
    """A design that can be computed."""

    document: Document
    variables: Mapping[str, Variable]
    """By key, in the author's order."""
    order: tuple[str, ...]
    """Keys such that each comes after those it depends on."""
    criteria: tuple[Judged | Uncalculated, ...]
    sentences: tuple[SentenceStatement, ...]
    hazards: tuple[HazardStatement, ...]
    discharges: tuple[Discharge, ...]
    references: tuple[ReferenceStatement, ...]
