"""Writing twice gives the same bytes, whatever the surroundings of the second time are."""

import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from tests.helpers.pages import DESIGNS, HERE

SURROUNDINGS = (
    {"PYTHONHASHSEED": "1", "TZ": "UTC", "LC_ALL": "C.UTF-8", "LANG": "C.UTF-8"},
    {"PYTHONHASHSEED": "4242", "TZ": "Pacific/Kiritimati", "LC_ALL": "de_DE.UTF-8",
     "LANG": "tr_TR.UTF-8"},
)  # fmt: skip


def written(folder: Path, surroundings: dict[str, str]) -> dict[str, bytes]:
    """The files of a record, written by a process of its own in a folder of its own."""
    folder.mkdir()
    shutil.copy(DESIGNS / "quay-stair-light-230.md", folder)
    kept = {name: value for name, value in os.environ.items() if name != "SOURCE_DATE_EPOCH"}
    command = [sys.executable, "-m", "calcdoc", "write", "quay-stair-light-230.md", "--to", "out"]
    done = subprocess.run(  # noqa: S603
        command,
        cwd=folder,
        env=kept | {"PYTHONPATH": str(HERE.parent)} | surroundings,
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.returncode == 0, done.stderr
    return {each.name: each.read_bytes() for each in sorted((folder / "out").iterdir())}


@pytest.mark.slow
@pytest.mark.timeout(180)
def test_same_text_same_bytes(tmp_path: Path) -> None:
    """Hash seed, time zone, locale and folder leave no trace in any of the three forms."""
    first, second = (
        written(tmp_path / name, surroundings)
        for name, surroundings in zip(("a", "another folder"), SURROUNDINGS, strict=True)
    )
    assert list(first) == [f"QSL-CAL-01-A.{form}" for form in ("html", "json", "pdf")]
    for name, content in first.items():
        assert second[name] == content, name
