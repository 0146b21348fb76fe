"""`check` on many files: side by side, in order, and whole when something dies."""

import os
import pty
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from calcdoc.commands import check as check_command
from calcdoc.commands.checked import check_file
from calcdoc.commands.many import check_many
from calcdoc.pipeline import Design, read
from tests.helpers.checking import TITLE
from tests.helpers.command import Shell

_ENVIRONMENT = {**os.environ, "PYTHONPATH": str(Path(__file__).parents[2])}
GOOD = TITLE + "\n```inputs\nV = 5 V ± 10 %\n```\n\n```criteria\nR1: V <= {0} V\n```\n"
FILES = ("good.md", "fails.md", "wrong.md", "none.md", "good.md")
SCRIPT = """
import os, sys
from calcdoc.commands import check, many
from calcdoc.commands.main import run
from tests.cli import dying
if __name__ == "__main__":
    os.cpu_count = lambda: 2
    method, one, *names = sys.argv[1:]
    check_many = many.check_many
    many.check_many = lambda names: check_many(names, getattr(dying, one), method)
    sys.exit(run(["check", *names]))
"""
"""The command with another function that checks one file, and a way for processes to start."""


def _put(shell: Shell) -> None:
    shell.put("good.md", GOOD.format(6))
    shell.put("fails.md", GOOD.format(5))
    shell.put("wrong.md", TITLE + "\n```derive\nx = y\n```\n")


def _calcdoc(folder: Path, *arguments: str) -> subprocess.CompletedProcess[bytes]:
    command = [sys.executable, "-m", "calcdoc", *arguments]
    return subprocess.run(command, cwd=folder, env=_ENVIRONMENT, capture_output=True, check=False)  # noqa: S603


@pytest.mark.parametrize("form", check_command.FORMATS)
def test_same_as_one_after_the_other(
    shell: Shell, monkeypatch: pytest.MonkeyPatch, form: str
) -> None:
    """Output, messages and status are to the byte those of one file after the other."""
    _put(shell)
    many = _calcdoc(shell.folder, "check", "--format", form, *FILES)
    monkeypatch.setattr(check_command, "MANY", len(FILES) + 1)
    said = shell("check", "--format", form, *FILES)
    assert (many.returncode, many.stdout.decode()) == (said.status, said.out)
    assert many.stderr.decode() == said.err
    assert said.status == 3
    assert "there is no file none.md" in said.err


def test_fresh_processes(shell: Shell, monkeypatch: pytest.MonkeyPatch) -> None:
    """Where processes cannot be copied, fresh ones give the same, in order."""
    _put(shell)
    monkeypatch.setattr(os, "cpu_count", lambda: 2)
    many = check_many(FILES, method="spawn")
    assert many == [check_file(name) for name in FILES]
    assert [each.name for each in many] == list(FILES)


def test_one_processor(shell: Shell, monkeypatch: pytest.MonkeyPatch) -> None:
    """On one processor no process is started, and the files are checked all the same."""
    _put(shell)
    monkeypatch.setattr(os, "cpu_count", lambda: None)
    monkeypatch.delattr("calcdoc.commands.many.ProcessPoolExecutor")
    assert check_many(FILES) == [check_file(name) for name in FILES]


@pytest.mark.parametrize("method", ["fork", "spawn"])
def test_a_process_that_dies(shell: Shell, method: str) -> None:
    """Each file a process dies of is said to, with status 3; all the others are reported."""
    _put(shell)
    names = ("good.md", "deadly.md", "wrong.md", "deadly-too.md", "good.md", "fails.md")
    shell.put("run.py", SCRIPT)
    said = subprocess.run(  # noqa: S603
        [sys.executable, "run.py", method, "dying", *names], cwd=shell.folder, env=_ENVIRONMENT,
        capture_output=True, check=False,
    )  # fmt: skip
    died = "the process that checked it has died; is there too little memory?"
    good, wrong, fails = (shell("check", name) for name in ("good.md", "wrong.md", "fails.md"))
    assert said.returncode == 3
    assert said.stdout.decode() == f"{good.out}\n{good.out}\n{fails.out}"
    assert said.stderr.decode() == (
        f"calcdoc: deadly.md: {died}\n{wrong.err}calcdoc: deadly-too.md: {died}\n"
    )


