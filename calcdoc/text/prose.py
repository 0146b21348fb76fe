"""Prose as a tree of our own: what CommonMark read, with ``{symbol}`` as mentions."""

from calcdoc.frozen import Frozen
from calcdoc.source import Span
from calcdoc.text.statements import Applied, Binding, Give, Label, Limit, Statement, Take


class Words(Frozen, frozen=True):
    """Plain text."""

    text: str


class Emphasis(Frozen, frozen=True):
    """Emphasised text."""

    strong: bool
    inline: tuple["Inline", ...]


class Code(Frozen, frozen=True):
    """A code span."""

    text: str


class Link(Frozen, frozen=True):
    """A link with a harmless address."""

    address: str
    inline: tuple["Inline", ...]


class Picture(Frozen, frozen=True):
    """A picture beside the text."""

    path: str
    alternative: str
    span: Span


class Break(Frozen, frozen=True):
    """A forced line break."""


class Mention(Frozen, frozen=True):
    """``{V_pk}``, ``{V_pk:least}``, ``{C4}``: a name whose value the record fills in."""

    name: str
    form: str
    """Empty, ``value``, ``least`` or ``greatest``."""
    span: Span


class Brace(Frozen, frozen=True):
    """A brace before a name that may have been meant as a mention; the rest follows as text."""

    name: str
    written: str
    """From the brace to its end, or to the end of the line."""
    span: Span


Inline = Words | Emphasis | Code | Link | Picture | Break | Mention | Brace


class Heading(Frozen, frozen=True):
    """A heading of level 1 to 6."""

    level: int
    inline: tuple[Inline, ...]


class Paragraph(Frozen, frozen=True):
    """A paragraph."""

    inline: tuple[Inline, ...]


class Items(Frozen, frozen=True):
    """A list; ``start`` is None when it is not numbered."""

    start: int | None
    items: tuple[tuple["Block", ...], ...]


class Quote(Frozen, frozen=True):
    """A quotation."""

    blocks: tuple["Block", ...]


class Listing(Frozen, frozen=True):
    """Code shown as it is."""

    text: str


class Grid(Frozen, frozen=True):
    """A pipe table."""

    align: tuple[str, ...]
    head: tuple[tuple[Inline, ...], ...]
    rows: tuple[tuple[tuple[Inline, ...], ...], ...]


class Rule(Frozen, frozen=True):
    """A thematic break."""


class CautionBlock(Frozen, frozen=True):
    """A caution of the author; ``signal`` is danger, warning, caution or notice."""

    signal: str
    blocks: tuple["Block", ...]
    span: Span


class Statements(Frozen, frozen=True):
    """The statements of one block of the calculation, in the author's order."""

    word: str
    statements: tuple[Statement, ...]


class Use(Frozen, frozen=True):
    """``use METHOD as NAME``: a method to be applied, with what it takes."""

    method: Label
    name: Label
    bindings: tuple[Binding, ...]
    opening: Span
    broken: bool
    """Whether a line of it could not be read."""


class Method(Frozen, frozen=True):
    """A method that was applied: its sheet in names of this application."""

    applied: Applied
    blocks: tuple["Block", ...]


class Takes(Frozen, frozen=True):
    """What a sheet takes, and where it is valid."""

    takes: tuple[Take, ...]
    limits: tuple[Limit, ...]


class Gives(Frozen, frozen=True):
    """What a sheet gives."""

    gives: tuple[Give, ...]


Block = (
    Heading
    | Paragraph
    | Items
    | Quote
    | Listing
    | Grid
    | Rule
    | CautionBlock
    | Statements
    | Use
    | Method
    | Takes
    | Gives
)
