"""Statements as written: one frozen type for each kind of line of a block."""

from enum import Enum

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


class Definition(Frozen, frozen=True):
    """``V_pk [V] = sqrt(2)*V_line | description | basis``."""

    symbol: Label
    unit: Unit | None
    """The unit the result is shown in; None when a prefix is to be chosen."""
    unit_text: UnitText | None
    formula: Node
    description: str
    basis: Basis
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


class Clauses(Frozen, frozen=True):
    """How an inequality is judged."""

    by: str = "extremes"
    at: tuple[PointValue, ...] = ()
    at_nominal: bool = False
    margin: Margin | None = None
    text: str = ""
    """As written, for the record."""


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


Statement = (
    GivenStatement
    | SentenceStatement
    | Definition
    | Inequality
    | Uncalculated
    | HazardStatement
    | ReferenceStatement
)
Criterion = Inequality | Uncalculated
