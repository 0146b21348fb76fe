"""Worst-case toy values (ours, computed by hand; practice 3.2) at the level of a whole record."""

from math import sqrt

import pytest

from tests.helpers.design import worked


def test_divider() -> None:
    """10 V ± 1 % over two 10 kΩ ± 1 %: exact corners 4.9005 V to 5.1005 V."""
    done = worked(
        inputs="V = 10 V ± 1 %\nR_1 = 10 kΩ ± 1 %\nR_2 = 10 kΩ ± 1 %",
        derive="V_out [V] = V*R_2/(R_1 + R_2)",
    )["V_out"]
    assert (done.nominal, done.least, done.greatest) == (5.0, 4.9005, 5.1005)
    assert done.proof == "exact"
    assert done.at_greatest == {"V": "10.1 V", "R_1": "9.9 kΩ", "R_2": "10.1 kΩ"}


def test_parabola_is_greatest_inside() -> None:
    """x(1 - x) with x = 0.5 ± 0.1 lies in 0.24 to 0.25, and the record says inside."""
    done = worked(inputs="x = 0.5 ± 0.1", derive="y = x*(1 - x)")["y"]
    assert done.least == pytest.approx(0.24, abs=1e-12)
    assert done.greatest == pytest.approx(0.25, abs=1e-12)
    assert done.notes == ("the greatest value lies inside the band of x",)
    assert done.at_greatest == {"x": "0.5"}


def test_a_part_over_itself() -> None:
    """R/R is exactly 1, and so are two shares of one sum."""
    done = worked(
        inputs="R_1 = 10 kΩ ± 1 %\nR_2 = 4.7 kΩ ± 5 %",
        derive="a = R_1/R_1\nb = R_1/(R_1 + R_2) + R_2/(R_1 + R_2)",
    )
    for name in "ab":
        assert (done[name].least, done[name].nominal, done[name].greatest) == (1.0, 1.0, 1.0)
        assert done[name].proof == "exact"


def test_limits_from_decimal_digits() -> None:
    """230 V ± 10 % holds the limit 253 V with equality, and the record says so."""
    done = worked(
        inputs="V_line = 230 V ± 10 %", criteria="R1: V_line <= 253 V\nR2: V_line < 253 V"
    )
    one, two = done.criterion("R1"), done.criterion("R2")
    assert (one.verdict, one.remark, one.margin) == ("pass", "equal to the limit", 0.0)
    assert (two.verdict, two.remark) == ("fail", "equal to the limit")


def test_both_sides_move_together() -> None:
    """A shared part moves once: V <= 1.2 V with the same V holds everywhere."""
    done = worked(
        inputs="V = 10 V ± 50 %", derive="V_lim [V] = 1.2*V", criteria="R1: V <= V_lim"
    ).criterion("R1")
    assert (done.verdict, done.governing) == ("pass", {"V": "5 V"})
    assert (done.value, done.limit) == (5.0, 6.0)


def test_a_value_that_would_round_to_its_limit() -> None:
    """5.004 against 5.00 fails and is printed with the digits that show it (rule R6)."""
    done = worked(inputs="V = 5.004 V", criteria="R1: V <= 5.00 V").criterion("R1")
    assert (done.verdict, done.value_text, done.limit_text) == ("fail", "5.004 V", "5.000 V")


DIVIDER = {
    "inputs": "V = 10 V ± 1 %\nR_1 = 10 kΩ ± 1 %\nR_2 = 10 kΩ ± 1 %",
    "derive": "V_out [V] = V*R_2/(R_1 + R_2)",
}


def test_divider_by_every_method() -> None:
    """Extremes 4.9005 V and 5.1005 V; root sum square 5 V ± 0.061237 V; then draws."""
    done = worked(
        **DIVIDER,
        criteria="E: 4.9005 V <= V_out\nF: V_out <= 5.1005 V\n"
        "G: V_out >= 4.93 V by root sum square\nH: V_out <= 5.07 V by root sum square\n"
        "S: V_out >= 4.91 V by sampling 99.865 %\nT: V_out <= 5.09 V by sampling 99.865 %\n"
        "U: V_out >= 4.92 V by sampling 99.865 %",
    )
    found = {each.id: each for each in done.record.criteria}
    assert [found[n].value for n in "EFGH"] == pytest.approx(
        [4.9005, 5.1005, 5 - 0.061237, 5 + 0.061237], abs=1e-6
    )
    assert [found[n].verdict for n in "EFGHSTU"] == ["pass"] * 2 + ["pass", "pass"] + [
        "pass", "pass", "fail",
    ]  # fmt: skip
    for name, exact in (("S", 4.9131), ("T", 5.0877)):
        low, high = found[name].interval or (None, None)
        assert low is not None
        assert high is not None
        assert low < found[name].value < high  # type: ignore[operator]
        assert found[name].value == pytest.approx(exact, abs=1e-3)
        assert found[name].standard_error == pytest.approx(0.0003, abs=0.0003)
    assert found["E"].remark == found["F"].remark == "equal to the limit"


