"""Sampling: same draws, streams, limits of shapes, conditions, what cannot be computed, bounds."""

import tracemalloc
from fractions import Fraction
from math import sqrt
from pathlib import Path

import numpy as np
import pytest
from scipy import stats

from calcdoc.analysis.counting import Sampled
from calcdoc.analysis.distributions import ranks, share_bounds
from calcdoc.analysis.draws import MOST_LIKE, Draws, Setting
from calcdoc.analysis.parts import Variate
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.sampling import Asked, Job, sampled
from calcdoc.analysis.tape import Op, TapeBuilder
from tests.bench.designs import CLOSED, DEMO
from tests.helpers.random_parts import varied, varied_text

DIVIDER = "V = 10 V ± 1 %\nR_1 = 10 kΩ ± 1 %\nR_2 = 10 kΩ ± 1 %"


def values_of(variate: Variate, draws: int = 20_000, *, quasi: bool = False) -> FloatArray:
    """All draws of one variate."""
    setting = Setting(draws, 3, quasi)
    made = Draws({variate: np.zeros(setting.size)}, setting)
    return np.concatenate([made.values[variate][:count].copy() for count in made.chunks()])


def same(one: Sampled, other: Sampled) -> bool:
    """Whether two results are the same to the last digit."""
    return repr(one) == repr(other)


@pytest.mark.parametrize("quasi", [False, True])
def test_same_seed_same_result(quasi: bool) -> None:
    """The same seed gives the same digits, another one others."""
    made = varied(inputs=DIVIDER, criteria="R1: V*R_2/(R_1 + R_2) <= 5.05 V")
    (first,), (again,), (other,) = (
        made.sampled(draws=5000, seed=seed, quasi=quasi) for seed in (1, 1, 2)
    )
    assert same(first, again)
    assert not same(first, other)


def test_an_edit_elsewhere_does_not_reshuffle() -> None:
    """Further symbols, drawn or not, before or after, leave the result of a criterion as it is."""
    criterion = "V*R_2/(R_1 + R_2) <= 5.05 V"
    alone = varied(inputs=DIVIDER, criteria=f"R1: {criterion}").sampled(draws=5000)[0]
    among = varied(
        inputs=f"a = 1 V ± 9 %\n{DIVIDER}\nz = 1 V ± 3 % as normal k=3",
        criteria=f"R0: a + z <= 2 V\nR1: {criterion}",
    ).sampled(draws=5000)[1]
    assert alone.met == among.met
    assert alone.spreads[0].quantile == among.spreads[0].quantile


def test_the_chunk_does_not_matter() -> None:
    """Memory is a matter of the chunk alone, draws are not."""
    made = varied(
        inputs="x = 1 V ± 1 % each of 3 shared 50 %\ny = 1 V ± 1 % as normal k=3",
        criteria="R1: x + y <= 2.01 V",
    )
    results = [
        sampled(made.compiled.tape, [made.job()], Setting(5000, 1, chunk=chunk))[0]
        for chunk in (64, 1024)
    ]
    assert results[0].met == results[1].met
    assert results[0].spreads[0].quantile == results[1].spreads[0].quantile


def test_progress_is_told() -> None:
    """After each chunk the draws done and their total; the last one says all."""
    made = varied(inputs=DIVIDER, criteria="R1: V*R_2/(R_1 + R_2) <= 5.05 V")
    told: list[tuple[int, int]] = []
    sampled(
        made.compiled.tape,
        [made.job()],
        Setting(2500, 1, chunk=1024),
        lambda done, total: told.append((done, total)),
    )
    assert told == [(1024, 2500), (2048, 2500), (2500, 2500)]


@pytest.mark.parametrize("quasi", [False, True])
@pytest.mark.parametrize(
    ("variate", "like"),
    [
        (Variate("x", "rectangular", 0.0, 1, 0.0), stats.uniform()),
        (Variate("x", "triangular", 0.5, 1, 0.0), stats.triang(0.5)),
        (Variate("x", "triangular", 0.2, 1, 0.0), stats.triang(0.2)),
        (Variate("x", "triangular", 0.0, 1, 0.0), stats.triang(0.0)),
        (Variate("x", "normal", 0.0, 1, 0.0), stats.norm()),
        (Variate("x", "rectangular", 0.0, 5, 1.0), stats.uniform()),
        (Variate("x", "rectangular", 0.0, 2, 0.0), stats.triang(0.5)),
    ],
)
def test_shapes(variate: Variate, like: stats.rv_continuous, quasi: bool) -> None:
    """Draws follow the distribution; the mean of two rectangular parts is a triangular one."""
    values = values_of(variate, quasi=quasi)
    assert stats.kstest(values, like.cdf).pvalue > 1e-4
    if variate.shape != "normal":
        assert values.min() >= 0.0
        assert values.max() <= 1.0


