"""The record: everything a page shows, in order, with nothing left to compute.

Texts of numbers and formulas are written in the language of the design text (``-3.2 V``,
``1.8e-3 Ω``, ``sqrt(2)*230 V - 2*0.95 V``): they can be parsed again, and each view typesets them.
Contract keys of the JSON are the attribute names. Symbols, ids and lines are unique in a record.
"""

from msgspec import Struct

SCHEMA = "calcdoc-record/1"


class Plain(Struct, frozen=True):
    """Base of all record types: frozen plain data."""


# --- prose -----------------------------------------------------------------------------------


class Words(Plain, frozen=True, tag_field="kind", tag="text"):
    """Plain text inside a paragraph."""

    text: str


class Emphasis(Plain, frozen=True, tag_field="kind", tag="emphasis"):
    """Emphasised text; ``strong`` for the heavier kind."""

    strong: bool
    inline: tuple["Inline", ...]


class Code(Plain, frozen=True, tag_field="kind", tag="code"):
    """A code span."""

    text: str


class Link(Plain, frozen=True, tag_field="kind", tag="link"):
    """A link whose address was found harmless (http, https, mailto, #)."""

    address: str
    inline: tuple["Inline", ...]


class Picture(Plain, frozen=True, tag_field="kind", tag="picture"):
    """A picture of the design's folder, embedded."""

    name: str
    alternative: str
    media_type: str
    data: str
    """Base64 of the file."""


class Break(Plain, frozen=True, tag_field="kind", tag="break"):
    """A forced line break."""


class Value(Plain, frozen=True, tag_field="kind", tag="value"):
    """``{V_pk}`` in prose: a quantity's value, linked to its line."""

    symbol: str
    form: str
    """``equation`` ("V_pk = 325.3 V"), or ``value``, ``least``, ``greatest`` (the number alone)."""
    text: str
    """The number with unit, as in ``325.3 V``."""


class Verdict(Plain, frozen=True, tag_field="kind", tag="verdict"):
    """``{C4}`` in prose: a criterion's name with its verdict."""

    id: str
    text: str
    """The verdict in words."""


Inline = Words | Emphasis | Code | Link | Picture | Break | Value | Verdict


class Heading(Plain, frozen=True, tag_field="kind", tag="heading"):
    """A heading; numbered when it opens a section."""

    level: int
    """2 opens a numbered section, 3 and more are below it (1 and 2 when the author starts at 1)."""
    number: str
    """``"3"``, or empty when not numbered."""
    anchor: str
    inline: tuple[Inline, ...]


class Paragraph(Plain, frozen=True, tag_field="kind", tag="paragraph"):
    """A paragraph of prose."""

    inline: tuple[Inline, ...]


class Items(Plain, frozen=True, tag_field="kind", tag="items"):
    """A list; ``start`` is None when it is not numbered."""

    start: int | None
    items: tuple[tuple["Block", ...], ...]


class Quote(Plain, frozen=True, tag_field="kind", tag="quote"):
    """A quotation."""

    blocks: tuple["Block", ...]


class Listing(Plain, frozen=True, tag_field="kind", tag="listing"):
    """A fenced block that is no part of the calculation, shown as code."""

    text: str


class Grid(Plain, frozen=True, tag_field="kind", tag="grid"):
    """A pipe table of the prose."""

    align: tuple[str, ...]
    """Per column ``left``, ``right``, ``center`` or empty."""
    head: tuple[tuple[Inline, ...], ...]
    rows: tuple[tuple[tuple[Inline, ...], ...], ...]


class Rule(Plain, frozen=True, tag_field="kind", tag="rule"):
    """A thematic break."""


class QuantityLine(Plain, frozen=True, tag_field="kind", tag="quantity"):
    """Here stands the working line of a quantity."""

    symbol: str


class CriterionLine(Plain, frozen=True, tag_field="kind", tag="criterion"):
    """Here stands a criterion."""

    id: str


class RelationLine(Plain, frozen=True, tag_field="kind", tag="relation"):
    """Here stands a relation."""

    name: str


class RestatedLine(Plain, frozen=True, tag_field="kind", tag="restated"):
    """Here stands a result in terms of chosen quantities."""

    line: str


class SensitivityLine(Plain, frozen=True, tag_field="kind", tag="sensitivity"):
    """Here stand the sensitivities of a quantity."""

    line: str


class CaseLine(Plain, frozen=True, tag_field="kind", tag="case"):
    """Here stands a mode or a fault."""

    name: str


class CrosscheckLine(Plain, frozen=True, tag_field="kind", tag="crosscheck"):
    """Here stands a cross-check."""

    id: str


