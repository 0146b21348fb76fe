"""Worst-case toy values (ours, computed by hand; practice 3.2) that need extremes only."""

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
