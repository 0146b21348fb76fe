"""Several routes to one requirement, accepted failures, and what counts in the tally."""

from itertools import product

import pytest

from calcdoc.commands.checked import status_of
from tests.helpers.design import Worked, worked

MEMBERS = {
    "pass": "x <= 9",
    "fail": "x <= 1",
    "not decided": "y <= 9 in neg",
    "not applicable": "x <= 9 when x > 100",
    "by test": "by test: heat",
    "by inspection": "by inspection: label",
}
"""A criterion for each verdict."""
BEST_FIRST = ("pass", "not decided", "by test", "by inspection", "fail", "not applicable")


def routes(*verdicts: str) -> Worked:
    """A design with a criterion for each verdict, and one that any of them meets."""
    names = [f"M{n}" for n in range(len(verdicts))]
    lines = [f"{n}: {MEMBERS[each]}" for n, each in zip(names, verdicts, strict=True)]
    return worked(
        inputs="x = 4 ± 1",
        derive="y = sqrt(x)",
        cases="fault neg: x = -1",
        criteria="\n".join([*lines, f"A: any of {', '.join(names)}"]),
    )


@pytest.mark.parametrize("pair", list(product(MEMBERS, repeat=2)), ids="-".join)
def test_any_of(pair: tuple[str, str]) -> None:
    """The best route decides: what passes, then what may still pass, then what fails."""
    done = routes(*pair)
    found = done.criterion("A")
    assert [done.criterion(f"M{n}").verdict for n in (0, 1)] == list(pair)
    assert found.verdict == min(pair, key=BEST_FIRST.index)
    assert (found.method, found.by_case, found.value) == ("any of", {}, None)
    assert [done.criterion(f"M{n}").route_of for n in (0, 1)] == ["A", "A"]


@pytest.mark.parametrize("verdict", list(MEMBERS))
def test_members_do_not_count_on_their_own(verdict: str) -> None:
    """A route that fails costs nothing while another passes; the best one counts."""
    beside = routes("pass", verdict)
    assert beside.record.verdict.bottom_line == "1 pass"
    assert status_of(beside.record) == 0
    alone = routes(verdict, "not applicable")
    assert alone.record.verdict.bottom_line == f"1 {verdict}"
    assert status_of(alone.record) == (1 if verdict in ("fail", "not decided") else 0)


def test_any_of_says_which_route_met_it() -> None:
    """A pass names its routes; else every route stands there with its verdict."""
    assert routes("fail", "pass", "pass").criterion("A").remark == "met by M1, M2"
    failed = routes("fail", "not decided", "fail").criterion("A")
    assert (failed.remark, failed.reason) == ("", "M1 not decided; M0, M2 fail")


THREE = {"inputs": "x = 5 ± 1", "cases": "mode a: x = 10\nfault b: x = 20"}


def accepted(*lines: str) -> Worked:
    """A criterion that fails in normal, a and b, with acceptances."""
    return worked(**THREE, criteria="\n".join(["R: x <= 1 in every case", *lines]))


def test_a_failure_accepted_everywhere() -> None:
    """It stays a failure, with its reason and last day, and counts as passing only when asked."""
    done = accepted("accept R | no harm | until 2027-06-30")
    found = done.criterion("R")
    assert (found.verdict, found.accepted) == ("fail", "no harm, until 2027-06-30")
    assert all(each.accepted for each in found.by_case.values())
    assert done.record.verdict.bottom_line == "1 fail (accepted)"
    assert [status_of(done.record, accepted=each) for each in (False, True)] == [1, 0]


@pytest.mark.parametrize("cases", ["a", "a, b", "normal", "normal, b"])
def test_a_failure_accepted_in_some_of_its_cases(cases: str) -> None:
    """What fails in three cases and is accepted in one or two of them is not accepted."""
    done = accepted(f"accept R in {cases} | no harm | until 2027-06-30")
    found = done.criterion("R")
    inside = {name for name, each in found.by_case.items() if each.accepted}
    assert inside == set(cases.split(", "))
    assert (found.accepted, done.record.verdict.bottom_line) == (None, "1 fail")
    assert status_of(done.record, accepted=True) == 1


def test_a_failure_accepted_case_by_case() -> None:
    """Acceptances that cover all failing cases together accept the criterion."""
    done = accepted(
        "accept R in a | one | until 2027-01-01", "accept R in normal, b | two | until 2027-02-01"
    )
    assert done.criterion("R").accepted == (
        "two in normal, b, until 2027-02-01; one in a, until 2027-01-01"
    )
    assert status_of(done.record, accepted=True) == 0


def test_what_passes_is_not_accepted() -> None:
    """An acceptance of a criterion or a case that passes changes nothing."""
    done = worked(**THREE, criteria="R: x <= 12 in every case\naccept R | r | until 2027-06-30\n"
                  "S: x <= 99\naccept S | r | until 2027-06-30")  # fmt: skip
    by_case = done.criterion("R").by_case
    assert {name: each.accepted for name, each in by_case.items()} == {
        "normal": None, "a": None, "b": "r, until 2027-06-30",
    }  # fmt: skip
    assert done.criterion("R").accepted == "r, until 2027-06-30"
    assert (done.criterion("S").verdict, done.criterion("S").accepted) == ("pass", None)
    assert done.record.verdict.bottom_line == "1 pass, 1 fail (accepted)"


def test_not_decided_is_never_accepted() -> None:
    """Beside a failure that is accepted, a case that is not decided still gives status 1."""
    done = worked(
        inputs="x = 4 ± 1",
        derive="y = sqrt(x)",
        cases="fault far: x = 400\nfault neg: x = -1",
        criteria="R: y <= 9 in every case\naccept R | r | until 2027-06-30",
    )
    assert done.criterion("R").by_case["neg"].verdict == "not decided"
    assert status_of(done.record, accepted=True) == 1


def test_any_of_accepted() -> None:
    """A failing `any of` can be accepted; its routes still do not count."""
    done = worked(**THREE, criteria="R: x <= 1\nS: x <= 2\nA: any of R, S\n"
                  "accept A | no harm | until 2027-06-30")  # fmt: skip
    assert done.criterion("A").accepted == "no harm, until 2027-06-30"
    assert done.record.verdict.bottom_line == "1 fail (accepted)"
    assert [status_of(done.record, accepted=each) for each in (False, True)] == [1, 0]


def test_an_accepted_route_is_no_pass() -> None:
    """Accepting the failure of one route neither meets the `any of` nor accepts it."""
    done = worked(**THREE, criteria="R: x <= 1\nS: x <= 2\nA: any of R, S\n"
                  "accept R | no harm | until 2027-06-30")  # fmt: skip
    assert (done.criterion("A").verdict, done.criterion("A").accepted) == ("fail", None)
    assert done.record.verdict.bottom_line == "1 fail"
    assert status_of(done.record, accepted=True) == 1
