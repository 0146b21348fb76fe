"""Root sum square: budget, cap at the extremes, level, and doubts about first order."""

import numpy as np
import pytest

from calcdoc.analysis.parts import Part
from calcdoc.analysis.root_sum_square import Doubt, root_sum_square
from calcdoc.analysis.tape import Op
from tests.helpers.random_parts import varied
from tests.helpers.tapes import inputs


def test_budget_of_a_divider() -> None:
    """10 V ± 1 % over two parts of 10 kΩ ± 1 %: slopes 0.5 and 0.25 mV/Ω, greatest first."""
    made = varied(
        inputs="V = 10 V ± 1 %\nR_1 = 10 kΩ ± 1 %\nR_2 = 10 kΩ ± 1 %",
        criteria="R1: V*R_2/(R_1 + R_2) <= 5.2 V",
    ).combined()
    assert [each.key for each in made.effects] == ["V", "R_1", "R_2"]
    assert [each.slope for each in made.effects] == pytest.approx([-0.5, 0.25e-3, -0.25e-3])
    assert [each.change for each in made.effects] == pytest.approx([0.1, -100, 100])
    assert [each.effect for each in made.effects] == pytest.approx([-0.05, -0.025, -0.025])
    assert made.spread == pytest.approx(0.0612372436, rel=1e-9)
    assert made.requirement == pytest.approx(0.2 - 0.0612372436, rel=1e-9)
    assert made.base == pytest.approx(0.2)
    assert (made.levels, made.doubtful, made.held) == ((None,), False, False)


def test_unequal_limits_count_on_the_worse_side() -> None:
    """-20 % +50 %: an upper limit sees the 50 %, a lower one the 20 %."""
    made = varied(
        inputs="a = 10 V -20 % +50 %\nb = 10 V ± 10 %", criteria="R1: a <= 20 V\nR2: a + b >= 1 V"
    )
    assert made.combined(0).requirement == pytest.approx(20 - 15)
    assert made.combined(1).requirement == pytest.approx(19 - (4 + 1) ** 0.5)


def test_never_beyond_the_extremes() -> None:
    """Where an extreme lies nearer than first order says, the result stands there and says so."""
    made = varied(inputs="x = 1 ± 0.5", criteria="R1: min(2*x, 2.2) <= 3").combined()
    assert made.spread == pytest.approx(1.0)
    assert made.requirement == pytest.approx(0.8)
    assert made.held
    assert made.doubt is Doubt.CURVED


def test_levels_name_what_the_limits_stand_for() -> None:
    """Normal parts by their k, others by the whole band; parts without effect do not count."""
    made = varied(
        inputs="a = 1 V ± 1 % as normal k=3\nb = 1 V ± 1 % as normal k=2\n"
        "c = 1 V ± 1 % as triangular\nd = 1 V ± 1 % as normal k=5",
        criteria="R1: a + b <= 3 V\nR2: a + c <= 3 V\nR3: c + 0*d <= 3 V",
    )
    assert [made.combined(at).levels for at in range(3)] == [(2, 3), (3, None), (None,)]


@pytest.mark.parametrize(
    ("criterion", "inputs", "doubt"),
    [
        ("x*(1 - x) <= 0.3", "x = 0.5 ± 0.1", Doubt.ZERO),
        ("x*y <= 1", "x = 0 ± 0.1\ny = 0 ± 0.1", Doubt.ZERO),
        ("x*y <= 1", "x = 0 ± 0.1\ny = 0.01 ± 0.1", Doubt.CURVED),
        ("x*y <= 1", "x = 1 ± 0.1\ny = 1 ± 0.1", None),
        ("exp(x) <= 9", "x = 0 ± 1", Doubt.CURVED),
        ("exp(x) <= 9", "x = 0 ± 0.1", None),
        ("abs(x) <= 1", "x = 0 ± 0.1", None),
        ("sqrt(x) <= 1", "x = 0 .. 0 .. 0.1", Doubt.NO_SLOPE),
        ("x/x <= 2", "x = 1 ± 0.1", None),
        ("x/(x + y) + y/(x + y) <= 2", "x = 1.3 ± 0.1\ny = 2.7 ± 0.1", None),
        ("floor(x) <= 9", "x = 1.5 ± 1", Doubt.ZERO),
        ("floor(x) <= 9", "x = 1.5 ± 0.1", None),
    ],
)
def test_doubts(criterion: str, inputs: str, doubt: Doubt | None) -> None:
    """First order is doubted where the limits do something else, and only there."""
    made = varied(inputs=inputs, criteria=f"R1: {criterion}").combined()
    assert made.doubt is doubt
    assert made.doubtful == (doubt is not None)


def test_limits_that_cannot_be_computed_are_doubted() -> None:
    """A limit beyond which there is no number is no effect to trust; a base without one neither."""
    x, y = inputs(2)
    term = x.then(Op.LN) + y
    parts = [
        Part("x", "x", 0, 1.0, -0.5, 2.5, 0.0, 0.0, "rectangular", 0.0, 1, 0.0),
        Part("y", "y", 1, 5.0, 4.9, 5.1, 0.0, 0.0, "rectangular", 0.0, 1, 0.0),
    ]
    tape = term.builder.tape()
    made = root_sum_square(tape, [term.at], parts, np.array([1.0, 5.0]), 0.0)
    assert made.doubt is Doubt.CURVED
    assert made.spread == pytest.approx(np.hypot(1.5, 0.1))
    lost = root_sum_square(tape, [term.at], parts[1:], np.array([-1.0, 5.0]), 3.0)
    assert (lost.doubt, lost.requirement) == (Doubt.NOT_COMPUTED, 3.0)


def test_huge_values_do_not_overflow() -> None:
    """The squares of effects that can be computed are never formed where they cannot."""
    made = varied(inputs="x = 1e99 ± 1e97\ny = 1e99 ± 1e97", criteria="R1: x^2 + y^2 <= 3*1e99^2")
    combined = made.combined()
    assert combined.spread == pytest.approx(2 * np.sqrt(2) * 1e196)
    assert combined.doubt is None


def test_no_slope_takes_what_the_limits_do() -> None:
    """Where there is no derivative the effect is the real one."""
    made = varied(inputs="x = 0 .. 0 .. 0.04", criteria="R1: sqrt(x) <= 1").combined()
    assert [each.slope for each in made.effects] == [None]
    assert [each.effect for each in made.effects] == pytest.approx([-0.2])
    assert made.requirement == pytest.approx(0.8)


@pytest.mark.parametrize(("shared", "spread"), [("", 0.5), ("shared 60 %", 0.632455532)])
def test_like_parts_by_the_square_root_law(shared: str, spread: float) -> None:
    """Four parts of ± 1 V: their mean ± 0.5 V; with 60 % in common hypot(0.6, 0.4/2)."""
    made = varied(inputs=f"x = 5 V ± 1 V each of 4 {shared}", criteria="R1: x <= 7 V").combined()
    assert made.spread == pytest.approx(spread, rel=1e-9)
    assert made.doubt is None


def test_through_a_loop_and_a_root() -> None:
    """Slopes go through what is solved numerically: x^3 = a has the slope 1/(3 x^2)."""
    made = varied(
        inputs="a = 8 ± 0.08",
        derive="relation cube: x^3 = a\nx from cube within 1 .. 3",
        criteria="R1: x >= 1",
    ).combined()
    assert [each.slope for each in made.effects] == pytest.approx([1 / 12])
    assert made.requirement == pytest.approx(1 - 0.08 / 12, rel=1e-9)
