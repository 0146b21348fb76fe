"""The same picture as MathML and as boxes, as whole strings."""

from xml.etree import ElementTree as ET

import pytest

from calcdoc.page.boxes import boxes
from calcdoc.page.mathml import mathml
from calcdoc.page.measure import measure
from calcdoc.page.pieces import Piece, is_formula, no_links, pieces, read

NB = "\u00a0"
THIN = "\u2009"
V_PK = '<msub><mi class="i">V</mi><mtext>pk</mtext></msub>'


def math(text: str) -> str:
    """The inside of the MathML of a formula in one piece."""
    written = mathml(Piece(read(text)), no_links)
    return written[written.index(">") + 1 : -len("</math>")]


def box(text: str) -> str:
    """The inside of the boxes of a formula in one piece."""
    written = boxes(Piece(read(text)), no_links)
    return written.removeprefix('<span class="m">').removesuffix("</span>")


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("V_pk", V_PK),
        (
            "V_s^2",
            '<msubsup><mi class="i">V</mi><mi mathvariant="normal">s</mi><mn>2</mn></msubsup>',
        ),
        ("a/b", '<mfrac><mi class="i">a</mi><mi class="i">b</mi></mfrac>'),
        ("sqrt(2)", "<msqrt><mn>2</mn></msqrt>"),
        ("a - 1", '<mi class="i">a</mi><mo form="infix">\u2212</mo><mn>1</mn>'),
        ("a < 1", '<mi class="i">a</mi><mo form="infix">&lt;</mo><mn>1</mn>'),
        ("-3 V", f'<mo form="prefix">\u2212</mo><mn>3</mn><mtext>{NB}</mtext><mtext>V</mtext>'),
        ("2*pi", f'<mn>2</mn><mtext>{THIN}</mtext><mi mathvariant="normal">π</mi>'),
        (
            "sin(x)",
            (
                '<mi>sin</mi><mrow><mo form="prefix" stretchy="false">(</mo><mi class="i">x</mi>'
                '<mo form="postfix" stretchy="false">)</mo></mrow>'
            ),
        ),
        (
            "if(x > 1, 2, 3)",
            (
                '<mrow><mo form="prefix" stretchy="true">{</mo><mtable><mtr><mtd><mrow><mn>2</mn>'
                f'<mtext>{NB}if{NB}</mtext><mi class="i">x</mi><mo form="infix">&gt;</mo><mn>1</mn>'
                f"</mrow></mtd></mtr><mtr><mtd><mrow><mn>3</mn><mtext>{NB}otherwise</mtext></mrow>"
                "</mtd></mtr></mtable></mrow>"
            ),
        ),
    ],
)
def test_mathml(text: str, expected: str) -> None:
    """Each construct is written in elements of MathML Core."""
    inner = math(text)
    assert inner in (expected, f"<mrow>{expected}</mrow>")


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("V_pk", "<i>V</i><sub>pk</sub>"),
        ("a - 1", "<i>a</i> \u2212 1"),
        ("a < 1", "<i>a</i> &lt; 1"),
        ("sqrt(2)", '<span class="rs">√</span><span class="rd">2</span>'),
        (
            "a/b",
            (
                '<span class="fr" style="vertical-align:-0.607em"><span class="n"><i>a</i></span>'
                '<span class="d"><i>b</i></span></span>'
            ),
        ),
        (
            "V_s^2",
            '<i>V</i><sub>s</sub><sup style="margin-left:-0.35em;margin-right:0.00em">2</sup>',
        ),
        (
            "if(x > 1, 2, 3)",
            (
                '<span class="tall" style="transform:translateY(0.392em) scaleY(2.414)">{</span>'
                '<span class="cs" style="vertical-align:-0.627em"><span class="row">'
                '2 if <i>x</i> &gt; 1</span><span class="row">3 otherwise</span></span>'
            ),
        ),
    ],
)
def test_boxes(text: str, expected: str) -> None:
    """Each construct is text in boxes, in reading order."""
    assert box(text) == expected


@pytest.mark.parametrize(
    "text",
    ["a/b + c", "(a/b)^2", "sqrt(a/b)", "abs(x)/2", "min(a, b)", "I_h[n]", "x <= 2 V", "s[3]/2"],
)
def test_mathml_is_well_formed(text: str) -> None:
    """An XML parser accepts every formula, and its alternative text is not empty."""
    tree = ET.fromstring(mathml(Piece(read(text)), no_links))  # noqa: S314  our own text
    assert tree.tag == "math"
    assert tree.get("alttext")


def test_symbol_links_from_the_token_of_its_base() -> None:
    """The link stands in the token, where a browser follows it; the subscript stays plain."""
    written = mathml(Piece(read("V_pk")), lambda name: f' href="#q-{name}"')
    assert '<mi class="i"><a href="#q-V_pk">V</a></mi><mtext>pk</mtext>' in written


def test_tall_brackets_are_stretched_about_what_they_hold() -> None:
    """A bracket around a fraction is scaled, one around a sum is not."""
    assert "scaleY(2." in box("(a/b)")
    assert box("(a + b)") == "(<i>a</i> + <i>b</i>)"


def test_short_formula_is_one_piece() -> None:
    """Nothing is cut that fits."""
    assert len(pieces(read("a + b = c"))) == 1


def test_long_formula_breaks_before_plus_and_minus() -> None:
    """Each piece fits the column and begins with its sign."""
    text = " + ".join(f"V_long_name_{number}" for number in range(12))
    cut = pieces(read(text), room=20.0)
    assert len(cut) == 12
    assert all(measure(piece.shown).width <= 20 for piece in cut)
    assert [boxes(piece, no_links)[16:18] for piece in cut[1:]] == ["+ "] * 11


def test_too_wide_piece_is_set_smaller_and_then_breaks() -> None:
    """A fraction wider than the column shrinks to the smallest readable type, no further."""
    little = pieces(read("(" + " + ".join(["V_line_max"] * 8) + ")/b"), room=26.0)
    assert 0.7 < little[0].scale < 1
    assert not little[0].breaks
    much = pieces(read("(" + " + ".join(["V_line_max"] * 40) + ")/b"), room=26.0)
    assert much[0].scale == 0.7
    assert 'class="m wide"' in boxes(much[0], no_links)


def test_sentence_is_no_formula() -> None:
    """A criterion may be a sentence; it stands as it is, escaped."""
    assert not is_formula("temperature rise of the lamp")
    assert is_formula("V_pk <= 400 V")
    assert box("a <b> sentence here") == "a &lt;b&gt; sentence here"


@pytest.mark.parametrize(
    "text",
    [
        "+".join(["V_long"] * 140),
        "*".join(["V_long"] * 140),
        "/".join(["a"] * 140),
        "a/(" * 50 + "b" + ")" * 50,
        "sqrt(" * 50 + "x" + ")" * 50,
        "abs(" * 50 + "x" + ")" * 50,
        "if(x > 1, a, " * 25 + "b" + ")" * 25,
    ],
)
def test_deep_and_long_formulas_are_drawn(text: str) -> None:
    """Whatever the parser accepts is drawn, in time in proportion to its length."""
    cut = pieces(read(text), room=30.0)
    assert len("".join(mathml(piece, no_links) for piece in cut)) < 400 * len(text)
    assert len("".join(boxes(piece, no_links) for piece in cut)) < 400 * len(text)
