"""Worst-case toy values of practice.md 3.2 (ours, computed by hand): root sum square, sampling."""

from math import sqrt

import numpy as np
import pytest

from calcdoc.analysis.root_sum_square import Doubt
from tests.helpers.random_parts import Varied, varied


def divider(makeup: str) -> Varied:
    """10 V over two 10 kΩ, all ± 1 %, against limits at zero and 10 V."""
    return varied(
        inputs=f"V = 10 V ± 1 % {makeup}\nR_1 = 10 kΩ ± 1 % {makeup}\nR_2 = 10 kΩ ± 1 % {makeup}",
        criteria="R1: 0 V <= V*R_2/(R_1 + R_2) <= 10 V",
    )


def test_divider_by_root_sum_square() -> None:
    """± 0.061237 V, with sensitivities 0.5 and ± 0.25 mV/Ω, inside of the extremes."""
    low, high = (divider("").combined(which=which) for which in (0, 1))
    assert (low.requirement, 10 - high.requirement) == pytest.approx(
        (5 - 0.061237, 5 + 0.061237), abs=1e-6
    )
    assert {e.key: e.slope for e in low.effects} == pytest.approx(
        {"V": 0.5, "R_1": -0.25e-3, "R_2": 0.25e-3}
    )
    assert not low.doubtful
    assert not low.held


@pytest.mark.parametrize(
    ("share", "low", "high"), [("0.975", 4.9337, 5.0667), ("0.99865", 4.9131, 5.0877)]
)
def test_divider_by_sampling(share: str, low: float, high: float) -> None:
    """Rectangular: sd 0.03536 V; 95 % 4.9337 to 5.0667, 99.73 % 4.9131 to 5.0877."""
    (found,) = divider("as rectangular").sampled(share, draws=1_000_000)
    first, second = found.spreads
    assert first.quantile == pytest.approx(low, abs=3e-4)
    assert 10 - (second.quantile or 0) == pytest.approx(high, abs=3e-4)
    assert first.deviation == pytest.approx(0.03536, abs=5e-5)
    assert first.first_order == pytest.approx(0.03536, abs=5e-6)


def test_divider_of_normal_parts() -> None:
    """Limits at three standard deviations: 3 sd = 0.06124 V, the root sum square."""
    made = divider("as normal k=3")
    (found,) = made.sampled(draws=200_000)
    assert 3 * (found.spreads[0].deviation or 0) == pytest.approx(0.06124, rel=0.01)
    assert made.combined().levels == (3,)


def test_parabola() -> None:
    """x(1 - x) at x = 0.5 ± 0.1: first order says 0 and is doubted, sampling comes to 0.25."""
    made = varied(inputs="x = 0.5 ± 0.1", criteria="R1: 0 <= x*(1 - x) <= 1")
    low, high = (made.combined(which=which) for which in (0, 1))
    assert (low.spread, low.doubt) == (0, Doubt.ZERO)
    assert (low.requirement, 1 - high.requirement) == pytest.approx((0.25, 0.25))
    (found,) = made.sampled("0.975")
    least, most = found.spreads
    # x is 0.5 + 0.1 t with t between -1 and 1, so x(1 - x) = 0.25 - 0.01 t².
    error = 4 * (least.standard_error or 0)
    assert 0 < error < 1e-4
    assert least.quantile == pytest.approx(0.25 - 0.01 * 0.975**2, abs=error)
    assert 1 - (most.quantile or 0) == pytest.approx(0.25 - 0.01 * 0.025**2, abs=2e-6)
    assert least.disagree


def test_a_part_over_itself() -> None:
    """R/R: root sum square 0, every draw 1."""
    made = varied(inputs="R = 10 kΩ ± 1 %", criteria="R1: R/R <= 2")
    assert (made.combined().spread, made.combined().requirement) == (0, 1)
    assert not made.combined().doubtful
    (spread,) = made.sampled(draws=10_000)[0].spreads
    assert (spread.quantile, spread.deviation) == (1, 0)


def test_two_equal_halves() -> None:
    """Bias 0.5 % in common, 1 % at random each: 1.5 % at the extremes, 1.207 % combined."""
    made = varied(
        inputs="a = 1 V ± 1 % bias -0.5 % .. 0.5 %\nb = 1 V ± 1 % bias -0.5 % .. 0.5 %",
        criteria="R1: (a + b)/2 <= 2 V",
    )
    _, worst = made.governing(made.sides()[0])
    combined = made.combined()
    assert 1 - worst == pytest.approx(0.015)
    assert 1 - combined.requirement == pytest.approx(0.005 + 0.01 / sqrt(2))
    assert 1 - combined.base == pytest.approx(0.005)


@pytest.mark.parametrize("count", [1, 2, 12, 100])
@pytest.mark.parametrize("shape", ["rectangular", "triangular", "normal k=3"])
def test_like_parts(count: int, shape: str) -> None:
    """The mean of n like parts has the root of n less spread, by either method."""
    made = varied(
        inputs=f"x = 18 V ± 3 % as {shape} each of n\nn = {count}", criteria="R1: n*x <= 9 kV"
    )
    assert made.combined().spread == pytest.approx(0.54 * count / sqrt(count))
    (spread,) = made.sampled(draws=20_000)[0].spreads
    assert spread.deviation == pytest.approx(spread.first_order, rel=0.03)
    single = {"rectangular": sqrt(3), "triangular": sqrt(6), "normal k=3": 3}[shape]
    assert spread.first_order == pytest.approx(0.54 * np.sqrt(count) / single)
