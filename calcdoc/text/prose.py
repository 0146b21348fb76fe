"""Prose as a tree of our own: what CommonMark read, with ``{symbol}`` as mentions."""

from dataclasses import dataclass

from calcdoc.source import Span
from calcdoc.text.statements import Statement


@dataclass(frozen=True, slots=True)
class Words:
    """Plain text."""

    text: str


@dataclass(frozen=True, slots=True)
class Emphasis:
    """Emphasised text."""

    strong: bool
    inline: tuple["Inline", ...]


@dataclass(frozen=True, slots=True)
class Code:
    """A code span."""

    text: str


@dataclass(frozen=True, slots=True)
class Link:
    """A link with a harmless address."""

    address: str
    inline: tuple["Inline", ...]


@dataclass(frozen=True, slots=True)
class Picture:
    """A picture beside the text."""

    path: str
    alternative: str
    span: Span


@dataclass(frozen=True, slots=True)
class Break:
    """A forced line break."""


@dataclass(frozen=True, slots=True)
class Mention:
    """``{V_pk}``, ``{V_pk:least}``, ``{C4}``: a name whose value the record fills in."""

    name: str
    form: str
    """Empty, ``value``, ``least`` or ``greatest``."""
    span: Span


Inline = Words | Emphasis | Code | Link | Picture | Break | Mention


@dataclass(frozen=True, slots=True)
class Heading:
    """A heading of level 1 to 6."""

    level: int
    inline: tuple[Inline, ...]


@dataclass(frozen=True, slots=True)
class Paragraph:
    """A paragraph."""

    inline: tuple[Inline, ...]


@dataclass(frozen=True, slots=True)
class Items:
    """A list; ``start`` is None when it is not numbered."""

    start: int | None
    items: tuple[tuple["Block", ...], ...]


@dataclass(frozen=True, slots=True)
class Quote:
    """A quotation."""

    blocks: tuple["Block", ...]


@dataclass(frozen=True, slots=True)
class Listing:
    """Code shown as it is."""

    text: str


@dataclass(frozen=True, slots=True)
class Grid:
    """A pipe table."""

    align: tuple[str, ...]
    head: tuple[tuple[Inline, ...], ...]
    rows: tuple[tuple[tuple[Inline, ...], ...], ...]


@dataclass(frozen=True, slots=True)
class Rule:
    """A thematic break."""


@dataclass(frozen=True, slots=True)
class CautionBlock:
    """A caution of the author; ``signal`` is danger, warning, caution or notice."""

    signal: str
    blocks: tuple["Block", ...]
    span: Span


@dataclass(frozen=True, slots=True)
class Statements:
    """The statements of one block of the calculation, in the author's order."""

    word: str
    statements: tuple[Statement, ...]


Block = Heading | Paragraph | Items | Quote | Listing | Grid | Rule | CautionBlock | Statements