@pytest.mark.parametrize("count", [3, MOST_LIKE, MOST_LIKE + 1, 100_000])
@pytest.mark.parametrize("shape", ["rectangular", "triangular"])
def test_means_of_like_parts(count: int, shape: str) -> None:
    """The spread falls with the root of the number, whichever way the mean is drawn."""
    one = sqrt(1 / 12) if shape == "rectangular" else sqrt(0.84 / 18)
    values = values_of(Variate("x", shape, 0.2 if shape == "triangular" else 0.0, count, 0.4))
    expected = one * sqrt(0.4**2 + 0.6**2 / count)
    assert values.std() == pytest.approx(expected, rel=0.02)
    middle = 0.5 if shape == "rectangular" else 0.4
    assert values.mean() == pytest.approx(middle, abs=5 * expected / sqrt(len(values)))


def test_normal_parts_have_no_end() -> None:
    """Draws beyond the limits of a normal part are wanted; its limits stand for k deviations."""
    made = varied(inputs="x = 0 V ± 3 V as normal k=3", criteria="R1: x <= 3 V")
    (found,) = made.sampled("0.99")
    assert found.met / found.draws == pytest.approx(stats.norm.cdf(3), abs=0.001)
    assert found.met < found.draws


def test_rectangular_parts_stay_within_their_limits() -> None:
    """The extremes hold for every draw: all meet a limit that is just there."""
    made = varied(inputs="x = 0 V -1 V +3 V", criteria="R1: -1 V <= x <= 3 V")
    (found,) = made.sampled("0.99")
    assert (found.met, found.upper) == (found.draws, 1.0)
    assert found.spreads[0].mean == pytest.approx(2, abs=0.02)


def test_each_limit_at_its_own_conditions() -> None:
    """A draw meets a two-sided criterion when it holds at both ends of the condition."""
    made = varied(
        conditions="V = 10 V ± 1 V", inputs="x = 0 V ± 1 V", criteria="R1: 8.5 V <= V + x <= 11.5 V"
    )
    (found,) = made.sampled("0.5")
    assert found.met / found.draws == pytest.approx(0.5, abs=0.01)
    assert [each.base.tolist() for each in found.spreads] == [[9, 0], [11, 0]]


def test_biases_stand_still() -> None:
    """A bias moves every draw to its worse end and adds nothing to the spread."""
    made = varied(inputs="x = 1 V ± 0.1 V bias -0.5 V .. 0.2 V", criteria="R1: x <= 2 V")
    (spread,) = made.sampled()[0].spreads
    assert spread.mean == pytest.approx(0.8, abs=0.001)
    assert spread.deviation == pytest.approx(0.1 / sqrt(3), rel=0.02)


def test_strictness_where_nothing_varies() -> None:
    """Equal to the limit: met by `<=`, missed by `<`; the share is certain, its bounds are not."""
    made = varied(inputs="a = 1 V ± 1 %", criteria="R1: 1 V <= 1 V\nR2: 1 V < 1 V")
    equal, strict = made.sampled("0.9", draws=100)
    assert (equal.met, strict.met) == (100, 0)
    assert equal.lower == pytest.approx(0.05 ** (1 / 100))
    assert equal.upper == 1.0
    assert equal.spreads[0].quantile == 0.0
    assert equal.spreads[0].deviation == 0.0
    assert not equal.spreads[0].disagree


def test_where_the_condition_is_false_a_draw_does_not_count() -> None:
    """Half of the draws are not asked; of the others none meets it, and they are spread evenly."""
    made = varied(inputs="x = 0 V ± 1 V", criteria="R1: x <= -1 V when x >= 0 V")
    (found,) = made.sampled("0.4")
    assert found.counted / found.draws == pytest.approx(0.5, abs=0.01)
    assert (found.met, found.lost, found.lower) == (0, 0, 0.0)
    (spread,) = found.spreads
    assert spread.mean == pytest.approx(-1.5, abs=0.01)
    assert spread.quantile == pytest.approx(-1.4, abs=0.02)
    (easy,) = made.sampled("0.6")[0].spreads
    assert easy.quantile == pytest.approx(-1.6, abs=0.02)


