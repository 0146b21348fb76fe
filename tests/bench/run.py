"""What calcdoc costs, as ratios: ``python tests/bench/run.py [--quick]``.

Each row is the median of several runs, taken in turn with what it is compared to, in processor
time. The limit stands beside it; nothing fails, for times depend on the machine.
"""

import argparse
import os
import resource
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from datetime import UTC, datetime
from functools import partial
from pathlib import Path
from statistics import median
from typing import Any

ROOT = Path(__file__).parents[2]
sys.path.insert(0, str(ROOT))

import weasyprint  # type: ignore[import-untyped]  # noqa: E402

from calcdoc import pipeline  # noqa: E402
from calcdoc.page.html import html  # noqa: E402
from calcdoc.page.pdf import pdf, sheet_html  # noqa: E402
from calcdoc.records.store import to_json  # noqa: E402
from tests.bench import bridge, sampling  # noqa: E402
from tests.bench.designs import CLOSED, DEMO, DROP, MEAN, repeated, toleranced  # noqa: E402

CHECK = ("-c", "from calcdoc.commands import main; main()", "check")
IMPORTS = "numpy, pint"
WITH_SOLVING = "sympy, pint, numpy"
ISSUED = datetime(2026, 11, 20, tzinfo=UTC)


@dataclass(frozen=True)
class Setting:
    """How much to run."""

    processes: int
    documents: int
    copies: int
    quantities: int
    draws: int
    points: int
    by_scipy: int


FULL = Setting(
    processes=15, documents=5, copies=4, quantities=60, draws=1_000_000, points=10_000, by_scipy=24
)
QUICK = Setting(
    processes=1, documents=1, copies=1, quantities=10, draws=10_000, points=500, by_scipy=2
)


@dataclass(frozen=True)
class Row:
    """One ratio with its limit."""

    what: str
    cost: float
    """Seconds of processor time, median."""
    against: float
    ratio: float
    """Median of the ratios of runs taken in turn."""
    limit: str

    def __str__(self) -> str:
        return (
            f"{self.what:<62} {self.cost * 1e3:9.1f} {self.against * 1e3:9.1f}"
            f" {self.ratio:7.2f}   {self.limit}"
        )


def paired(
    what: str, limit: str, runs: int, cost: Callable[[], float], against: Callable[[], float]
) -> Row:
    """Run two costs in turn, after one round that does not count."""
    cost(), against()
    pairs = [(cost(), against()) for _ in range(runs)]
    return Row(
        what,
        median(one for one, _ in pairs),
        median(other for _, other in pairs),
        median(one / other for one, other in pairs),
        limit,
    )


def process(arguments: tuple[str, ...], cache: str) -> Callable[[], float]:
    """The processor time of a Python process that finds its modules compiled."""
    environment = {**os.environ, "PYTHONPYCACHEPREFIX": cache, "PYTHONPATH": str(ROOT)}
    environment.pop("PYTHONDONTWRITEBYTECODE", None)

    def run() -> float:
        before = resource.getrusage(resource.RUSAGE_CHILDREN)
        subprocess.run(  # noqa: S603  (our own command)
            [sys.executable, *arguments], env=environment, check=True, stdout=subprocess.DEVNULL
        )
        after = resource.getrusage(resource.RUSAGE_CHILDREN)
        return after.ru_utime - before.ru_utime + after.ru_stime - before.ru_stime

    return run


def timed(work: Callable[[], object]) -> Callable[[], float]:
    """The processor time of work in this process."""

    def run() -> float:
        begin = time.process_time()
        work()
        return time.process_time() - begin

    return run


def times(factor: float, cost: Callable[[], float]) -> Callable[[], float]:
    """A cost scaled."""
    return lambda: factor * cost()


def design(text: str, folder: Path) -> pipeline.Design:
    """Read a generated text; it must be without mistakes."""
    path = folder / "bench.md"
    path.write_text(text, encoding="utf-8")
    read = pipeline.read(path)
    assert read.ok, pipeline.evaluate(read).problems()[:2000]
    return read


def record_data(read: pipeline.Design) -> tuple[Any, bytes]:
    """Record and JSON of a design."""
    made = pipeline.record(pipeline.evaluate(read))
    return made, to_json(made)


def rows(setting: Setting) -> Iterator[Row]:
    """Every row, as it is measured."""
    with tempfile.TemporaryDirectory() as name:
        yield check_row(setting, name, "check of a closed-form design", CLOSED, IMPORTS)
        yield check_row(setting, name, "check of the demo", DEMO, WITH_SOLVING)
        yield pdf_row(setting, Path(name))
        yield from line_rows(setting, Path(name))
        yield extremes_row(setting, Path(name))
    yield from sampling_rows(setting)
    yield memory_row(setting)
    yield from bridge_rows(setting)


