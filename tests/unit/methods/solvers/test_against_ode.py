"""The solver against a general solver of differential equations and against numpy's FFT."""

from typing import Final

import numpy as np
import pytest
from scipy.stats import qmc

from calcdoc.methods.solvers.bridge import bridge_steady_state
from tests.helpers import bridge_ode
from tests.helpers.bridge_ode import Point, Sampled

SHARE: Final = 1e-3
"""Within 0.1 %, the harmonics within 0.1 % of the fundamental."""
POINTS: Final = 64


def spread() -> list[Point]:
    """A Latin hypercube over line, capacitance, current, resistance and the string."""
    low = [100.0, 0.0, 5e-3, 0.0, 0.3, 0.4, 20.0, 1.0]
    high = [277.0, 100e-6, 350e-3, 200.0, 1.2, 1.3, 400.0, 12.0]
    drawn = qmc.scale(qmc.LatinHypercube(len(low), rng=20261201).random(POINTS), low, high)
    return [
        Point(V, f, R, V_D, C, I_set, knee * V, slope, drop)
        for f, (V, C, I_set, R, V_D, knee, slope, drop) in zip(
            np.resize([50.0, 60.0], POINTS), drawn.tolist(), strict=True
        )
    ]


def agree(point: Point, sampled: Sampled) -> None:
    """Every result of the solver against the sums over the samples."""
    done = bridge_steady_state(**point.given)
    expected = bridge_ode.sums(point, sampled)
    floor = {
        "I_string_min": SHARE * point.I_set,
        "I_string_max": SHARE * point.I_set,
        "flicker_index": SHARE,
        "I_C_rms": SHARE * expected["I_s_rms"],
    }
    for name, value in expected.items():
        found = float(getattr(done, name)[0])
        close = pytest.approx(value, rel=SHARE, abs=floor.get(name, 0.0))
        assert found == close, f"{name} at {point}"
    orders = bridge_ode.harmonics(sampled)
    assert done.I_h[:, 0] == pytest.approx(orders, rel=0, abs=SHARE * orders[0])
    low, high = expected["I_string_min"], expected["I_string_max"]
    assert done.percent_flicker[0] == pytest.approx(100 * (high - low) / (high + low), abs=0.1)


@pytest.mark.timeout(120)
@pytest.mark.parametrize("part", range(8))
def test_latin_hypercube(part: int) -> None:
    """At 64 points with a series resistance every result is that of scipy's solver to 0.1 %."""
    points = spread()[part::8]
    assert len(points) == 8
    for point in points:
        agree(point, bridge_ode.reference(point))


def test_hypercube_covers_the_cases() -> None:
    """The 64 points hold strings that are regulated always, sometimes and never."""
    points = spread()
    columns = {name: [point.given[name] for point in points] for name in points[0].given}
    done = bridge_steady_state(**columns)
    always = done.percent_flicker == 0.0
    assert np.count_nonzero(always) >= 8
    assert np.count_nonzero(done.reaches & ~always) >= 8
    assert np.count_nonzero(~done.reaches) >= 8


LAMP: Final = Point(230.0, 50.0, 10.0, 0.8, 4.7e-6, 0.04, 230.0, 400.0, 6.0)


def changed(**by: float) -> Point:
    """The lamp with some quantities changed."""
    return Point(**{**LAMP.given, **by})


@pytest.mark.parametrize(
    "point",
    [
        changed(C=1e-6),
        changed(C=1e-6, R_s=0.0),
        changed(C=0.0),
        changed(C=0.0, R_s=0.0),
        changed(C=0.0, R_s=500.0, I_set=0.35),
        changed(R_s=0.0),
        changed(R_s=0.0, C=0.1e-6),
        changed(R_s=0.0, V_knee=280.0, I_set=0.35),
        changed(C=47e-9),
        changed(R_s=2000.0, C=1e-6),
        changed(R_s=0.5, C=22e-6),
    ],
    ids=str,
)
def test_hard_cases(point: Point) -> None:
    """Lost regulation, no series resistance and no reservoir agree with their references too."""
    agree(point, bridge_ode.reference(point))
