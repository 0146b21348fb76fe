"""Statements as the model reads them: cases, scopes, acceptances, measurements, make-up."""

from collections.abc import Callable
from fractions import Fraction

import pytest

from calcdoc.problems import Mistake
from calcdoc.text.cases import case
from calcdoc.text.criteria import criterion
from calcdoc.text.crosschecks import crosscheck
from calcdoc.text.given import Given, Style, given
from calcdoc.text.makeup import with_makeup
from calcdoc.text.nodes import Logic, Name, Number
from calcdoc.text.passage import Passage, passage_of
from calcdoc.text.scan import Scanner
from calcdoc.text.statements import Acceptance, AnyOf, CaseStatement, Inequality, Measurement
from calcdoc.text.unparse import unparse


def read_case(text: str) -> CaseStatement:
    """A line of a `cases` block."""
    return case(passage_of("", text))


def read_criterion(text: str) -> Inequality:
    """An inequality of a `criteria` block."""
    found = criterion(passage_of("", text))
    assert isinstance(found, Inequality)
    return found


def value_of(text: str) -> Given:
    """A given value with its make-up, which fills a text."""
    scanner = Scanner(passage_of("", text))
    value = with_makeup(scanner, given(scanner))
    assert scanner.ended
    return value


def test_a_case() -> None:
    """Kind, name with its blanks collapsed, changes, description and basis."""
    found = read_case(
        "fault one  LED\n shorted: n_LED = n_LED - 1, V = 230 V ± 1 %,\n R = max(R, 2 Ω) | d | [S]"
    )
    assert (found.kind, found.name.name) == ("fault", "one LED shorted")
    assert [each.symbol.name for each in found.changes] == ["n_LED", "V", "R"]
    assert [each.text for each in found.changes] == [
        "n_LED = n_LED - 1", "V = 230 V ± 1 %", "R = max(R, 2 Ω)",
    ]  # fmt: skip
    first, second, third = found.changes
    assert first.given is None
    assert first.formula is not None
    assert unparse(first.formula) == "n_LED - 1"
    assert second.formula is None
    assert second.given is not None
    assert (second.given.nominal, second.given.style) == (Fraction(230), Style.RELATIVE)
    assert third.formula is not None
    assert unparse(third.formula) == "max(R, 2 Ω)"
    assert (found.description, found.basis.text) == ("d", "[S]")
    assert [each.key for each in found.basis.citations] == ["S"]
    assert (
        found.text == "fault one LED shorted: n_LED = n_LED - 1, V = 230 V ± 1 %, R = max(R, 2 Ω)"
    )


@pytest.mark.parametrize(
    ("right", "is_given"),
    [
        ("5", True),
        ("-5 V", True),
        ("+5 V ± 1 V", True),
        ("5 V -10 % +20 %", True),
        ("4 .. 5 V", True),
        ("4 .. 5 .. 7 V", True),
        ("5 V ± 1 % as normal k=3 bias -1 % .. 0 % (heat)", True),
        ("V", False),
        ("(5 V)", False),
        ("5 V - 1 V", False),
        ("2*V", False),
        ("5 V/(2)", False),
        ("-(5 V)", False),
        ("if(V > 3 V, 2 V, 1 V)", False),
    ],
)
def test_a_value_or_a_formula(right: str, is_given: bool) -> None:
    """A number or quantity with its band is a value; anything else is a formula."""
    (change,) = read_case(f"mode dim: V = {right}").changes
    assert (change.given is not None) is is_given
    assert (change.formula is None) is is_given


def test_scopes() -> None:
    """No `in`, every case, every fault, and names up to the next clause."""
    assert read_criterion("A: x <= 1").clauses.scope is None
    scope = read_criterion("A: x <= 1 in every  fault by extremes").clauses.scope
    assert scope is not None
    assert (scope.every, scope.names) == ("fault", ())
    found = read_criterion("A: x <= 1 in normal, one LED\n shorted, dim when x > 0 at nominal")
    scope = found.clauses.scope
    assert scope is not None
    assert scope.every == ""
    assert [each.name for each in scope.names] == ["normal", "one LED shorted", "dim"]
    assert found.clauses.at_nominal
    assert found.clauses.text == "in normal, one LED shorted, dim when x > 0 at nominal"


def test_a_condition_ends_at_the_next_clause() -> None:
    """The condition of `when` may hold and, or, not; a clause word ends it."""
    clauses = read_criterion(
        "A: x <= 1 when x > 0 and not y < 5 in dim with margin 1 % for n in 1..3"
    ).clauses
    assert isinstance(clauses.when, Logic)
    assert unparse(clauses.when) == "x > 0 and not y < 5"
    assert clauses.scope is not None
    assert clauses.margin is not None
    assert clauses.index is not None


def test_one_of_several() -> None:
    """`any of` has its members in the author's order."""
    found = criterion(passage_of("", "H0: any  of H1,H2 , H3 | one | [S]"))
    assert isinstance(found, AnyOf)
    assert [each.name for each in found.members] == ["H1", "H2", "H3"]
    assert (found.text, found.description) == ("any of H1, H2, H3", "one")


