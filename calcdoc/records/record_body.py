"""The body of a record: prose, and the places of its lines, in the author's order."""

from calcdoc.records.plain import Plain


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
