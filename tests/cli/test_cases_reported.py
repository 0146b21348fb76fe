"""`check` of a design with modes and faults: the table, and the exit status with acceptances."""

import json

import pytest

from tests.cli.reported import REPORTS
from tests.helpers.checking import TITLE
from tests.helpers.command import Shell


def test_whole_table(shell: Shell) -> None:
    """Routes in brackets, accepted failures as such, the governing case, and open cases below."""
    shell.put("cases.md", (REPORTS / "cases.md").read_bytes())
    said = shell("check", "cases.md")
    assert said.out == (REPORTS / "cases.txt").read_text(encoding="utf-8")
    assert (said.status, said.err) == (1, "")


def test_json_of_cases(shell: Shell) -> None:
    """The JSON has every case of every criterion, with its reason where nothing is decided."""
    shell.put("cases.md", (REPORTS / "cases.md").read_bytes())
    data = json.loads(shell("check", "cases.md", "--format", "json").out)
    assert [(each["name"], each["kind"]) for each in data["cases"]] == [
        ("normal", "normal"), ("dim", "mode"), ("short", "fault"), ("reversed", "fault"),
    ]  # fmt: skip
    by_id = {each["id"]: each for each in data["criteria"]}
    found = by_id["R2"]["by_case"]["reversed"]
    assert (found["verdict"], found["value"]) == ("not decided", None)
    assert found["reason"].startswith("the square root is taken of a negative value")
    assert by_id["R2"]["case"] == "short"
    assert by_id["R4"]["interval"][0] < by_id["R4"]["value"] < by_id["R4"]["interval"][1]


INPUTS = "```inputs\nx = 4 ± 1 | given | assumed\n```\n"
ACCEPT = "accept R | harmless | until 2027-06-30\n"


@pytest.mark.parametrize(
    ("criteria", "plain", "accepted"),
    [
        (f"R: x <= 4\n{ACCEPT}", 1, 0),
        (f"R: x <= 4\nS: x <= 4\n{ACCEPT}", 1, 1),
        ("R: x <= 4\n", 1, 1),
        (f"R: x <= 9\n{ACCEPT}", 0, 0),
        (f"R: x <= 4 in every case\n{ACCEPT}", 1, 0),
        ("R: x <= 4 in every case\naccept R in wide | harmless | until 2027-06-30\n", 1, 1),
        (f"R: sqrt(x) <= 1 in every case\n{ACCEPT}", 1, 1),
    ],
)
def test_status_with_acceptances(shell: Shell, criteria: str, plain: int, accepted: int) -> None:
    """A failure counts unless `--accepted` is given and the text accepts it wherever it fails."""
    cases = "```cases\nfault wide: x = 6 ± 2\nfault below: x = -1\n```\n"
    shell.put("a.md", f"{TITLE}\n{INPUTS}{cases}```criteria\n{criteria}```\n")
    assert shell("check", "a.md").status == plain
    assert shell("check", "a.md", "--accepted").status == accepted


@pytest.mark.parametrize(("date", "status"), [("2027-06-30", 0), ("2027-07-01", 1)])
def test_an_acceptance_that_has_ended(shell: Shell, date: str, status: int) -> None:
    """It holds on its last day; after it the failure is one again, with a warning."""
    title = TITLE.replace('revision = "A"', f'revision = "A"\ndate = "{date}"')
    shell.put("a.md", f"{title}\n{INPUTS}```criteria\nR: x <= 4\n{ACCEPT}```\n")
    said = shell("check", "a.md", "--accepted")
    assert said.status == status
    assert ("fail, accepted" in said.out) is (status == 0)
    assert ("acceptance-expired" in said.err) is (status == 1)


SAMPLED = "```criteria\nR: x^2 <= 24.8 by sampling 99 % in every case\n```\n"


def _sampled(seed: str, more: str = "") -> str:
    title = TITLE.removesuffix("```\n") + f"[sampling]\ndraws = 20000\n{seed}```\n"
    return f"{title}\n{INPUTS}{more}{SAMPLED}"


def test_same_seed_same_bytes(shell: Shell) -> None:
    """One seed gives the same JSON to the byte, another one other numbers."""
    cases = "```cases\nfault other: x = 4 ± 1.1\n```\n"
    found = {}
    for name, seed in (("a", "seed = 5\n"), ("b", "seed = 5\n"), ("c", "seed = 6\n")):
        shell.put("s.md", _sampled(seed, cases))
        found[name] = shell("check", "s.md", "--format", "json").out
    assert found["a"] == found["b"]
    one, other = (json.loads(found[name]) for name in "ac")
    assert (one["sampling"]["seed"], other["sampling"]["seed"]) == (5, 6)
    values = [each["criteria"][0]["value"] for each in (one, other)]
    assert values[0] != values[1]
    assert values[0] == pytest.approx(values[1], rel=1e-2)
