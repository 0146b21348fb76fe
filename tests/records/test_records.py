"""Golden records: each folder holds a design text and what it becomes.

``pytest tests/records --rewrite-records`` writes what is found now; the difference is reviewed like
code. The folders of the demos hold no text of their own, it stands in ``designs``.
"""

import json
import re
from collections.abc import Iterator
from pathlib import Path

import pytest

from calcdoc.records.store import from_json, to_json
from tests.helpers.pages import GOLDEN, LAYOUT_ENGINE, design_of, page, record, sheets, words

NAMES = sorted(each.name for each in GOLDEN.iterdir() if each.is_dir() and each.name[0].isalpha())
FILES = {"record.json", "record.txt", "pdf.txt"}
CLOSE = 1e-9


@pytest.fixture
def expected(request: pytest.FixtureRequest) -> "Golden":
    """The golden files, or a way to write them."""
    return Golden(rewrite=bool(request.config.getoption("--rewrite-records")))


class Golden:
    """Golden files of a record."""

    def __init__(self, *, rewrite: bool) -> None:
        self.rewrite = rewrite

    def text(self, name: str, file: str, found: str) -> str:
        """What is expected; when rewriting, what was found."""
        path = GOLDEN / name / file
        if self.rewrite:
            path.write_text(found, encoding="utf-8")
        return path.read_text(encoding="utf-8")


def differences(found: object, expected: object, at: str = "record") -> Iterator[str]:
    """Where two records differ: numbers by more than 1e-9, everything else at all."""
    match found, expected:
        case (bool(), _) | (_, bool()):
            same = found is expected
        case float() | int(), float() | int():
            same = abs(found - expected) <= CLOSE * max(abs(found), abs(expected))
        case dict(), dict():
            same = list(found) == list(expected)
            for key in found.keys() & expected.keys():
                yield from differences(found[key], expected[key], f"{at}.{key}")
        case list(), list():
            same = len(found) == len(expected)
            for place, (one, other) in enumerate(zip(found, expected, strict=False)):
                yield from differences(one, other, f"{at}[{place}]")
        case _:
            same = found == expected
    if not same:
        yield f"{at}: {found!r}, expected {expected!r}"


def test_folders_are_complete(expected: Golden) -> None:
    """There are golden records, and each has its text and all its files."""
    if expected.rewrite:
        pytest.skip("the files are being written")
    assert len(NAMES) >= 5
    for name in NAMES:
        assert design_of(name).exists()
        assert {each.name for each in (GOLDEN / name).iterdir()} - {"design.md", "sheets"} == FILES


@pytest.mark.parametrize("name", NAMES)
def test_record(name: str, expected: Golden) -> None:
    """The JSON is what it was, numbers to 1e-9."""
    found = to_json(record(name)).decode()
    golden = expected.text(name, "record.json", found)
    assert list(differences(json.loads(found), json.loads(golden))) == []
    assert from_json(golden.encode()).schema == record(name).schema


@pytest.mark.parametrize("name", NAMES)
def test_page(name: str, expected: Golden) -> None:
    """The words of the HTML page are what they were."""
    found = words(page(name))
    assert found.splitlines() == expected.text(name, "record.txt", found).splitlines()


@pytest.mark.parametrize("name", [pytest.param(name, marks=LAYOUT_ENGINE) for name in NAMES])
def test_sheets(name: str, expected: Golden, tmp_path: Path) -> None:
    """The words of the sheets, and how many there are, are what they were."""
    texts = sheets(name, tmp_path, "-layout")
    lines = [f"sheets: {len(texts)}"]
    for number, text in enumerate(texts, start=1):
        lines.append(f"--- {number}")
        lines += [re.sub(" {2,}", "  ", line).rstrip() for line in text.splitlines()]
    found = "\n".join(line for line in lines if line) + "\n"
    assert found.splitlines() == expected.text(name, "pdf.txt", found).splitlines()
