"""Files and folders that are wrong: a message, an exit status, never a traceback."""

import os
import time
from pathlib import Path

import pytest

from tests.helpers.checking import TITLE
from tests.helpers.command import Shell


def test_missing_file(shell: Shell) -> None:
    """A file that is not there is named and gives status 3."""
    said = shell("check", "lamp.md")
    assert (said.status, said.out, said.err) == (3, "", "calcdoc: there is no file lamp.md\n")


def test_folder_in_place_of_a_file(shell: Shell) -> None:
    """A folder is no design text."""
    (shell.folder / "lamp").mkdir()
    said = shell("check", "lamp")
    assert said.status == 3
    assert said.err == "calcdoc: lamp is a folder; give the path of a design text\n"


def test_device_in_place_of_a_file(shell: Shell) -> None:
    """A device is not read, however much it would give."""
    said = shell("check", "/dev/zero")
    assert said.status == 3
    assert said.err == "calcdoc: /dev/zero is no plain file; give the path of a design text\n"


def test_file_without_permission(shell: Shell, monkeypatch: pytest.MonkeyPatch) -> None:
    """A file that may not be read is named with the reason."""
    shell.put("lamp.md", TITLE)
    if os.geteuid() == 0:  # root may read everything, so the refusal is played

        def refuse(*_: object, **__: object) -> None:
            raise PermissionError(13, "Permission denied")

        monkeypatch.setattr(Path, "open", refuse)
    else:
        (shell.folder / "lamp.md").chmod(0)
    said = shell("check", "lamp.md")
    assert said.status == 3
    assert said.err == "calcdoc: lamp.md cannot be read: permission denied\n"


def test_empty_file(shell: Shell) -> None:
    """An empty text lacks its title block."""
    said = shell("check", shell.put("lamp.md", ""))
    assert said.status == 2
    assert said.err == (
        "lamp.md:1:1: error[missing-document]: the text has no `document` block\n"
        "  |\n1 |\n  | ^\n"
        "help: begin with ```document, then number, title and revision, then ```\n"
    )


def test_text_that_is_not_utf8(shell: Shell) -> None:
    """The first byte that is not UTF-8 is pointed at."""
    said = shell("check", shell.put("lamp.md", b"# Lamp\n\nV = 3 \xb5V\n"))
    assert said.status == 2
    assert said.err == (
        "lamp.md:3:7: error[not-utf8]: the text is not UTF-8 from here on\n"
        "  |\n3 | V = 3 \ufffdV\n  |       ^\n"
        "help: save the file as UTF-8\n"
    )


def test_nul(shell: Shell) -> None:
    """A NUL is pointed at."""
    said = shell("check", shell.put("lamp.md", b"# La\0mp\n"))
    assert said.status == 2
    assert said.err == (
        "lamp.md:1:5: error[nul-character]: the text holds a NUL character\n"
        "  |\n1 | # La\ufffdmp\n  |     ^\n"
        "help: remove it\n"
    )


def test_carriage_returns_and_byte_order_mark(shell: Shell) -> None:
    """CR LF and a byte-order mark are read as if they were not there; positions count without."""
    text = TITLE + "\n```inputs\nV_D = 0.95 V\nV_D = 1 V\n```\n"
    plain = shell("check", shell.put("lamp.md", text))
    windows = b"\xef\xbb\xbf" + text.replace("\n", "\r\n").encode()
    said = shell("check", shell.put("lamp.md", windows))
    assert said.status == 2
    assert said.err == plain.err
    assert said.err.startswith("lamp.md:9:1: error[defined-twice]: `V_D` is defined twice\n")


def test_five_megabytes(shell: Shell) -> None:
    """A text of 5 MB is refused at once."""
    said_at = time.monotonic()
    said = shell("check", shell.put("lamp.md", "x {a} y\n\n" * 600_000))
    assert time.monotonic() - said_at < 2
    assert said.status == 2
    assert said.err.startswith(
        "lamp.md:1:1: error[text-size]: the text has 5400000 characters, at most 2000000 are read\n"
    )


def test_ten_thousand_parentheses(shell: Shell) -> None:
    """Deep nesting is refused at the parenthesis that is too deep."""
    text = TITLE + "\n```derive\nx = " + "(" * 10_000 + "\n```\n"
    said = shell("check", shell.put("lamp.md", text))
    assert said.status == 2
    assert said.err.splitlines()[0] == (
        "lamp.md:8:65: error[formula-size]: the formula is nested more than 60 deep"
    )


def test_tower_of_powers(shell: Shell) -> None:
    """``9^9^9^9`` is said to be too large, in bounded time."""
    text = TITLE + "\n```derive\nx = 9^9^9^9\n```\n"
    said = shell("check", shell.put("lamp.md", text))
    assert said.status == 2
    assert said.err == (
        "lamp.md:8:7: error[too-large]: the value of `9^9^9` is too large to compute at the"
        " nominal values\n"
        "  |\n8 | x = 9^9^9^9\n  |       ^^^^^\n"
        "help: check the exponent and the units\n"
    )


def test_output_folder_that_cannot_be_written(shell: Shell) -> None:
    """A file in place of the output folder is named; nothing is left behind."""
    shell("new", "lamp")
    shell.put("taken", "")
    said = shell("write", "lamp.md", "--to", "taken", "--as", "json")
    assert said.status == 3
    assert said.err == "calcdoc: lamp.md: taken is a file, not a folder to write to\n"
    assert sorted(each.name for each in shell.folder.iterdir()) == ["lamp.md", "taken"]


def test_two_designs_of_one_name(shell: Shell) -> None:
    """Two designs with one number and revision would overwrite each other and are refused."""
    shell("new", "lamp")
    shell.put("other.md", (shell.folder / "lamp.md").read_bytes())
    said = shell("write", "lamp.md", "other.md", "--as", "json")
    assert said.status == 3
    assert said.err == (
        "calcdoc: lamp.md and other.md would both be written as lamp-A;"
        " give one of them another number or revision\n"
    )
    assert not (shell.folder / "output").exists()


def test_unsafe_number(shell: Shell) -> None:
    """Number and revision make a safe file name, whatever they hold."""
    shell("new", "lamp")
    text = (shell.folder / "lamp.md").read_text().replace('"lamp"', '"../up/QS 1"')
    said = shell("write", shell.put("lamp.md", text), "--as", "json")
    assert (said.status, said.out) == (0, "output/-up-QS-1-A.json\n")


@pytest.mark.parametrize("picture", ["../secret.png", "/etc/hostname", "link.png"])
def test_picture_outside_the_folder(shell: Shell, picture: str) -> None:
    """A picture outside the design's folder is not read, also not through a link."""
    inside = shell.folder / "designs"
    inside.mkdir()
    (shell.folder / "secret.png").write_bytes(b"\x89PNG\r\n\x1a\n")
    (inside / "link.png").symlink_to(shell.folder / "secret.png")
    (inside / "lamp.md").write_text(f"{TITLE}\n![wiring]({picture})\n")
    said = shell("check", "designs/lamp.md")
    assert said.status == 2
    assert said.err.splitlines()[0] == (
        f"designs/lamp.md:7:11: error[picture]: this picture is not shown: {picture} lies outside"
        " the folder of the design"
    )
