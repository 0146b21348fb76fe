"""Which columns are parts, what they are made of, and where the others stand."""

from math import sqrt

import numpy as np
import pytest

from calcdoc.analysis.base_point import base_point
from calcdoc.analysis.parts import Part, random_parts
from calcdoc.analysis.program import plain
from tests.helpers.random_parts import varied


def part(makeup: str, count: str = "4") -> Part:
    """The part a tolerance describes."""
    made = varied(inputs=f"x = {makeup}\nn = {count}", criteria="R1: x <= 1 V")
    return made.parts[0]


def test_conditions_and_fixed_values_are_no_parts() -> None:
    """Inputs and assumptions that vary are parts; conditions and what stands still are not."""
    made = varied(
        conditions="V = 5 V ± 10 %",
        inputs="a = 1 V ± 1 %\nb = 2 V",
        assumptions="A1: c = 1 V ± 2 % | assumed | open: test",
        criteria="R1: V + a + b + c <= 20 V at b = 2.1 V",
    )
    assert list(made.compiled.columns) == ["V", "a", "b", "c"]
    assert [each.key for each in made.parts] == ["a", "c"]
    assert [each.column for each in made.parts] == [1, 3]


def test_a_column_of_a_look_up_is_no_part() -> None:
    """A column whose key is not a symbol of the model does not vary at random."""
    made = varied(inputs="a = 1 V ± 1 %", criteria="R1: a <= 20 V")
    assert [each.key for each in random_parts({"@7": 7, "a": 0}, made.model)] == ["a"]


def test_a_column_of_a_case_has_the_stream_of_its_symbol() -> None:
    """The same draws in every case: the stream is keyed by the symbol alone."""
    made = varied(
        conditions="T = 5 K ± 10 %",
        inputs="a = 1 V ± 1 %\nb = 1 V ± 1 %\nc = 1 V ± 1 %",
        cases="mode hot: a = 3 V ± 4 %, T = 9 K ± 1 %, b = 2*b, c = 2 V",
        criteria="R1: a + b + c + T*1 V/K <= 90 V",
    )
    assert [each.key for each in made.parts] == ["a", "b", "c", "a@hot"]
    normal, *_, hot = made.parts
    assert hot.stream == "a"
    assert (hot.nominal, hot.low) == pytest.approx((3.0, 2.88))
    assert hot.column == made.compiled.columns["a@hot"]
    assert normal.variate == hot.variate


def test_limits_of_the_random_part_leave_biases_out() -> None:
    """Limits are those of the random part; biases are summed up on each side, in SI."""
    found = part("100 mV ± 10 % bias -2 % .. 0 % (warm) bias -1 mV .. 3 mV (old)")
    assert (found.nominal, found.low, found.high) == pytest.approx((0.1, 0.09, 0.11))
    assert (found.bias_low, found.bias_high) == pytest.approx((-0.003, 0.003))


@pytest.mark.parametrize(
    ("makeup", "deviation"),
    [
        ("0 V ± 3 V", sqrt(3)),
        ("0 V -1 V +5 V", sqrt(3)),
        ("0 V ± 3 V as triangular", sqrt(1.5)),
        ("0 V -0 V +3 V as triangular", sqrt(0.5)),
        ("0 V ± 3 V as normal k=2", 1.5),
        ("0 V ± 3 V each of n", sqrt(3) / 2),
        ("0 V ± 3 V each of n shared 100 %", sqrt(3)),
        ("0 V ± 3 V as normal k=3 each of n shared 60 %", sqrt(0.36 + 0.16 / 4)),
    ],
)
def test_standard_deviations(makeup: str, deviation: float) -> None:
    """Half a width over root three, over root six, limit over k; like parts by the root of n."""
    assert part(makeup).deviation == pytest.approx(deviation, rel=1e-12)


def test_limits_of_the_mean_of_like_parts() -> None:
    """Half the band shrinks by the root of n; the middle of an unequal one stays off nominal."""
    assert part("0 V ± 2 V each of n").limits == pytest.approx((-1, 1))
    assert part("0 V -2 V +6 V each of n").limits == pytest.approx((0, 4))
    assert part("0 V -2 V +6 V").limits == (-2, 6)


def test_counts_of_a_case() -> None:
    """How many like parts there are may differ in a case: 3 in place of 4."""
    made = varied(inputs="x = 0 V ± 2 V each of n\nn = 4", criteria="R1: x <= 1 V")
    (found,) = random_parts(made.compiled.columns, made.model, {"n": 3})
    assert (made.parts[0].count, found.count) == (4, 3)


def test_written_number_of_like_parts() -> None:
    """The number may be written out."""
    assert part("0 V ± 2 V each of 9").reduction == pytest.approx(1 / 3)


def base(criterion: str, **blocks: str) -> dict[str, float]:
    """The base point of a criterion by symbol."""
    made = varied(criteria=f"R1: {criterion}", **blocks)
    side = made.sides()[0]
    program = plain(made.compiled.tape, [side.requirement])
    point = base_point(program, [side.requirement], made.parts, made.governing(side)[0])
    return dict(zip(made.compiled.columns, np.round(point, 12).tolist(), strict=True))


def test_conditions_govern_and_biases_stand_at_their_worse_end() -> None:
    """Parts at nominal with the worse bias, the condition where it is worst."""
    blocks = {
        "conditions": "V = 10 V ± 10 %",
        "inputs": "a = 1 V ± 1 % bias -2 % .. 1 %\nb = 1 V ± 1 %",
    }
    assert base("V + a + b <= 20 V", **blocks) == {"V": 11, "a": 1.01, "b": 1}
    assert base("V + a + b >= 1 V", **blocks) == {"V": 9, "a": 0.98, "b": 1}


def test_a_bias_turns_where_the_governing_side_misleads() -> None:
    """With the random part the product is worst high, with the bias alone it is worst low."""
    found = base("(x - 0.9)^2 <= 1", inputs="x = 1.00 -0.1 +0.5 bias -0.4 .. 0.1")
    assert found == {"x": 0.6}


def test_a_bias_on_one_side_only() -> None:
    """A bias that only lowers a value stays at zero where high is worse."""
    blocks = {"inputs": "a = 1 V ± 1 % bias -2 % .. 0 %"}
    assert base("a <= 2 V", **blocks) == {"a": 1}
    assert base("a >= 0.5 V", **blocks) == {"a": 0.98}
