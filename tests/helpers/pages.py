"""Records of design texts, and the words on their pages."""

import re
import shutil
import subprocess
from datetime import UTC, datetime
from functools import lru_cache
from html.parser import HTMLParser
from pathlib import Path

import pytest
from msgspec import structs

from calcdoc.page.html import html
from calcdoc.page.pdf import pdf
from calcdoc.pipeline import evaluate, read
from calcdoc.pipeline import record as record_of
from calcdoc.records.record import Record, Tool

HERE = Path(__file__).parent.parent
DESIGNS = HERE.parent / "designs"
GOLDEN = HERE / "records"
DEMOS = ("quay-stair-light-120", "quay-stair-light-230")
ISSUED = datetime(2026, 11, 20, tzinfo=UTC)
NO_DATA = b"{}"
"""Stands in for the JSON, whose digest is printed and depends on the last bits of numbers."""

LAYOUT_ENGINE = [
    pytest.mark.slow,
    pytest.mark.timeout(180),
    # the layout engine leaves its colour profile open
    pytest.mark.filterwarnings("ignore::ResourceWarning"),
    pytest.mark.filterwarnings("ignore::pytest.PytestUnraisableExceptionWarning"),
]
"""Marks of a test that writes sheets."""


def design_of(name: str) -> Path:
    """The design text of a golden record: its own, or the demo of that name."""
    own = GOLDEN / name / "design.md"
    return own if own.exists() else DESIGNS / f"{name}.md"


@lru_cache(maxsize=16)
def record(name: str) -> Record:
    """The record of a design, versions of libraries masked."""
    found = record_of(evaluate(read(str(design_of(name)))))
    masked = Tool(version="*", libraries=dict.fromkeys(found.tool.libraries, "*"))
    return structs.replace(found, tool=masked)


@lru_cache(maxsize=16)
def page(name: str) -> str:
    """The HTML page of a design."""
    return html(record(name), NO_DATA)


def sheets(name: str, folder: Path, *options: str) -> list[str]:
    """The text of each sheet of a design, as poppler reads it."""
    path = folder / f"{name}.pdf"
    if not path.exists():
        text = design_of(name).read_bytes()
        path.write_bytes(pdf(record(name), text, NO_DATA, issued=ISSUED))
    return pdf_text(path, *options).split("\f")[:-1]


def pdf_text(path: Path, *options: str) -> str:
    """The text of a PDF as poppler reads it."""
    tool = shutil.which("pdftotext")
    if tool is None:
        pytest.skip("pdftotext (Debian package poppler-utils) is not installed")
    command = [tool, *options, str(path), "-"]
    return subprocess.run(command, check=True, capture_output=True, text=True).stdout  # noqa: S603


class _Words(HTMLParser):
    """Collects the words of a page, one line for each block."""

    BLOCKS = re.compile(
        "blockquote|caption|d[dlt]|div|figcaption|footer|h[1-6]|header|li|nav|p|pre|section|summary|table|tr"
    )
    SILENT = frozenset({"style", "script", "title"})

    def __init__(self) -> None:
        super().__init__()
        self.parts: list[str] = []
        self.silent = ""

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Begin a line or a cell; formulas and pictures are told by their alternative."""
        if self.silent:
            return
        if tag in self.SILENT:
            self.silent = tag
        elif tag in {"math", "svg"}:
            self.silent = tag
            name = "alttext" if tag == "math" else "aria-label"
            self.parts.append(dict(attrs).get(name) or "")
        elif self.BLOCKS.fullmatch(tag) or tag == "br":
            self.parts.append("\n")
        elif tag in {"td", "th"}:
            self.parts.append(" | ")
        elif tag in {"sub", "sup"}:
            self.parts.append("_" if tag == "sub" else "^")

    def handle_endtag(self, tag: str) -> None:
        """End what was silent, or a line."""
        if tag == self.silent:
            self.silent = ""
        elif self.BLOCKS.fullmatch(tag) and not self.silent:
            self.parts.append("\n")

    def handle_data(self, data: str) -> None:
        """Take the words, whose line ends are only spaces."""
        if not self.silent:
            self.parts.append(data.replace("\n", " "))


def words(shown: str) -> str:
    """The words of a page, a line for each block, without the faces and the record it carries."""
    reader = _Words()
    reader.feed(shown)
    lines = (
        re.sub("[ |]*\n|  +", " ", each).strip(" |") for each in "".join(reader.parts).split("\n")
    )
    return "\n".join(each for each in lines if each) + "\n"
