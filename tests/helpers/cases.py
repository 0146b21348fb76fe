"""Case files: Markdown with a heading for each case and its texts in fences of tildes.

A case has a text that is refused (or warned of), what is found in it, and its accepted neighbour::

    ## A sum of unlike quantities
    ~~~~fragment
    ...
    ~~~~
    ~~~~findings
    lamp.md:2:9: error[...]: ...
    ~~~~
    ~~~~accepted
    ...
    ~~~~

``design`` in place of ``fragment`` marks a text that is complete; a fragment gets a title block
after its last line, so that its lines count from 1. The neighbour is of the same sort. A block
``sheet`` is the sheet ``sheets/own.md`` of both texts, or of the refused one alone when a block
``goodsheet`` stands beside it for the accepted one.
"""

import re
from dataclasses import dataclass
from pathlib import Path
from typing import Final

from tests.helpers.checking import TITLE

FOLDER: Final = Path(__file__).parent.parent / "cases"
_HEADING: Final = re.compile(r"^## (.+)$", re.MULTILINE)
_BLOCK: Final = re.compile(
    r"^(?P<marks>~{4,})(?P<word>[a-z]+)\n(?P<text>.*?)^(?P=marks)$", re.MULTILINE | re.DOTALL
)


@dataclass(frozen=True)
class Case:
    """One case of a file."""

    path: Path
    title: str
    refused: str
    expected: str
    accepted: str
    sheet: str = ""
    goodsheet: str = ""

    def __str__(self) -> str:
        return f"{self.path.stem}: {self.title}"


def cases_of(path: Path) -> list[Case]:
    """The cases of a file, in order."""
    parts = _HEADING.split(path.read_text("utf-8"))[1:]
    return [_case(path, title, body) for title, body in zip(parts[::2], parts[1::2], strict=True)]


def _case(path: Path, title: str, body: str) -> Case:
    blocks = {found["word"]: found["text"] for found in _BLOCK.finditer(body)}
    after = TITLE if "fragment" in blocks else ""
    refused = blocks["fragment"] if "fragment" in blocks else blocks["design"]
    sheet = blocks.get("sheet", "")
    return Case(
        path,
        title,
        refused + after,
        blocks["findings"],
        blocks["accepted"] + after,
        sheet,
        blocks.get("goodsheet", sheet),
    )


def sheets_of(text: str) -> dict[str, str]:
    """The sheets of a project that has one, or none."""
    return {"sheets/own.md": text} if text else {}


def rewrite(case: Case, found: str) -> None:
    """Put what was found into the file of a case."""
    text = case.path.read_text("utf-8")
    begin = text.index(f"## {case.title}\n")
    block = next(each for each in _BLOCK.finditer(text, begin) if each["word"] == "findings")
    case.path.write_text(text[: block.start("text")] + found + text[block.end("text") :], "utf-8")
