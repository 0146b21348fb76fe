"""Statements as written: one frozen type for each kind of line of a block."""

from enum import Enum
from fractions import Fraction

from calcdoc.frozen import Frozen
from calcdoc.source import Span
from calcdoc.text.given import Given
from calcdoc.text.names import fold
from calcdoc.text.nodes import Node, UnitText
from calcdoc.units import Unit


class Label(Frozen, frozen=True):
    """A symbol or id where it is defined."""

    name: str
    span: Span

    @property
    def key(self) -> str:
        """The spelling that all spellings of it share."""
        return fold(self.name)


class Citation(Frozen, frozen=True):
    """``[KEY]`` or ``[KEY, table 4]`` in a basis."""

    key: str
    detail: str
    span: Span


class Basis(Frozen, frozen=True):
    """Where something comes from: free text with citations."""

    text: str
    citations: tuple[Citation, ...] = ()


class Kind(Enum):
    """What kind of given quantity a statement defines."""

    CONDITION = "condition"
    INPUT = "input"
    ASSUMPTION = "assumption"


class GivenStatement(Frozen, frozen=True):
    """``V_line = 230 V ± 10 % | description | basis`` in conditions, inputs or assumptions."""

    kind: Kind
    symbol: Label
    given: Given
    description: str
    basis: Basis
    id: Label | None
    """The id of an assumption, when it has one."""
    state: str
    """``open`` or ``closed`` for an assumption, else empty."""
    text: str
    span: Span


class SentenceStatement(Frozen, frozen=True):
    """``A3: text | why it is reasonable | open: note``: an assumption that is a sentence."""

    id: Label
    text: str
    reason: str
    basis: Basis
    state: str
    span: Span


class Index(Frozen, frozen=True):
    """``for n in 3..39 odd``: the running index of a series and the values it takes."""

    name: Label
    values: tuple[int, ...]
    text: str
    """The set as written: ``3..39 odd``."""


class Definition(Frozen, frozen=True):
    """``V_pk [V] = sqrt(2)*V_line``, or a series ``i[n] [mA] = 3.4 mA/n for n in 3..39 odd``."""

    symbol: Label
    unit: Unit | None
    """The unit the result is shown in; None when a prefix is to be chosen."""
    unit_text: UnitText | None
    formula: Node
    description: str
    basis: Basis
    span: Span
    index: Index | None = None
    taken: "Take | None" = None
    """What a method takes, when this line hands it over; then the unit is what is asked for."""


class Unknown(Frozen, frozen=True):
    """A quantity that relations are solved for, with the unit it is shown in."""

    symbol: Label
    unit: Unit | None
    unit_text: UnitText | None


class RelationStatement(Frozen, frozen=True):
    """``relation charge: C_res*ΔV = I_reg*t_dis``: an equation that is stated, not solved."""

    name: Label
    left: Node
    right: Node
    description: str
    basis: Basis
    span: Span


class SolvedStatement(Frozen, frozen=True):
    """``ΔV [V] from charge``, ``V_a, I_a from loop, node``, with ``where`` or ``within``."""

    unknowns: tuple[Unknown, ...]
    relations: tuple[Label, ...]
    where: Node | None
    """A condition that leaves one root."""
    bracket: Given | None
    """Solve numerically between these values."""
    description: str
    basis: Basis
    span: Span


class SettleStatement(Frozen, frozen=True):
    """``settle T_b within -40 °C .. 200 °C``: a quantity that depends on itself."""

    symbol: Label
    bracket: Given
    description: str
    basis: Basis
    span: Span


class RestateStatement(Frozen, frozen=True):
    """``restate ΔV in C_res, I_reg, f_line``: the same result in terms of chosen quantities."""

    symbol: Label
    terms: tuple[Label, ...]
    description: str
    span: Span


class SensitivityStatement(Frozen, frozen=True):
    """``sensitivity of P_reg to V_line, V_LED``: partial derivatives as formulas and numbers."""

    symbol: Label
    inputs: tuple[Label, ...]
    description: str
    span: Span


class CrosscheckStatement(Frozen, frozen=True):
    """``K1: ΔV against ΔV_1 within 25 %``, ``K2: ΔV not below ΔV_1``, ``K3: a not above b``."""

    id: Label
    first: Node
    second: Node
    form: str
    """``against``, ``not below`` or ``not above``."""
    allowed: Given | None
    """The share of the second that ``against`` allows."""
    description: str
    basis: Basis
    text: str
    span: Span


class PointValue(Frozen, frozen=True):
    """``V_line = 230 V ± 2 %`` in an ``at`` clause."""

    symbol: Label
    given: Given


class Margin(Frozen, frozen=True):
    """``with margin 10 %`` (a share of the limit) or ``with margin 5 K`` (a difference)."""

    value: Given
    is_share: bool
    span: Span


class Scope(Frozen, frozen=True):
    """``in every case``, ``in every fault`` or ``in dim, one LED shorted``."""

    every: str
    """``case``, ``fault``, or empty when the cases are named."""
    names: tuple[Label, ...]
    span: Span


class Clauses(Frozen, frozen=True):
    """How an inequality is judged."""

    by: str = "extremes"
    """``extremes``, ``root sum square`` or ``sampling``."""
    share: Fraction | None = None
    """For sampling, the share of draws that must meet the limit."""
    at: tuple[PointValue, ...] = ()
    at_nominal: bool = False
    scope: Scope | None = None
    """None for the normal case and every mode."""
    when: Node | None = None
    """The condition under which the limit counts."""
    margin: Margin | None = None
    index: Index | None = None
    text: str = ""
    """As written, for the record."""
    by_span: Span | None = None
    """Where the method stands; None where none is named."""


