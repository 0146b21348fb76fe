"""The parser is total: any text gives a document and findings, in bounded time."""

import re
import time

import pytest
from hypothesis import given

from calcdoc.model.build import build
from calcdoc.problems.views import full
from calcdoc.source import SourceFile
from calcdoc.text.document import read_document
from tests.helpers.checking import TITLE, codes, rendered
from tests.property.strategies import texts

HEADLINE = re.compile(r"lamp\.md:[0-9]+:[0-9]+: (error|warning)\[[a-z-]+\]: .+")


@pytest.mark.property
@given(texts())
def test_any_text_is_answered(text: str) -> None:
    """Nothing is raised; every finding has a headline and places inside the text."""
    for whole in (text, TITLE + text):
        source = SourceFile("lamp.md", whole)
        document, findings = read_document(source)
        assert document is not None
        model, more = build(document)
        for finding in (*findings, *more):
            for place in (finding.place, *finding.related):
                assert 0 <= place.span.start <= place.span.end <= len(whole)
            first, *_ = full(finding, {"lamp.md": source}).split("\n")
            assert HEADLINE.fullmatch(first)
        if model is not None:
            assert set(model.order) == set(model.variables)


def derive(formula: str) -> str:
    """A text with one definition."""
    return f"{TITLE}```derive\nz = {formula}\n```\n"


def inputs(value: str) -> str:
    """A text with one input."""
    return f"{TITLE}```inputs\nV = {value}\n```\n"


def cases(changes: str) -> str:
    """A text with one case."""
    return f"{TITLE}```inputs\nx = 1\n```\n```cases\nmode dim: {changes}\n```\n"


def criteria(clauses: str) -> str:
    """A text with one criterion."""
    return f"{TITLE}```criteria\nR: 1 <= 2 {clauses}\n```\n"


HOSTILE = {
    "ten thousand parentheses": (derive("(" * 10_000), ("formula-size",)),
    "ten thousand signs": (derive("-" * 10_000 + "1"), ("formula-size",)),
    "nested conditions": (derive("if(" + "not " * 5000 + "1 < 2, 1, 2)"), ("formula-size",)),
    "a long sum": (derive("+".join("1" * 9000)), ("formula-size",)),
    "a tower of powers": (derive("^".join("9" * 5000)), ("formula-size",)),
    "a small tower of powers": (derive("9^9^9^9"), ("too-large",)),
    "an exponent tower on a unit": (derive("(2 V)^(9^9^9^9)"), ("unit-mismatch",)),
    "a statement of 30 000 characters": (derive("1 + " + "a" * 30_000), ("formula-size",)),
    "a number of 19 000 digits": (inputs("9" * 19_000 + " V"), ("number-form",)),
    "a unit of 9 000 words": (inputs("1 " + "·".join("V" * 9000)), ("number-form",)),
    "a huge unit": (inputs("1 " + "·".join(["QΩ^9"] * 9)), ("number-form",)),
    "a word of 19 000 letters": (inputs("1 " + "a" * 19_000), ("unknown-unit",)),
    "twenty thousand columns": (inputs("5 V" + "|" * 20_000), ("columns",)),
    "brackets in a basis": (inputs("5 V | a | " + "[" * 19_000), ()),
    "blanks in a formula": (derive("1" + " " * 19_000 + "x"), ("number-form",)),
    "a case of ten thousand changes": (cases("x = 1, " * 10_000), ("formula-size",)),
    "a case of nested parentheses": (cases("x = " + "(" * 10_000), ("formula-size",)),
    "a name of nine thousand words": (criteria("in " + "a " * 9000), ("unknown-case",)),
    "a list of six thousand cases": (criteria("in " + "a, " * 6000 + "a"), ("unknown-case",)),
    "a condition of ten thousand signs": (criteria("when " + "-" * 10_000), ("formula-size",)),
    "a thousand biases": (inputs("1 V" + " bias 0 .. 1 V" * 1000), ("tolerance",)),
    "two thousand cases": (
        f"{TITLE}```inputs\nx = 1\n```\n```cases\n"
        + "".join(f"mode m{k}: x = {k}\n" for k in range(2000))
        + "```\n",
        ("case-form",) * 1800,
    ),
    "ten thousand acceptances": (
        f"{TITLE}```criteria\nR: 1 <= 2\n" + "accept R | r | until 2027-06-30\n" * 10_000 + "```\n",
        ("acceptance",) * 9999,
    ),
    "nested quotations": (TITLE + ">" * 100_000, ()),
    "nested lists": (TITLE + "- " * 100_000, ()),
    "open brackets in prose": (TITLE + "[" * 50_000, ()),
    "open links": (TITLE + "[a](" * 20_000, ()),
    "open braces": (TITLE + "{" * 100_000, ()),
    "stars": (TITLE + "*a **b " * 20_000, ()),
    "backticks": (TITLE + "".join("`" * k + " " for k in range(1, 1000)), ()),
    "less-than signs": (TITLE + "<" * 100_000, ()),
    "a wide table": (TITLE + "|" * 5000 + "\n" + "|-" * 5000 + "|\n", ()),
    "TOML nested deeply": ("```document\na = " + "[" * 5000 + "\n```\n", ("document-toml",)),
    "fences that open only": (TITLE + "```derive\n" * 200, ("unclosed-block",) * 200),
    "control characters": (
        inputs("".join(map(chr, range(1, 9))) + " V"),
        ("syntax",),
    ),
    "a lone surrogate": (inputs("\ud800"), ("syntax",)),
}


@pytest.mark.parametrize("name", HOSTILE)
def test_hostile_text(name: str) -> None:
    """The text is answered with exactly these codes, in well under ten seconds."""
    text, expected = HOSTILE[name]
    begin = time.process_time()
    assert codes(text) == expected
    assert time.process_time() - begin < 10


def test_many_unknown_names_take_time_in_proportion() -> None:
    """A thousand unknown names among a thousand known ones are each answered."""
    lines = "".join(f"x_{k} = y_{k}\n" for k in range(1000))
    begin = time.process_time()
    assert codes(f"{TITLE}```derive\n{lines}```\n") == ("unknown-symbol",) * 1000
    assert time.process_time() - begin < 20


def test_every_mistake_of_a_long_text_is_reported() -> None:
    """Two thousand wrong lines give two thousand findings, each at its line."""
    lines = "".join(f"x_{k} =\n" for k in range(2000))
    heads = [
        line for line in rendered(f"{TITLE}```derive\n{lines}```\n").split("\n") if "error[" in line
    ]
    assert [line.split(":")[1] for line in heads] == [str(k) for k in range(7, 2007)]
