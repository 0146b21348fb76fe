"""Root sum square and sampling with conditions, operating points and cases."""

from math import sqrt

import pytest

from calcdoc.records.record import Criterion
from tests.helpers.design import Worked, worked


def judged(criterion: str, **blocks: str) -> Criterion:
    """One criterion of a design."""
    return worked(**blocks, criteria=f"R: {criterion}").criterion("R")


def test_root_sum_square_without_a_base() -> None:
    """Where the condition is false with parts at nominal nothing is combined: not decided."""
    found = judged("sqrt(x - 1) <= 2 by root sum square when x >= 1", inputs="x = 0.5 ± 1")
    assert (found.verdict, found.value) == ("not decided", None)
    assert found.reason == (
        "its condition is false with the parts at nominal, so there are no effects to combine:"
        " judge it by extremes or by sampling"
    )


def test_root_sum_square_never_beyond_the_condition() -> None:
    """A condition that cuts the band short holds the result at its edge."""
    found = judged("V <= 240 V by root sum square when V <= 240 V", inputs="V = 230 V ± 10 %")
    assert (found.verdict, found.value) == ("pass", 240.0)


@pytest.mark.parametrize(
    ("share", "limit", "verdict", "value"),
    [("90 %", "1 V", "fail", 252.77), ("99 %", "253 V", "pass", 252.977)],
)
def test_sampling_under_a_condition_that_is_seldom_true(
    share: str, limit: str, verdict: str, value: float
) -> None:
    """A draw that the condition leaves out does not count: the quantile is of the others."""
    found = judged(f"V <= {limit} by sampling {share} when V > 250.7 V", inputs="V = 230 V ± 10 %")
    assert found.verdict == verdict
    assert found.value == pytest.approx(value, abs=0.04)
    assert found.share is not None
    assert found.share.met == float(verdict == "pass")
    assert any(" of 100\u202f000 draws; the shares are of these." in each
               for each in found.statistics)  # fmt: skip


def test_a_condition_that_is_true_at_the_edge_alone() -> None:
    """Where no draw has a true condition nothing is decided."""
    found = judged("V <= 300 V by sampling 99 % when V >= 253 V", inputs="V = 230 V ± 10 %")
    assert (found.verdict, found.value) == ("not decided", None)
    assert found.reason == (
        "0 of 0 draws meet it; its condition is true in too few, so there is no value to show:"
        " more draws decide"
    )


@pytest.mark.parametrize(("share", "verdict"), [("40 %", "pass"), ("90 %", "fail")])
def test_sampling_beside_what_cannot_be_computed(share: str, verdict: str) -> None:
    """A condition may leave the nominal point out, where the requirement cannot be computed."""
    found = judged(f"sqrt(x - 1) <= 0.5 by sampling {share} when x >= 1", inputs="x = 0.5 ± 1")
    assert (found.verdict, found.value) == (verdict, None)
    assert " draws meet it; it cannot be computed with the parts at nominal" in found.reason


@pytest.mark.parametrize("method", ["root sum square", "sampling 95 %"])
def test_conditions_are_worst_for_the_method(method: str) -> None:
    """Where parts vary on their own another end of a condition may be worse than at extremes."""
    design = {
        "conditions": "c = 1 .. 1.5 .. 2",
        "inputs": "\n".join(f"a_{n} = 0 V ± 1 V" for n in range(4)),
        "derive": "y [V] = c*(a_0 + a_1 + a_2 + a_3 - 2.5 V)",
    }
    wide = judged(f"y <= -0.7 V by {method}", **design)
    assert wide.governing == {"c": "1"}
    for end in ("c = 1", "c = 2"):
        there = judged(f"y <= -0.7 V by {method} at {end}", **design)
        assert there.value is not None
        assert wide.value is not None
        assert wide.value >= there.value
    assert judged("y <= -0.7 V", **design).governing["c"] == "2"


def test_a_bias_that_is_worst_when_new() -> None:
    """Where neither end of a bias is worst, the part as it is when new counts."""
    found = judged(
        "4 V^2 - a^2 <= 3.5 V^2 by sampling 99 %",
        inputs="a = 0 V ± 0.1 V as normal k=3 bias -1 V .. 1 V",
    )
    assert (found.verdict, found.governing) == ("fail", {"a": "0 V"})


