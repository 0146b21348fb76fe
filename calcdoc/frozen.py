"""The bases of our types: frozen ones pass between stages, a working one lives inside one.

A dataclass costs about half a millisecond to define, and there are more than a hundred types:
that is half of what a quick ``check`` may take. A msgspec Struct is the same thing for a tenth.
"""

from msgspec import Struct
from msgspec.structs import replace

__all__ = ["Frozen", "Piece", "Working", "replace"]


class Frozen(Struct, frozen=True):
    """Frozen, slotted, compared by value; change with :func:`replace`."""


class Working(Struct):
    """Slotted and changeable: what a stage holds while it works."""


class Piece(Frozen, frozen=True, eq=False):
    """A piece of a tree: two are equal when they say the same, wherever they stand.

    Fields whose name ends in ``span`` are places and take no part in comparison and hash.
    """

    def __eq__(self, other: object) -> bool:
        return type(self) is type(other) and self._said() == other._said()

    def __hash__(self) -> int:
        return hash((type(self), self._said()))

    def _said(self) -> tuple[object, ...]:
        fields = self.__struct_fields__
        return tuple(getattr(self, each) for each in fields if not each.endswith("span"))
