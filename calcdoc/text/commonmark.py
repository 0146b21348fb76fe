"""CommonMark to our own prose tree; the only place that asks markdown-it.

Fences of the calculation are handed to a reader that is passed in, with the file position of
each of their lines.
"""

import re
from bisect import bisect_right
from collections.abc import Callable
from functools import cache
from typing import TYPE_CHECKING, Final

from calcdoc.frozen import Frozen, Working
from calcdoc.problems import Finding, error, warning
from calcdoc.source import SourceFile, Span
from calcdoc.text import prose
from calcdoc.text.names import SYMBOL

if TYPE_CHECKING:
    from markdown_it import MarkdownIt
    from markdown_it.rules_inline import StateInline
    from markdown_it.token import Token

MENTION: Final = re.compile(r"\{([^{}\s:]+)(?::([a-z]+))?\}")
_BRACE: Final = re.compile(rf"\{{[ \t\n]*({SYMBOL.pattern})[^{{}}\n]*")
"""What begins like a mention and is none."""
_SAFE: Final = ("http://", "https://", "mailto:", "#")
_CELL_ENDS: Final = ("th_close", "td_close")
_DEEPEST: Final = 20


class Fence(Frozen, frozen=True):
    """A fenced block: its info words and its lines with their places in the file."""

    word: str
    info: str
    lines: tuple[str, ...]
    places: tuple[int, ...]
    """Offset of each line's first character."""
    opening: Span
    """The info word, or the whole opening line when it has none."""
    closed: bool
    marks: str = "```"
    """The backticks or tildes that begin it."""


FenceReader = Callable[[Fence], prose.Block | None]


@cache
def _reader() -> "MarkdownIt":
    from markdown_it import MarkdownIt  # noqa: PLC0415  (needed only here)

    markdown = MarkdownIt("commonmark", {"html": False, "maxNesting": _DEEPEST})
    markdown.enable("table")
    # Escapes must stay apart from text, or `\{` would look like the begin of a mention.
    markdown.inline.ruler.before("link", "mention", _mention_rule)
    markdown.inline.ruler.after("mention", "brace", _brace_rule)
    return markdown


def _mention_rule(state: "StateInline", silent: bool) -> bool:
    found = MENTION.match(state.src, state.pos)
    if found is None:
        return False
    if not silent:
        token = state.push("mention", "", 0)
        token.content = found.group()
        token.meta = {"at": state.pos}
    state.pos = found.end()
    return True


def _brace_rule(state: "StateInline", silent: bool) -> bool:
    """The brace alone; what follows it is text like other text."""
    found = _BRACE.match(state.src, state.pos)
    if found is None:
        return False
    if not silent:
        token = state.push("brace", "", 0)
        token.content = found.group() + state.src[found.end() : found.end() + 1].strip("\n{")
        token.meta = {"at": state.pos, "name": found[1]}
    state.pos += 1
    return True


