"""The tokenizer in four verbs: look, take, expect, refuse.

It is asked by the grammar rules for what they can use next, so that ``min`` may be a unit after a
number and a function elsewhere. It knows ASCII digits only and never evaluates anything.
"""

import re
from dataclasses import dataclass
from typing import Final, NoReturn

from calcdoc.problems import Mistake, Place, error
from calcdoc.source import Span
from calcdoc.text.names import LETTER
from calcdoc.text.passage import Passage

_BLANKS: Final = re.compile(r"[ \n]*")
_PIECE: Final = re.compile(rf"[{LETTER}][{LETTER}0-9_]*|[0-9][0-9.]*|.", re.DOTALL)

TYPICAL: Final = {
    "≤": "write <= for ≤",
    "≥": "write >= for ≥",
    "−": "write the minus sign as -",
    "–": "write the minus sign as -",
    "÷": "write / to divide",
    "=": "a comparison is written <=, >=, < or >",
    "**": "write ^ for a power",
    "²": "write ^2 for a square",
    "³": "write ^3 for a cube",
    ",": "write the decimal marker as a point: 1.5",
    "\t": "use a space in place of the tab",
    "!": "write not, and <= or > in place of !=",
    "&": "write and",
}
"""What people write in place of the sign this language knows."""


@dataclass(slots=True)
class Scanner:
    """A place in a passage and what can be read from there."""

    passage: Passage
    at: int = 0

    def blanks(self) -> None:
        """Go past blanks."""
        self.at = self.match(_BLANKS).end()

    def match(self, pattern: re.Pattern[str]) -> re.Match[str]:
        """The pattern here; it must be able to match nothing."""
        found = pattern.match(self.passage.text, self.at)
        assert found is not None
        return found

    def look(self, pattern: re.Pattern[str]) -> re.Match[str] | None:
        """What the pattern finds after blanks, without taking it."""
        self.blanks()
        return pattern.match(self.passage.text, self.at)

    def take(self, pattern: re.Pattern[str]) -> re.Match[str] | None:
        """What the pattern finds after blanks, taken; None when it is not there."""
        found = self.look(pattern)
        if found:
            self.at = found.end()
        return found

    def expect(self, pattern: re.Pattern[str], wanted: str, *, opened: Span | None = None) -> Span:
        """Take the pattern or refuse with what was wanted; ``opened`` shows where it began."""
        found = self.take(pattern)
        if found is None:
            related = (Place(opened, "opened here"),) if opened else ()
            self.refuse(wanted, related=related)
        return self.span(*found.span())

    def span(self, start: int, end: int) -> Span:
        """The place of characters of the passage in the file."""
        return self.passage.span(start, end)

    @property
    def ended(self) -> bool:
        """Whether only blanks are left."""
        self.blanks()
        return self.at >= len(self.passage.text)

    def refuse(self, wanted: str, *, related: tuple[Place, ...] = ()) -> NoReturn:
        """Say what was wanted here and what stands here instead."""
        self.blanks()
        text = self.passage.text
        piece = _PIECE.match(text, self.at)
        if piece is None:
            end = len(text)
            raise Mistake(
                error(
                    "syntax",
                    f"expected {wanted}, found the end of the statement",
                    self.span(max(0, end - 1), end),
                    related=related,
                )
            )
        found = "**" if text.startswith("**", self.at) else piece.group()
        raise Mistake(
            error(
                "syntax",
                f"expected {wanted}, found {shown(found)}",
                self.span(self.at, self.at + len(found)),
                related=related,
                help=TYPICAL.get(found, ""),
            )
        )


SHOWN_MOST: Final = 40
"""Characters of the author's text that a message shows."""


def shown(text: str) -> str:
    """A piece of the author's text inside a message, short and on one line."""
    flat = " ".join(text.split()) or repr(text)[1:-1]
    return f"`{flat if len(flat) <= SHOWN_MOST else flat[: SHOWN_MOST - 1] + '…'}`"
