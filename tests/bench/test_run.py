"""The benchmark itself; what it measures is read by people."""

import re
import subprocess
import sys
from pathlib import Path

import pytest


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
    ]
    assert [match and match[3] for match in found][:3] == ["<= 1.5", "<= 1.5", "<= 1.25"]
    assert all(match and float(match[2]) > 0 for match in found)
