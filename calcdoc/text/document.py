"""A design text as a document: title block, prose and statements, with every mistake found."""

import re
from collections.abc import Callable, Iterator
from itertools import pairwise
from typing import Final, TypeVar

from calcdoc.frozen import Frozen, replace
from calcdoc.problems import Finding, Mistake, Place, error, warning
from calcdoc.source import SourceFile, Span
from calcdoc.text import prose, sheets
from calcdoc.text.commonmark import Fence, read_prose
from calcdoc.text.criteria import criterion
from calcdoc.text.figures import figure
from calcdoc.text.names import OF_METHOD, fold, owner
from calcdoc.text.passage import Passage
from calcdoc.text.rules import RULES
from calcdoc.text.scan import shown
from calcdoc.text.statements import Applied, Statement
from calcdoc.text.titleblock import TitleBlock, title_block

T = TypeVar("T")
LARGEST: Final = 2_000_000
"""Characters of a design text."""
_STATEMENT_RULES: Final[dict[str, Callable[[Passage], Statement]]] = {
    **RULES,
    "criteria": criterion,
    "figure": figure,
}
_OTHER_BLOCKS: Final = ("document", "caution")
_OF_METHODS: Final = ("use", "takes", "gives")
BLOCK_WORDS: Final = (*_OTHER_BLOCKS, *_STATEMENT_RULES, *_OF_METHODS)
_OF_SHEETS: Final = (
    *("document", "takes", "gives", "derive", "crosschecks", "criteria", "caution", "references"),
)
"""Blocks that a sheet may have."""
SIGNALS: Final = ("danger", "warning", "caution", "notice")
_FENCE_LINE: Final = re.compile(r" {0,3}(?P<marks>`{3,}|~{3,}) *(?P<word>[a-z]+)(?: .*)?")
_DEEP_FENCE: Final = re.compile(
    r"[\s>]*(?:(?:[-*+]|[0-9]{1,9}[.)])\s+)*(?:`{3,}|~{3,})\s*([A-Za-z]+)"
)
_DEFINED_BEFORE: Final = re.compile(r"=|\|| from ")
_UNIT: Final = re.compile(r"\[[^\]]*\]")
_SIGNAL: Final = re.compile(r"\s*(danger|warning|caution|notice)\b[ \t]*[:.]?[ \t]*", re.IGNORECASE)

_WORD_BEFORE_COLON: Final = re.compile(r"\s*[*_]*(?P<word>[A-Za-z]+)[*_]*[ \t]*:")
_STEM: Final = 4
"""Letters of a signal word that are enough to mean it: warn, dang, caut, noti."""


class Document(Frozen, frozen=True):
    """A design text, read. Prose and statements stand in the author's order."""

    source: SourceFile
    title: TitleBlock
    body: tuple[prose.Block, ...]
    broken: frozenset[str] = frozenset()
    """Keys of names that lines define which could not be read; they are not unknown. The key of a
    method that could not be applied stands for all it gives."""
    applied: tuple[Applied, ...] = ()
    """The methods it applies, in the author's order."""

    @property
    def statements(self) -> tuple[Statement, ...]:
        """Every statement, in the author's order."""
        return tuple(
            each
            for block in walk(self.body)
            if isinstance(block, prose.Statements)
            for each in block.statements
        )

    def is_broken(self, key: str) -> bool:
        """Whether a name, or the method it belongs to, is defined by what could not be read."""
        return key in self.broken or owner(key) in self.broken


def walk(blocks: tuple[prose.Block, ...]) -> Iterator[prose.Block]:
    """Blocks and the blocks within them, in order."""
    for block in blocks:
        yield block
        if isinstance(block, prose.Items):
            for item in block.items:
                yield from walk(item)
        elif isinstance(block, prose.Quote | prose.CautionBlock | prose.Method):
            yield from walk(block.blocks)


def inlines(blocks: tuple[prose.Block, ...]) -> Iterator[prose.Inline]:
    """Every inline node of the prose, in order, those within others included."""
    for block in walk(blocks):
        match block:
            case prose.Heading(_, inline) | prose.Paragraph(inline):
                yield from _within(inline)
            case prose.Grid(_, head, rows):
                for row in (head, *rows):
                    for cell in row:
                        yield from _within(cell)
            case _:
                pass


def _within(inline: tuple[prose.Inline, ...]) -> Iterator[prose.Inline]:
    for each in inline:
        yield each
        if isinstance(each, prose.Emphasis | prose.Link):
            yield from _within(each.inline)


