"""A statement's text with the way back to the file.

A statement may be continued on further lines, and its block may stand in a list or a quotation,
so its characters are not always neighbours in the file. A passage holds them as one string.
"""

import re
from bisect import bisect_right
from typing import Final

from calcdoc.frozen import Frozen
from calcdoc.source import Span

_SEPARATOR: Final = re.compile(r'\\.|"[^"]*"|\|', re.DOTALL)
"""A bar, or what may hide one: an escaped character, a text in double quotes."""


class Passage(Frozen, frozen=True):
    """Text put together from pieces of a file; ``starts[i]`` in the text is ``places[i]`` there."""

    path: str
    text: str
    starts: tuple[int, ...]
    places: tuple[int, ...]

    def offset(self, at: int) -> int:
        """Where a character of the text stands in the file."""
        piece = bisect_right(self.starts, at) - 1
        return self.places[piece] + at - self.starts[piece]

    def span(self, start: int, end: int) -> Span:
        """The place of characters ``start`` to ``end`` (exclusive) in the file."""
        first = self.offset(start)
        last = self.offset(end - 1) + 1 if end > start else first
        return Span(self.path, first, last)

    def part(self, start: int, end: int) -> "Passage":
        """Characters ``start`` to ``end`` with blanks at both ends left out."""
        while start < end and self.text[start] in " \n":
            start += 1
        while end > start and self.text[end - 1] in " \n":
            end -= 1
        piece = bisect_right(self.starts, start) - 1
        kept = [
            (max(s, start) - start, p + max(s, start) - s)
            for s, p in zip(self.starts[piece:], self.places[piece:], strict=True)
            if s < end or s == self.starts[piece]
        ]
        return Passage(
            self.path, self.text[start:end], tuple(s for s, _ in kept), tuple(p for _, p in kept)
        )

    @property
    def whole(self) -> Span:
        """The place of the whole text."""
        return self.span(0, len(self.text))

    def columns(self) -> "list[Passage]":
        r"""The cells between bars; ``\|`` and bars in double quotes do not separate."""
        cells, start = [], 0
        for found in _SEPARATOR.finditer(self.text):
            if found.group() == "|":
                cells.append(self.part(start, found.start()))
                start = found.end()
        return [*cells, self.part(start, len(self.text))]


def passage_of(path: str, text: str, offset: int = 0) -> Passage:
    """A passage of one piece."""
    return Passage(path, text, (0,), (offset,))
