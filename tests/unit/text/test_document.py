"""Reading a whole text: statements in order, prose around them, places in the file."""

from calcdoc.source import SourceFile
from calcdoc.text import prose
from calcdoc.text.document import Document, mentions, read_document
from calcdoc.text.statements import (
    Definition,
    GivenStatement,
    HazardStatement,
    Inequality,
    Kind,
    ReferenceStatement,
    SentenceStatement,
    Uncalculated,
)
from tests.helpers.checking import TITLE


def read(text: str) -> Document:
    """A document without findings."""
    document, findings = read_document(SourceFile("lamp.md", TITLE + text))
    assert findings == ()
    assert document is not None
    return document


def test_title_block() -> None:
    """Keys are read; those left out have their defaults."""
    title = read("").title
    assert (title.number, title.title, title.revision) == ("T-1", "Trial", "A")
    assert (title.status, title.paper, title.digits, title.language) == ("draft", "A4", 4, "en")
    assert (title.draws, title.seed, title.sequence) == (None, None, "random")


def test_sampling_in_the_title_block() -> None:
    """Draws, seed and sequence are read from a table of their own."""
    table = 'draws = 20_000\nseed = 7\nsequence = "quasi-random"'
    text = TITLE.replace('"A"\n', f'"A"\n\n[sampling]\n{table}\n')
    document, findings = read_document(SourceFile("lamp.md", text))
    assert findings == ()
    assert document is not None
    title = document.title
    assert (title.draws, title.seed, title.sequence) == (20_000, 7, "quasi-random")


def test_every_kind_of_statement() -> None:
    """Each block word makes its kind of statement, in the author's order."""
    document = read(
        "```conditions\nV = 230 V ± 10 % | supply | [S, 2] and [T]\n```\n"
        "```inputs\nR = 5 Ω\n```\n"
        "```assumptions\nA1: T = 5 K | warm | open: test\nA2: dry air | quay | closed: [S]\n```\n"
        "```derive\nI [mA] = V/R | current\n```\n"
        "```criteria\nK: I <= 3 A by extremes | limit\nL: by test: heat\n```\n"
        "```hazards\nsupply V\n```\n"
        "```references\nS | Sheet | 2nd | here\n```\n"
    )
    kinds = [type(each) for each in document.statements]
    assert kinds == [
        GivenStatement,
        GivenStatement,
        GivenStatement,
        SentenceStatement,
        Definition,
        Inequality,
        Uncalculated,
        HazardStatement,
        ReferenceStatement,
    ]
    first, second, third, *_ = document.statements
    assert isinstance(first, GivenStatement)
    assert isinstance(second, GivenStatement)
    assert isinstance(third, GivenStatement)
    assert [each.kind for each in (first, second, third)] == [
        Kind.CONDITION,
        Kind.INPUT,
        Kind.ASSUMPTION,
    ]
    assert [(each.key, each.detail) for each in first.basis.citations] == [("S", "2"), ("T", "")]
    assert (third.state, third.basis.text) == ("open", "test")


def test_continued_statement_with_comment() -> None:
    """Lines that begin with a blank continue, comments between them are left out."""
    document = read("```inputs\nV = 230 V\n# why not\n  ± 10 %\n  | supply \\| mains |\n```\n")
    (statement,) = document.statements
    assert isinstance(statement, GivenStatement)
    assert statement.text == "V = 230 V ± 10 %"
    assert statement.description == "supply | mains"


def test_places_in_a_list_and_a_quotation() -> None:
    """The place of a statement is that in the file, whatever its block stands in."""
    text = "- a\n\n  ```inputs\n  V = 5 V\n  ```\n\n> ```inputs\n> R = 5 Ω\n>  ± 1 %\n> ```\n"
    document = read(text)
    spans = [each.span for each in document.statements]
    source = document.source.text
    assert [source[span.start : span.end] for span in spans] == ["V = 5 V", "R = 5 Ω\n>  ± 1 %"]