class SentenceLine(Plain, frozen=True, tag_field="kind", tag="sentence"):
    """Here stands an assumption that is a sentence."""

    id: str


class FigureLine(Plain, frozen=True, tag_field="kind", tag="figure"):
    """Here stands a figure."""

    number: int


class CautionBox(Plain, frozen=True, tag_field="kind", tag="caution"):
    """Here stands a caution of the author."""

    signal: str
    blocks: tuple["Block", ...]


class MethodBox(Plain, frozen=True, tag_field="kind", tag="method"):
    """Here stands a method that was applied, line by line."""

    name: str
    anchor: str
    blocks: tuple["Block", ...]


Block = (
    Heading
    | Paragraph
    | Items
    | Quote
    | Listing
    | Grid
    | Rule
    | QuantityLine
    | CriterionLine
    | RelationLine
    | RestatedLine
    | SensitivityLine
    | CaseLine
    | CrosscheckLine
    | SentenceLine
    | FigureLine
    | CautionBox
    | MethodBox
)

# --- title block ------------------------------------------------------------------------------


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


# --- the calculation --------------------------------------------------------------------------


class CaseValues(Plain, frozen=True):
    """A quantity in one case that changes it, in its unit; null where it cannot be computed."""

    nominal: float | list[float] | None
    least: float | list[float] | None
    greatest: float | list[float] | None
    text: str
    """The nominal value and, when it varies, its band, typeset; empty for a series."""
    reason: str
    """Why it cannot be computed."""


class Quantity(Plain, frozen=True):
    """One quantity: an input with its band or a working line. Numbers are in ``unit``."""

    symbol: str
    line: str
    kind: str
    """``condition``, ``input``, ``assumption``, ``derived`` (later: solved, settled, method)."""
    unit: str
    """Empty for a plain number."""
    nominal: float | list[float]
    least: float | list[float]
    greatest: float | list[float]
    index: tuple[int, ...] | None
    at_least: dict[str, str]
    """The combination that gives the least value, e.g. ``{"V_line": "207 V"}``."""
    at_greatest: dict[str, str]
    proof: str
    """``exact``, ``bounded`` or ``searched``."""
    formula: str
    """Empty for an input."""
    substitution: str
    """The formula with nominal values; empty for an input."""
    result: str
    """The nominal value with unit, as in ``323.4 V``."""
    steps: tuple[str, ...]
    residual: str | None
    depends_on: tuple[str, ...]
    used_by: tuple[str, ...]
    """Symbols and criterion ids, in order."""
    description: str
    basis: str
    by_case: dict[str, CaseValues]
    # beyond the contract, for the pages
    id: str
    """Id of an assumption (``A1``), else empty."""
    state: str
    """``open`` or ``closed`` for an assumption, else empty."""
    units_carried: str
    """As in ``mA·ms/µF = V``; empty where nothing is reduced."""
    tolerance: str
    """The band as a reader writes it: ``230 V × (1 ± 10 %)``, ``(230 ± 23) V``,
    typeset already (no-break spaces, true minus); empty when the quantity does not vary."""
    least_text: str
    greatest_text: str
    varies: bool
    from_relation: str
    """Names of the relations it was solved from, as in ``charge``; else empty."""
    unverified: tuple[str, ...]
    """Tables of which this line itself uses a row that is not verified."""
    makeup: tuple[str, ...]
    """What a tolerance is made of, typeset: the random part, biases, like parts."""
    notes: tuple[str, ...]
    """Sentences for the reader: the extreme lies inside the band, the nominal is the middle, ..."""


class CaseChange(Plain, frozen=True):
    """What one case changes."""

    symbol: str
    text: str
    """As written: ``n_LED = n_LED - 1``."""
    formula: str
    """The right side, when it is a formula of normal values; else empty."""
    normal: str
    """The nominal value otherwise."""
    result: str
    """The nominal value in this case."""
    band: str
    """Its band in this case, typeset; empty when it does not vary."""


class Case(Plain, frozen=True):
    """A case the design is judged in; ``normal`` changes nothing."""

    name: str
    kind: str
    """``normal``, ``mode`` or ``fault``."""
    line: str
    changes: tuple[CaseChange, ...]
    description: str
    basis: str


class CriterionCase(Plain, frozen=True):
    """A criterion in one case."""

    value: float | None
    limit: float | None
    margin: float | None
    margin_abs: float | None
    verdict: str
    margin_text: str
    """As in ``8.2 %`` or ``4.1 K``; empty where there is nothing to compare."""
    accepted: str | None
    reason: str
    """Why it is not decided, not applicable, or fails for another reason than its numbers."""


