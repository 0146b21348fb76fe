"""Machines that lack what pip cannot bring."""

import os
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
DESIGN = ROOT / "designs" / "quay-stair-light-120.md"
WITHOUT_PANGO = """\
import sys


class WithoutPango:
    def find_spec(self, name, path=None, target=None):
        if name == "weasyprint":
            raise OSError("cannot load library 'libpango-1.0-0'")


sys.meta_path.insert(0, WithoutPango())
"""


@pytest.fixture
def machine(tmp_path: Path) -> dict[str, str]:
    """The environment of a machine on which WeasyPrint finds no Pango."""
    (tmp_path / "site").mkdir()
    (tmp_path / "site" / "sitecustomize.py").write_text(WITHOUT_PANGO)
    path = os.pathsep.join((str(tmp_path / "site"), str(ROOT)))
    return {**os.environ, "PYTHONPATH": path, "PYTHONDONTWRITEBYTECODE": "1"}


def calcdoc(
    machine: dict[str, str], folder: Path, *arguments: str
) -> subprocess.CompletedProcess[str]:
    """Run calcdoc in a process of its own."""
    command = [sys.executable, "-m", "calcdoc", *arguments]
    return subprocess.run(  # noqa: S603  (our own command)
        command, env=machine, cwd=folder, capture_output=True, text=True, check=False
    )


def test_without_pango_the_other_forms_are_written(machine: dict[str, str], tmp_path: Path) -> None:
    """HTML and JSON are written, the message names the packages, and the status is 3."""
    said = calcdoc(machine, tmp_path, "write", str(DESIGN), "--to", "records")
    assert said.returncode == 3
    assert said.stderr.endswith(
        f"calcdoc: {DESIGN}: the PDF needs system libraries that are not installed: on Debian,"
        " apt-get install libpango-1.0-0 libpangoft2-1.0-0 libharfbuzz-subset0\n"
    )
    assert "Traceback" not in said.stderr
    written = {each.name: each.stat().st_size for each in (tmp_path / "records").iterdir()}
    assert sorted(written) == ["QSL-CAL-02-A.html", "QSL-CAL-02-A.json"]
    assert min(written.values()) > 10_000


def test_without_pango_check_and_html_need_nothing(machine: dict[str, str], tmp_path: Path) -> None:
    """Who asks for no PDF does not notice that Pango is missing."""
    assert calcdoc(machine, tmp_path, "check", str(DESIGN)).returncode == 1
    said = calcdoc(machine, tmp_path, "write", str(DESIGN), "--as", "html,json", "--to", "records")
    assert (said.returncode, len(said.stdout.splitlines())) == (0, 2)
    assert "libpango" not in said.stderr