class _Builder(Working):
    """Walks the flat token list once and builds the tree."""

    source: SourceFile
    first_line: int
    """Line of the file (from 1) on which the parsed text begins."""
    read_fence: FenceReader
    findings: list[Finding]
    tokens: "list[Token]"
    at: int = 0
    cursor: int = 0
    """Where in the file the search for the next cell of a table begins."""

    def blocks(self, until: str) -> tuple[prose.Block, ...]:
        """Blocks up to a closing token, which is taken."""
        found: list[prose.Block] = []
        while self.at < len(self.tokens) and self.tokens[self.at].type != until:
            block = self.block()
            if block is not None:
                found.append(block)
        self.at += 1
        return tuple(found)

    def block(self) -> prose.Block | None:
        """The block that begins here."""
        token = self.tokens[self.at]
        self.at += 1
        match token.type:
            case "heading_open":
                return prose.Heading(int(token.tag[1]), self.inline("heading_close"))
            case "paragraph_open":
                return prose.Paragraph(self.inline("paragraph_close"))
            case "bullet_list_open":
                return prose.Items(None, self.items("bullet_list_close"))
            case "ordered_list_open":
                start = int(token.attrs.get("start", 1))
                return prose.Items(start, self.items("ordered_list_close"))
            case "blockquote_open":
                return prose.Quote(self.blocks("blockquote_close"))
            case "table_open":
                return self.table()
            case "fence":
                return self.fence(token)
            case "hr":
                return prose.Rule()
            case "code_block":
                return prose.Listing(token.content)
            case _:
                return None

    def items(self, until: str) -> tuple[tuple[prose.Block, ...], ...]:
        """The items of a list."""
        found = []
        while self.tokens[self.at].type != until:
            self.at += 1
            found.append(self.blocks("list_item_close"))
        self.at += 1
        return tuple(found)

    def table(self) -> prose.Grid:
        """A pipe table."""
        rows: list[tuple[tuple[prose.Inline, ...], ...]] = []
        cells: list[tuple[prose.Inline, ...]] = []
        align: list[str] = []
        while (token := self.tokens[self.at]).type != "table_close":
            self.at += 1
            if token.type in ("th_open", "td_open"):
                cells.append(self.inline(token.type.replace("open", "close")))
                if token.type == "th_open":
                    align.append(str(token.attrs.get("style", "")).partition(":")[2])
            elif token.type == "tr_close":
                rows.append(tuple(cells))
                cells = []
        self.at += 1
        return prose.Grid(tuple(align), rows[0], tuple(rows[1:]))

    def inline(self, until: str) -> tuple[prose.Inline, ...]:
        """The inline content of a paragraph, heading or cell."""
        found: tuple[prose.Inline, ...] = ()
        while (token := self.tokens[self.at]).type != until:
            self.at += 1
            if token.type == "inline":
                places = _InlinePlaces(self, token, is_cell=until in _CELL_ENDS)
                found += _InlineBuilder(self, token.children or [], places).nodes(None)
        self.at += 1
        return found

    def fence(self, token: "Token") -> prose.Block | None:
        """A fenced block, handed to its reader."""
        assert token.map is not None
        begin, end = token.map
        # The last line of a file may lack its line end.
        lines = tuple(token.content.removesuffix("\n").split("\n")) if token.content else ()
        first = self.first_line + begin
        places = [self.place(first + 1 + k, line) for k, line in enumerate(lines)]
        word = token.info.split()[0] if token.info.split() else ""
        opening = self.source.line(first)
        start = self.source.line_start(first)
        marks = max(0, opening.find(token.markup)) + len(token.markup)
        column = opening.find(word, marks) if word else 0
        span = self.source.span(
            start + column, start + column + len(word) if word else start + len(opening)
        )
        closed = len(lines) == end - begin - 2
        return self.read_fence(
            Fence(word, token.info, lines, tuple(places), span, closed, token.markup)
        )

    def place(self, number: int, content: str) -> int:
        """Offset of a content line in the file: it is the end of its source line."""
        line = self.source.line(number)
        start = self.source.line_start(number)
        if line.endswith(content):
            return start + len(line) - len(content)
        stripped = content.lstrip(" ")
        return start + max(0, len(line) - len(stripped))


class _InlinePlaces:
    """Where characters of an inline text stand in the file."""

    def __init__(self, builder: _Builder, token: "Token", *, is_cell: bool) -> None:
        first, last = token.map or (0, 0)
        self.source = builder.source
        self.low = self.source.line_start(builder.first_line + first)
        self.high = self.source.line_start(builder.first_line + last)
        self.content = token.content
        self.is_cell = is_cell
        self.starts: list[int] = []
        self.places: list[int] = []
        if is_cell:
            self._cell(builder)
        else:
            self._lines(builder.first_line + first)
        self.cursor = self.places[0]

    def _cell(self, builder: _Builder) -> None:
        """A cell is written as it stands, but for its bars."""
        begin = max(self.low, builder.cursor) if builder.cursor < self.high else self.low
        written = self.content.replace("|", "\\|")
        at = max(begin, self.source.text.find(written, begin, self.high))
        self.starts, self.places = [0], [at]
        builder.cursor = at + len(written)

    def _lines(self, number: int) -> None:
        """A line of the content is the end of its source line, but for marks and blanks there."""
        at = 0
        for line in self.content.split("\n"):
            self.starts.append(at)
            written = self.source.line(number)
            column = max(0, written.rfind(line))
            self.places.append(self.source.line_start(number) + column)
            at += len(line) + 1
            number += 1

    def span(self, at: int, text: str) -> Span:
        """The place of a text that stands at an offset of the content."""
        piece = bisect_right(self.starts, at) - 1
        place = self.places[piece] + at - self.starts[piece]
        if self.is_cell:
            place += self.content.count("|", 0, at)
        self.cursor = place + len(text)
        return self.source.span(place, self.cursor)

    def find(self, text: str) -> Span:
        """The next place of a text; where the search begins when it is written otherwise."""
        at = self.source.text.find(text, self.cursor, self.high)
        if at < 0:
            return self.source.span(self.cursor, self.cursor + 1)
        self.cursor = at + len(text)
        return self.source.span(at, at + len(text))


