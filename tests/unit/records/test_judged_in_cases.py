"""Criteria with a condition, in their cases, and what stands where nothing is decided."""

import pytest

from calcdoc.records.record import Criterion
from tests.helpers.design import Worked, worked

BAND = "V = 230 V ± 10 %"


def conditioned(clause: str, limit: str = "240 V", band: str = BAND) -> Criterion:
    """``V <= limit`` over 207 V to 253 V under a condition."""
    return worked(inputs=band, criteria=f"R: V <= {limit} when {clause}").criterion("R")


@pytest.mark.parametrize(
    ("clause", "limit", "verdict", "value"),
    [
        ("V > 0 V", "253 V", "pass", 253.0),
        ("V > 0 V", "252 V", "fail", 253.0),
        ("V <= 240 V", "240 V", "pass", 240.0),
        ("V <= 240 V", "239.9 V", "fail", 240.0),
        ("V >= 253 V", "252 V", "fail", 253.0),
        ("V <= 207 V", "206 V", "fail", 207.0),
        ("V > 252 V and V < 252.5 V", "253 V", "pass", 252.5),
        ("V < 208 V or V > 252.9 V", "252 V", "fail", 253.0),
        ("not V > 210 V", "209 V", "fail", 210.0),
    ],
)
def test_when_in_part(clause: str, limit: str, verdict: str, value: float) -> None:
    """It holds where the condition is true, or a point that breaks it satisfies the condition."""
    found = conditioned(clause, limit)
    assert found.verdict == verdict
    assert found.value == pytest.approx(value, rel=1e-6)
    assert found.reason == ""


@pytest.mark.parametrize("clause", ["V > 253 V", "V < 207 V", "V > 260 V", "V < 0 V and V > 230 V"])
def test_when_true_nowhere(clause: str) -> None:
    """A condition that no point satisfies makes a criterion not applicable, and it says so."""
    found = conditioned(clause, "1 V")
    assert (found.verdict, found.value, found.case) == ("not applicable", None, "normal")
    assert found.reason == "its condition is true nowhere"


def test_when_over_a_series() -> None:
    """Elements whose condition is false do not count; those left are judged one by one."""
    done = worked(
        inputs="k = 1 ± 10 %",
        derive="I[n] [mA] = 20 mA*k/n for n in 1..5 odd",
        criteria="R: I[n] <= 5 mA for n in 1..5 odd when I[n] < 10 mA\n"
        "S: I[n] <= 8 mA for n in 1..5 odd when n > 1",
    )
    one, two = done.criterion("R"), done.criterion("S")
    assert [each.verdict for each in one.rows] == ["not applicable", "fail", "pass"]
    assert (one.verdict, one.governing) == ("fail", {"n": "3", "k": "1.1"})
    assert one.value == pytest.approx(22 / 3)
    assert [each.verdict for each in two.rows] == ["not applicable", "pass", "pass"]
    assert (two.verdict, two.governing["n"]) == ("pass", "3")


def test_when_guards_what_cannot_be_computed() -> None:
    """Where the condition is false the requirement need not be computable, in either order."""
    done = worked(
        inputs="x = 0 ± 1",
        criteria="A: sqrt(x) <= 1 when x > 0\nB: 1/x >= 1 when x >= 0.5\nC: ln(x) <= -1 when x > 0",
    )
    assert [(done.criterion(n).verdict, done.criterion(n).value) for n in "AB"] == [
        ("pass", 1.0), ("pass", 1.0),
    ]  # fmt: skip
    assert (done.criterion("C").verdict, done.criterion("C").value) == ("fail", 0.0)


@pytest.mark.parametrize("method", ["by extremes", "by sampling 99 %"])
def test_when_of_two_sides(method: str) -> None:
    """Both sides are under the condition, and the one that governs is named."""
    found = worked(
        inputs="x = 0 ± 1", criteria=f"R: -0.5 <= x <= 2 {method} when x > -0.25"
    ).criterion("R")
    assert (found.verdict, found.relation) == ("pass", ">=")


CASES = "mode dim: I = 1 A\nfault hot: I = 3 A\nfault cold: I = 2 A"


