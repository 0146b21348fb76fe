"""Offsets inside, lines outside."""

import hashlib

import pytest

from calcdoc.source import SourceFile, Span, digest

TEXT = "one\ntwo\n\nfour"


@pytest.mark.parametrize(
    ("offset", "place"),
    [(0, (1, 1)), (2, (1, 3)), (3, (1, 4)), (4, (2, 1)), (8, (3, 1)), (9, (4, 1)), (13, (4, 5))],
)
def test_position(offset: int, place: tuple[int, int]) -> None:
    """Lines and columns count from 1; a line end belongs to its line."""
    assert SourceFile("a", TEXT).position(offset) == place


def test_lines() -> None:
    """Each line stands without its end; past the last one begins the end of the text."""
    file = SourceFile("a", TEXT)
    assert [file.line(k) for k in range(1, 5)] == ["one", "two", "", "four"]
    assert [file.line_start(k) for k in range(1, 7)] == [0, 4, 8, 9, 13, 13]


def test_only_line_feeds_end_a_line() -> None:
    """Other characters that look like line ends do not shift line numbers."""
    assert SourceFile("a", "a\u2028b\x0cc\x85d\ne").position(8) == (2, 1)


def test_spans() -> None:
    """A span reaches from the start of one to the end of the other."""
    assert Span("a", 1, 2).to(Span("a", 5, 9)) == Span("a", 1, 9)


def test_digest() -> None:
    """The digest is SHA-256 in hexadecimal."""
    assert digest(b"abc") == hashlib.sha256(b"abc").hexdigest()
