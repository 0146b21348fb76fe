"""The base of all types of a record."""

from msgspec import Struct


class Plain(Struct, frozen=True):
    """Base of all record types: frozen plain data."""