def mentions(blocks: tuple[prose.Block, ...]) -> Iterator[prose.Mention]:
    """Every ``{name}`` in prose."""
    return (each for each in inlines(blocks) if isinstance(each, prose.Mention))


def pictures(blocks: tuple[prose.Block, ...]) -> Iterator[prose.Picture]:
    """Every picture in prose."""
    return (each for each in inlines(blocks) if isinstance(each, prose.Picture))


def read_document(
    source: SourceFile, *, sheet: bool = False
) -> tuple[Document | None, tuple[Finding, ...]]:
    """Read a design text, or the sheet of a method; None when it is too large to be read.

    Every mistake of the file is reported; a wrong statement is left out and reading goes on, so
    a document with errors among its findings is good for further checks only.
    """
    size = len(source.text)
    if size > LARGEST:
        start = source.span(0, 1)
        return None, (
            error(
                "text-size",
                f"the text has {size} characters, at most {LARGEST} are read",
                start,
                help="split the design into several texts",
            ),
        )
    reader = _Reader(source, sheet=sheet)
    body, findings = read_prose(source, source.text, 1, reader.fence)
    reader.findings += findings
    reader.find_deep_blocks()
    if reader.title is None and not reader.saw_document:
        reader.findings.append(
            error(
                "missing-document",
                "the text has no `document` block",
                source.span(0, min(1, size)),
                help="begin with ```document, then title and revision, then ```"
                if sheet
                else "begin with ```document, then number, title and revision, then ```",
            )
        )
    title = reader.title or TitleBlock("", "", "")
    return Document(source, title, body, reader.broken), tuple(reader.findings)


