"""Files a design text uses: pictures and tables beside it, and the tables that come with the tool.

Each is read once through the confined reader and listed with its digest, so that the record can be
made again from what is filed.
"""

import base64
import re
from collections.abc import Mapping
from pathlib import Path
from typing import Final

from calcdoc.errors import CalcdocError, FileTrouble
from calcdoc.folder import Folder
from calcdoc.frozen import Frozen
from calcdoc.model.lookups import tables_named
from calcdoc.problems import Finding, error
from calcdoc.records.build import Embedded
from calcdoc.source import digest
from calcdoc.tables.reader import read_table
from calcdoc.tables.table import Table
from calcdoc.text.document import Document, pictures
from calcdoc.text.names import nearest
from calcdoc.text.nodes import Text
from calcdoc.text.prose import Picture
from calcdoc.text.scan import shown

LIBRARY: Final = Path(__file__).parent / "tables" / "data"
_MEDIA: Final = {b"\x89PNG\r\n\x1a\n": "image/png", b"\xff\xd8\xff": "image/jpeg"}
_NAME: Final = re.compile(r"[A-Za-z0-9][A-Za-z0-9_.-]*")


class Beside(Frozen, frozen=True):
    """What a text uses besides itself."""

    pictures: Mapping[str, Embedded] = {}
    """By path as written in the text."""
    tables: Mapping[str, Table] = {}
    """By name."""
    files: Mapping[str, bytes] = {}
    """Every file of the design's folder, by name."""


def read_beside(document: Document, folder: Folder) -> tuple[Beside, tuple[Finding, ...]]:
    """Read every picture and table a document names; what cannot be read is a finding."""
    reader = _Reader(folder)
    for node in pictures(document.body):
        reader.picture(node.path, node)
    for name in tables_named(document):
        reader.table(name)
    return Beside(reader.pictures, reader.tables, reader.files), tuple(reader.findings)


class _Reader:
    """Reads each file once."""

    def __init__(self, folder: Folder) -> None:
        self.folder = folder
        self.pictures: dict[str, Embedded] = {}
        self.tables: dict[str, Table] = {}
        self.files: dict[str, bytes] = {}
        self.findings: list[Finding] = []

    def picture(self, path: str, node: Picture) -> None:
        """A picture of the prose."""
        if path in self.pictures:
            return
        try:
            content = self.folder.read(path)
        except FileTrouble as trouble:
            message = f"this picture is not shown: {trouble}"
            advice = "put the file beside the design and name it from there"
            self.findings.append(error("picture", message, node.span, help=advice))
            return
        kind = next((kind for magic, kind in _MEDIA.items() if content.startswith(magic)), None)
        if kind is None:
            message = "a picture is a PNG or a JPEG file"
            self.findings.append(error("picture", message, node.span, help="convert it"))
            return
        self.files[path] = content
        encoded = base64.b64encode(content).decode()
        self.pictures[path] = Embedded(path, digest(content), kind, encoded)

    def table(self, name: Text) -> None:
        """A table of the design's folder, else of the library."""
        if name.value in self.tables:
            return
        try:
            data = self._table_bytes(name.value)
            if data is not None:
                self.tables[name.value] = read_table(name.value, data)
                return
        except CalcdocError as trouble:
            self.findings.append(error("table", str(trouble), name.span))
            return
        near = nearest(name.value, [path.stem for path in LIBRARY.glob("*.toml")])
        self.findings.append(
            error(
                "table",
                f"there is no table {shown(name.value)}",
                name.span,
                help=f'did you mean "{near}"?'
                if near
                else f"put it beside the design as tables/{name.value}.toml",
            )
        )

    def _table_bytes(self, name: str) -> bytes | None:
        if not _NAME.fullmatch(name):
            raise FileTrouble(f"{name} lies outside the folder of the design")
        path = f"tables/{name}.toml"
        if (self.folder.root / path).exists():
            self.files[path] = self.folder.read(path)
            return self.files[path]
        own = LIBRARY / f"{name}.toml"
        return own.read_bytes() if own.exists() else None
