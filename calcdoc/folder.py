"""The one reader of files: confined to the folder of the design, bounded in size.

Nothing outside that folder is read, whatever a text names, also not through a link in it.
"""

import os
import stat
from pathlib import Path
from typing import Final

from calcdoc.errors import FileTrouble
from calcdoc.frozen import Frozen

LARGEST: Final = 16_000_000
"""Bytes of one file."""


class Folder(Frozen, frozen=True):
    """A folder from which files may be read."""

    root: Path

    def read(self, name: str) -> bytes:
        """The bytes of a file named relative to the folder.

        Raises:
            FileTrouble: when it lies outside, is no plain file, is too large or cannot be read.
        """
        path = (self.root / name).resolve()
        if not path.is_relative_to(self.root.resolve()):
            raise FileTrouble(f"{name} lies outside the folder of the design")
        return read_bytes(path, name)


def read_bytes(path: Path, name: str) -> bytes:
    """The bytes of a plain file.

    Raises:
        FileTrouble: when there is none, it is too large, or it cannot be read.
    """
    try:
        if not stat.S_ISREG(path.stat().st_mode):
            kind = "a folder" if path.is_dir() else "no plain file"
            raise FileTrouble(f"{name} is {kind}; give the path of a design text")
        with path.open("rb") as file:
            data = file.read(LARGEST + 1)
    except FileNotFoundError as trouble:
        raise FileTrouble(f"there is no file {name}") from trouble
    except PermissionError as trouble:
        raise FileTrouble(f"{name} cannot be read: permission denied") from trouble
    except (OSError, ValueError) as trouble:
        reason = trouble.strerror if isinstance(trouble, OSError) else "it is no file name"
        raise FileTrouble(f"{name} cannot be read: {reason}") from trouble
    if len(data) > LARGEST:
        raise FileTrouble(f"{name} is larger than {LARGEST // 1_000_000} MB")
    return data


def write_whole(path: Path, data: bytes) -> None:
    """Write a file whole or not at all: beside it first, then renamed.

    Raises:
        FileTrouble: when the folder cannot be written to.
    """
    beside = path.with_name(f".{path.name}.{os.getpid()}.part")
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        try:
            beside.write_bytes(data)
            beside.replace(path)
        finally:
            beside.unlink(missing_ok=True)
    except FileExistsError as trouble:
        raise FileTrouble(f"{path.parent} is a file, not a folder to write to") from trouble
    except OSError as trouble:
        reason = (trouble.strerror or "unknown reason").lower()
        raise FileTrouble(f"{path} cannot be written: {reason}") from trouble