class _Reader:
    """Reads the fenced blocks of one text and collects what is wrong with them."""

    def __init__(self, source: SourceFile, *, sheet: bool) -> None:
        self.source = source
        self.sheet = sheet
        self.findings: list[Finding] = []
        self.title: TitleBlock | None = None
        self.broken: frozenset[str] = frozenset()
        self.saw_document: Place | None = None
        self.seen: set[int] = set()
        """Lines that CommonMark reads as a fence or as its content."""

    def fence(self, fence: Fence) -> prose.Block | None:
        """One fenced block."""
        self._note_lines(fence)
        *cut, last = self._pieces(fence)
        blocks = [self._read(each) for each in cut]
        if not last.closed:
            self._unclosed(last)
        blocks.append(self._read(last))
        if not cut:
            return blocks[0]
        kept = [each for each in blocks if isinstance(each, prose.Statements)]
        return prose.Statements(fence.word, tuple(s for each in kept for s in each.statements))

    def _pieces(self, fence: Fence) -> list[Fence]:
        """A block, cut where others begin within it: then it was meant to be closed before."""
        begins = [
            at
            for at, line in enumerate(fence.lines)
            if (found := _FENCE_LINE.fullmatch(line))
            and found["word"] in BLOCK_WORDS
            and found["marks"].startswith(fence.marks)
        ]
        if fence.word not in BLOCK_WORDS or not begins:
            return [fence]
        edges = list(pairwise([-1, *begins, len(fence.lines)]))
        pieces = [
            replace(
                fence, lines=fence.lines[a + 1 : b], places=fence.places[a + 1 : b], closed=False
            )
            for a, b in edges
        ]
        for at, (begin, _) in enumerate(edges[1:], 1):
            opening = self._opening(fence, begin)
            word = self.source.text[opening.start : opening.end]
            pieces[at] = replace(pieces[at], word=word, opening=opening)
            self._unclosed(pieces[at - 1], Place(opening, "the next block begins here"))
        return [*pieces[:-1], replace(pieces[-1], closed=fence.closed)]

    def _opening(self, fence: Fence, at: int) -> Span:
        """The word of a block that begins within another."""
        found = _FENCE_LINE.fullmatch(fence.lines[at])
        assert found is not None
        start = fence.places[at] + found.start("word")
        return self.source.span(start, start + len(found["word"]))

    def _unclosed(self, fence: Fence, *where: Place) -> None:
        self.findings.append(
            error(
                "unclosed-block",
                "this block is not closed",
                fence.opening,
                related=where,
                help=f"end it with {fence.marks} on a line of its own, as far in as its first line",
            )
        )

    def _read(self, fence: Fence) -> prose.Block | None:
        """What a block of its kind says."""
        if fence.word in BLOCK_WORDS and self._misplaced(fence):
            return None
        if fence.word == "document":
            self._document(fence)
            return None
        if fence.word == "caution":
            return self._caution(fence)
        if fence.word in _STATEMENT_RULES:
            return self._statements(fence, _STATEMENT_RULES[fence.word])
        if fence.word in _OF_METHODS:
            return self._of_method(fence)
        self._check_word(fence)
        return prose.Listing("\n".join(fence.lines))

    def _misplaced(self, fence: Fence) -> bool:
        """Say that a block stands in a sheet, or in a design, where it means nothing."""
        if self.sheet and fence.word not in _OF_SHEETS:
            advice = (
                "a sheet applies no other; take what it needs from the design"
                if fence.word == "use"
                else "what a sheet needs it takes from the design, or defines in `derive`"
            )
            where = "a sheet"
        elif not self.sheet and fence.word in ("takes", "gives"):
            where, advice = "a design", "it belongs into the sheet of a method"
        else:
            return False
        message = f"{where} has no `{fence.word}` block"
        self.findings.append(error("sheet-form", message, fence.opening, help=advice))
        return True

    def _of_method(self, fence: Fence) -> prose.Block | None:
        """What a sheet takes and gives, and where a design applies one."""
        if fence.word == "gives":
            return prose.Gives(tuple(self._each(fence, sheets.give)[0]))
        if fence.word == "takes":
            lines, _ = self._each(fence, sheets.take)
            return prose.Takes(
                tuple(taken for taken, _ in lines if taken),
                tuple(limit for _, limit in lines if limit),
            )
        try:
            method, name = sheets.opening(self.source, fence.opening)
        except Mistake as mistake:
            self.findings.append(mistake.finding)
            last = fence.info.split()[-1]
            self.broken |= {fold(last)}
            return None
        bindings, broken = self._each(fence, sheets.binding)
        return prose.Use(method, name, tuple(bindings), fence.opening, broken)

    def _note_lines(self, fence: Fence) -> None:
        first = self.source.position(fence.opening.start)[0]
        self.seen.update(range(first, first + len(fence.lines) + 2))

    def _check_word(self, fence: Fence) -> None:
        for word in BLOCK_WORDS:
            if _one_edit(fence.word.lower(), word):
                self.findings.append(
                    warning(
                        "unknown-block",
                        f"`{fence.word}` is no block word, so this is shown as code",
                        fence.opening,
                        help=f"did you mean `{word}`?",
                    )
                )
                return

    def _document(self, fence: Fence) -> None:
        if self.saw_document:
            self.findings.append(
                error(
                    "second-document",
                    "a text has one `document` block",
                    fence.opening,
                    related=(Place(self.saw_document.span, "the first one"),),
                    help="remove one of them",
                )
            )
            return
        self.saw_document = Place(fence.opening)
        text = "".join(f"{line}\n" for line in fence.lines)
        starts, places, at = [0], [fence.opening.start], 0
        for line, place in zip(fence.lines, fence.places, strict=True):
            starts.append(at)
            places.append(place)
            at += len(line) + 1
        if not fence.lines:
            text = " "
        passage = Passage(self.source.path, text, tuple(starts), tuple(places))
        self.title, findings = title_block(passage, fence.opening, sheet=self.sheet)
        self.findings += findings

    def _statements(self, fence: Fence, rule: Callable[[Passage], Statement]) -> prose.Statements:
        return prose.Statements(fence.word, tuple(self._each(fence, rule)[0]))

    def _each(self, fence: Fence, rule: Callable[[Passage], T]) -> tuple[list[T], bool]:
        """Every line by its rule, and whether one could not be read."""
        found, broken = [], False
        sure = self._surely_within(fence)
        for passage in self._passages(fence):
            try:
                found.append(rule(passage))
            except Mistake as mistake:
                if passage.offset(0) >= sure:
                    break
                self.findings.append(mistake.finding)
                broken = True
                if fence.word not in ("figure", "use"):  # they define nothing
                    self.broken |= _defined(passage.text)
        return found, broken

    def _surely_within(self, fence: Fence) -> int:
        """Where prose may begin in a block that is not closed: its first blank line."""
        if not fence.closed:
            for line, place in zip(fence.lines, fence.places, strict=True):
                if not line.strip():
                    return place
        return len(self.source.text) + 1

    def _passages(self, fence: Fence) -> Iterator[Passage]:
        """One passage for each statement: its line and the lines that continue it."""
        pieces: list[tuple[str, int]] = []
        for line, place in zip(fence.lines, fence.places, strict=True):
            if line.startswith("#"):
                continue
            if line.startswith("\t"):
                self.findings.append(
                    error(
                        "tab-at-start",
                        "a line of a block begins with a tab",
                        self.source.span(place, place + 1),
                        help="begin a statement at the margin; continue one after a blank",
                    )
                )
            elif line.startswith(" ") and line.strip():
                if pieces:
                    pieces.append((line, place))
                    continue
                indent = len(line) - len(line.lstrip(" "))
                self.findings.append(
                    error(
                        "syntax",
                        "this line continues nothing",
                        self.source.span(place + indent, place + len(line.rstrip())),
                        help="a statement begins at the margin; a blank line ends it",
                    )
                )
            else:
                yield from self._joined(pieces)
                pieces = [(line, place)] if line.strip() else []
        yield from self._joined(pieces)

    def _joined(self, pieces: list[tuple[str, int]]) -> Iterator[Passage]:
        if not pieces:
            return
        starts, at = [], 0
        for line, _ in pieces:
            starts.append(at)
            at += len(line) + 1
        text = "\n".join(line for line, _ in pieces)
        whole = Passage(self.source.path, text, tuple(starts), tuple(place for _, place in pieces))
        yield whole.part(0, len(text))

    def _caution(self, fence: Fence) -> prose.Block | None:
        text = "\n".join(fence.lines)
        found = _SIGNAL.match(text)
        rest = text[found.end() :] if found else text
        if not rest.strip():
            self.findings.append(
                error(
                    "empty-caution",
                    "this caution says nothing",
                    fence.opening,
                    help="write what can happen and how to avoid it",
                )
            )
            return None
        if found is None and (meant := _WORD_BEFORE_COLON.match(text)) is not None:
            self._check_signal(fence, meant)
        signal = found[1].lower() if found else "caution"
        first = self.source.position(fence.opening.start)[0] + 1
        skipped = text[: len(text) - len(rest)].count("\n")
        blocks, findings = read_prose(self.source, rest, first + skipped, self._no_fence)
        self.findings += findings
        return prose.CautionBlock(signal, blocks, fence.opening)

    def _check_signal(self, fence: Fence, found: re.Match[str]) -> None:
        """A word near to a signal word would lower what it warns of without a word."""
        written = found["word"]
        if (signal := _like_a_signal(written.lower())) is None:
            return
        number = self.source.position(fence.opening.start)[0] + 1
        number += found.string.count("\n", 0, found.start("word"))
        start = self.source.line_start(number) + self.source.line(number).index(written)
        self.findings.append(
            error(
                "syntax",
                f"expected {', '.join(SIGNALS[:-1])} or {SIGNALS[-1]} before the colon, found"
                f" {shown(found[0].strip().removesuffix(':').rstrip())}",
                self.source.span(start, start + len(written)),
                help=f"did you mean `{signal}:`?",
            )
        )

    def _no_fence(self, fence: Fence) -> prose.Block:
        return prose.Listing("\n".join(fence.lines))

    def find_deep_blocks(self) -> None:
        """A block word where CommonMark sees plain code or text would be lost silently."""
        start = 0
        for number, line in enumerate(self.source.text.split("\n"), 1):
            found = _DEEP_FENCE.match(line)
            if found and number not in self.seen and found[1] in BLOCK_WORDS:
                self.findings.append(
                    error(
                        "block-too-deep",
                        f"this `{found[1]}` block stands too far in and is read as plain code",
                        self.source.span(start + found.start(1), start + found.end(1)),
                        help="begin its ``` at the margin, or at the text of its list item",
                    )
                )
            start += len(line) + 1


def _defined(text: str) -> frozenset[str]:
    """Keys of the names that a statement would define, had it been read."""
    head = _DEFINED_BEFORE.split(text, maxsplit=1)[0]
    return frozenset(fold(name) for name in OF_METHOD.findall(_UNIT.sub(" ", head)))


def _like_a_signal(word: str) -> str | None:
    """The signal word that is meant by another one, or by itself between marks."""
    return next(
        (
            signal
            for signal in SIGNALS
            if _one_edit(word, signal) or word.startswith(signal[:_STEM])
        ),
        None,
    )


def _one_edit(word: str, other: str) -> bool:
    """Whether one letter added, left out, changed or swapped makes one word the other."""
    if not word or abs(len(word) - len(other)) > 1:
        return False
    if word == other:
        return True
    at = next(
        (i for i, (a, b) in enumerate(zip(word, other, strict=False)) if a != b),
        min(len(word), len(other)),
    )
    return (
        word[at + 1 :] == other[at:]
        or word[at:] == other[at + 1 :]
        or (word[at + 1 :] == other[at + 1 :])
        or (word[at : at + 2] == other[at : at + 2][::-1] and word[at + 2 :] == other[at + 2 :])
    )