@pytest.mark.parametrize(
    ("scope", "judged", "governing", "value"),
    [
        ("", ["normal", "dim"], "normal", 2.5),
        ("in every case", ["normal", "dim", "hot", "cold"], "hot", 3.0),
        ("in every fault", ["hot", "cold"], "hot", 3.0),
        ("in cold, dim", ["dim", "cold"], "cold", 2.0),
        ("in normal", ["normal"], "normal", 2.5),
    ],
)
def test_scopes(scope: str, judged: list[str], governing: str, value: float) -> None:
    """Normal and modes by default, else as said; the least distance to the limit governs."""
    found = worked(inputs="I = 2 A ± 25 %", cases=CASES, criteria=f"R: I <= 5 A {scope}")
    criterion = found.criterion("R")
    assert list(criterion.by_case) == judged
    assert (criterion.case, criterion.value) == (governing, value)
    assert criterion.by_case[governing].value == criterion.value


def test_the_worst_verdict_governs_before_the_least_distance() -> None:
    """Fail before not decided before pass before not applicable, whatever the margins are."""
    done = worked(
        inputs="x = 4 ± 1",
        derive="y = sqrt(x)",
        cases="fault neg: x = -1\nfault far: x = 400",
        criteria="A: y <= 10 in normal, neg\nB: y <= 10 in every case\n"
        "C: y <= 10 in normal, far when x < 100",
    )
    assert (done.criterion("A").verdict, done.criterion("A").case) == ("not decided", "neg")
    assert (done.criterion("B").verdict, done.criterion("B").case) == ("fail", "far")
    assert (done.criterion("C").verdict, done.criterion("C").case) == ("pass", "normal")
    assert done.criterion("C").by_case["far"].verdict == "not applicable"


def test_every_case_keeps_its_reason() -> None:
    """A case that is not decided says why, also where another case fails and governs."""
    by_case = worked(
        inputs="x = 4 ± 1", derive="y = sqrt(x)", cases="fault neg: x = -1\nfault far: x = 400",
        criteria="B: y <= 10 in every case",
    ).criterion("B").by_case  # fmt: skip
    assert by_case["neg"].reason == (
        "the square root is taken of a negative value of `x` at the nominal values"
    )
    assert (by_case["far"].reason, by_case["normal"].reason) == ("", "")


POINT = {"inputs": "V = 230 V ± 10 %\nk = 2 ± 10 %", "derive": "P = k*V"}


@pytest.mark.parametrize("change", ["V = 300 V", "V = 300 V ± 1 %", "V = V + 70 V", "V = P/1.5"])
def test_an_operating_point_wins_over_the_case(change: str) -> None:
    """What a criterion sets stands in every case; all else is as the case says."""
    done = worked(
        **POINT,
        cases=f"fault high: {change}, k = k + 1",
        criteria="R: P <= 1 kV in every case\nS: P <= 1 kV at V = 100 V in every case",
    )
    assert done.criterion("S").by_case["normal"].value == pytest.approx(220)
    assert done.criterion("S").by_case["high"].value == pytest.approx(320)
    assert done.criterion("R").by_case["high"].value != pytest.approx(320)


def test_an_operating_point_that_undoes_the_whole_case() -> None:
    """A case that changes only what the criterion sets is the normal one for it."""
    done = worked(**POINT, cases="fault high: V = 300 V", criteria="S: P <= 250 V at V = 100 V in every case")  # fmt: skip # noqa: E501
    by_case = done.criterion("S").by_case
    assert (by_case["high"], by_case["high"].value) == (by_case["normal"], 220.0)


def rooted(criteria: str, cases: str) -> Worked:
    """A line solved numerically whose relation a case can break."""
    return worked(
        inputs="a = 4 ± 1\nb = 2\nT = 1",
        derive="relation r: x^2 = a - b + T\nx from r within 0 .. 10\ny = x + T",
        cases=cases,
        criteria=criteria,
    )


def test_no_root_in_a_case_seen_with_an_operating_point() -> None:
    """A criterion that sets one of two changes sees a line of its own, and says why it has none."""
    found = rooted("R: y <= 10 at T = 2 in every fault", "fault f: b = 200, T = 5").criterion("R")
    assert found.verdict == "not decided"
    assert found.reason == (
        "in f: no value of `x` between 0 and 10 solves the relation at the values that criterion"
        " `R` sets: left less right is 194 at 0 and 294 at 10 at T = 2"
    )


