"""What the commands print and how they leave."""

import json
import os
import re
from pathlib import Path

import pytest

from calcdoc.problems.codes import codes
from calcdoc.records.store import from_json
from tests.helpers.checking import TITLE
from tests.helpers.command import Shell

DESIGNS = Path(__file__).parents[2] / "designs"
QUANTITY_KEYS = {
    "symbol",
    "line",
    "kind",
    "unit",
    "nominal",
    "least",
    "greatest",
    "at_least",
    "at_greatest",
    "proof",
    "formula",
    "substitution",
    "result",
    "steps",
    "residual",
    "depends_on",
    "used_by",
    "description",
    "basis",
    "by_case",
}
CRITERION_KEYS = {
    "id",
    "line",
    "text",
    "method",
    "value",
    "limit",
    "unit",
    "relation",
    "margin",
    "margin_abs",
    "verdict",
    "accepted",
    "case",
    "governing",
    "by_case",
    "rows",
    "interval",
    "standard_error",
    "unverified",
    "description",
    "basis",
    "reason",
}
RECORD_KEYS = {
    "schema",
    "document",
    "purpose",
    "verdict",
    "source",
    "tool",
    "sampling",
    "cases",
    "quantities",
    "relations",
    "criteria",
    "crosschecks",
    "assumptions",
    "hazards",
    "cautions",
    "references",
    "methods",
    "figures",
    "notices",
    "problems",
    "body",
}


def test_demo_passes(shell: Shell) -> None:
    """The 230 V demo checks clean with status 0."""
    said = shell("check", str(DESIGNS / "quay-stair-light-230.md"))
    assert (said.status, said.err) == (0, "")
    assert "14 pass, 1 not applicable, 1 by test" in said.out


def test_sister_fails_in_one(shell: Shell) -> None:
    """The 120 V demo fails in the headroom, which is accepted; status 1, and 0 with --accepted."""
    accepted = shell("check", "--accepted", str(DESIGNS / "quay-stair-light-120.md"))
    assert accepted.status == 0
    said = shell("check", str(DESIGNS / "quay-stair-light-120.md"))
    assert (said.status, said.err) == (1, "")
    assert [line.split()[:3] for line in said.out.splitlines() if " fail, " in line] == [
        ["R2", "fail,", "accepted"]
    ]


def test_json_has_every_key(shell: Shell) -> None:
    """The record as JSON has every contract key for every quantity and criterion."""
    said = shell("check", "--format", "json", str(DESIGNS / "quay-stair-light-120.md"))
    record = json.loads(said.out)
    assert record.keys() >= RECORD_KEYS
    assert record["schema"] == "calcdoc-record/1"
    assert len(record["quantities"]) == 49
    for quantity in record["quantities"]:
        assert quantity.keys() >= QUANTITY_KEYS, quantity["symbol"]
    for criterion in record["criteria"]:
        assert criterion.keys() >= CRITERION_KEYS, criterion["id"]
    assert "NaN" not in said.out
    assert "Infinity" not in said.out


def test_json_of_several_files_is_a_list(shell: Shell) -> None:
    """Several files give a list; one of them with errors gives schema, source and problems."""
    wrong = shell.put("wrong.md", TITLE + "\n```derive\nx = y\n```\n")
    shell("new", "lamp")
    said = shell("check", "--format", "json", "lamp.md", wrong)
    good, bad = json.loads(said.out)
    assert said.status == 2
    assert good["document"]["number"] == "lamp"
    assert bad.keys() == {"schema", "source", "problems"}
    assert bad["problems"] == [
        {
            "code": "unknown-symbol",
            "column": 5,
            "file": "wrong.md",
            "help": "define it in inputs, conditions or derive",
            "line": 8,
            "message": "there is no symbol `y`",
            "severity": "error",
        }
    ]


def test_new_design_checks_clean(shell: Shell) -> None:
    """What `new` writes checks clean, is a draft, and is not written twice."""
    said = shell("new", "lamp")
    assert (said.status, said.out) == (0, "lamp.md is written. Next: calcdoc check lamp.md\n")
    said = shell("check", "lamp.md")
    assert (said.status, said.err) == (0, "")
    said = shell("new", "lamp")
    assert (said.status, said.err) == (
        3,
        "calcdoc: lamp.md is there already; choose another name\n",
    )


