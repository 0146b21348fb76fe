"""Findings as people read them: the caret stands under the place, cell by cell."""

import json

import pytest

from calcdoc.problems import Finding, Place, error, warning
from calcdoc.problems.views import as_data, full, has_errors, headline, in_order
from calcdoc.source import SourceFile


def source(text: str) -> dict[str, SourceFile]:
    """One text, by its name."""
    return {"a.md": SourceFile("a.md", text)}


def at(text: str, piece: str, advice: str = "") -> Finding:
    """An error at the first place of a piece of a text."""
    start = text.index(piece)
    span = SourceFile("a.md", text).span(start, start + len(piece))
    return error("code", "message", span, help=advice)


CARETS = [
    ("V = zz", "zz", "1 | V = zz", "  |     ^^"),
    ("V\t= zz", "zz", "1 | V    = zz", "  |        ^^"),
    ("\tV = zz", "\t", "1 |     V = zz", "  | ^^^^"),
    ("e\u0301e\u0301 zz", "zz", "1 | e\u0301e\u0301 zz", "  |    ^^"),
    ("zx\u0302z +", "zx\u0302z", "1 | zx\u0302z +", "  | ^^^"),
    ("中文 zz", "zz", "1 | 中文 zz", "  |      ^^"),
    ("a 中文", "中文", "1 | a 中文", "  |   ^^^^"),
    ("a\u200bb zz", "zz", "1 | a\u200bb zz", "  |    ^^"),
    ("a\x00\x1b[1m zz", "zz", "1 | a\ufffd\ufffd[1m zz", "  |        ^^"),
    ("a\u2028b zz", "zz", "1 | a\ufffdb zz", "  |     ^^"),
    ("a\u202eb zz", "zz", "1 | a\ufffdb zz", "  |     ^^"),
    ("\U0001d6fc zz", "zz", "1 | \U0001d6fc zz", "  |   ^^"),
]


@pytest.mark.parametrize(
    ("text", "piece", "line", "caret"), CARETS, ids=[ascii(c[0]) for c in CARETS]
)
def test_caret(text: str, piece: str, line: str, caret: str) -> None:
    """Tabs take four cells, wide characters two, combining marks none."""
    assert full(at(text, piece), source(text)).split("\n")[2:4] == [line, caret]


def test_the_whole_form() -> None:
    """Headline, line, caret with label, related places aligned, help."""
    text = "V = 5\n" * 9 + "I = V + A\n"
    sources = source(text)
    first = sources["a.md"].span(0, 1)
    start = text.index("V + A")
    finding = error(
        "unit-mismatch",
        "cannot add",
        sources["a.md"].span(start, start + 5),
        label="a + b",
        related=(Place(first, "set here"),),
        help="do this",
    )
    assert full(finding, sources) == (
        "a.md:10:5: error[unit-mismatch]: cannot add\n"
        "   |\n"
        "10 | I = V + A\n"
        "   |     ^^^^^ a + b\n"
        "   --> a.md:1:1\n"
        " 1 | V = 5\n"
        "   | - set here\n"
        "help: do this"
    )


def test_a_related_place_further_down_is_aligned_too() -> None:
    """The margin is as wide as the largest line number shown."""
    text = "V = W\n" + "\n" * 98 + "W = V\n"
    sources = source(text)
    there = sources["a.md"].span(text.index("W = V"), text.index("W = V") + 1)
    finding = error("c", "m", sources["a.md"].span(0, 1), related=(Place(there),))
    assert full(finding, sources) == (
        "a.md:1:1: error[c]: m\n"
        "    |\n"
        "  1 | V = W\n"
        "    | ^\n"
        "    --> a.md:100:1\n"
        "100 | W = V\n"
        "    | -"
    )


def test_a_place_over_several_lines_is_marked_on_the_first() -> None:
    """The caret never runs past the end of its line."""
    text = "ab cd\nef"
    assert full(at(text, "cd\nef"), source(text)).split("\n")[3] == "  |    ^^"


def test_a_place_at_the_end_of_the_text() -> None:
    """An empty place still has one caret."""
    text = "ab"
    span = SourceFile("a.md", text).span(2, 2)
    assert full(error("c", "m", span), source(text)).split("\n")[2:] == ["1 | ab", "  |   ^"]


def test_a_long_line_is_cut_around_the_place() -> None:
    """At most 110 characters are shown, with marks where the line goes on."""
    text = "x" * 300 + "zz" + "y" * 300
    line, caret = full(at(text, "zz"), source(text)).split("\n")[2:4]
    assert len(line) == len("1 | ") + 112
    assert line.startswith("1 | …x")
    assert line.endswith("y…")
    assert line[caret.index("^") : caret.rindex("^") + 1] == "zz"


def test_headline_and_data() -> None:
    """One line for editors; plain data for tools."""
    text = "a\nb zz"
    finding = at(text, "zz", "do")
    assert headline(finding, source(text)) == "a.md:2:3: error[code]: message"
    assert as_data(finding, source(text)) == {
        "file": "a.md",
        "line": 2,
        "column": 3,
        "code": "code",
        "severity": "error",
        "message": "message",
        "help": "do",
    }
    assert json.dumps(as_data(finding, source(text)))


def test_order() -> None:
    """Findings stand by place, then code; each is said once."""
    text = "a b c"
    one, two, three = at(text, "c"), at(text, "a"), warning("b", "m", at(text, "a").place.span)
    assert in_order([one, two, three, one]) == (three, two, one)


def test_errors_and_warnings() -> None:
    """Only an error stops a text."""
    finding = at("a", "a")
    assert has_errors([finding])
    assert not has_errors([warning("b", "m", finding.place.span)])
