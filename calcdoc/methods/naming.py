"""Names of a sheet, and the same in a design that applies it: ``V`` becomes ``bleed.V``."""

import re
from collections.abc import Iterator, Mapping
from typing import Final, TypeVar

from calcdoc.frozen import Frozen, replace
from calcdoc.source import Span
from calcdoc.text import nodes, prose
from calcdoc.text.given import Given
from calcdoc.text.names import LETTER, SYMBOL, fold
from calcdoc.text.statements import (
    Basis,
    Definition,
    Index,
    Inequality,
    Label,
    Scope,
    Uncalculated,
)
from calcdoc.units import Unit

T = TypeVar("T")
_WORDS: Final = frozenset({"description", "reason"})
"""Fields that hold the author's words."""
_WORD: Final = re.compile(rf"(?<![{LETTER}0-9_.]){SYMBOL.pattern}(?![{LETTER}0-9_])")
_BEHIND_NUMBER: Final = re.compile(r"[0-9][ \u00a0]$|[/·]$")
_CITED: Final = re.compile(r"\[([^\[\],]+)(?=[\],])")
_LEAVES: Final = (str, bytes, int, float, frozenset, Unit, Given, Scope, Span, nodes.UnitText)


class Naming(Frozen, frozen=True):
    """How the names of one application are made."""

    name: str
    """Of the application."""
    own: frozenset[str]
    """Keys of the sheet's names."""
    cited: Mapping[str, str]
    """Key of a reference in the sheet to its key in the record."""

    def without(self, index: Index | None) -> "Naming":
        """The same, where a running index hides a name."""
        return replace(self, own=self.own - {index.name.key}) if index else self

    def symbol(self, name: str) -> str:
        """A name of the sheet with that of the application before it."""
        return f"{self.name}.{name}" if fold(name) in self.own else name

    def formula_text(self, text: str) -> str:
        """A piece of the language as text; behind a number a word is a unit."""
        return _WORD.sub(
            lambda found: (
                found[0] if _BEHIND_NUMBER.search(text[: found.start()]) else self.symbol(found[0])
            ),
            text,
        )

    def words(self, text: str) -> str:
        """The author's words, where only what can be nothing else is taken for a symbol."""
        return _WORD.sub(lambda found: self.symbol(found[0]) if _sure(found[0]) else found[0], text)

    def citing(self, text: str) -> str:
        """A basis with the keys of the record."""
        return _CITED.sub(lambda found: f"[{self.cited.get(found[1].strip(), found[1])}", text)


def _sure(word: str) -> bool:
    return "_" in word or "\u0370" <= word[0] <= "\u03ff"


def renamed(piece: T, naming: Naming) -> T:
    """A statement, a tree or a block in the names of one application; places stay."""
    return _renamed(piece, naming)  # type: ignore[return-value]  # each piece keeps its type


def _renamed(piece: object, naming: Naming) -> object:  # noqa: PLR0911  (one for each kind)
    match piece:
        case None:
            return piece
        case tuple():
            return tuple(_renamed(each, naming) for each in piece)
        case nodes.Name() | Label() | prose.Mention() | prose.Brace():
            return replace(piece, name=naming.symbol(piece.name))
        case nodes.Element():
            index = _renamed(piece.index, naming)
            return replace(piece, name=naming.symbol(piece.name), index=index)
        case Basis():
            cited = tuple(
                replace(each, key=naming.cited.get(each.key, each.key)) for each in piece.citations
            )
            return Basis(naming.citing(naming.words(piece.text)), cited)
        case prose.Words():
            return prose.Words(naming.words(piece.text))
        case Index():
            return piece
        case Definition():
            return _fields(piece, naming.without(piece.index))
        case Inequality():
            return _fields(piece, naming.without(piece.clauses.index))
        case Frozen() if not isinstance(piece, _LEAVES):
            return _fields(piece, naming)
        case _:
            return piece


def _fields(piece: Frozen, naming: Naming) -> Frozen:
    changed: dict[str, object] = {}
    for field in piece.__struct_fields__:
        value = getattr(piece, field)
        if not isinstance(value, str):
            changed[field] = _renamed(value, naming)
        elif field in _WORDS or (field == "text" and isinstance(piece, Uncalculated)):
            changed[field] = naming.words(value)
        elif field == "text" and not isinstance(piece, prose.Code | prose.Listing | nodes.Text):
            changed[field] = naming.formula_text(value)
    return replace(piece, **changed)


def spoken(piece: object) -> Iterator[Label]:
    """Every name that a statement of a sheet says, where it stands; no running index."""
    index = piece.index if isinstance(piece, Definition) else None
    if isinstance(piece, Inequality):
        index = piece.clauses.index
    for label in _spoken(piece):
        if index is None or label.key != index.name.key:
            yield label


def _spoken(piece: object) -> Iterator[Label]:
    match piece:
        case tuple():
            for each in piece:
                yield from _spoken(each)
        case Label():
            yield piece
        case nodes.Name():
            yield Label(piece.name, piece.span)
        case nodes.Element():
            yield Label(piece.name, piece.span)
            yield from _spoken(piece.index)
        case Index():
            pass
        case Frozen() if not isinstance(piece, _LEAVES):
            for field in piece.__struct_fields__:
                yield from _spoken(getattr(piece, field))
        case _:
            pass
