"""Routes, cases and accepted failures on the cover and in the body."""

import re

import pytest

from calcdoc.page.html import html
from calcdoc.records.store import to_json
from tests.helpers.design import worked

CASES = "mode low: V = 2 V\nfault high: V = 9 V"


def words(criteria: str, cases: str = CASES) -> str:
    """The page without its tags, blanks collapsed."""
    done = worked(inputs="V = 5 V ± 10 %", cases=cases, criteria=criteria)
    page = html(done.record, to_json(done.record)).partition("<body")[2]
    page = page.partition("application/json")[0]
    text = re.sub(r"<[^>]+>", " ", page).replace("\u00a0", " ")
    return re.sub(r"\s+", " ", text)


def test_a_route_that_fails_is_called_a_route() -> None:
    """On the cover and in the body; in the table of cases its verdicts stand in brackets."""
    shown = words("H0: any of H1, H2 | one\nH1: V <= 1 V | two\nH2: V <= 99 V | three")
    assert "Two 5.500 V 1.000 V −450 % fail , a route of H0" in shown
    assert shown.count("fail , a route of H0") == 2
    assert "normal (fail) −450 % (pass) 94 %" in shown
    assert "fail , a route" not in words("H0: V <= 9.9 V | one\nH1: V <= 1 V | two")


def test_a_failure_that_is_accepted_in_part_is_open() -> None:
    """The cover says what is accepted, and in which cases nobody has accepted it."""
    lines = "R: V <= 4 V in every case\naccept R in {} | agreed | mail until 2027-06-30"
    shown = words(lines.format("high"))
    said = "Accepted failures: 1. R in high: agreed, mail until 2027-06-30; not accepted in normal"
    assert said in shown
    whole = words(lines.format("normal, high"))
    assert "Accepted failures: 1. R : agreed in normal, high, mail until 2027-06-30" in whole


@pytest.mark.parametrize("clause", ["in low, high", "with margin 10 %", "when V ≥ 1 V"])
def test_clauses_stand_beside_an_inequality_without_description(clause: str) -> None:
    """On the cover and in the body, also when nothing was computed."""
    written = clause.replace("≥", ">=")
    shown = words(f"R: sqrt(V - 4 V)/sqrt(1 V) <= 3 {written}")
    assert shown.count(clause) == 2


@pytest.mark.parametrize(("number", "kind"), [(24, "cases whole"), (25, "cases")])
def test_a_long_table_of_cases_may_break(number: int, kind: str) -> None:
    """Up to 25 rows it stays on one sheet, the normal case among them."""
    cases = "\n".join(f"fault part {n} open: V = {n} V" for n in range(number))
    done = worked(inputs="V = 5 V ± 10 %", cases=cases, criteria="R: V <= 99 V in every case")
    page = html(done.record, to_json(done.record))
    assert re.findall(r'<table class="(cases[^"]*)"', page) == [kind]


def test_one_reason_in_many_cases_stands_once() -> None:
    """Cases that are not decided for one reason share a line."""
    shown = words("R: V <= 99 V when V > 8 V in every case")
    assert "R in normal, low: not applicable , its condition is true nowhere" in shown