class Share(Plain, frozen=True):
    """How many draws meet a criterion that is judged by sampling; shares of one."""

    asked: float
    met: float
    lower: float
    """One-sided bound: the true share is at least this, with 95 % confidence."""
    upper: float
    """The same: it is at most this."""
    lost: int
    """Draws that could not be computed; they count as not meeting it."""


class Contribution(Plain, frozen=True):
    """What one part contributes to a criterion by root sum square, in the criterion's unit."""

    symbol: str
    effect: float
    """To the limit at which the margin falls: zero or negative."""


class Criterion(Plain, frozen=True):
    """One acceptance criterion with its verdict. Numbers are in ``unit`` at the governing point."""

    id: str
    line: str
    text: str
    """The inequality as written, or the text of a test, without the clauses."""
    method: str
    """``extremes``, ``nominal``, ``point`` (extremes at an operating point), ``root sum square``,
    ``sampling``, ``any of``, ``test``, ``inspection`` or ``none``."""
    value: float | None
    limit: float | None
    unit: str
    relation: str
    """``<=``, ``>=``, ``<`` or ``>`` of the governing side, read value first; empty for a test."""
    margin: float | None
    margin_abs: float | None
    verdict: str
    """``pass``, ``fail``, ``not decided``, ``not applicable``, ``by test``, ``by inspection``."""
    accepted: str | None
    case: str
    governing: dict[str, str]
    by_case: dict[str, CriterionCase]
    route_of: str
    """The criterion of which this is one of several routes; then it counts through that one."""
    rows: tuple["CriterionRow", ...]
    interval: tuple[float | None, float | None] | None
    """By sampling: 95 % confidence interval of ``value``, which is then a quantile."""
    standard_error: float | None
    """Of the same."""
    share: Share | None
    """By sampling."""
    contributions: tuple[Contribution, ...]
    """By root sum square, the greatest first."""
    unverified: tuple[str, ...]
    description: str
    basis: str
    reason: str
    """Why it is not applicable or not decided; for a test, what is open."""
    # beyond the contract, for the pages
    clauses: str
    """The clauses as written: ``by extremes with margin 10 %``; may be empty."""
    substitution: str
    """The value side with numbers, when it is more than one symbol; else empty."""
    value_text: str
    limit_text: str
    """Rounded to as many digits as the verdict needs, e.g. ``88.1 V``."""
    margin_text: str
    """``8.2 %`` or, where there is no share, ``4.1 K``."""
    remark: str
    """As in ``short by 7.2 V (-180 % of the limit)``, ``equal to the limit``; may be empty."""
    statistics: tuple[str, ...]
    """By root sum square or sampling: how the parts were combined, typeset sentences."""
    proof: str
    """Empty by root sum square and by sampling, which prove nothing."""


class CriterionRow(Plain, frozen=True):
    """One element of a criterion over a series, at the point that governs it."""

    index: int
    value: float
    limit: float
    margin: float | None
    verdict: str
    value_text: str
    limit_text: str
    margin_text: str


class Crosscheck(Plain, frozen=True):
    """Two ways to one quantity, compared at nominal and over all bands."""

    id: str
    first: str
    second: str
    """Both sides as written."""
    unit: str
    """Of the difference: per cent of the second for ``against``, else the quantity's unit."""
    difference: float | None
    """The difference farthest from agreement: first less second."""
    allowed: float | None
    """The share that is allowed, or zero for a bound."""
    agrees: bool
    # beyond the contract, for the pages
    line: str
    form: str
    """``against``, ``not below``, ``not above`` or ``measured against``."""
    first_text: str
    second_text: str
    """Both sides at nominal."""
    difference_text: str
    allowed_text: str
    at: dict[str, str]
    """The combination at which the difference is worst, empty at nominal; the conditions of a
    measurement."""
    proof: str
    description: str
    basis: str
    first_band: str
    """Of a measurement: the band of the instrument, typeset, as in ``4.61 W × (1 ± 1.5 %)``."""
    second_band: str
    """Of a measurement: the band of the computed value at its conditions."""


class Relation(Plain, frozen=True):
    """An equation that is stated and solved elsewhere."""

    name: str
    line: str
    left: str
    right: str
    description: str
    basis: str
    solved_in: tuple[str, ...]
    """Line numbers of the quantities solved from it."""


class Restated(Plain, frozen=True):
    """A result in terms of chosen quantities, with its own numbers."""

    line: str
    symbol: str
    terms: tuple[str, ...]
    formula: str
    substitution: str
    result: str
    residual: str
    """How well it agrees with the line it restates."""
    description: str


