"""The benchmark itself; what it measures is read by people."""

import re
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

from tests.bench import bridge, sampling


@pytest.mark.slow
@pytest.mark.timeout(180)
def test_benchmark_prints_every_row() -> None:
    """On its small setting the benchmark runs through and prints a ratio and a limit per row."""
    command = [sys.executable, str(Path(__file__).with_name("run.py")), "--quick"]
    done = subprocess.run(command, check=True, capture_output=True, text=True)  # noqa: S603
    head, *rows = done.stdout.splitlines()
    assert head.split() == ["cost", "ms", "other", "ms", "ratio", "limit"]
    shape = re.compile(r"(.+\S) +[0-9.]+ +[0-9.]+ +([0-9.]+)   (none|<= [0-9.]+)")
    found = [shape.fullmatch(row) for row in rows]
    assert [match and match[1].split(" : ")[0] for match in found] == [
        "check of a closed-form design",
        "check of the demo",
        "PDF of a few lines",
        "10 x the lines",
        "10 x the lines",
        "10 x the lines, each on the last",
        "10 x the lines, each on the last",
        "10 x the lines, most to be searched",
        "10 x the lines, most to be searched",
        "extremes of 10 quantities",
        "sampling of closed-form design",
        "sampling of the demo, with a loop and a root",
        "memory of sampling in MB",
        "500 x steady state",
        "500 x steady state",
    ]
    assert [match and match[3] for match in found][:3] == ["<= 1.5", "<= 1.5", "<= 1.25"]
    assert all(match and float(match[2]) > 0 for match in found)


@pytest.mark.parametrize(("path", "by_hand"), [each[1:] for each in sampling.WAYS])
def test_what_is_compared_is_the_same(
    path: Path, by_hand: Callable[[int], tuple[float, float]]
) -> None:
    """By hand and by calcdoc the same quantile comes out, to its standard error."""
    (spread,) = sampling.sample(*sampling.ready(path), 200_000).spreads
    assert spread.quantile is not None
    assert spread.standard_error is not None
    _, quantile = by_hand(200_000)
    assert 0 < spread.standard_error < 0.1
    assert abs(quantile - spread.quantile) < 6 * spread.standard_error


@pytest.mark.parametrize("way", [bridge.DEFAULT, bridge.FASTEST], ids=str)
def test_loop_over_scipy_is_within_a_permille(way: bridge.Way) -> None:
    """What the steady state is timed against finds it to 0.1 %, harmonics of the fundamental."""
    few = bridge.points(10_000)[:8]
    done = bridge.solved(bridge.columns(few))
    for at, (mean, rms, orders) in enumerate(bridge.by_scipy(few, way)):
        assert mean == pytest.approx(done.V_mean[at], rel=1e-3)
        assert rms == pytest.approx(done.I_s_rms[at], rel=1e-3)
        assert orders == pytest.approx(done.I_h[:, at], rel=0, abs=1e-3 * done.I_h[0, at])
