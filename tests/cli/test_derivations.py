"""Derivations that need more than the text: files beside it, and a clock."""

import time
from functools import partial

import pytest

from calcdoc import pipeline
from calcdoc.model import solving
from calcdoc.model.symbolic import solve
from tests.helpers.checking import TITLE
from tests.helpers.command import Shell

TABLE = """\
title = "Creepage distances"
edition = "IEC 60664-1"
clause = "table F.4"
rows = [[200, 1.0], [250, 1.25], [320, 1.6, "unverified"]]

[value]
unit = "mm"

[[axis]]
name = "working voltage"
unit = "V"
rule = "next higher"
"""


def design(shell: Shell, line: str, table: str = TABLE) -> str:
    """A design with one derived line, and a table beside it."""
    (shell.folder / "tables").mkdir()
    shell.put("tables/creepage.toml", table)
    text = f"{TITLE}\n```inputs\nV = 230 V ± 10 %\n```\n\n```derive\n{line}\n```\n"
    return shell.put("lamp.md", text)


def first_line(err: str, code: str) -> str:
    """The headline of the finding of a code, without the file's name."""
    return next(line for line in err.splitlines() if f"[{code}]" in line).removeprefix("lamp.md:")


def test_relation_that_runs_out_of_time(shell: Shell, monkeypatch: pytest.MonkeyPatch) -> None:
    """A solve that takes too long is ended and `within` is suggested, within six seconds."""
    monkeypatch.setattr(solving, "solve", partial(solve, seconds=0.01))
    text = (
        f"{TITLE}\n```inputs\na = 2\n```\n\n```derive\n"
        "relation r: sqrt(x) + sqrt(x + a) + x^1.37 = 5*a\nx from r\n```\n"
    )
    began = time.monotonic()
    said = shell("check", shell.put("lamp.md", text))
    assert time.monotonic() - began < 6
    assert said.status == 2
    assert first_line(said.err, "solve") == (
        "13:1: error[solve]: solving for `x` took more than five seconds"
    )
    assert said.err.splitlines()[-1] == (
        "help: solve numerically: add `within a .. b` with values around the root"
    )


def test_table_is_not_found(shell: Shell) -> None:
    """A table that is nowhere is named with the place it should lie at."""
    said = shell("check", design(shell, 'd = lookup("clearance", V)'))
    assert said.status == 2
    assert said.err.startswith(
        "lamp.md:12:12: error[table]: there is no table `clearance`\n"
        '   |\n12 | d = lookup("clearance", V)\n   |            ^^^^^^^^^^^\n'
        "help: put it beside the design as tables/clearance.toml\n"
    )


def test_table_outside_the_folder(shell: Shell) -> None:
    """The name of a table cannot lead out of the folder."""
    said = shell("check", design(shell, 'd = lookup("../tables/creepage", V)'))
    assert said.status == 2
    assert first_line(said.err, "table") == (
        "12:12: error[table]: ../tables/creepage lies outside the folder of the design"
    )


def test_argument_outside_the_axis(shell: Shell) -> None:
    """An argument whose band leaves the axis is refused with the rows there are."""
    said = shell("check", design(shell, 'd = lookup("creepage", 1.4*V)'))
    assert said.status == 2
    assert said.err == (
        "lamp.md:12:24: error[outside-axis]: `1.4*V` lies outside of the table `creepage`\n"
        '   |\n12 | d = lookup("creepage", 1.4*V)\n   |                        ^^^^^\n'
        "help: working voltage goes from 200 to 320 V\n"
    )


def test_argument_of_the_wrong_kind(shell: Shell) -> None:
    """An argument of another kind than the axis is refused."""
    said = shell("check", design(shell, 'd = lookup("creepage", 3 A)'))
    assert first_line(said.err, "unit-mismatch") == (
        "12:24: error[unit-mismatch]: the axis `working voltage` takes a voltage, this is a current"
    )


def test_table_that_is_no_table(shell: Shell) -> None:
    """A table without rows is refused where it is looked up."""
    table = TABLE.replace("rows = ", "raws = ")
    said = shell("check", design(shell, 'd = lookup("creepage", V)', table))
    assert first_line(said.err, "table") == (
        "12:12: error[table]: the table `creepage` cannot be read: there is no key `raws`"
    )


def test_ranged_argument_takes_all_rows(shell: Shell) -> None:
    """230 V ± 10 % touches the rows 250 V and 320 V; the unverified one is marked everywhere."""
    name = design(shell, 'd = lookup("creepage", V) | creepage')
    text = (shell.folder / name).read_text() + "\n```criteria\nR1: d <= 2 mm\n```\n"
    shell("check", "--format", "json", shell.put(name, text))
    record = pipeline.record(pipeline.evaluate(pipeline.read(name)))
    d = next(each for each in record.quantities if each.symbol == "d")
    assert (d.nominal, d.least, d.greatest) == (1.25, 1.25, 1.6)
    (note,) = d.notes
    assert note == (
        "table creepage (Creepage distances, IEC 60664-1, table F.4): working voltage 250 V:"
        " 1.25 mm; working voltage 320 V: 1.6 mm (not verified); not verified against the edition"
        " in force"
    )
    assert record.criteria[0].unverified == (
        "table creepage (Creepage distances, IEC 60664-1, table F.4)",
    )
    assert record.verdict.unverified == 1
    assert [each.name for each in record.source.files] == ["tables/creepage.toml"]