def test_mentions_in_order() -> None:
    """Mentions in headings, paragraphs, tables, cautions and quotations; none in code."""
    document = read(
        "# A {a}\n\nb {b:value} `{no}` \\{no} **{c}** [{d}](https://example.org)\n\n"
        "| {e} |\n|---|\n| {f} |\n\n> - {g}\n\n```caution\nDanger: hot {h}\n```\n"
    )
    names = [each.name for each in mentions(document.body)]
    assert names == ["a", "b", "c", "d", "e", "f", "g", "h"]


def test_mentions_stand_where_they_say() -> None:
    """The text at the place of each mention is the mention."""
    document = read(
        "{a} \\{b} {b}\u2028{c}\n>  {d}\n\n1. x\n   {e} *{f}\n   y {g}*\n\n## {h} ##\n"
        "\n```caution\nDanger: so hot {i}\n```\n"
    )
    found = [(each.name, each.span) for each in mentions(document.body)]
    source = document.source.text
    assert [source[span.start : span.end] for _, span in found] == [
        f"{{{name}}}" for name, _ in found
    ]
    assert "".join(name for name, _ in found) == "abcdefghi"
    assert found[1][1].start == source.index(" {b}") + 1


def test_caution() -> None:
    """The first word sets the signal; without one it is a caution."""
    document = read("```caution\nWARNING: Hot\n```\n```caution\nmind the {V}\n```\n")
    cautions = [each for each in document.body if isinstance(each, prose.CautionBlock)]
    assert [each.signal for each in cautions] == ["warning", "caution"]
    assert cautions[0].blocks == (prose.Paragraph((prose.Words("Hot"),)),)


def test_other_fences_are_code() -> None:
    """A fence without a block word is shown as it stands."""
    document = read("```\nplain\n```\n\n~~~~text\n```inputs\nV = 5 V\n```\n~~~~\n")
    assert document.body == (
        prose.Listing("plain"),
        prose.Listing("```inputs\nV = 5 V\n```"),
    )
    assert document.statements == ()


def test_too_large() -> None:
    """Five million characters are refused at once, with one finding and no document."""
    document, findings = read_document(SourceFile("big.md", TITLE + "a" * 5_000_000))
    assert document is None
    assert [each.message for each in findings] == [
        f"the text has {len(TITLE) + 5_000_000} characters, at most 2000000 are read"
    ]


def test_prose_tree() -> None:
    """CommonMark becomes our own tree."""
    document = read("1. a\n2. *b* `c`\n\n---\n\n    code\n\n![alt](p.png)\\\nend\n")
    items, rule, listing, paragraph = document.body
    assert isinstance(items, prose.Items)
    assert items.start == 1
    assert items.items[1] == (
        prose.Paragraph(
            (
                prose.Emphasis(strong=False, inline=(prose.Words("b"),)),
                prose.Words(" "),
                prose.Code("c"),
            )
        ),
    )
    assert rule == prose.Rule()
    assert listing == prose.Listing("code\n")
    assert isinstance(paragraph, prose.Paragraph)
    picture, forced, words = paragraph.inline
    assert isinstance(picture, prose.Picture)
    assert (picture.path, picture.alternative) == ("p.png", "alt")
    span = picture.span
    assert document.source.text[span.start : span.end] == "p.png"
    assert (forced, words) == (prose.Break(), prose.Words("end"))


def test_a_number_of_thousands_of_digits() -> None:
    """A number no computer reads is refused, not crashed on."""
    text = TITLE.replace('"A"\n', f'"A"\n\n[sampling]\nseed = {"9" * 5000}\n')
    _, findings = read_document(SourceFile("lamp.md", text))
    assert [(each.code, each.message, each.help) for each in findings] == [
        (
            "document-toml",
            "a whole number of the title block is too long",
            "write at most 18 digits",
        )
    ]
