"""The record: everything a page shows, in order, with nothing left to compute.

Texts of numbers and formulas are written in the language of the design text (``-3.2 V``,
``1.8e-3 Ω``, ``sqrt(2)*230 V - 2*0.95 V``): they can be parsed again, and each view typesets them.
Contract keys of the JSON are the attribute names. Symbols, ids and lines are unique in a record.
"""

from calcdoc.records.plain import Plain
from calcdoc.records.record_body import (
    Block,
    Break,
    CaseLine,
    CautionBox,
    Code,
    CriterionLine,
    CrosscheckLine,
    Emphasis,
    FigureLine,
    Grid,
    Heading,
    Inline,
    Items,
    Link,
    Listing,
    MethodBox,
    Paragraph,
    Picture,
    QuantityLine,
    Quote,
    RelationLine,
    RestatedLine,
    Rule,
    SensitivityLine,
    SentenceLine,
    Value,
    Verdict,
    Words,
)
from calcdoc.records.record_figures import (
    AnyFigure,
    Curve,
    Drive,
    Figure,
    MarginRow,
    Margins,
    Meeting,
    Sensitivities,
    Spread,
    SpreadLimit,
)
from calcdoc.records.record_lines import (
    Case,
    CaseChange,
    CaseValues,
    Contribution,
    Criterion,
    CriterionCase,
    CriterionRow,
    Crosscheck,
    Quantity,
    Relation,
    Restated,
    Sensitivity,
    SensitivityRow,
    Share,
)

__all__ = [
    "SCHEMA",
    "AnyFigure",
    "AppliedMethod",
    "Assumption",
    "Block",
    "Break",
    "Case",
    "CaseChange",
    "CaseLine",
    "CaseValues",
    "Caution",
    "CautionBox",
    "Code",
    "Contribution",
    "Criterion",
    "CriterionCase",
    "CriterionLine",
    "CriterionRow",
    "Crosscheck",
    "CrosscheckLine",
    "Curve",
    "Document",
    "Drive",
    "Emphasis",
    "Figure",
    "FigureLine",
    "File",
    "Grid",
    "Hazard",
    "Heading",
    "Inline",
    "Issue",
    "Items",
    "Link",
    "Listing",
    "MarginRow",
    "Margins",
    "Meeting",
    "MethodBox",
    "MethodLimit",
    "Paragraph",
    "People",
    "Picture",
    "Plain",
    "Problem",
    "Quantity",
    "QuantityLine",
    "Quote",
    "Record",
    "Reference",
    "Relation",
    "RelationLine",
    "Restated",
    "RestatedLine",
    "Rule",
    "Sampling",
    "Sensitivities",
    "Sensitivity",
    "SensitivityLine",
    "SensitivityRow",
    "SentenceLine",
    "Share",
    "Source",
    "Spread",
    "SpreadLimit",
    "Tally",
    "Tool",
    "Value",
    "Verdict",
    "Words",
]

SCHEMA = "calcdoc-record/1"


class People(Plain, frozen=True):
    """Who prepared, checked and approved; empty where not named."""

    prepared: str
    checked: str
    approved: str


class Issue(Plain, frozen=True):
    """One row of the revision history."""

    revision: str
    date: str
    reason: str


class Document(Plain, frozen=True):
    """The title block."""

    number: str
    title: str
    subtitle: str
    """The text of the one level-1 heading that opens the text; may be empty."""
    revision: str
    date: str
    status: str
    """``draft`` or ``for issue``."""
    product: str
    owner: str
    language: str
    paper: str
    """``A4`` or ``letter``."""
    digits: int
    replaces: str
    people: People
    history: tuple[Issue, ...]


class MethodLimit(Plain, frozen=True):
    """A limit of validity of a method, judged over the whole band and in every case."""

    text: str
    """``discharge.V_0 > discharge.V_safe``"""
    verdict: str
    """``within``, ``outside`` or ``not decided``."""
    case: str
    value_text: str
    limit_text: str
    """Both sides where the limit is nearest, or farthest outside; empty when not computed."""
    at: dict[str, str]
    """The combination there."""
    description: str
    basis: str
    reason: str
    """Why it is not decided."""


