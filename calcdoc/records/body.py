"""Prose with its values filled in, and the places of lines, in the author's order."""

import re
import unicodedata
from collections.abc import Callable

from calcdoc.frozen import Frozen, replace
from calcdoc.records import record as r
from calcdoc.records.naming import Naming, keys_of, section_level
from calcdoc.records.wording import opened
from calcdoc.text import prose
from calcdoc.text.statements import (
    AnyOf,
    CaseStatement,
    CrosscheckStatement,
    Definition,
    FigureStatement,
    GivenStatement,
    Inequality,
    Measurement,
    RelationStatement,
    RestateStatement,
    SensitivityStatement,
    SentenceStatement,
    SolvedStatement,
    Statement,
    Uncalculated,
)

_BELOW_METHOD = 4
"""The level of the first headings in a method."""
_SLUG = re.compile(r"[^a-z0-9]+")


class Fill(Frozen, frozen=True):
    """What prose may name: filled in by whoever knows the numbers."""

    mention: Callable[[prose.Mention], r.Inline]
    picture: Callable[[prose.Picture], r.Inline]


class Parts(Frozen, frozen=True):
    """The body, and what was taken out of it for the cover."""

    subtitle: str
    purpose: str
    blocks: tuple[prose.Block, ...]


def divide(body: tuple[prose.Block, ...], fill: Fill) -> Parts:
    """Take the one level-1 heading that opens the text, and the first paragraph, to the cover.

    The heading is for readers of the plain text; the cover has the title of the title block.
    """
    blocks = list(body)
    subtitle = ""
    tops = [each for each in blocks if isinstance(each, prose.Heading) and each.level == 1]
    shown = next((each for each in blocks if not isinstance(each, prose.Statements)), None)
    if len(tops) == 1 and shown is tops[0]:
        subtitle = plain(inline(tops[0].inline, fill))
        blocks.remove(tops[0])
    first = next(
        (each for each in blocks if isinstance(each, prose.Heading | prose.Paragraph)), None
    )
    purpose = ""
    if isinstance(first, prose.Paragraph):
        purpose = plain(inline(first.inline, fill))
        blocks.remove(first)
    return Parts(subtitle, purpose, tuple(blocks))


def inline(nodes: tuple[prose.Inline, ...], fill: Fill) -> tuple[r.Inline, ...]:
    """Inline prose with its values."""
    return tuple(_inline(node, fill) for node in nodes)


def _inline(node: prose.Inline, fill: Fill) -> r.Inline:
    match node:
        case prose.Words(text):
            return r.Words(text=text)
        case prose.Brace():
            return r.Words("{")
        case prose.Code(text):
            return r.Code(text=text)
        case prose.Break():
            return r.Break()
        case prose.Emphasis(strong, inner):
            return r.Emphasis(strong=strong, inline=inline(inner, fill))
        case prose.Link(address, inner):
            return r.Link(address=address, inline=inline(inner, fill))
        case prose.Picture():
            return fill.picture(node)
        case prose.Mention():
            return fill.mention(node)


def plain(nodes: tuple[r.Inline, ...]) -> str:
    """The text of inline prose."""
    return "".join(_plain(node) for node in nodes)


def _plain(node: r.Inline) -> str:
    match node:
        case r.Words() | r.Code():
            return node.text
        case r.Emphasis() | r.Link():
            return plain(node.inline)
        case r.Value():
            return f"{node.symbol} = {node.text}" if node.form == "equation" else node.text
        case r.Verdict():
            return f"{node.id} ({node.text})"
        case r.Picture():
            return node.alternative
        case r.Break():
            return " "


def blocks(body: tuple[prose.Block, ...], naming: Naming, fill: Fill) -> tuple[r.Block, ...]:
    """The body of the record."""
    builder = _Body(naming, fill)
    return tuple(each for block in body for each in builder.block(block))


