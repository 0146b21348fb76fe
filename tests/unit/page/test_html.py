"""The HTML page of the sample record."""

import json
import re
from html.parser import HTMLParser

import pytest

from calcdoc.page.html import POLICY, html, inert
from calcdoc.page.lines import given_value
from tests.helpers.sample_parts import quantity
from tests.helpers.sample_record import DATA, sample

VOID = frozenset({"meta", "br", "hr", "img", "col", "link"})


class Reader(HTMLParser):
    """Collects what the assertions ask for, and checks that elements close in order."""

    def __init__(self) -> None:
        super().__init__()
        self.open: list[str] = []
        self.ids: list[str] = []
        self.targets: list[str] = []
        self.headings: list[int] = []
        self.tags: set[str] = set()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Note what opens."""
        self.tags.add(tag)
        for name, value in attrs:
            if name == "id" and value:
                self.ids.append(value)
            if name == "href" and value:
                self.targets.append(value)
        if re.fullmatch("h[1-6]", tag):
            self.headings.append(int(tag[1]))
        if tag not in VOID:
            self.open.append(tag)

    def handle_endtag(self, tag: str) -> None:
        """Close the one that is open."""
        assert self.open.pop() == tag


@pytest.fixture(scope="module")
def page() -> str:
    return html(sample(), DATA)


@pytest.fixture(scope="module")
def seen(page: str) -> Reader:
    reader = Reader()
    reader.feed(page)
    return reader


def test_policy_is_the_first_thing_in_the_head(page: str) -> None:
    """Nothing can be asked for before the policy is known."""
    first = f'<head>\n<meta http-equiv="Content-Security-Policy" content="{POLICY}">'
    assert page.startswith(f'<!DOCTYPE html>\n<html lang="en">\n{first}')


def test_elements_close_in_order(seen: Reader) -> None:
    """Every element is closed where it was opened."""
    assert seen.open == []


def test_ids_are_unique_and_links_lead_somewhere(seen: Reader) -> None:
    """Every link inside the page has a target, and no id stands twice."""
    assert sorted(set(seen.ids)) == sorted(seen.ids)
    assert {each for each in seen.targets if each[1:] not in seen.ids} == set()


def test_headings_skip_no_level(seen: Reader) -> None:
    """One title, and no heading more than one level below the one before."""
    assert seen.headings[0] == 1
    assert seen.headings.count(1) == 1
    pairs = zip(seen.headings, seen.headings[1:], strict=False)
    assert all(after - before <= 1 for before, after in pairs)


def test_landmarks(seen: Reader) -> None:
    """Header, navigation, main and footer are marked as such."""
    assert {"header", "nav", "main", "footer"} <= seen.tags


def test_only_script_is_the_record_and_it_is_inert(page: str) -> None:
    """The JSON is embedded as data that no tag can leave, and it reads back equal."""
    scripts = re.findall(r"<script([^>]*)>(.*?)</script>", page, re.DOTALL)
    assert [attributes for attributes, _ in scripts] == [' type="application/json" id="record"']
    assert json.loads(scripts[0][1]) == json.loads(DATA)
    assert "<" not in inert(DATA)


def test_nothing_is_loaded(page: str) -> None:
    """No address but fragments and embedded data stands where a browser would fetch."""
    sources = re.findall(r'(?:src|href|url)\s*[=(]\s*"([^"]*)"', page)
    assert {each for each in sources if not each.startswith(("#", "data:"))} == set()
    assert "javascript:" not in page


def test_author_text_is_escaped(page: str) -> None:
    """Markup in the author's text stays text."""
    assert "A &lt;tag&gt; &amp; an ampersand stay text" in page
    title = html(sample(title='<img src=x onerror=alert(1)>"'), DATA)
    assert "<img" not in title


def test_symbol_links_to_its_line_with_a_card(page: str) -> None:
    """The card says meaning, value and band."""
    card = "Reservoir voltage at the line peak · 323.4\u00a0V · 290.9\u00a0V to 356\u00a0V"
    assert f'<a href="#q-V_pk" data-card="{card}">V</a>' in page


def test_lines_link_both_ways(page: str) -> None:
    """A line names what it rests on and where it is used."""
    line = page[page.index('id="q-V_valley"') :]
    assert 'from <a href="#q-V_pk">3.1</a>, <a href="#q-ΔV">3.3</a>' in line
    assert 'used in <a href="#c-R2">R2</a>' in line


def test_failure_is_a_word(page: str) -> None:
    """The ink of a failure never stands without the word."""
    assert set(re.findall(r'class="v bad">([^<]*)<', page)) == {"fail"}


def test_cover_answers_what_is_open(page: str) -> None:
    """Open assumptions, open tests, accepted failures, values not verified: each has an answer."""
    for answer in (
        "Open assumptions: yes (1).",
        "Open tests: 1.",
        "Accepted failures: 1.",
        "Values not verified: 1.",
    ):
        assert f"<b>{answer}</b>" in page


def test_order_of_the_page(page: str) -> None:
    """Cover, body, back matter, end mark."""
    marks = (
        'id="verdicts"', 'id="open"', 'id="cautions"', 'id="signatures"', 'id="q-V_line"',
        'id="c-N1"', 'id="back-clauses"', 'id="back-inputs"', 'id="back-symbols"',
        'id="back-references"', 'id="back-method"', 'id="back-digests"', 'id="back-history"',
        "end of record QSL-CAL-01 revision B",
    )  # fmt: skip
    places = [page.index(mark) for mark in marks]
    assert places == sorted(places)


def test_draft_cannot_be_signed() -> None:
    """A draft says so in its strip, its state and its signature boxes."""
    page = html(sample(status="draft"), DATA)
    assert page.count("draft: cannot be signed") == 3
    assert '<strong class="draft">DRAFT</strong>' in page


def test_same_record_same_page(page: str) -> None:
    """Equal input gives equal text."""
    assert html(sample(), DATA) == page


def test_faces_follow_the_letters() -> None:
    """The extended Latin faces are embedded only for a page that needs them."""
    assert 'calcdoc serif more";font-weight' not in html(sample(), DATA)
    assert 'calcdoc serif more";font-weight' in html(sample(title="Světlo"), DATA)


def test_nominal_stands_beside_limits() -> None:
    """A tolerance written as two limits does not hide the nominal value."""
    band = "\u221220\u00a0°C to 45\u00a0°C"
    warm = quantity(symbol="T_a", kind="condition", result="12.5 °C", tolerance=band, varies=True)
    assert given_value(warm) == f"12.5\u00a0°C, {band}"
    factor = "230\u00a0V × (1 ± 10\u00a0%)"
    line = quantity(symbol="V", kind="condition", result="230 V", tolerance=factor, varies=True)
    assert given_value(line) == factor
