"""Extremes: known answers, their proof, and what they cost."""

from collections.abc import Callable
from fractions import Fraction

import numpy as np
import pytest

from calcdoc.analysis import search, starts
from calcdoc.analysis.extremes import Proof, Question, extremes
from calcdoc.analysis.program import Program
from calcdoc.analysis.sweep import Boxes, Swept, sweep
from calcdoc.analysis.tape import Op
from tests.helpers.tapes import Term, choose, ends, inputs, number


def test_divider() -> None:
    """10 V with 1 % and two 10 kΩ with 1 % give exactly 4.9005 V to 5.1005 V at corners."""
    v, upper, lower = inputs(3)
    ranges = ((9.9, 10.0, 10.1), (9900.0, 10e3, 10100.0), (9900.0, 10e3, 10100.0))
    least, most = ends(v * lower / (upper + lower), *ranges)
    assert (least.value, most.value) == pytest.approx((4.9005, 5.1005), rel=1e-15)
    assert least.point.tolist() == [9.9, 10100.0, 9900.0]
    assert most.point.tolist() == [10.1, 9900.0, 10100.0]
    assert least.proof is most.proof is Proof.EXACT
    assert most.matters.all()
    assert not most.interior.any()


def test_extreme_inside_the_range() -> None:
    """x*(1 - x) with x = 0.5 ± 0.1 is greatest inside, 0.25, and least at the lower end, 0.24."""
    (x,) = inputs(1)
    least, most = ends(x * (number(x, 1) - x), (0.4, 0.5, 0.6))
    assert least.value == pytest.approx(0.24, rel=1e-15)
    assert least.point[0] == 0.4
    assert least.proof is Proof.EXACT
    assert most.value == pytest.approx(0.25, rel=1e-12)
    assert most.interior[0]
    assert most.proof is Proof.BOUNDED
    assert most.value <= most.bound <= most.value * (1 + 1e-9)


def test_same_part_above_and_below() -> None:
    """R/R is exactly one, nothing matters, and the point is nominal."""
    (r,) = inputs(1)
    for extreme in ends(r / r, (990.0, 1000.0, 1010.0)):
        assert (extreme.value, extreme.bound, extreme.proof) == (1.0, 1.0, Proof.EXACT)
        assert extreme.point[0] == 1000.0
        assert not extreme.matters.any()


def test_shares_that_add_up_to_one() -> None:
    """R_1/(R_1 + R_2) + R_2/(R_1 + R_2) does not move, and what it multiplies does."""
    a, b, c = inputs(3)
    term = (a / (a + b) + b / (a + b)) * c
    least, most = ends(term, (1.0, 2.0, 3.0), (1.0, 2.0, 3.0), (4.0, 5.0, 6.0))
    assert (least.value, most.value) == pytest.approx((4.0, 6.0))
    assert most.matters.tolist() == [False, False, True]
    assert most.proof is Proof.EXACT


@pytest.mark.parametrize(
    ("low", "high", "least", "most"), [(0.0, 1.0, 0.0, 1.0), (-1.0, 2.0, 0.0, 4.0)]
)
def test_square(low: float, high: float, least: float, most: float) -> None:
    """x^2 is monotone from zero on, and folds when zero is inside."""
    (x,) = inputs(1)
    found = ends(x * x, (low, 0.5, high))
    assert [each.value for each in found] == pytest.approx([least, most], abs=1e-12)
    assert found[1].proof is Proof.EXACT
    assert (found[0].proof is Proof.EXACT) == (low == 0.0)


def test_absolute_value() -> None:
    """|x - 0.3| over 0..1 is greatest at 1, exactly, and least at the kink."""
    (x,) = inputs(1)
    least, most = ends((x - 0.3).then(Op.ABS), (0.0, 0.5, 1.0))
    assert (most.value, most.proof) == (0.7, Proof.EXACT)
    assert least.value == pytest.approx(0.0, abs=1e-12)
    assert least.bound <= 0.0


def test_jump_of_floor() -> None:
    """floor(x) over 0.5..2.5 is exactly 0 to 2; x - floor(x) comes up to 1 but is not 1."""
    (x,) = inputs(1)
    least, most = ends(x.then(Op.FLOOR), (0.5, 1.0, 2.5))
    assert (least.value, most.value, most.proof) == (0.0, 2.0, Proof.EXACT)
    _, most = ends(x - x.then(Op.FLOOR), (0.5, 1.0, 2.5))
    assert 1.0 - 1e-9 < most.value < 1.0 <= most.bound
    assert most.proof is Proof.BOUNDED


def test_jump_of_a_condition() -> None:
    """if(x < 1, x, 3 - x) over 0..2 rises to 2 just where it jumps."""
    (x,) = inputs(1)
    _, most = ends(choose(x < 1.0, x, number(x, 3) - x), (0.0, 0.5, 2.0))
    assert most.value == pytest.approx(2.0, rel=1e-9)
    assert most.bound >= 2.0


@pytest.mark.parametrize(
    "formula",
    [
        lambda x: number(x, 1) / x,
        lambda x: x.power(-1),
        lambda x: x.power(-3),
        lambda x: (x * 4.0 + np.pi / 2).then(Op.TAN),
    ],
)
def test_pole_has_no_bound(formula: Callable[[Term], Term]) -> None:
    """Across a pole no slope has a sign: searched, an infinite bound and a finite value."""
    (x,) = inputs(1)
    for extreme, bound in zip(ends(formula(x), (-1.0, 0.5, 1.0)), (-np.inf, np.inf), strict=True):
        assert extreme.bound == bound
        assert extreme.proof is Proof.SEARCHED
        assert np.isfinite(extreme.value)