def test_an_acceptance() -> None:
    """Criterion, cases, reason, basis without its end, and the last day."""
    text = "accept R3 in dim, one LED | as agreed | [DEV-3] until then until 2027-06-30"
    found = criterion(passage_of("", text))
    assert isinstance(found, Acceptance)
    assert found.criterion.name == "R3"
    assert [each.name for each in found.cases] == ["dim", "one LED"]
    assert (found.reason, found.until) == ("as agreed", "2027-06-30")
    assert found.basis.text == "[DEV-3] until then"
    assert text[found.until_span.start : found.until_span.end] == "2027-06-30"
    whole = criterion(passage_of("", "accept R3 | reason | until 2024-02-29"))
    assert isinstance(whole, Acceptance)
    assert (whole.cases, whole.basis.text) == ((), "")


def test_a_criterion_may_be_called_accept() -> None:
    """The word alone is an id like others."""
    assert read_criterion("accept: x <= 1").id.name == "accept"


def test_a_measurement() -> None:
    """Symbol, value with its band, what it is compared with, and its conditions."""
    found = crosscheck(
        passage_of("", "K3: measured P_m = 4.61 W ± 1.5 % against P_in at V = 230.2 V, T = 24 °C")
    )
    assert isinstance(found, Measurement)
    assert (found.id.name, found.symbol.name) == ("K3", "P_m")
    assert found.given.greatest == Fraction("4.61") * Fraction("1.015")
    assert found.second == Name("P_in", found.second.span)
    assert [each.symbol.name for each in found.at] == ["V", "T"]


def test_a_make_up() -> None:
    """Random part, biases and like parts; the band holds all of them."""
    value = value_of("10 µF ± 10 % as normal k=3 bias -12 .. 0 % (age) bias -1 .. 2 µF each of n")
    made = value.parts
    assert (made.shape, made.k, made.assumed) == ("normal", Fraction(3), False)
    assert [made.low, made.high] == [9, 11]
    assert [[each.low, each.high] for each in made.biases] == [[Fraction("-1.2"), 0], [-1, 2]]
    assert [each.text for each in made.biases] == ["-12 .. 0 % (age)", "-1 .. 2 µF"]
    assert [value.least, value.nominal, value.greatest] == [Fraction("6.8"), 10, 13]
    assert made.like is not None
    assert isinstance(made.like.count, Name)
    assert (made.like.count.name, made.like.shared) == ("n", Fraction(0))


@pytest.mark.parametrize(
    ("text", "shape", "k"),
    [
        ("5 V ± 1 V as triangular", "triangular", None),
        ("5 V ± 1 V as rectangular", "rectangular", None),
        ("4 .. 5 .. 6 V as normal k=2.5", "normal", Fraction("2.5")),
    ],
)
def test_shapes(text: str, shape: str, k: Fraction | None) -> None:
    """A distribution that is stated is not assumed."""
    made = value_of(text).parts
    assert (made.shape, made.k, made.assumed) == (shape, k, False)


def test_a_band_alone() -> None:
    """Without a make-up a band is one random part, assumed rectangular."""
    value = value_of("5 V ± 1 V")
    assert value.makeup is None
    made = value.parts
    assert (made.shape, made.assumed) == ("rectangular", True)
    assert [made.low, made.high] == [4, 6]
    assert (made.biases, made.like) == ((), None)


def test_like_parts() -> None:
    """A count in digits, and the share they have in common."""
    like = value_of("3 V ± 5 % each of 12 shared 60 %").parts.like
    assert like is not None
    assert isinstance(like.count, Number)
    assert (like.count.digits, like.shared) == ("12", Fraction(3, 5))


def test_a_bias_of_a_temperature() -> None:
    """A temperature in °C is moved by differences in K."""
    value = value_of("40 °C ± 2 K bias -5 K .. 0 K")
    assert [value.least, value.greatest] == [33, 42]


def test_every_unit_of_a_bias_is_kept() -> None:
    """Joined words in a bias may be mistaken for symbols as well."""
    words = [[word.word for word in unit.words] for unit in value_of("1 Ω bias 0 .. 1 V/A").units]
    assert words == [["Ω"], ["V", "A"]]


@pytest.mark.parametrize(
    ("read", "text"),
    [
        (case, "mode a: " + "V = 1 V, " * 200 + "V = 1 V"),
        (case, "mode " + "a" * 30_000 + ": V = 1 V"),
        (case, "mode a: V = " + "(" * 10_000),
        (criterion, "A: x <= 1 in " + "every " * 9000),
        (criterion, "A: x <= 1 when " + "not " * 9000 + "x > 1"),
        (criterion, "A: any of " + "A " * 9000),
        (criterion, "accept A | r | " + "until " * 9000),
        (crosscheck, "K: measured P = 1 W ± " + "1" * 19_000 + " % against P"),
    ],
)
def test_hostile_statements(read: Callable[[Passage], object], text: str) -> None:
    """What is too much is refused, not read for ever."""
    with pytest.raises(Mistake, match=r"at most|too long|nested|expected|last day"):
        read(passage_of("", text))