class AppliedMethod(Plain, frozen=True):
    """A method as the design applies it."""

    name: str
    """What its symbols begin with: ``discharge``."""
    method: str
    """Of the library, or a sheet of the project by its path."""
    title: str
    revision: str
    """Of the sheet."""
    verdict: str
    """``within`` its limits of validity, ``outside`` or ``not decided``."""
    limits: tuple[MethodLimit, ...]
    gives: tuple[str, ...]
    """Symbols that the design may use."""
    defaults: tuple[str, ...]
    """Symbols of what it takes that stand at their defaults."""


class Assumption(Plain, frozen=True):
    """One row of the assumptions register."""

    id: str
    text: str
    """The sentence, or the statement of the quantity (``R_th = 60 K/W ± 15 %``)."""
    symbol: str
    """The symbol it defines, else empty."""
    reason: str
    state: str
    """``open`` or ``closed``."""
    note: str
    """What stands behind ``open:`` or ``closed:``."""
    rests_on_it: tuple[str, ...]
    """Line numbers and criterion ids that depend on it, through all steps."""
    line: str


class Hazard(Plain, frozen=True):
    """A declared hazard with what was computed for it."""

    kind: str
    """``supply``, ``stored`` or ``not isolated``."""
    text: str
    """The statement as written."""
    result: str
    """Computed value, e.g. ``14.2 s`` to 60 V; empty where none."""


class Caution(Plain, frozen=True):
    """A caution: on the cover, and where the author placed it in the body."""

    signal: str
    """``danger``, ``warning``, ``caution`` or ``notice``."""
    text: str
    """Plain text; numbers in it are typeset already."""
    origin: str
    """``general``, ``hazards``, ``assumptions`` or ``author``."""


class Reference(Plain, frozen=True):
    """A cited document."""

    key: str
    title: str
    edition: str
    held: str
    cited_by: tuple[str, ...]
    """Line numbers and criterion ids."""


class File(Plain, frozen=True):
    """A file the text used."""

    name: str
    sha256: str


class Source(Plain, frozen=True):
    """Where the record came from."""

    name: str
    sha256: str
    files: tuple[File, ...]


class Tool(Plain, frozen=True):
    """What computed the record."""

    version: str
    libraries: dict[str, str]


class Problem(Plain, frozen=True):
    """A warning the text gave rise to."""

    code: str
    severity: str
    message: str
    line: int
    column: int
    help: str
    file: str = ""
    """The sheet it stands in; empty for the design text."""


class Tally(Plain, frozen=True):
    """How many criteria have which verdict, and what is open."""

    passed: int
    failed: int
    accepted: int
    undecided: int
    not_applicable: int
    by_test: int
    by_inspection: int
    open_assumptions: int
    unverified: int
    bottom_line: str
    """One sentence: ``5 pass, 1 fail, 1 by test``; never "all pass" while tests are open."""


class Sampling(Plain, frozen=True):
    """How parts were drawn."""

    draws: int
    """As many as were computed."""
    seed: int
    sequence: str
    """``random`` or ``quasi-random``."""
    generator: str


class Record(Plain, frozen=True):
    """A calculation record."""

    schema: str
    document: Document
    purpose: str
    """The first paragraph of the text, as plain text with values filled in."""
    verdict: Tally
    source: Source
    tool: Tool
    sampling: Sampling | None
    cases: tuple[Case, ...]
    quantities: tuple[Quantity, ...]
    relations: tuple[Relation, ...]
    restated: tuple[Restated, ...]
    sensitivities: tuple[Sensitivity, ...]
    criteria: tuple[Criterion, ...]
    crosschecks: tuple[Crosscheck, ...]
    assumptions: tuple[Assumption, ...]
    hazards: tuple[Hazard, ...]
    cautions: tuple[Caution, ...]
    references: tuple[Reference, ...]
    applied: tuple[AppliedMethod, ...]
    """The methods it applies, in the author's order."""
    methods: tuple[str, ...]
    """The method statement: one sentence each, how bands were combined, what is exact."""
    figures: tuple[AnyFigure, ...]
    notices: tuple[str, ...]
    problems: tuple[Problem, ...]
    body: tuple[Block, ...]
