"""`calcdoc methods`, and sheets of a project on the command line."""

import json

from calcdoc.methods.library import method_names
from tests.helpers.checking import TITLE
from tests.helpers.command import Shell

SHEET = (
    '```document\ntitle = "A sheet"\nrevision = "1"\n```\n'
    "```gives\nu\n```\n```derive\nu = {}\n```\n"
)
USE = TITLE + "```use ./sheets/own.md as m\n```\n```derive\nv = 2*m.u\n```\n"


def test_list(shell: Shell) -> None:
    """Without a name the library is listed, one line each."""
    said = shell("methods")
    assert said.status == 0
    assert [line.split()[0] for line in said.out.splitlines()] == list(method_names())
    assert "inrush            Inrush current\n" in said.out


def test_one(shell: Shell) -> None:
    """With a name: takes with units, defaults and sources, gives, limits, cautions, sources."""
    said = shell("methods", "residual-voltage")
    assert said.status == 0
    for line in (
        "  R [MΩ]             bleed resistance\n",
        "  t_wait [s] = 1 s   time after which it is measured; [IEC 60335-1, 22.5] from a",
        "  R_max [MΩ]  greatest bleed resistance that is quick enough\n",
        "  V_0 > V_safe  else there is nothing to discharge\n",
        "  warning  Measure before touching.",
        "  IEC 60335-1  Household",
    ):
        assert line in said.out


def test_none(shell: Shell) -> None:
    """An unknown method is answered with the nearest one."""
    said = shell("methods", "in-rush")
    assert (said.status, said.err) == (
        3,
        "calcdoc: there is no method 'in-rush'; did you mean inrush?\n",
    )


def test_sheet_is_filed(shell: Shell) -> None:
    """A sheet of the project is read from the folder of the design and filed with its digest."""
    shell.put("sheets/own.md", SHEET.format("3"))
    said = shell("check", "--format", "json", shell.put("lamp.md", USE))
    record = json.loads(said.out)
    assert [each["name"] for each in record["source"]["files"]] == ["sheets/own.md"]
    assert [each["symbol"] for each in record["quantities"]] == ["m.u", "v"]
    assert record["quantities"][0]["kind"] == "method"


def test_mistake_in_a_sheet(shell: Shell) -> None:
    """A finding in a sheet names its file, on every road out."""
    shell.put("sheets/own.md", SHEET.format("3 V + 2 A"))
    shell.put("lamp.md", USE)
    said = shell("check", "lamp.md")
    assert said.status == 2
    assert said.err.startswith("sheets/own.md:9:5: error[unit-mismatch]: cannot add a voltage")
    (problem,) = json.loads(shell("check", "--format", "json", "lamp.md").out)["problems"]
    assert (problem["file"], problem["line"]) == ("sheets/own.md", 9)
    (run,) = json.loads(shell("check", "--format", "sarif", "lamp.md").out)["runs"]
    place = run["results"][0]["locations"][0]["physicalLocation"]["artifactLocation"]
    assert place == {"uri": "sheets/own.md", "index": 1}
    assert run["artifacts"][1]["location"]["uri"] == "sheets/own.md"
    assert "sheets/own.md:9:5" in shell("check", "--format", "junit", "lamp.md").out


def test_outside_the_folder(shell: Shell) -> None:
    """A sheet outside of the folder of the design is not read."""
    shell.put("own.md", SHEET.format("3"))
    use = USE.replace("./sheets/own.md", "./../own.md")
    said = shell("check", shell.put("inner/lamp.md", use))
    assert said.status == 2
    assert "error[sheet-file]: this sheet cannot be applied: ../own.md lies outside" in said.err


def test_warning_of_a_sheet(shell: Shell) -> None:
    """A warning that stands in a sheet names it in the record."""
    shell.put("sheets/own.md", SHEET.format("3") + "A [link](ftp://x).\n")
    said = shell("check", "--format", "json", shell.put("lamp.md", USE))
    (problem,) = json.loads(said.out)["problems"]
    assert (problem["code"], problem["file"]) == ("link-refused", "sheets/own.md")