LOOP = "T_b = T_a + R_th*P*(1 + k*(T_b - 25 °C))\nsettle T_b within -20000 °C .. 20000 °C"
HOT = "R_th = 60 K/W\nP = 1 W\nT_a = 25 °C\nk = 0.002 1/K"


def test_a_loop_that_runs_away_only_in_a_fault() -> None:
    """The criterion fails in that fault alone, and the line says so there."""
    done = worked(inputs=HOT, derive=LOOP, cases="fault hot: k = 0.02 1/K",
                  criteria="R: T_b <= 2000 °C in every case")  # fmt: skip
    found = done.criterion("R")
    assert {name: each.verdict for name, each in found.by_case.items()} == {
        "normal": "pass", "hot": "fail",
    }  # fmt: skip
    assert (found.case, found.remark) == ("hot", "thermal runaway")
    assert found.reason == "it rests on T_b, which runs away: the loop gain reaches one"
    assert found.by_case["hot"].reason == found.reason
    assert done["T_b"].notes == ()
    assert done["T_b"].by_case["hot"].text.endswith("; thermal runaway: the loop gain reaches 1.20")


@pytest.mark.parametrize(
    ("case", "point", "verdict"),
    [
        ("R_th = 60 K/W", "k = 0.02 1/K", "fail"),
        ("k = 0.02 1/K", "k = 0.002 1/K", "pass"),
        ("R_th = 600 K/W, k = 0.0001 1/K", "k = 0.002 1/K", "fail"),
        ("k = 0.02 1/K, R_th = 6 K/W", "P = 9 W", "fail"),
    ],
)
def test_a_loop_is_judged_where_the_criterion_is(case: str, point: str, verdict: str) -> None:
    """The gain counts at the operating point, which may lie outside the band and undo a change."""
    found = worked(inputs=HOT, derive=LOOP, cases=f"fault f: {case}",
                   criteria=f"R: T_b <= 2000 °C at {point} in f").criterion("R")  # fmt: skip
    assert found.verdict == verdict


def test_a_loop_that_does_not_settle_only_in_a_fault() -> None:
    """Without a value in its bracket the fault is not decided, the normal case is."""
    done = worked(inputs=HOT, derive=LOOP.replace(" 20000", " 200"), cases="fault hot: P = 5 W",
                  criteria="R: T_b <= 200 °C in every case")  # fmt: skip
    found = done.criterion("R")
    assert (found.verdict, found.case) == ("not decided", "hot")
    assert found.reason.startswith("in hot: `T_b` does not settle between -20000 °C and 200 °C")
    assert done["T_b"].by_case["hot"].nominal is None
    assert done["T_b"].by_case["hot"].reason == found.reason.removeprefix("in hot: ")


def test_several_roots_only_in_a_fault() -> None:
    """Where the condition of a solved line leaves none or two roots the fault is not decided."""
    done = worked(
        inputs="x = 5 ± 0.5",
        derive="relation r: y^2 - x*y + 1 = 0\ny from r where y > 1",
        cases="fault none: x = -5\nfault good: x = 8",
        criteria="R: y <= 10 in every case",
    )
    found = done.criterion("R")
    assert {name: each.verdict for name, each in found.by_case.items()} == {
        "normal": "pass", "none": "not decided", "good": "pass",
    }  # fmt: skip
    assert found.reason == "in none: no root of `y` meets the condition over the whole band"
    assert done["y"].by_case["good"].nominal == pytest.approx(4 + 15**0.5)


def test_two_roots_only_in_a_fault() -> None:
    """Two roots that both meet the condition in a fault leave it not decided, and say how many."""
    done = worked(
        inputs="x = 5 ± 0.5\nc = -1",
        derive="relation r: y^2 - x*y + c = 0\ny from r where y > 0",
        cases="fault two: c = 1",
        criteria="R: y <= 10 in every case",
    )
    found = done.criterion("R")
    assert (found.verdict, found.by_case["normal"].verdict) == ("not decided", "pass")
    assert found.reason == "in two: 2 roots are left for `y`"
