r"""The text as one string, and places in it.

Offsets count characters of the normalised text (line ends are ``\n``, no byte-order mark).
Lines and columns are computed here, for views, and nowhere else.
"""

import bisect
import hashlib
from functools import cached_property

from calcdoc.frozen import Frozen


class Span(Frozen, frozen=True):
    """A place: characters ``start`` to ``end`` (exclusive) of the text called ``path``."""

    path: str
    start: int
    end: int

    def to(self, other: "Span") -> "Span":
        """The place from the start of this one to the end of the other."""
        return Span(self.path, self.start, other.end)


class SourceFile(Frozen, frozen=True, dict=True):
    r"""One text file, read and normalised.

    >>> SourceFile("a.md", "one\ntwo\n").position(5)
    (2, 2)
    """

    path: str
    """As the user named it; shown in findings."""
    text: str
    """The normalised text; every span points into it."""
    sha256: str = ""
    """Digest of the bytes as they were on disk."""

    @cached_property
    def _starts(self) -> list[int]:
        starts = [0]
        at = self.text.find("\n")
        while at >= 0:
            starts.append(at + 1)
            at = self.text.find("\n", at + 1)
        return starts

    def position(self, offset: int) -> tuple[int, int]:
        """Line and column of a character, both counted from 1."""
        row = bisect.bisect_right(self._starts, offset) - 1
        return row + 1, offset - self._starts[row] + 1

    def line(self, number: int) -> str:
        """The text of a line, counted from 1, without its line end."""
        start = self._starts[number - 1]
        end = self.text.find("\n", start)
        return self.text[start:] if end < 0 else self.text[start:end]

    def line_start(self, number: int) -> int:
        """Offset of the first character of a line, counted from 1; past the end, the length."""
        return self._starts[number - 1] if number <= len(self._starts) else len(self.text)

    def span(self, start: int, end: int) -> Span:
        """A place in this text."""
        return Span(self.path, start, end)


def digest(data: bytes) -> str:
    """SHA-256 of bytes, in hexadecimal."""
    return hashlib.sha256(data).hexdigest()