class Inequality(Frozen, frozen=True):
    """``R1: V_max <= 0.8*V_rated with margin 10 % | description | basis``."""

    id: Label
    operands: tuple[Node, ...]
    operators: tuple[str, ...]
    clauses: Clauses
    description: str
    basis: Basis
    span: Span


class Uncalculated(Frozen, frozen=True):
    """A criterion that is not calculated: ``by test``, ``by inspection``, ``not applicable``."""

    id: Label
    verdict: str
    text: str
    """What is tested, or why it does not apply."""
    description: str
    basis: Basis
    span: Span


class AnyOf(Frozen, frozen=True):
    """``H0: any of H1, H2, H3``: one of several routes is enough."""

    id: Label
    members: tuple[Label, ...]
    text: str
    """``any of H1, H2, H3``"""
    description: str
    basis: Basis
    span: Span


class Acceptance(Frozen, frozen=True):
    """``accept R3 in dim | reason | [DEV-3] until 2027-06-30``: a failure that is lived with."""

    criterion: Label
    cases: tuple[Label, ...]
    """Empty: in whatever case it fails."""
    reason: str
    basis: Basis
    until: str
    """The last day it holds, as YYYY-MM-DD."""
    until_span: Span
    text: str
    span: Span


class Change(Frozen, frozen=True):
    """One change of a case: a value with its band, or a formula of the normal values."""

    symbol: Label
    given: Given | None
    formula: Node | None
    """Exactly one of the two is there."""
    text: str
    """As written: ``n_LED = n_LED - 1``."""


class CaseStatement(Frozen, frozen=True):
    """``fault one LED shorted: n_LED = n_LED - 1 | single fault``: named changes of inputs."""

    kind: str
    """``mode`` or ``fault``."""
    name: Label
    changes: tuple[Change, ...]
    description: str
    basis: Basis
    text: str
    span: Span


class Measurement(Frozen, frozen=True):
    """``K3: measured P_m = 4.61 W ± 1.5 % against P_in at V_line = 230.2 V, T_a = 24 °C``."""

    id: Label
    symbol: Label
    """What the measured value is called; it cannot be used in formulas."""
    given: Given
    """With the uncertainty of the instrument as its band."""
    second: Node
    at: tuple[PointValue, ...]
    """The conditions of the measurement."""
    description: str
    basis: Basis
    text: str
    span: Span


class FigureStatement(Frozen, frozen=True):
    """``curve V_min against C_res from 4.7 µF to 22 µF with 240 V | caption``."""

    kind: str
    """``curve``, ``spread``, ``sensitivities`` or ``margins``."""
    symbol: Label | None
    """What is drawn; None for margins."""
    against: Label | None
    low: Given | None
    high: Given | None
    """For a curve: the input along the abscissa, and from where to where."""
    limit: Node | None
    """A line to compare with, in a curve or a spread."""
    caption: str
    text: str
    span: Span


class HazardStatement(Frozen, frozen=True):
    """``supply V``, ``stored C at V through R``, ``not isolated``."""

    kind: str
    symbols: tuple[Label, ...]
    text: str
    span: Span


class ReferenceStatement(Frozen, frozen=True):
    """``KEY | title | edition | where held``."""

    key: str
    title: str
    edition: str
    held: str
    span: Span


class Take(Frozen, frozen=True):
    """``V_drop [V] = 0 V | voltage the regulator needs | basis``: what a sheet is applied to."""

    symbol: Label
    unit: Unit | None
    """None for a plain number."""
    unit_text: UnitText | None
    default: Node | None
    """Without one it has to be given where the sheet is applied."""
    description: str
    basis: Basis
    """Of the default."""
    span: Span


class Limit(Frozen, frozen=True):
    """``V_s > 0 V | description | basis``: where a sheet is valid; without clauses."""

    inequality: "Inequality"
    description: str


class Give(Frozen, frozen=True):
    """``V_min | least voltage``: what a sheet gives to the design that applies it."""

    symbol: Label
    description: str


class Binding(Frozen, frozen=True):
    """``C = C_res`` in a `use` block: what a method takes, and from where."""

    symbol: Label
    formula: Node


class Applied(Frozen, frozen=True):
    """A method as one design applies it."""

    name: Label
    """As in ``use METHOD as NAME``, where the design says it."""
    method: str
    """As the design names it: ``residual-voltage`` or ``./sheets/bleed.md``."""
    title: str
    revision: str
    limits: tuple["Inequality", ...]
    """Where the method is valid, in names of this application."""
    gives: frozenset[str]
    """Keys that the design may use: what the sheet gives, and the ids of what it judges."""
    defaults: frozenset[str]
    """Keys of what it takes and the design leaves at its default."""


Statement = (
    GivenStatement
    | SentenceStatement
    | Definition
    | RelationStatement
    | SolvedStatement
    | SettleStatement
    | RestateStatement
    | SensitivityStatement
    | CrosscheckStatement
    | Inequality
    | Uncalculated
    | AnyOf
    | Acceptance
    | CaseStatement
    | Measurement
    | FigureStatement
    | HazardStatement
    | ReferenceStatement
)
