"""The symbolic engine in its own process: what it adds, its limits, and its isolation."""

import os
import subprocess
import sys
import time
from pathlib import Path

import pytest

from calcdoc.model.symbolic import Failure, Roots, solve
from tests.unit.model.symbolic.shown import printed, relations, roots

ROOT = Path(__file__).parents[4]
AMPLE = 25.0
"""Seconds that are enough on a busy machine too."""


def test_what_own_steps_cannot_do_comes_from_the_engine_with_digits_and_units() -> None:
    """A biquadratic relation keeps the author's quantities and decimal digits."""
    assert roots("x^4 + (1.50 V)*x^2 = b*c", "x", seconds=AMPLE) == [
        "x = -sqrt(-1.50 V/2 - sqrt((1.50 V)^2 + 4*b*c)/2)",
        "x = -sqrt(sqrt((1.50 V)^2 + 4*b*c)/2 - 1.50 V/2)",
        "x = sqrt(-1.50 V/2 - sqrt((1.50 V)^2 + 4*b*c)/2)",
        "x = sqrt(sqrt((1.50 V)^2 + 4*b*c)/2 - 1.50 V/2)",
    ]


def test_a_sum_of_roots_is_solved() -> None:
    """Radicals of sums are the engine's, and its answer is one of our formulas."""
    outcome = solve(relations("sqrt(x + a) + sqrt(x) = b"), ("x",), AMPLE)
    assert isinstance(outcome, Roots)
    (((found),),) = outcome.combinations
    assert found.how == "symbolic engine"
    assert [step.words for step in found.steps] == ["solve with the symbolic engine"]
    assert printed(found.tree) == "a^2/(4*b^2) + b^2/4 - a/2"


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("x*exp(x) = a", "the symbolic engine found no solution"),
        ("cos(x) = x", "the symbolic engine knows no way to solve it"),
        ("x^5 + x = a", "the symbolic engine found no solution"),
    ],
)
def test_what_no_formula_of_ours_can_say_is_not_solvable(text: str, message: str) -> None:
    """Roots in functions that we do not have are dropped, and then nothing is left."""
    assert roots(text, "x", seconds=AMPLE) == [f"not solvable: {message}"]


def test_a_relation_that_takes_too_long_runs_out_of_time() -> None:
    """After five seconds the engine is ended, and the whole call is over within six."""
    start = time.monotonic()
    outcome = solve(relations("x^1.37 + 2*x^0.43 = 7"), ("x",))
    assert time.monotonic() - start < 6
    assert isinstance(outcome, Failure)
    assert outcome.kind == "out of time"
    assert outcome.message == "the symbolic engine found no solution within 5 seconds"
    assert outcome.names == ("loop",)


def test_the_time_limit_can_be_shorter() -> None:
    """A caller may allow less time, which the message states."""
    assert roots("sin(x) + a*cos(2*x) + x = 0", "x", seconds=0.5) == [
        "out of time: the symbolic engine found no solution within 0.5 seconds"
    ]


def test_this_process_never_imports_sympy(tmp_path: Path) -> None:
    """Asking the engine leaves SymPy out of the parent, and works from any folder."""
    program = (
        "import sys\n"
        "from calcdoc.model.symbolic import solve\n"
        "from calcdoc.text.formula import parse_text\n"
        "found = solve([('r', parse_text('x^3 + x^3 + x^6'), parse_text('a'))], ['x'], 25)\n"
        "print(type(found).__name__, 'sympy' in sys.modules, 'numpy' in sys.modules)\n"
    )
    (tmp_path / "sympy.py").write_text("raise SystemExit('the wrong sympy')\n")
    done = subprocess.run(  # noqa: S603  (our own text)
        [sys.executable, "-c", program],
        cwd=tmp_path,
        env={**os.environ, "PYTHONPATH": str(ROOT)},
        capture_output=True,
        text=True,
        check=True,
    )
    assert done.stdout.split() == ["Roots", "False", "False"]
