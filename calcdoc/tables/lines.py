"""Lines of a table's TOML, which its parser does not tell: of a key, a section, a row.

Only a place that is found once is told; for anything else there is no line rather than a wrong one.
"""

import re
from collections.abc import Iterator
from functools import cached_property
from typing import Final

TOP: Final = ("", 1)
"""What stands before the first section."""

Section = tuple[str, int]
"""The name of a section and which of that name it is, from 1."""

_HEAD: Final = re.compile(r"\s*\[\[?\s*(axis|value)\s*\]\]?\s*(?:#.*)?")
_TOKEN: Final = re.compile(r'"(?:\\.|[^"\\\n])*"|\'[^\'\n]*\'|#[^\n]*|[\[\]]')
_ROWS: Final = re.compile(r"^[ \t]*rows[ \t]*=[ \t]*(?=\[)", re.MULTILINE)
_IN_ROW: Final = 2


class Lines:
    """Where things stand in a TOML text."""

    def __init__(self, text: str) -> None:
        self.text = text

    def key(self, key: str, section: Section = TOP) -> int | None:
        """The line of a key of a section."""
        start = re.compile(rf'\s*(["\']?){re.escape(key)}\1\s*=')
        return _only(n for n, at, line in self._lines() if at == section and start.match(line))

    def section(self, section: Section) -> int | None:
        """The line of the head of a section."""
        return _only(n for n, at, line in self._lines() if at == section and _HEAD.fullmatch(line))

    def row(self, number: int) -> int | None:
        """The line where a row begins, counted from 1."""
        return self._rows[number - 1] if number <= len(self._rows) else None

    @cached_property
    def _rows(self) -> list[int]:
        """The line of every row, found once for all of them."""
        opened = list(_ROWS.finditer(self.text))
        if len(opened) != 1:
            return []
        found: list[int] = []
        depth, at, line = 0, 0, 1
        for token in _TOKEN.finditer(self.text, opened[0].end()):
            depth += {"[": 1, "]": -1}.get(token[0], 0)
            if token[0] == "[" and depth == _IN_ROW:
                line += self.text.count("\n", at, token.start())
                at = token.start()
                found.append(line)
            if depth == 0 and token[0] == "]":
                break
        return found

    def _lines(self) -> Iterator[tuple[int, Section, str]]:
        """Every line with its number and the section it stands in."""
        at, seen = TOP, {"axis": 0, "value": 0}
        for number, line in enumerate(self.text.split("\n"), 1):
            head = _HEAD.fullmatch(line)
            if head:
                seen[head[1]] += 1
                at = (head[1], seen[head[1]])
            yield number, at, line


def _only(found: Iterator[int]) -> int | None:
    """The one line that was found, or None when there are none or several."""
    lines = list(found)
    return lines[0] if len(lines) == 1 else None
