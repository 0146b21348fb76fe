"""Every case file: the whole message of each refused text, and its accepted neighbour."""

import pytest

from tests.helpers.cases import FOLDER, Case, cases_of, rewrite, sheets_of
from tests.helpers.checking import rendered

FILES = sorted(FOLDER.glob("*.md"))
CASES = [case for path in FILES for case in cases_of(path)]


def test_there_are_cases() -> None:
    """The folder is not empty, and no file in it is without a case."""
    assert FILES
    assert {case.path for case in CASES} == set(FILES)


def test_titles_are_unique() -> None:
    """No two cases of a file have one title, so that each can be rewritten."""
    titles = [str(case) for case in CASES]
    assert sorted(set(titles)) == sorted(titles)


@pytest.mark.parametrize("case", CASES, ids=str)
def test_refused(case: Case, request: pytest.FixtureRequest) -> None:
    """The text is answered with exactly the findings beside it, and with at least one."""
    found = rendered(case.refused, files=sheets_of(case.sheet)) + "\n"
    assert found.strip()
    if request.config.getoption("--rewrite-cases"):
        rewrite(case, found)
        pytest.skip("rewritten")
    assert found == case.expected


@pytest.mark.parametrize("case", CASES, ids=str)
def test_accepted(case: Case) -> None:
    """The neighbour, one change away, is read and checked without a finding."""
    assert rendered(case.accepted, files=sheets_of(case.goodsheet)) == ""
