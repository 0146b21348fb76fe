"""A design text with its methods written out, and who reads the sheets."""

from collections.abc import Callable, Mapping

from calcdoc.frozen import Frozen
from calcdoc.source import SourceFile
from calcdoc.text.document import Document

Reader = Callable[[str], bytes]
"""Reads a file of the design's folder, or raises FileTrouble."""


class Expanded(Frozen, frozen=True):
    """A design text with its methods written out."""

    document: Document
    sheets: Mapping[str, SourceFile]
    """Every sheet it applies, by the path that places in it name."""
    files: Mapping[str, bytes]
    """The sheets of the project, by name."""