class SensitivityRow(Plain, frozen=True):
    """How a quantity answers to one of the quantities it depends on."""

    symbol: str
    formula: str
    """The partial derivative."""
    value: float
    """At nominal, in ``unit``."""
    unit: str
    value_text: str
    per_cent_text: str
    """The change that one per cent of the input makes; empty where the input is a temperature."""
    full: float
    """The greater of the two changes that the full tolerance makes, in the quantity's unit."""
    low_text: str
    high_text: str
    """The changes at the input's least and greatest value, all others at nominal."""


class Sensitivity(Plain, frozen=True):
    """The sensitivities of one quantity, the greatest effect of a full tolerance first."""

    line: str
    symbol: str
    description: str
    rows: tuple[SensitivityRow, ...]


class Figure(Plain, frozen=True, tag_field="kind"):
    """What all figures have. Numbers are in the units named; no figure holds a drawing."""

    number: int
    """They are counted through the record."""
    caption: str
    text: str
    """The statement as written."""
    alternative: str
    """What the picture shows, in full sentences; numbers are typeset."""
    notes: tuple[str, ...]
    """What a reader must know of it, one sentence each; numbers are typeset."""


class Meeting(Plain, frozen=True):
    """How a curve and its limit lie to each other."""

    end: str
    """``nominal``, ``least`` or ``greatest``: of the curve less its limit."""
    at: tuple[float, ...]
    """Where they meet along the axis."""
    side: str
    """``above`` or ``below`` the limit when they never meet; else empty."""


class Curve(Figure, frozen=True, tag="curve"):
    """A quantity against an input, with its band over all else; None where it has no value."""

    symbol: str
    unit: str
    against: str
    against_unit: str
    axis: tuple[float, ...]
    nominal: tuple[float | None, ...]
    least: tuple[float | None, ...]
    greatest: tuple[float | None, ...]
    limit: tuple[float | None, ...]
    """At nominal: one value when it is the same everywhere, none when there is no limit."""
    limit_least: tuple[float | None, ...]
    limit_greatest: tuple[float | None, ...]
    """Its band; empty when it has none."""
    limit_text: str
    """The limit as written."""
    meetings: tuple[Meeting, ...]
    at_nominal: tuple[float, float] | None
    """The nominal value of the input and of the quantity, where the axis holds it."""
    at_nominal_text: str
    partial: str
    """Why a part of the bands cannot be computed somewhere along the axis; else empty."""


class SpreadLimit(Plain, frozen=True):
    """A limit in a spread."""

    criterion: str
    """Empty for one that the figure states itself."""
    value: float
    text: str


class Spread(Figure, frozen=True, tag="spread"):
    """How a quantity is distributed when parts vary at random and conditions stand still."""

    symbol: str
    unit: str
    draws: int
    seed: int
    lost: int
    """Draws that could not be computed."""
    low: float
    high: float
    counts: tuple[int, ...]
    """Draws in bins of one width from ``low`` to ``high``."""
    mean: float
    deviation: float
    """In the unit of a difference: K for temperatures."""
    nominal: float
    least: float
    greatest: float
    nominal_text: str
    least_text: str
    greatest_text: str
    limits: tuple[SpreadLimit, ...]
    criterion: str
    """The criterion whose governing conditions hold here; may be empty."""
    fixed: dict[str, str]
    """Conditions and biased parts that do not stand at nominal."""
    assumed: tuple[str, ...]
    """Parts whose distribution is assumed."""


class Drive(Plain, frozen=True):
    """The changes that one input makes alone, in ``unit`` of the figure."""

    symbol: str
    at_least: str
    at_greatest: str
    """The least and the greatest value of the input."""
    low: float | None
    high: float | None
    """The changes there; None where they cannot be computed."""
    low_text: str
    high_text: str


class Sensitivities(Figure, frozen=True, tag="sensitivities"):
    """What drives a quantity, the largest change first."""

    symbol: str
    unit: str
    """Of a change: K for temperatures."""
    nominal: float
    nominal_text: str
    rows: tuple[Drive, ...]
    left_out: int
    """Inputs with smaller changes that are not shown."""


class MarginRow(Plain, frozen=True):
    """The margin of one criterion."""

    id: str
    description: str
    margin: float | None
    """As a share of the limit; None when the limit is zero or a temperature."""
    margin_text: str
    verdict: str
    remark: str


class Margins(Figure, frozen=True, tag="margins"):
    """The distance of every calculated criterion to its limit."""

    rows: tuple[MarginRow, ...]


AnyFigure = Curve | Spread | Sensitivities | Margins


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