class _Body:
    """Converts blocks; anchors of headings are unique."""

    def __init__(self, naming: Naming, fill: Fill) -> None:
        self.naming, self.fill = naming, fill
        self.anchors: set[str] = set()

    def block(  # noqa: PLR0911  (one for each kind of block)
        self, block: prose.Block
    ) -> tuple[r.Block, ...]:
        """The record's blocks for one of the text."""
        match block:
            case prose.Heading():
                return (self._heading(block),)
            case prose.Paragraph(nodes):
                return (r.Paragraph(inline=inline(nodes, self.fill)),)
            case prose.Items(start, items):
                return (r.Items(start=start, items=tuple(self._all(item) for item in items)),)
            case prose.Quote(inner):
                return (r.Quote(blocks=self._all(inner)),)
            case prose.Listing(text):
                return (r.Listing(text=text),)
            case prose.Grid(align, head, rows):
                return (r.Grid(align=align, head=self._cells(head),
                               rows=tuple(self._cells(row) for row in rows)),)  # fmt: skip
            case prose.Rule():
                return (r.Rule(),)
            case prose.CautionBlock(signal, inner):
                return (r.CautionBox(signal=signal, blocks=self._opened(self._all(inner))),)
            case prose.Method(applied, inner):
                name = applied.name.name
                return (
                    r.MethodBox(name=name, anchor=self._anchor(name), blocks=self._within(inner)),
                )
            case prose.Use() | prose.Takes() | prose.Gives():
                return ()
            case prose.Statements(_, statements):
                return tuple(line for each in statements for line in _lines(each, self.naming))

    def _all(self, body: tuple[prose.Block, ...]) -> tuple[r.Block, ...]:
        return tuple(each for block in body for each in self.block(block))

    def _within(self, body: tuple[prose.Block, ...]) -> tuple[r.Block, ...]:
        """The blocks of a method; its headings stand below the head of the method."""
        top = section_level(body)
        return tuple(
            replace(each, level=block.level - top + _BELOW_METHOD)
            if isinstance(each, r.Heading) and isinstance(block, prose.Heading)
            else each
            for block in body
            for each in self.block(block)
        )

    def _opened(self, body: tuple[r.Block, ...]) -> tuple[r.Block, ...]:
        """The text of a caution with a capital, as descriptions have one."""
        match body:
            case (r.Paragraph(inline=(r.Words(text=text), *others)), *more):
                first = r.Words(text=opened(text, self.naming.lines))
                return (r.Paragraph(inline=(first, *others)), *more)
            case _:
                return body

    def _cells(self, row: tuple[tuple[prose.Inline, ...], ...]) -> tuple[tuple[r.Inline, ...], ...]:
        return tuple(inline(cell, self.fill) for cell in row)

    def _heading(self, heading: prose.Heading) -> r.Heading:
        nodes = inline(heading.inline, self.fill)
        number = self.naming.sections.get(id(heading), "")
        level = heading.level - self.naming.section_level + 2
        return r.Heading(
            level=level, number=number, anchor=self._anchor(plain(nodes)), inline=nodes
        )

    def _anchor(self, text: str) -> str:
        ascii_text = unicodedata.normalize("NFKD", text).encode("ascii", "ignore").decode()
        base = f"section-{_SLUG.sub('-', ascii_text.lower()).strip('-') or 'x'}"
        anchor, count = base, 1
        while anchor in self.anchors:
            count += 1
            anchor = f"{base}-{count}"
        self.anchors.add(anchor)
        return anchor


def _lines(  # noqa: PLR0911  (one for each kind of line)
    statement: Statement, naming: Naming
) -> tuple[r.Block, ...]:
    """Where the lines of a statement stand."""
    match statement:
        case GivenStatement() | Definition():
            return (r.QuantityLine(symbol=statement.symbol.name),)
        case SolvedStatement():
            return tuple(r.QuantityLine(symbol=each.symbol.name) for each in statement.unknowns)
        case RelationStatement():
            return (r.RelationLine(name=statement.name.name),)
        case RestateStatement():
            return (r.RestatedLine(line=naming.lines[keys_of(statement)[0]]),)
        case SensitivityStatement():
            return (r.SensitivityLine(line=naming.lines[keys_of(statement)[0]]),)
        case CaseStatement():
            return (r.CaseLine(name=statement.name.name),)
        case CrosscheckStatement() | Measurement():
            return (r.CrosscheckLine(id=statement.id.name),)
        case SentenceStatement():
            return (r.SentenceLine(id=statement.id.name),)
        case Inequality() | Uncalculated() | AnyOf():
            return (r.CriterionLine(id=statement.id.name),)
        case FigureStatement():
            return (r.FigureLine(number=naming.figures[statement.span.start]),)
        case _:
            return ()


def caution_text(blocks_: tuple[r.Block, ...]) -> str:
    """A caution of the author as one text for the cover."""
    parts: list[str] = []
    for block in blocks_:
        match block:
            case r.Paragraph() | r.Heading():
                parts.append(plain(block.inline))
            case r.Items():
                parts += [caution_text(item) for item in block.items]
            case r.Quote():
                parts.append(caution_text(block.blocks))
            case _:
                pass
    return " ".join(part for part in parts if part)