def test_two_equal_halves() -> None:
    """Bias 0.5 % in common, 1 % at random each: 1.5 % at the extremes, 1.207 % combined."""
    done = worked(
        inputs="a = 1 V ± 1 % bias -0.5 % .. 0.5 %\nb = 1 V ± 1 % bias -0.5 % .. 0.5 %",
        derive="m = (a + b)/2",
        criteria="E: m <= 2 V\nG: m <= 2 V by root sum square",
    )
    assert done.criterion("E").value == pytest.approx(1.015)
    assert done.criterion("G").value == pytest.approx(1 + 0.005 + 0.01 / sqrt(2))
    assert done["m"].greatest == pytest.approx(1.015)


def test_parabola_by_every_method() -> None:
    """Only extremes and draws see 0.24 and 0.25: root sum square says 0.25 and is warned of."""
    done = worked(
        inputs="x = 0.5 ± 0.1",
        derive="y = x*(1 - x)",
        criteria="E: y <= 0.25\nG: y >= 0.2 by root sum square\nS: y <= 0.25 by sampling 99 %",
    )
    found = {each.id: each for each in done.record.criteria}
    assert (found["E"].value, found["E"].verdict) == (0.25, "pass")
    assert found["G"].value == 0.25
    assert found["S"].value == pytest.approx(0.25, abs=1e-5)
    codes = [each.code for each in done.record.problems]
    assert codes == ["first-order", "first-order"]


def test_a_part_over_itself_by_every_method() -> None:
    """R/R is 1 by extremes, by root sum square and in every draw, without a warning."""
    done = worked(
        inputs="R_a = 10 kΩ ± 1 %",
        derive="q = R_a/R_a",
        criteria="E: q <= 1\nG: q <= 1 by root sum square\nS: q <= 1 by sampling 99 %",
    )
    for each in done.record.criteria:
        assert (each.value, each.verdict) == (1.0, "pass")
    assert "first-order" not in [each.code for each in done.record.problems]


@pytest.mark.parametrize(("x", "warned"), [("0", True), ("0.010", True), ("0.050", False)])
@pytest.mark.parametrize("method", ["root sum square", "sampling 95 %"])
def test_squares_near_zero(x: str, method: str, warned: bool) -> None:
    """x1² + x2² with u = 0.005 (JCGM 101, 9.4): first order is wrong near zero and is doubted."""
    done = worked(
        inputs=f"x_1 = {x} ± 0.015 as normal k=3\nx_2 = 0 ± 0.015 as normal k=3",
        criteria=f"R: x_1^2 + x_2^2 <= 1 by {method}",
    )
    assert ("first-order" in [each.code for each in done.record.problems]) is warned


@pytest.mark.parametrize("count", [1, 4, 12, 100])
def test_like_parts(count: int) -> None:
    """The sum of n like parts of 18 V ± 3 %: n times the band at the extremes, root n combined."""
    done = worked(
        inputs=f"n = {count}\nV_f = 18 V ± 3 % each of n",
        criteria="E: n*V_f <= 9 kV\nG: n*V_f <= 9 kV by root sum square\n"
        "S: n*V_f <= 9 kV by sampling 99 %",
    )
    found = {each.id: each for each in done.record.criteria}
    unit = 1000 if found["E"].unit == "kV" else 1
    nominal, band = 18 * count / unit, 0.54 * count / unit
    assert found["E"].value == pytest.approx(nominal + band)
    assert found["G"].value == pytest.approx(nominal + band / sqrt(count))
    assert nominal < found["S"].value <= nominal + band  # type: ignore[operator]


def test_conditions_never_combine() -> None:
    """A condition of ± 10 % moves the result by 10 % by every method, parts by their share."""
    done = worked(
        conditions="V = 230 V ± 10 %",
        inputs="k = 1 ± 1 %\nm = 1 ± 1 %",
        derive="U = V*k*m",
        criteria="E: U <= 1 kV\nG: U <= 1 kV by root sum square\nS: U <= 1 kV by sampling 99 %",
    )
    extreme, combined, drawn = (done.criterion(n).value for n in "EGS")
    assert extreme == pytest.approx(253 * 1.01**2)
    assert combined == pytest.approx(253 * (1 + 0.01 * sqrt(2)))
    # The sum of two rectangular parts, each within -1 .. 1, is above 2 - d in d²/8 of all draws;
    # their product adds less than 1e-4.
    error = done.criterion("S").standard_error
    assert error is not None
    assert 0 < error < 0.03
    assert drawn == pytest.approx(253 * (1.01 * 1.01 - 0.01 * sqrt(0.08)), abs=4 * error + 0.0253)
