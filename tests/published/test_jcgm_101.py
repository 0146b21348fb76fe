"""JCGM 101:2008, clause 9: sums, mass calibration, comparison loss; values from practice.md 3.2.

Figures as collected there: 9.2 and 9.4 from secondary text, 9.3 from memory; closed forms where
they exist are our own and exact. Each quantity is a criterion with a limit of zero, so that the
requirement is the quantity with its sign changed.
"""

from math import log, sqrt

import pytest

from calcdoc.analysis.counting import Spread
from calcdoc.analysis.root_sum_square import Combined, Doubt
from tests.helpers.random_parts import Varied, varied

DRAWS = 1_000_000


def quantity(formula: str, inputs: str) -> Varied:
    """A quantity as a criterion: formula <= 0."""
    return varied(inputs=inputs, criteria=f"R1: {formula} <= 0")


def end(made: Varied, share: str) -> tuple[float, Spread]:
    """The value that a share of the draws stays below, and how the requirement is spread."""
    (found,) = made.sampled(share, draws=DRAWS, seed=101)
    (spread,) = found.spreads
    assert spread.quantile is not None
    return -spread.quantile, spread


def four(shape: str, *deviations: float) -> Varied:
    """The sum of four quantities around zero."""
    limit = {"normal": 1.0, "rectangular": sqrt(3)}[shape]
    word = " as normal k=1" if shape == "normal" else " as rectangular"
    lines = [f"x_{n} = 0 ± {each * limit!r}{word}" for n, each in enumerate(deviations)]
    return quantity("x_0 + x_1 + x_2 + x_3", "\n".join(lines))


def test_four_normal() -> None:
    """9.2.2: u = 2, the 95 % interval ends at ± 3.92."""
    found, spread = end(four("normal", 1, 1, 1, 1), "0.975")
    assert found == pytest.approx(3.9199, abs=5 * (spread.standard_error or 0))
    assert spread.deviation == pytest.approx(2, rel=0.002)
    assert spread.first_order == pytest.approx(2, rel=1e-12)
    assert not spread.disagree


def test_four_rectangular() -> None:
    """9.2.3: the 95 % interval ends at ± 3.88; exactly √3(4 − 2·0.6^¼)."""
    exact = sqrt(3) * (4 - 2 * 0.6**0.25)
    assert exact == pytest.approx(3.879407, abs=1e-6)
    found, spread = end(four("rectangular", 1, 1, 1, 1), "0.975")
    assert 0 < (spread.standard_error or 0) < 0.006
    assert found == pytest.approx(exact, abs=4 * (spread.standard_error or 0))
    assert spread.deviation == pytest.approx(2, rel=0.002)


def test_interval_of_four_rectangular() -> None:
    """9.2.3: of 60 seeds about 95 % enclose the exact end in their confidence interval."""
    made, exact = four("rectangular", 1, 1, 1, 1), sqrt(3) * (4 - 2 * 0.6**0.25)
    inside = 0
    for seed in range(60):
        (spread,) = made.sampled("0.975", draws=20_000, seed=seed)[0].spreads
        low, high = spread.interval.low, spread.interval.high
        assert low is not None
        assert high is not None
        inside += low <= -exact <= high
    assert 52 <= inside <= 60


def test_one_dominates() -> None:
    """9.2.4: three of u = 1 and one of u = 10: u = 10.1, ± 17.0 (first order would say 19.9)."""
    found, spread = end(four("rectangular", 1, 1, 1, 10), "0.975")
    assert spread.deviation == pytest.approx(sqrt(103), rel=0.002)
    assert found == pytest.approx(17.0, abs=0.05)
    assert 1.96 * (spread.first_order or 0) == pytest.approx(19.89, abs=0.01)


def loss(centre: str) -> Varied:
    """δY = X1² + X2² with u = 0.005 each."""
    part = "± 0.005 as normal k=1"
    return quantity("x_1^2 + x_2^2", f"x_1 = {centre} {part}\nx_2 = 0 {part}")


