"""The HTML page of the sample record."""

import json
import re
from html.parser import HTMLParser

import pytest
from msgspec import structs

from calcdoc.page.boxes import boxes
from calcdoc.page.html import POLICY, html, inert
from calcdoc.page.lines import criterion_line, given_value
from calcdoc.page.markup import margin_bar
from calcdoc.page.view import View
from tests.helpers.sample_parts import CRITERIA, criterion, quantity
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
    assert set(re.findall(r'class="v bad">([^<]*)<', page)) == {
        "fail",
        "fail, accepted",
    }


def test_cover_answers_what_is_open(page: str) -> None:
    """Open assumptions, open tests, accepted failures, values not verified: each has an answer."""
    for answer in (
        "Open assumptions: yes (1).",
        "Open tests: 1.",
        "Accepted failures: 1.",
        "Values not verified: 1.",
    ):
        assert f"<b>{answer}</b>" in page
    quiet = html(structs.replace(sample(), criteria=(), assumptions=(), body=()), DATA)
    none = "Open assumptions: none. Open tests: none. Accepted failures: none. Values not verified"
    assert f"<b>{none}: none.</b>" in quiet


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
    assert words(given_value(warm)) == f"12.5\u00a0°C, {band}"
    factor = "230\u00a0V × (1 ± 10\u00a0%)"
    line = quantity(symbol="V", kind="condition", result="230 V", tolerance=factor, varies=True)
    assert words(given_value(line)) == factor


def words(shown: str) -> str:
    """The text of a piece of HTML."""
    return re.sub("<[^>]*>", "", shown)


@pytest.mark.parametrize(
    ("value", "limit", "relation", "filled", "tick"),
    [
        (153.0, 200.0, "<=", 73.4, 96.0),  # 77 % of an upper limit is used up
        (19.18, 5.0, ">=", 25.0, 96.0),  # a margin of 280 % above a lower limit is a short bar
        (5.0, 5.0, ">=", 96.0, 96.0),
        (6.0, 5.0, "<=", 100.0, 83.3),
        (4.136, 5.0, ">=", 100.0, 82.7),
        (-3.2, 4.0, ">=", 100.0, 30.0),
        (-4.0, -5.0, ">=", 76.8, 96.0),
        (-1.0, 5.0, "<=", 0.0, 96.0),
    ],
)
def test_bar_shows_what_is_used_of_the_limit(
    value: float, limit: float, relation: str, filled: float, tick: float
) -> None:
    """One rule for both directions, and a failure runs over the tick."""
    one = criterion(id="X", value=value, limit=limit, relation=relation, margin=0.1, unit="V")
    assert f"width:{filled:.1f}%" in margin_bar(one)
    assert f"left:{tick:.1f}%" in margin_bar(one)


def test_no_bar_for_temperatures_and_zero() -> None:
    """Half of 100 °C means nothing, nor does a share of zero."""
    assert margin_bar(criterion(id="X", value=50.0, limit=100.0, relation="<=", unit="°C")) == ""
    assert margin_bar(criterion(id="X", value=-5.0, limit=0.0, relation="<=", unit="V")) == ""
    assert margin_bar(criterion(id="X", verdict="by test")) == ""


@pytest.mark.parametrize(
    ("text", "opening"),
    [
        ("supply voltage, rms", "Supply voltage, rms"),
        ("open-circuit voltage", "Open-circuit voltage"),
        ("a half period", "A half period"),
        ("rms supply voltage", "rms supply voltage"),
        ("mA rating", "mA rating"),
        ("min voltage", "min voltage"),
        ("n-channel switch", "n-channel switch"),
        ("pH of the water", "pH of the water"),
        ("LEDs in series", "LEDs in series"),
        ("", ""),
    ],
)
def test_capital_only_for_words(text: str, opening: str) -> None:
    """A line of its own begins with a capital, unless with a symbol, a unit or an abbreviation."""
    assert a_view().opening(text) == opening


def test_language_in_sentences_is_typeset() -> None:
    """Symbols and tolerances in clauses, cautions and remarks look as in formulas."""
    shown = words(a_view().clauses("at V_line = 230 V ± 2 %, T_a = 25 °C"))
    assert shown == "at Vline = 230\u00a0V\u00a0×\u00a0(1\u00a0±\u00a02\u00a0%), Ta = 25\u00a0°C"
    assert "<i>V</i><sub>line</sub>" in a_view().clauses("at V_line = 5 V")
    assert "<i>C</i><sub>res</sub>" in a_view().words("after disconnection C_res stays charged")
    assert a_view().words("no_such symbol") == "no_such symbol"


def a_view() -> View:
    """A view of the sample as the sheets use it."""
    return View(record=sample(), draw=boxes, paper=True, record_digest="0" * 64)


def test_reason_stands_once(page: str) -> None:
    """What is not applicable says what it is about, then why, once."""
    line = words(page[page.index('id="c-N1"') : page.index('id="back-clauses"')])
    assert line.count("o dimmer is foreseen") == 1
    described = criterion(
        id="N2", text="too small", reason="too small", verdict="not applicable",
        method="none", description="harmonics of the line current",
    )  # fmt: skip
    shown = words(criterion_line(a_view(), described))
    assert shown.startswith("N2Harmonics of the line current")
    assert shown.endswith("not applicable: too small\n")


def test_tested_first_then_the_remark(page: str) -> None:
    """A test names what is tested before it says why it is one."""
    line = words(page[page.index('id="c-T1"') : page.index('id="c-N1"')])
    assert "T1[EN 60598-1, 12.4]Temperature rise of the complete lamp by test: not covered" in line


def test_subtitle_is_printed_as_it_is() -> None:
    """Nothing is added to the author's subtitle; without one the kind of document stands there."""
    assert '<p class="sub">Electrical design of the light engine</p>' in html(sample(), DATA)
    assert '<p class="sub">Calculation record</p>' in html(sample(subtitle=""), DATA)


def test_short_formula_and_substitution_share_a_line(page: str) -> None:
    """Formula and numbers on one line when there is room, the result on its own."""
    start = page.index('id="q-V_pk"')
    assert page[start : page.index('id="q-t_dis"')].count('class="eq"') == 2
    start = page.index('id="q-k_fit"')
    assert page[start : page.index('id="c-R1"')].count('class="eq"') == 3


def test_long_combination_is_cut_on_the_cover() -> None:
    """The cover names conditions first and says how many more there are; the body has them all."""
    at = {"V_D": "1 V", "C_res": "8 µF", "I_reg": "31.8 mA", "V_LED": "20.7 V", "R_bleed": "231 kΩ",
          "V_line": "207 V", "f_line": "49.5 Hz", "T_a": "-20 °C"}  # fmt: skip
    long = structs.replace(CRITERIA[1], governing=at, case="normal")
    page = html(structs.replace(sample(), criteria=(CRITERIA[0], long, *CRITERIA[2:])), DATA)
    row = words(page[page.index('id="verdicts"') : page.index('id="open"')])
    assert "Vline 207\u00a0V, fline 49.5\u00a0Hz, Ta \u221220\u00a0°C, VD 1\u00a0V" in row
    assert "and 3 more, see R2" in row
    body = words(page[page.index('id="c-R2"') : page.index('id="c-R3"')])
    assert "Rbleed 231\u00a0kΩ" in body
