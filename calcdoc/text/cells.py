"""Columns of a statement: description, basis with its citations."""

import re
from typing import Final

from calcdoc.problems import Mistake, error
from calcdoc.text.names import OF_METHOD, SYMBOL
from calcdoc.text.passage import Passage
from calcdoc.text.scan import Scanner, one_dot, shown
from calcdoc.text.statements import Basis, Citation, Label

_CITATION: Final = re.compile(r"\[([^\[\],]+)(?:,([^\[\]]*))?\]")
_COLON: Final = re.compile(r":")
_STATE: Final = re.compile(r"(open|closed):\s*")


def plain(cell: Passage) -> str:
    r"""The text of a cell on one line, with ``\|`` as a bar."""
    return " ".join(cell.text.replace("\\|", "|").split())


def basis(cell: Passage) -> Basis:
    """Free text with citations ``[KEY]`` or ``[KEY, table 4]``."""
    citations = tuple(
        Citation(found[1].strip(), (found[2] or "").strip(), cell.span(*found.span()))
        for found in _CITATION.finditer(cell.text)
    )
    return Basis(plain(cell), citations)


def state(cell: Passage) -> tuple[str, Passage]:
    """``open: note`` or ``closed: note`` of an assumption."""
    found = _STATE.match(cell.text)
    if found is None:
        raise Mistake(
            error(
                "assumption-state",
                "the last column of an assumption begins with `open:` or `closed:`",
                cell.whole,
                help="write open: and what will settle it, or closed: and the proof",
            )
        )
    return found[1], cell.part(found.end(), len(cell.text))


def columns(statement: Passage, names: tuple[str, ...]) -> list[Passage]:
    """The cells of a statement, one for each name; the ones left out are empty."""
    cells = statement.columns()
    if len(cells) > len(names):
        extra = cells[len(names)]
        raise Mistake(
            error(
                "columns",
                f"a statement here has at most {len(names)} columns, this one has {len(cells)}",
                extra.whole if extra.text else statement.whole,
                help=f"the columns are: {' | '.join(names)}; write \\| for the character itself",
            )
        )
    end = len(statement.text)
    return cells + [statement.part(end, end)] * (len(names) - len(cells))


def label(scanner: Scanner, what: str) -> Label:
    """A symbol or id of this text itself, as where it is defined."""
    found = used(scanner, what)
    if "." in found.name:
        raise Mistake(
            error(
                "method-symbol",
                f"{shown(found.name)} belongs to a method, it cannot stand here",
                found.span,
                help="a name with a dot is what a method gives, and can be used but not defined",
            )
        )
    return found


def used(scanner: Scanner, what: str) -> Label:
    """A symbol or id that is spoken of: of this text, or of a method it applies."""
    if scanner.look(SYMBOL) is None:
        scanner.refuse(what)
    found = scanner.take(OF_METHOD)
    assert found is not None
    one_dot(scanner, found)
    return Label(found.group(), scanner.span(*found.span()))


def labelled(cell: Passage, what: str) -> tuple[Label, Scanner]:
    """``ID:`` and the scanner behind it."""
    scanner = Scanner(cell)
    name = label(scanner, what)
    scanner.expect(_COLON, "`:` after the name")
    scanner.blanks()
    return name, scanner