@pytest.mark.parametrize("name", ["", ".md", "..", " "])
def test_new_without_a_name(shell: Shell, name: str) -> None:
    """A design needs a name of its own; nothing hidden is written."""
    said = shell("new", name)
    assert (said.status, said.err) == (3, f"calcdoc: '{name}' is no file name\n")
    assert list(shell.folder.iterdir()) == []


def test_margin_asked_for_is_said(shell: Shell) -> None:
    """The terminal says which margin was asked for beside the one there is."""
    lines = (
        "```inputs\nT_a = 80 °C\n```\n```criteria\nR1: T_a <= 90 °C with margin 15 K | air\n```\n"
    )
    said = shell("check", shell.put("lamp.md", TITLE + lines))
    assert said.out.splitlines()[2] == (
        "  R1  fail  80.00\u00a0°C  ≤  90.00\u00a0°C  margin 10\u00a0K  air with margin 15 K"
    )


def test_name_that_is_no_utf8(shell: Shell) -> None:
    """A file whose name is no UTF-8 is checked; its name is shown as far as it can be."""
    name = os.fsdecode(b"l\xff.md")
    try:
        shell.put(name, TITLE + "\n```derive\nx = y\n```\n")
    except OSError:
        pytest.skip("the file system takes no such name")
    said = shell("check", "--format", "json", name)
    assert said.status == 2
    assert json.loads(said.out)["problems"][0]["file"] == "l\ufffd.md"


def test_write_then_read_back(shell: Shell) -> None:
    """The JSON that is written is the record again when read."""
    shell("new", "lamp")
    said = shell("write", "lamp.md", "--as", "json,html")
    assert said.out == "output/lamp-A.json\noutput/lamp-A.html\n"
    data = (shell.folder / "output/lamp-A.json").read_bytes()
    record = from_json(data)
    assert record.verdict.bottom_line == "2 pass, 1 by test"
    assert (shell.folder / "output/lamp-A.html").read_text().startswith("<!DOCTYPE html>")


def test_write_goes_on_after_a_text_with_errors(shell: Shell) -> None:
    """A text with errors gives status 2 and no record; the others are written."""
    wrong = shell.put("wrong.md", TITLE + "\n```derive\nx = y\n```\n")
    shell("new", "lamp")
    said = shell("write", wrong, "lamp.md", "--as", "json")
    assert (said.status, said.out) == (2, "output/lamp-A.json\n")
    assert said.err.startswith("wrong.md:8:5: error[unknown-symbol]")


def test_unknown_form(shell: Shell) -> None:
    """A form that is none is named with those there are."""
    said = shell("write", "lamp.md", "--as", "docx")
    assert said.status == 3
    assert "'docx' is no form; the forms are html, pdf, json" in said.err


def test_unknown_command(shell: Shell) -> None:
    """A command that is none gives status 3 and no traceback."""
    said = shell("chek")
    assert said.status == 3
    assert "No such command 'chek'" in said.err


def test_explain_unknown_code(shell: Shell) -> None:
    """An unknown code is answered with the nearest one."""
    said = shell("explain", "unit-mismach")
    assert (said.status, said.err) == (
        3,
        "calcdoc: there is no problem code 'unit-mismach'; did you mean unit-mismatch?\n",
    )


def test_explain_one(shell: Shell) -> None:
    """A code is explained with title, reason and example."""
    said = shell("explain", "error[circle]")
    assert said.status == 0
    assert said.out == (
        "circle: a quantity depends on itself\n\n"
        "A value that is needed for its own computation cannot be computed line by line.\n\n"
        "An example that is refused:\n\n"
        "    ```derive\n    a = 2*b\n    b = a + 1\n    ```\n"
    )


@pytest.mark.parametrize("name", [n for n, code in codes().items() if not code.described])
def test_every_example_has_its_code(shell: Shell, name: str) -> None:
    """The example of a code has exactly that code."""
    said = shell("check", "--format", "json", shell.put("example.md", codes()[name].text))
    problems = json.loads(said.out)["problems"]
    assert {each["code"] for each in problems} == {name}


def test_every_code_in_use_is_listed() -> None:
    """A code that stands in the program stands in the list, and the other way round."""
    used = set()
    for path in (Path(__file__).parents[2] / "calcdoc").rglob("*.py"):
        text = path.read_text(encoding="utf-8")
        used |= set(
            re.findall(r'\b(?:error|warning|Mistake|_refuse|_CODES)\(\s*"([a-z0-9-]+)"', text)
        )
        used |= set(re.findall(r'^\s*"((?:division-by|out-of|too)-[a-z]+)",', text, re.MULTILINE))
    assert used == set(codes())
