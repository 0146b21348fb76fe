"""A shell for each test."""

from pathlib import Path

import pytest

from tests.helpers.command import Shell


@pytest.fixture
def shell(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> Shell:
    """Commands run in an empty folder."""
    monkeypatch.chdir(tmp_path)
    return Shell(tmp_path, capsys)
