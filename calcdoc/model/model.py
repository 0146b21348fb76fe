"""The model: every name resolved, every formula with its dimension, in order of computation."""

from collections.abc import Mapping
from fractions import Fraction

from calcdoc.frozen import Frozen
from calcdoc.tables.table import Table
from calcdoc.text.document import Document
from calcdoc.text.given import Given
from calcdoc.text.nodes import Node
from calcdoc.text.statements import (
    Acceptance,
    AnyOf,
    Basis,
    CaseStatement,
    CrosscheckStatement,
    FigureStatement,
    GivenStatement,
    HazardStatement,
    Index,
    Inequality,
    Label,
    Measurement,
    ReferenceStatement,
    RelationStatement,
    RestateStatement,
    SensitivityStatement,
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


class Root(Frozen, frozen=True):
    """One closed form of an unknown, with the steps that lead to it in words."""

    tree: Node
    steps: tuple[str, ...]
    """``divide both sides by C_res: ΔV = I_reg*t_dis/C_res``"""


class Solved(Frozen, frozen=True):
    """Unknowns in closed form; when there are several combinations, ``where`` leaves one."""

    unknowns: tuple[str, ...]
    """Keys, in the author's order."""
    relations: tuple[str, ...]
    """Keys of the relations they were solved from."""
    combinations: tuple[tuple[Root, ...], ...]
    """Each has one root for every unknown."""
    where: Node | None
    proven: bool
    """Whether every combination satisfies its relations identically."""
    span_of: Label
    """Where to point when no combination, or more than one, is left."""


class Implicit(Frozen, frozen=True):
    """A quantity that is found numerically: where ``left`` equals ``right`` in a bracket."""

    left: Node
    right: Node
    dimension: Dimension
    """Of both sides, and so of what is left between them."""
    bracket: Given
    inner: tuple[str, ...]
    """For a settled loop: keys that are computed anew at every trial, in order."""
    is_loop: bool
    """Then ``left`` is the quantity's own formula and ``right`` the quantity."""
    relation: str
    """Key of the relation; empty for a loop."""


class Variable(Frozen, frozen=True):
    """A quantity with a name: given, defined by a formula, solved for, or settled."""

    key: str
    """The spelling all spellings share."""
    label: Label
    """As typed where it is defined."""
    kind: str
    """``condition``, ``input``, ``assumption``, ``derived``, ``solved`` or ``settled``."""
    typed: Typed
    unit: Unit | None
    """The unit it is shown in; None when one is to be chosen."""
    description: str
    basis: Basis
    depends_on: tuple[str, ...]
    """Keys of the quantities it rests on, in order."""
    given: Given | None = None
    """Its value, when it is given."""
    stated: GivenStatement | None = None
    """The statement that gives it."""
    formula: Node | None = None
    """Its formula, when it is defined by one (a loop has one too)."""
    solved: Solved | None = None
    implicit: Implicit | None = None
    index: Index | None = None
    """The indices of a series."""

    @property
    def symbol(self) -> str:
        """As typed where it is defined."""
        return self.label.name


class Relation(Frozen, frozen=True):
    """An equation that is stated, with the quantities it names."""

    key: str
    statement: RelationStatement
    names: tuple[str, ...]


class Judged(Frozen, frozen=True):
    """A criterion that is calculated, with the kind of quantity it compares."""

    statement: Inequality
    typed: Typed
    depends_on: tuple[str, ...]
    """Keys of what its sides and its ``when`` name."""
    cases: tuple[str, ...]
    """Names of the cases it is judged in: ``normal`` first, the others in the author's order."""


class Chosen(Frozen, frozen=True):
    """``any of H1, H2``: one of several criteria is enough."""

    statement: AnyOf
    members: tuple[str, ...]
    """Keys of the criteria, each once, in the author's order."""


Criterion = Judged | Uncalculated | Chosen


class Accepted(Frozen, frozen=True):
    """A failure that is accepted until a day."""

    statement: Acceptance
    criterion: str
    """Key of the criterion, which is calculated."""
    cases: tuple[str, ...]
    """Names of the cases in which its failure is accepted; empty for all of them."""


class Case(Frozen, frozen=True):
    """A mode or a fault; the case ``normal`` changes nothing and has none."""

    key: str
    """Blanks collapsed, accents composed; names are compared by it."""
    name: str
    """The same, as it is shown."""
    kind: str
    """``mode`` or ``fault``."""
    statement: CaseStatement
    changes: Mapping[str, Given | Node]
    """Key of a given quantity to its value in this case, or to a formula of normal values."""


class Compared(Frozen, frozen=True):
    """A cross-check between two ways to one quantity."""

    statement: CrosscheckStatement
    typed: Typed
    depends_on: tuple[str, ...]


class Measured(Frozen, frozen=True):
    """A measured value and what it is compared with."""

    statement: Measurement
    typed: Typed
    depends_on: tuple[str, ...]


class Discharge(Frozen, frozen=True):
    """``stored C at V through R``: keys of capacitor, voltage and bleed resistor (None: none)."""

    capacitance: str
    voltage: str
    resistance: str | None
    statement: HazardStatement


class Pictured(Frozen, frozen=True):
    """A figure that can be computed."""

    statement: FigureStatement
    depends_on: tuple[str, ...]
    """Keys of the given quantities that what it shows rests on, in the author's order."""


class Model(Frozen, frozen=True):
    """A design that can be computed."""

    document: Document
    tables: Mapping[str, Table]
    variables: Mapping[str, Variable]
    """By key, in the author's order."""
    order: tuple[str, ...]
    """Keys such that each comes after those it depends on."""
    relations: Mapping[str, Relation]
    cases: tuple[Case, ...]
    """Modes and faults in the author's order; ``normal`` is not among them."""
    criteria: tuple[Criterion, ...]
    acceptances: tuple[Accepted, ...]
    crosschecks: tuple[Compared, ...]
    measurements: tuple[Measured, ...]
    """Cross-checks with a measured value; ``statement.span`` says where they stand among them."""
    restated: tuple[RestateStatement, ...]
    sensitivities: tuple[SensitivityStatement, ...]
    sentences: tuple[SentenceStatement, ...]
    hazards: tuple[HazardStatement, ...]
    discharges: tuple[Discharge, ...]
    references: tuple[ReferenceStatement, ...]
    figures: tuple[Pictured, ...] = ()
    limits: tuple[Judged, ...] = ()
    """The limits of validity of its methods, in order."""

    @property
    def judged(self) -> tuple[Judged, ...]:
        """What is judged at extremes and by the other ways: criteria first, then limits."""
        return (*(each for each in self.criteria if isinstance(each, Judged)), *self.limits)
