"""Passages: text put together from pieces of a file."""

from calcdoc.source import Span
from calcdoc.text.passage import Passage, passage_of

# "ab" stands at 10, "cd" at 20 of the file.
JOINED = Passage("f", "ab\ncd", (0, 3), (10, 20))


def test_offsets_of_both_pieces() -> None:
    """A character of each piece is found where it stands in the file."""
    assert [JOINED.offset(at) for at in (0, 1, 3, 4)] == [10, 11, 20, 21]


def test_a_span_over_both_pieces() -> None:
    """A span from the first piece to the second covers what lies between in the file."""
    assert JOINED.span(1, 4) == Span("f", 11, 21)
    assert JOINED.whole == Span("f", 10, 22)


def test_an_empty_span() -> None:
    """A span of nothing is a point."""
    assert JOINED.span(3, 3) == Span("f", 20, 20)


def test_a_part_keeps_its_places() -> None:
    """A part without its blanks still knows where its characters stand."""
    part = Passage("f", "a \n  b ", (0, 3), (10, 20)).part(1, 7)
    assert part.text == "b"
    assert part.whole == Span("f", 22, 23)


def test_columns() -> None:
    """Bars separate; one after a backslash or inside double quotes does not."""
    text = r'a | b \| "c | d" e | f'
    assert [cell.text for cell in passage_of("f", text).columns()] == [
        "a",
        r'b \| "c | d" e',
        "f",
    ]


def test_a_lone_quote_hides_no_bar() -> None:
    """A double quote without a second one is an ordinary character."""
    assert [cell.text for cell in passage_of("f", 'a 5" | b').columns()] == ['a 5"', "b"]