@pytest.mark.parametrize("method", ["fork", "spawn"])
def test_interrupt(tmp_path: Path, method: str) -> None:
    """Ctrl-C ends the command and its processes with status 3, and no traceback is seen."""
    (tmp_path / "run.py").write_text(SCRIPT, encoding="utf-8")
    command = [sys.executable, "run.py", method, "endless", "a.md", "b.md", "c.md"]
    running = subprocess.Popen(  # noqa: S603
        command, cwd=tmp_path, env=_ENVIRONMENT, stdout=subprocess.PIPE, stderr=subprocess.PIPE,
        start_new_session=True,
    )  # fmt: skip
    marks = [tmp_path / "a.md.pid", tmp_path / "b.md.pid"]
    until = time.monotonic() + 20
    while not all(mark.is_file() and mark.read_text() for mark in marks):
        assert time.monotonic() < until, "the processes have not started"
        assert running.poll() is None
        time.sleep(0.05)
    os.killpg(running.pid, signal.SIGINT)  # as a terminal does: to all of them
    out, err = running.communicate(timeout=10)
    assert (running.returncode, out, err) == (3, b"", b"\n")
    for mark in marks:
        with pytest.raises(ProcessLookupError):
            os.kill(int(mark.read_text()), 0)


def test_a_fault_of_ours_in_one_file(shell: Shell, monkeypatch: pytest.MonkeyPatch) -> None:
    """A fault of ours names the file and gives status 3; the other file is reported."""
    _put(shell)
    shell.put("odd.md", GOOD.format(6))

    def odd(name: str) -> Design:
        if name == "odd.md":
            raise RuntimeError("a wheel came off")
        return read(name)

    monkeypatch.setattr("calcdoc.commands.checked.read", odd)
    said = shell("check", "odd.md", "good.md")
    assert said.status == 3
    assert said.out == shell("check", "good.md").out
    assert said.err.startswith("calcdoc: odd.md: internal-error in ")
    assert "RuntimeError: a wheel came off\nThis is a fault of calcdoc" in said.err


def test_few_files_load_nothing_more(shell: Shell) -> None:
    """Two files are checked without loading what many files need."""
    _put(shell)
    code = (
        "import sys\nfrom calcdoc.commands.main import run\nrun(['check', 'good.md', 'fails.md'])\n"
        "heavy = {'concurrent.futures', 'multiprocessing', 'rich', 'xml.etree.ElementTree'}\n"
        "print(sorted(heavy & set(sys.modules)))\n"
    )
    done = subprocess.run(  # noqa: S603
        [sys.executable, "-c", code], cwd=shell.folder, env=_ENVIRONMENT,
        capture_output=True, check=True,
    )  # fmt: skip
    assert done.stdout.decode().splitlines()[-1] == "[]"


@pytest.mark.parametrize(("term", "seen"), [("xterm", True), ("dumb", False)])
def test_bar_on_a_terminal_only(shell: Shell, term: str, seen: bool) -> None:
    """A terminal that can draw shows a bar that counts; standard output stays the same."""
    _put(shell)
    names = ("good.md", "fails.md", "good.md")
    assert len(names) >= check_command.MANY
    ours, theirs = pty.openpty()
    done = subprocess.run(  # noqa: S603
        [sys.executable, "-m", "calcdoc", "check", *names],
        cwd=shell.folder, env={**_ENVIRONMENT, "TERM": term},
        stdout=subprocess.PIPE, stderr=theirs, check=False,
    )  # fmt: skip
    os.write(theirs, b"end")
    drawn = os.read(ours, 100_000)
    os.close(ours)
    os.close(theirs)
    assert done.stdout.decode() == shell("check", *names).out
    assert (b"3/3" in drawn) is seen
    assert (drawn == b"end") is not seen
