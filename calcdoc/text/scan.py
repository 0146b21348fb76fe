"""The tokenizer in four verbs: look, take, expect, refuse.

It is asked by the grammar rules for what they can use next, so that ``min`` may be a unit after a
number and a function elsewhere. It knows ASCII digits only and never evaluates anything.
"""

import re
import unicodedata
from typing import Final, NoReturn

from calcdoc.frozen import Working
from calcdoc.problems import Finding, Mistake, Place, error
from calcdoc.source import Span
from calcdoc.text.names import LETTER, MARK
from calcdoc.text.passage import Passage

_FAMILIAR: Final = re.compile(rf"[{LETTER}]")
_IN_SYMBOL: Final = re.compile(rf"[{LETTER}{MARK}0-9_]")
_BLANKS: Final = re.compile(r"[ \n]*")
_DOTTED: Final = re.compile(rf"(?:\.[{LETTER}][{LETTER}{MARK}0-9_]*)+")
_PIECE: Final = rf"(?s)[{LETTER}][{LETTER}{MARK}0-9_]*|[0-9][0-9.]*|."
"""What stands here, for a mistake; compiled when there is one."""

TYPICAL: Final = {
    "≤": "write <= for ≤",
    "≥": "write >= for ≥",
    "−": "write the minus sign as -",
    "–": "write the minus sign as -",
    "÷": "write / to divide",
    "**": "write ^ for a power",
    "==": "write one = to define; a comparison is <=, >=, < or >",
    "!=": "write not, and <= or > in place of !=",
    "²": "write ^2 for a square",
    "³": "write ^3 for a cube",
    ",": "write the decimal marker as a point: 1.5",
    "\t": "use a space in place of the tab",
    "\u00a0": "use a plain space in its place",
    "\u202f": "use a plain space in its place",
    "&": "write and",
    '"': "a text ends with a second double quote on the same line",
}
"""What people write in place of the sign this language knows."""


class Scanner(Working):
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

    def refuse(self, wanted: str, *, related: tuple[Place, ...] = (), advice: str = "") -> NoReturn:
        """Say what was wanted here, what stands here instead, and perhaps what to write."""
        self.blanks()
        text = self.passage.text
        piece = re.compile(_PIECE).match(text, self.at)
        if piece is None:
            end = len(text)
            raise Mistake(
                error(
                    "syntax",
                    f"expected {wanted}, found the end of the statement",
                    self.span(max(0, end - 1), end),
                    related=related,
                    help=advice,
                )
            )
        pair = text[self.at : self.at + 2]
        found = pair if pair in ("**", "==", "!=") else piece.group()
        raise Mistake(
            error(
                "syntax",
                f"expected {wanted}, found {shown(found)}",
                self.span(self.at, self.at + len(found)),
                related=related,
                help=advice or _advice(wanted, found, text, self.at),
            )
        )


def _advice(wanted: str, found: str, text: str, at: int) -> str:
    """What to write in place of what stands there."""
    before, after = text[at - 1 : at] if at else "", text[at + 1 : at + 2]
    if found == "," and not (before.isdecimal() and after.isdecimal()):
        alone = "end of the figure" in wanted or "along the axis" in wanted
        return "a figure shows one symbol: write a line for each" if alone else ""
    odd = after if found == "_" else found
    if before and _IN_SYMBOL.fullmatch(before) and odd.isalpha() and not _FAMILIAR.match(odd):
        return "a symbol and its subscript hold Latin and Greek letters, digits and _, as in V_in"
    if found == "=" and wanted.startswith("<="):
        return "a comparison is written <=, >=, < or >"
    implied = found == "(" or found[0].isalnum()
    if implied and found not in TYPICAL and wanted.startswith("an operator or the end"):
        return "write * to multiply"
    return TYPICAL.get(found, "")


def one_dot(scanner: Scanner, found: re.Match[str]) -> None:
    """Refuse a name with two dots, as ``a.b.c``; ``found`` is ``a.b``."""
    more = _DOTTED.match(scanner.passage.text, found.end())
    if "." in found.group() and more:
        raise Mistake(
            error(
                "method-symbol",
                "a name has one dot at most",
                scanner.span(found.start(), more.end()),
                help="write the method's name and what it gives, as in bridge.V_min",
            )
        )


SHOWN_MOST: Final = 40
"""Characters of the author's text that a message shows."""


def not_yet(what: str, span: Span, advice: str = "it is reserved for a coming version") -> Finding:
    """What to say of a word whose meaning is fixed but cannot be computed yet."""
    return error("not-available-yet", f"{what} is not available yet", span, help=advice)


def shown(text: str) -> str:
    """A piece of the author's text inside a message, short and on one line."""
    if len(text) == 1 and not text.isprintable():
        name = "a tab" if text == "\t" else unicodedata.name(text, "a character").lower()
        return name if text == "\t" else f"a {name.removeprefix('a ')} (U+{ord(text):04X})"
    flat = " ".join(text.split()) or repr(text)[1:-1]
    if len(text) == 1 and text.isalpha() and not _FAMILIAR.match(text):
        return f"`{text}` ({unicodedata.name(text, 'a letter').lower()}, U+{ord(text):04X})"
    flat = "".join(each if each.isprintable() else "\ufffd" for each in flat)
    return f"`{flat if len(flat) <= SHOWN_MOST else flat[: SHOWN_MOST - 1] + '…'}`"
