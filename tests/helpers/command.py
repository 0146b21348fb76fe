"""Run the command line inside this process, as a user would from a shell."""

from dataclasses import dataclass
from pathlib import Path

import pytest

from calcdoc.commands.main import run


@dataclass(frozen=True)
class Said:
    """What a command left behind."""

    status: int
    out: str
    err: str


@dataclass(frozen=True)
class Shell:
    """A folder to stand in and a way to run commands there."""

    folder: Path
    capture: pytest.CaptureFixture[str]

    def __call__(self, *arguments: str) -> Said:
        """Run ``calcdoc`` with arguments."""
        self.capture.readouterr()
        status = run(arguments)
        out, err = self.capture.readouterr()
        return Said(status, out, err)

    def put(self, name: str, text: str | bytes) -> str:
        """Write a file and give its name."""
        data = text.encode() if isinstance(text, str) else text
        path = self.folder / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_bytes(data)
        return name