@pytest.mark.parametrize("centre", [0.0, 0.010, 0.050])
def test_comparison_loss(centre: float) -> None:
    """9.4: mean x1² + 2u², variance 4u²x1² + 4u⁴; published u 50e-6, 112e-6, 502e-6."""
    u = 0.005
    _, spread = end(loss(f"{centre:.3f}"), "0.95")
    assert spread.mean is not None
    deviation = sqrt(4 * u**2 * centre**2 + 4 * u**4)
    assert -spread.mean == pytest.approx(centre**2 + 2 * u**2, rel=0.005)
    assert spread.deviation == pytest.approx(deviation, rel=0.01)
    published = {0.0: 50e-6, 0.010: 112e-6, 0.050: 502e-6}[centre]
    assert spread.deviation == pytest.approx(published, rel=0.01)
    assert spread.first_order == pytest.approx(2 * u * centre, abs=1e-15)
    assert spread.disagree == (centre < 0.05)


def test_upper_end_of_the_comparison_loss() -> None:
    """9.4 at zero: 95 % of the draws stay below −2u² ln 0.05 = 149.8e-6."""
    found, spread = end(loss("0.000"), "0.95")
    exact = -2 * 0.005**2 * log(0.05)
    assert exact == pytest.approx(149.8e-6, abs=0.05e-6)
    assert found == pytest.approx(exact, abs=4 * (spread.standard_error or 0))


@pytest.mark.parametrize(
    ("centre", "doubt"), [("0.000", Doubt.ZERO), ("0.010", Doubt.CURVED), ("0.050", None)]
)
@pytest.mark.parametrize("k", [1, 2])
def test_first_order_of_the_comparison_loss(centre: str, doubt: Doubt | None, k: int) -> None:
    """9.4: first order, zero at 0 and too little at 0.010, is flagged there, and not at 0.050."""
    part = f"± {0.005 * k} as normal k={k}"
    made = quantity("x_1^2 + x_2^2", f"x_1 = {centre} {part}\nx_2 = 0.000 {part}").combined()
    assert made.doubt is doubt
    assert made.spread == pytest.approx(2 * 0.005 * k * float(centre), abs=1e-15)


def mass() -> Varied:
    """δm = (m_R,c + δm_R,c)(1 + (ρ_a − ρ_a0)(1/ρ_W − 1/ρ_R)) − 100 g."""
    return varied(
        inputs="m_R = 100000.000 mg ± 0.050 mg as normal k=1\n"
        "δ_R = 1.234 mg ± 0.020 mg as normal k=1\n"
        "ρ_a = 1.10 .. 1.30 kg/m^3 as rectangular\n"
        "ρ_W = 7000 .. 9000 kg/m^3 as rectangular\n"
        "ρ_R = 7950 .. 8050 kg/m^3 as rectangular\n"
        "ρ_0 = 1.2 kg/m^3",
        criteria="R1: (m_R + δ_R)*(1 + (ρ_a - ρ_0)*(1/ρ_W - 1/ρ_R)) - 100000 mg <= 0 mg",
    )


def test_mass_calibration() -> None:
    """9.3: mean 1.2341, u 0.0754, width 0.299 (ends wander between seeds); first order 0.0539."""
    high, spread = end(mass(), "0.975")
    low, _ = end(mass(), "0.025")
    assert spread.mean is not None
    milligram = 1e-6
    assert -spread.mean / milligram == pytest.approx(1.2341, abs=0.0005)
    assert (spread.deviation or 0) / milligram == pytest.approx(0.0754, abs=0.0003)
    assert (high - low) / milligram == pytest.approx(0.299, abs=0.002)
    assert (spread.first_order or 0) / milligram == pytest.approx(0.0539, abs=0.00005)
    assert spread.disagree


def test_mass_calibration_to_first_order() -> None:
    """9.3: the slope to the air densities is zero where they stand, so first order is doubted."""
    made: Combined = mass().combined()
    assert made.doubt is Doubt.CURVED
    assert made.spread / 1e-6 == pytest.approx(sqrt(0.05**2 + 0.02**2), rel=1e-4)
