"""What the tests of reports start from: three files, and a criterion that is not decided."""

from pathlib import Path
from typing import Final

from calcdoc.commands.checked import Checked, check_file
from calcdoc.frozen import replace
from tests.helpers.command import Shell

REPORTS: Final = Path(__file__).parent / "reports"
FILES: Final = ("small.md", "wrong.md", "none.md")
"""One with every verdict that is sure, one with errors and a warning, one that is not there."""


def put_files(shell: Shell) -> None:
    """Lay the files into the folder of a test."""
    for name in FILES[:2]:
        shell.put(name, (REPORTS / name).read_bytes())


def undecided() -> Checked:
    """The small design with its first criterion not decided; `put_files` goes before."""
    checked = check_file("small.md")
    assert checked.record is not None
    first, *others = checked.record.criteria
    doubtful = replace(first, verdict="not decided", reason="no bound on it could be proven")
    return replace(checked, record=replace(checked.record, criteria=(doubtful, *others)))