def check_row(setting: Setting, cache: str, what: str, path: Path, imports: str) -> Row:
    """A check of a design against the imports it cannot do without."""
    return paired(
        f"{what} : import {imports}",
        "<= 1.5",
        setting.processes,
        process((*CHECK, str(path)), cache),
        process(("-c", f"import {imports}"), cache),
    )


def pdf_row(setting: Setting, folder: Path) -> Row:
    """A PDF against the layout engine alone on the same HTML."""
    quick = setting is QUICK
    read = design(toleranced(setting.quantities), folder) if quick else pipeline.read(DEMO)
    made, data = record_data(read)
    page = sheet_html(made, data, ISSUED)
    return paired(
        f"PDF of {'a few lines' if quick else 'the demo'} : WeasyPrint alone on the same HTML",
        "<= 1.25",
        setting.documents,
        timed(lambda: pdf(made, read.data, data, issued=ISSUED)),
        timed(lambda: weasyprint.HTML(string=page).write_pdf(pdf_variant="pdf/a-3a")),
    )


def line_rows(setting: Setting, folder: Path) -> Iterator[Row]:
    """Ten times the lines against the lines, evaluation and HTML."""
    for name, chain, limit in (
        ("10 x the lines", "", "<= 11"),
        ("10 x the lines, each on the last", DROP, "<= 11"),
        ("10 x the lines, most to be searched", MEAN, "none"),
    ):
        few = design(repeated(setting.copies, chain), folder)
        many = design(repeated(10 * setting.copies, chain), folder)
        yield paired(
            f"{name} : the lines, evaluation",
            limit,
            setting.documents,
            timed(partial(pipeline.evaluate, many)),
            timed(partial(pipeline.evaluate, few)),
        )
        more, most = record_data(few), record_data(many)
        yield paired(
            f"{name} : the lines, HTML",
            "<= 11",
            setting.documents,
            timed(partial(html, *most)),
            timed(partial(html, *more)),
        )


def extremes_row(setting: Setting, folder: Path) -> Row:
    """Extremes of a design where many need a search, against reading it."""
    text = toleranced(setting.quantities)
    read = design(text, folder)
    return paired(
        f"extremes of {setting.quantities} quantities : reading them",
        "none",
        setting.documents,
        timed(lambda: pipeline.evaluate(read)),
        timed(lambda: design(text, folder)),
    )


def sampling_rows(setting: Setting) -> Iterator[Row]:
    """A criterion by sampling against NumPy by hand, drawing included."""
    for name, path, by_hand in sampling.WAYS:
        made = sampling.ready(path)
        yield paired(
            f"sampling of {name} : NumPy by hand",
            "<= 1.3",
            setting.documents,
            timed(partial(sampling.sample, *made, setting.draws)),
            timed(partial(by_hand, setting.draws)),
        )


def bridge_rows(setting: Setting) -> Iterator[Row]:
    """Steady states at once, 500 times their cost, against a loop over scipy's solver.

    The loop runs over some of the points, and its cost is scaled to all of them.
    """
    points = bridge.points(setting.points)
    columns, few = bridge.columns(points), points[: setting.by_scipy]
    at_once = timed(partial(bridge.solved, columns))
    for name, way, limit in (
        ("default method", bridge.DEFAULT, "<= 1.0"),
        ("cheapest method", bridge.FASTEST, "none"),
    ):
        loop = timed(partial(bridge.by_scipy, few, way))
        share = len(points) / len(few)
        yield paired(
            f"500 x steady state : loop over scipy, {name}",
            limit,
            setting.documents,
            times(500.0, at_once),
            times(share, loop),
        )


def memory_row(setting: Setting) -> Row:
    """The peak memory of a process that samples, in MB, against 400 MB."""
    command = [sys.executable, "-m", "tests.bench.sampling", str(CLOSED), str(setting.draws)]
    done = subprocess.run(command, check=True, capture_output=True, text=True, cwd=ROOT)  # noqa: S603
    peak = float(done.stdout) / 1024
    return Row("memory of sampling in MB : 400 MB", peak / 1e3, 0.4, peak / 400, "<= 1.0")


def main() -> None:
    """Print every row."""
    options = argparse.ArgumentParser(description=__doc__)
    options.add_argument("--quick", action="store_true", help="small and once, to see that it runs")
    setting = QUICK if options.parse_args().quick else FULL
    print(f"{'':<62} {'cost ms':>9} {'other ms':>9} {'ratio':>7}   limit")  # noqa: T201
    for row in rows(setting):
        print(row, flush=True)  # noqa: T201


if __name__ == "__main__":
    main()