def test_guarded_pole_is_bounded() -> None:
    """if(x > 0.01, 1/x, 5) over -1..1 comes up to 100 and no further."""
    (x,) = inputs(1)
    term = choose(number(x, 0.01) < x, number(x, 1) / x, 5.0)
    _, most = ends(term, (-1.0, 0.5, 1.0))
    assert most.value == pytest.approx(100.0, rel=1e-6)
    assert most.bound >= 100.0


def test_fixed_inputs_stay() -> None:
    """An input without width stands at its value and does not matter."""
    a, b = inputs(2)
    _, most = ends(a * b, (2.0, 2.0, 2.0), (1.0, 2.0, 3.0))
    assert most.point.tolist() == [2.0, 3.0]
    assert most.matters.tolist() == [False, True]


def test_each_question_has_its_own_box() -> None:
    """Two boxes in one call do not mix."""
    (x,) = inputs(1)
    term = x.power(3)
    boxes = [(1.0, 2.0, 3.0), (-3.0, -2.0, -1.0)]
    questions = [Question(term.at, True, *(np.array([v]) for v in box)) for box in boxes]
    assert [each.value for each in extremes(term.builder.tape(), questions)] == [27.0, -1.0]


def test_same_question_same_answer() -> None:
    """A hard question asked twice gives the same numbers to the last digit."""
    x, y = inputs(2)
    term = x.then(Op.SIN) * (x * y).then(Op.COS)
    first, second = (ends(term, (-3.0, 1.0, 3.0), (-3.0, 1.0, 3.0)) for _ in range(2))
    for one, two in zip(first, second, strict=True):
        assert (one.value, one.bound, one.point.tolist()) == (
            two.value, two.bound, two.point.tolist(),
        )  # fmt: skip


def test_no_questions() -> None:
    """Nothing asked, nothing answered."""
    (x,) = inputs(1)
    assert extremes(x.builder.tape(), []) == ()


class Counter:
    """Counts sweeps and the boxes in them."""

    def __init__(self, monkeypatch: pytest.MonkeyPatch) -> None:
        self.sweeps = self.boxes = 0
        monkeypatch.setattr(search, "sweep", self)
        monkeypatch.setattr(starts, "sweep", self)

    def __call__(self, program: Program, boxes: Boxes) -> Swept:
        """Sweep and count."""
        self.sweeps += 1
        self.boxes += boxes.low.shape[1]
        return sweep(program, boxes)


def total(terms: list[Term]) -> Term:
    """Sum of terms."""
    result = terms[0]
    for term in terms[1:]:
        result = result + term
    return result


def test_monotone_questions_cost_one_box(monkeypatch: pytest.MonkeyPatch) -> None:
    """Sixty quantities over one box are settled by one sweep of one box."""
    xs = inputs(15)
    terms = [xs[k % 15] * xs[(k + 1) % 15] + xs[(k + 2) % 15] for k in range(60)]
    low, nominal, high = np.full(15, 0.9), np.ones(15), np.full(15, 1.1)
    questions = [Question(t.at, side, low, nominal, high) for t in terms for side in (False, True)]
    count = Counter(monkeypatch)
    answers = extremes(xs[0].builder.tape(), questions)
    assert (count.sweeps, count.boxes) == (1, 1)
    assert all(each.proof is Proof.EXACT for each in answers)


def test_25_inputs_do_not_cost_their_corners(monkeypatch: pytest.MonkeyPatch) -> None:
    """A sum of 25 humps has 2^25 corners; a few thousand boxes give its greatest value."""
    xs = inputs(25)
    term = total([x * (number(x, 1) - x) for x in xs])
    count = Counter(monkeypatch)
    least, most = ends(term, *[(0.4, 0.5, 0.6)] * 25)
    assert count.boxes < 10_000
    assert most.value == pytest.approx(6.25, rel=1e-12)
    assert least.value == pytest.approx(6.0, rel=1e-12)
    assert least.bound <= least.value
    assert most.bound >= most.value


def test_20_squarings_are_one_sweep(monkeypatch: pytest.MonkeyPatch) -> None:
    """Each line is the square of the one before: the graph has 20 nodes, the tree 2^20."""
    (x,) = inputs(1)
    term = x
    for _ in range(20):
        term = term * term
    assert len(term.builder.tape().instructions) == 21
    count = Counter(monkeypatch)
    least, most = ends(term, (0.9999999, 1.0, 1.0000001))
    assert (count.sweeps, count.boxes) == (1, 1)
    assert most.value == pytest.approx(np.exp(2**20 * np.log1p(1e-7)), rel=1e-8)
    assert least.proof is most.proof is Proof.EXACT


def test_efficiency_is_monotone() -> None:
    """The same power above and below a ratio is settled without a search."""
    v, i, r, p = inputs(4)
    term = v * i / (v * i + i.power(2) * r + p)
    ranges = ((27.0, 30.0, 33.0), (0.9, 1.0, 1.1), (4.0, 5.0, 6.0), (0.5, 1.0, 1.5))
    least, most = ends(term, *ranges)
    assert least.proof is Proof.EXACT
    assert least.value <= 27.0 * 1.1 / (27.0 * 1.1 + 1.1**2 * 6.0 + 1.5) + 1e-12
    assert most.matters.all()


def test_fractional_exponent_at_zero() -> None:
    """x^(3/2) from zero on is monotone and exact."""
    (x,) = inputs(1)
    least, most = ends(x.power(Fraction(3, 2)), (0.0, 1.0, 4.0))
    assert (least.value, most.value) == (0.0, 8.0)
    assert most.proof is Proof.EXACT