def test_what_cannot_be_computed_is_not_met() -> None:
    """A logarithm of nothing: such a draw counts as missed, and how many is said."""
    made = varied(inputs="x = 1 ± 2", criteria="R1: x <= 4")
    job = made.job(share="0.9")
    builder = TapeBuilder.on(made.compiled.tape)
    logarithm = builder.add(Op.LN, builder.add(Op.INPUT, value=0))
    asked = Asked(logarithm, strict=False, equal=0.0, governing=np.array([1.0]))
    lost = Job((asked,), job.parts, Fraction(9, 10))
    (found,) = sampled(builder.tape(), [lost], Setting(20_000, 1))
    assert found.lost / found.draws == pytest.approx(0.25, abs=0.02)
    assert found.met / found.draws == pytest.approx(0.5, abs=0.02)
    (spread,) = found.spreads
    assert spread.quantile is None
    assert spread.mean == pytest.approx(np.log(3) - 1, abs=0.03)


def test_disagreement_with_first_order() -> None:
    """x(1 - x) at its top and x² at zero are told, a divider is not."""
    made = varied(
        inputs=f"x = 0.5 ± 0.1\ny = 0 ± 1\n{DIVIDER}",
        criteria="R1: x*(1 - x) <= 1\nR2: y^2 <= 1\nR3: V*R_1/(R_1 + R_2) <= 6 V\nR4: x/x <= 2",
    )
    found = [each.spreads[0].disagree for each in made.sampled(draws=20_000)]
    assert found == [True, True, False, False]


@pytest.mark.parametrize(("met", "draws"), [(0, 10), (10, 10), (7, 10), (997_123, 1_000_000)])
def test_share_bounds_are_those_of_scipy(met: int, draws: int) -> None:
    """Clopper and Pearson, one-sided 95 % each: the two-sided interval of 90 %."""
    expected = stats.binomtest(met, draws).proportion_ci(0.9, method="exact")
    assert share_bounds(met, draws, 0.95) == pytest.approx((expected.low, expected.high), rel=1e-9)


@pytest.mark.parametrize("draws", [10, 999, 1_000_000])
@pytest.mark.parametrize("share", [0.003, 0.3, 0.975])
def test_ranks_are_quantiles_of_the_binomial(draws: int, share: float) -> None:
    """Places from the binomial distribution, so that 95 % of samples enclose the quantile."""
    low, high = ranks(draws, share, 0.95)
    count = stats.binom(draws, share)
    assert (low, high) == (count.ppf(0.025), count.ppf(0.975) + 1)
    assert count.cdf(high - 1) - count.cdf(low - 1) >= 0.95


@pytest.mark.parametrize("quasi", [False, True])
def test_the_interval_encloses_the_quantile(quasi: bool) -> None:
    """Of 200 seeds about 95 % enclose the true quantile, and the standard error is right."""
    made = varied(inputs="x = 0 V ± 1 V as normal k=1", criteria="R1: x <= 0 V")
    job, true = made.job(share="0.9"), stats.norm.ppf(0.1)
    seeds = 100 if quasi else 200
    spreads = [
        sampled(made.compiled.tape, [job], Setting(800, seed, quasi))[0].spreads[0]
        for seed in range(seeds)
    ]
    inside = sum(
        each.interval.low <= true <= each.interval.high
        for each in spreads
        if each.interval.low is not None and each.interval.high is not None
    )
    assert inside >= 0.9 * seeds
    errors = [each.standard_error or 0.0 for each in spreads]
    values = [each.quantile or 0.0 for each in spreads]
    assert np.mean(errors) == pytest.approx(np.std(values), rel=1.0 if quasi else 0.25)


def test_few_draws_say_so() -> None:
    """Too few draws for a bound of the quantile leave it open, and never seem certain."""
    made = varied(inputs="x = 0 V ± 1 V", criteria="R1: x <= 2 V")
    (found,) = made.sampled("0.99", draws=5)
    (spread,) = found.spreads
    assert spread.interval.low is None
    assert spread.standard_error is None
    assert found.lower == pytest.approx(0.05 ** (1 / 5))
    assert found.upper == 1.0