class _InlineBuilder(Working):
    """Walks the children of an inline token."""

    builder: _Builder
    children: "list[Token]"
    places: _InlinePlaces
    at: int = 0

    def nodes(self, until: str | None) -> tuple[prose.Inline, ...]:
        """Inline nodes up to a closing token, neighbouring texts joined."""
        found: list[prose.Inline] = []
        while self.at < len(self.children) and self.children[self.at].type != until:
            token = self.children[self.at]
            self.at += 1
            for node in self.node(token):
                if isinstance(node, prose.Words) and found and isinstance(found[-1], prose.Words):
                    found[-1] = prose.Words(found[-1].text + node.text)
                else:
                    found.append(node)
        self.at += 1
        return tuple(found)

    def node(self, token: "Token") -> tuple[prose.Inline, ...]:
        """What one token stands for."""
        match token.type:
            case "text" | "text_special":
                return (prose.Words(token.content),)
            case "softbreak":
                return (prose.Words(" "),)
            case "hardbreak":
                return (prose.Break(),)
            case "code_inline":
                self.places.find(token.content)
                return (prose.Code(token.content),)
            case "em_open" | "strong_open":
                strong = token.type == "strong_open"
                return (prose.Emphasis(strong, self.nodes(token.type.replace("open", "close"))),)
            case "link_open":
                return self.link(str(token.attrs.get("href", "")))
            case "image":
                path = str(token.attrs.get("src", ""))
                return (prose.Picture(path, token.content, self.places.find(path)),)
            case "mention":
                return (self.mention(token.content, token.meta["at"]),)
            case "brace":
                span = self.places.span(token.meta["at"], token.content)
                return (prose.Brace(token.meta["name"], token.content, span),)
            case _:
                return ()

    def link(self, address: str) -> tuple[prose.Inline, ...]:
        """A link, or its text alone when the address is not a plain web or mail address."""
        inline = self.nodes("link_close")
        span = self.places.find(address)
        if address.lower().startswith(_SAFE):
            return (prose.Link(address, inline),)
        self.builder.findings.append(
            warning(
                "link-refused",
                "this link is shown as plain text",
                span,
                help="links begin with https://, http://, mailto: or #",
            )
        )
        return inline

    def mention(self, text: str, at: int) -> prose.Mention:
        """A name in braces at an offset of the inline content."""
        found = MENTION.fullmatch(text)
        assert found is not None
        span = self.places.span(at, text)
        form = found[2] or ""
        if form not in ("", "value", "least", "greatest"):
            self.builder.findings.append(
                error(
                    "unknown-name",
                    f"`:{form}` is not a form of a value",
                    span,
                    help="write {name}, {name:value}, {name:least} or {name:greatest}",
                )
            )
        return prose.Mention(found[1], form, span)


def read_prose(
    source: SourceFile, text: str, first_line: int, read_fence: FenceReader
) -> tuple[tuple[prose.Block, ...], list[Finding]]:
    """Parse CommonMark that begins on a line of the file.

    Args:
        source: The file, for positions.
        text: The lines to parse, as they stand in the file.
        first_line: The line of the file (from 1) the text begins on.
        read_fence: Makes a block of a fenced block, or None to leave it out.
    """
    builder = _Builder(source, first_line, read_fence, [], _reader().parse(text))
    return builder.blocks("end of text"), builder.findings