@pytest.mark.parametrize(
    ("where", "count"), [("", 12), ("at n = 3", 3), ("in less", 9), ("at n = 3 in less", 3)]
)
@pytest.mark.parametrize("method", ["root sum square", "sampling 99 %"])
def test_like_parts_are_counted_where_the_criterion_is(where: str, count: int, method: str) -> None:
    """The mean of like parts narrows by the number there is in the case or at the point."""
    found = judged(
        f"x <= 9 V by {method} {where}",
        inputs="n = 12\nx = 3 V ± 3 % as normal k=3 each of n",
        cases="fault less: n = n - 3",
    )
    factor = 1 if method == "root sum square" else 2.3263 / 3
    spread = 0.09 / sqrt(count) * factor
    assert found.value == pytest.approx(3 + spread, abs=0.01 * spread if factor < 1 else 1e-11)


@pytest.mark.parametrize("method", ["by root sum square", "by sampling 99 %"])
def test_conditions_have_their_full_effect(method: str) -> None:
    """The band of a condition moves the result by all of it, a part's by less."""
    design = {"conditions": "V = 230 V ± 10 %", "inputs": "k = 1 ± 10 %\nm = 1 ± 10 %"}
    wide = judged(f"V*k*m <= 300 V {method}", **design)
    narrow = judged(f"V*k*m <= 300 V {method} at V = 253 V", **design)
    assert wide.value == narrow.value
    assert wide.value is not None
    assert 253 * 1.1 < wide.value < 253 * 1.21
    assert wide.governing == {"V": "253 V"}


def test_a_condition_that_a_case_gives_a_band() -> None:
    """A condition stays at its worst end in a case that widens it, by every method."""
    done = worked(
        conditions="V = 230 V",
        inputs="k = 1 ± 1 %",
        cases="fault wide: V = 230 V ± 20 %",
        criteria="A: V*k <= 300 V by root sum square in every case\n"
        "B: V*k <= 300 V by sampling 99 % in every case",
    )
    assert done.criterion("A").by_case["wide"].value == pytest.approx(276 * 1.01)
    value = done.criterion("B").by_case["wide"].value
    assert value == pytest.approx(276 * 1.0098, rel=1e-4)


SAMPLED = "R: a*b <= 30 by sampling 99 % in every case"


def draws(cases: str = "fault other: u = 7\nfault own: a = 6 ± 5 %", **more: str) -> Worked:
    """A sampled product of two parts, and an input that is none of its business."""
    inputs = "a = 5 ± 10 %\nb = 4 ± 10 % as triangular\nu = 1 ± 10 %" + more.pop("inputs", "")
    return worked(inputs=inputs, cases=cases, criteria=SAMPLED, **more)


def test_cases_see_the_same_draws() -> None:
    """A case that does not touch the criterion has its numbers to the last digit."""
    by_case = draws().criterion("R").by_case
    assert by_case["other"] == by_case["normal"]
    assert by_case["own"].value != by_case["normal"].value


def test_inputs_that_are_added_leave_the_draws_alone() -> None:
    """Another input, before or behind, changes no number of a sampled criterion."""
    plain, more = draws(), draws(inputs="\na_a = 3 ± 10 %\nz = 1 ± 5 % as normal k=2",
                                 derive="y = a_a*z")  # fmt: skip
    one, two = plain.criterion("R"), more.criterion("R")
    assert (one.value, one.interval, one.standard_error, one.statistics) == (
        two.value, two.interval, two.standard_error, two.statistics,
    )  # fmt: skip


def test_a_sampled_criterion_that_cannot_be_computed_in_a_case() -> None:
    """The fault is not decided with its reason, the others have their draws."""
    done = worked(
        inputs="a = 4 ± 10 %", derive="y = sqrt(a)", cases="fault neg: a = -1",
        criteria="R: y <= 3 by sampling 99 % in every case\n"
        "S: y <= 3 by root sum square in every case",
    )  # fmt: skip
    for name in "RS":
        found = done.criterion(name)
        assert (found.verdict, found.case) == ("not decided", "neg")
        assert found.reason == (
            "in neg: the square root is taken of a negative value of `a` at the nominal values"
        )
        assert found.by_case["normal"].verdict == "pass"
        assert (found.interval, found.standard_error) == (None, None)