def test_one_draw() -> None:
    """One draw is judged without a crash; nothing is claimed from it."""
    made = varied(inputs="x = 0 V ± 1 V", criteria="R1: x <= 2 V")
    for quasi in (False, True):
        (found,) = made.sampled("0.99", draws=1, quasi=quasi)
        assert found.draws == (16 if quasi else 1)
        assert found.lower <= 0.05 ** (1 / found.draws) + 1e-12


def test_quasi_random_draws_are_nearer_and_no_less_careful() -> None:
    """Scramblings agree with each other far better; the bounds stay those of so many draws."""
    made = varied(inputs=DIVIDER, criteria="R1: V*R_2/(R_1 + R_2) <= 5.05 V")
    (plain,), (quasi,) = (made.sampled("0.9", draws=16_384, quasi=each) for each in (False, True))
    assert quasi.draws == 16_384
    first, second = plain.spreads[0].standard_error, quasi.spreads[0].standard_error
    assert first is not None
    assert second is not None
    assert 0 < second < first / 2
    assert quasi.lower <= share_bounds(quasi.met, quasi.draws, 0.95)[0]
    mean = quasi.spreads[0].mean
    assert mean == pytest.approx(0.05, abs=1e-6)


def test_quasi_random_like_parts() -> None:
    """What like parts share is quasi-random, what is their own random: the spread is right."""
    made = varied(
        inputs="x = 0 V ± 1 V each of 4 shared 60 %\ny = 0 V ± 1 V as normal k=2 each of 4",
        criteria="R1: x + y <= 9 V",
    )
    (spread,) = made.sampled(draws=30_000, quasi=True)[0].spreads
    assert spread.first_order == pytest.approx(sqrt((0.36 + 0.04) / 3 + 1 / 16))
    assert spread.deviation == pytest.approx(spread.first_order, rel=0.01)


def test_no_derivative_at_the_base() -> None:
    """Where first order has no number it disagrees with any."""
    made = varied(inputs="x = 0 .. 0 .. 1", criteria="R1: sqrt(x) <= 2")
    (spread,) = made.sampled(draws=1000)[0].spreads
    assert (spread.first_order, spread.disagree) == (None, True)


def test_a_case_sees_the_same_draws() -> None:
    """The same part in another case: what the case does not move comes out the same."""
    made = varied(
        inputs="a = 1 V ± 1 %\nb = 1 V ± 1 %",
        cases="mode dim: b = 2 V ± 1 %",
        criteria="R1: a <= 1.005 V in normal, dim\nR2: b <= 1.005 V in normal\n"
        "R3: b <= 2.010 V in dim",
    )
    jobs = [made.job(0), made.job(0, case="dim"), made.job(1), made.job(2, case="dim")]
    found = [each.met for each in sampled(made.compiled.tape, jobs, Setting(10_000, 1))]
    assert found[0] == found[1]
    assert found[2] == found[3]
    assert found[0] != found[2]


@pytest.mark.parametrize("path", [CLOSED, DEMO], ids=lambda path: path.stem)
def test_no_draw_and_no_root_sum_square_is_beyond_the_extremes(path: Path) -> None:
    """In both designs the worst of many draws, and the combined limits, are within the extremes."""
    made = varied_text(path.read_text(encoding="utf-8"))
    jobs = [made.job(number, "0.9999999") for number in range(len(made.compiled.limits))]
    results = sampled(made.compiled.tape, jobs, Setting(20_000, 1))
    seen = 0
    for number, found in enumerate(results):
        assert found.lost == 0
        for which, spread in enumerate(found.spreads):
            combined = made.combined(number, which)
            _, worst = made.governing(made.sides(number)[which])
            assert spread.quantile is not None
            room = 1e-9 * max(abs(combined.base), abs(worst))
            assert worst - room <= spread.quantile <= combined.base + room
            assert worst <= combined.requirement <= combined.base
            seen += combined.requirement < combined.base
    assert seen >= 7


def test_memory_does_not_grow_with_the_draws() -> None:
    """Only the tail beyond the quantile is kept: some thousand numbers of a million."""
    made = varied(inputs=DIVIDER, criteria="R1: V*R_2/(R_1 + R_2) <= 5.05 V")
    job = made.job(share="0.997")
    peaks = []
    for draws in (20_000, 400_000):
        tracemalloc.start()
        sampled(made.compiled.tape, [job], Setting(draws, 1))
        peaks.append(tracemalloc.get_traced_memory()[1])
        tracemalloc.stop()
    assert peaks[1] < peaks[0] + 400_000
