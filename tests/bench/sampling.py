"""Sampling against NumPy by hand: junction temperature of the regulator, one criterion, R3.

By hand means whole arrays, the formulas of the design one after the other, conditions where they
govern. The loop of the board temperature is gone round until it stands still, the root is found
by the secant rule from two points near it.
"""

import re
import sys
from pathlib import Path
from typing import Final

import numpy as np
from numpy.typing import NDArray

from calcdoc.analysis.sampling import Job, Sampled, Setting, sampled
from calcdoc.analysis.tape import Tape
from tests.bench.designs import CLOSED, DEMO
from tests.helpers.random_parts import varied_text

SHARE: Final = "0.997"
R3: Final = 2
LIMIT: Final = 125.0 + 273.15 - 5.0

Array = NDArray[np.float64]


def ready(path: Path) -> tuple[Tape, Job]:
    """A design compiled, with its governing point found."""
    design = varied_text(path.read_text(encoding="utf-8"))
    return design.compiled.tape, design.job(R3, SHARE)


def sample(tape: Tape, job: Job, draws: int) -> Sampled:
    """Sample R3: share that meets it, quantile, mean and deviation of what is left to the limit."""
    (found,) = sampled(tape, [job], Setting(draws, seed=1))
    return found


def by_hand_closed(draws: int) -> tuple[float, float]:
    """The same for the closed form: hot, highest line, lowest frequency's effect on the ripple."""
    rng = np.random.default_rng(1)
    f_line, t_a, v_line = 50.5, 45.0 + 273.15, 253.0
    v_d = rng.uniform(0.8, 1.0, draws)
    c_res = rng.uniform(0.8 * 4.7e-6, 1.2 * 4.7e-6, draws)
    v_led = rng.uniform(0.97 * 18.5, 1.03 * 18.5, draws)
    k_t = rng.uniform(-14.4e-3, -9.6e-3, draws)
    v_ref = rng.uniform(0.98 * 0.6, 1.02 * 0.6, draws)
    r_set = rng.uniform(0.99 * 41.2, 1.01 * 41.2, draws)
    warmer = rng.uniform(30.0, 50.0, draws)
    r_th = rng.uniform(0.85 * 30.0, 1.15 * 30.0, draws)
    v_pk = np.sqrt(2) * v_line - 2 * v_d
    i_reg = v_ref / r_set
    t_half = 1 / (2 * f_line)
    ripple = i_reg * t_half / c_res
    v_mean = v_pk - ripple / 2
    t_led = t_a + warmer
    v_string = 12 * (v_led + k_t * (t_led - 298.15))
    p_reg = (v_mean - v_string) * i_reg
    return _counted(LIMIT - (t_a + r_th * p_reg))


def by_hand_demo(draws: int) -> tuple[float, float]:
    """The same for the demo, with a loop, a root and twelve LEDs that vary on their own."""
    rng = np.random.default_rng(1)
    f_line, t_a, v_line = 50.5, 45.0 + 273.15, 253.0
    v_d = rng.uniform(0.8, 1.0, draws)
    c_res = rng.uniform(0.8 * 4.7e-6, 1.2 * 4.7e-6, draws)
    own = rng.uniform(0.97 * 18.5, 1.03 * 18.5, (draws, 12)).mean(axis=1)
    v_led = 0.6 * rng.uniform(0.97 * 18.5, 1.03 * 18.5, draws) + 0.4 * own
    k_t = rng.uniform(-14.4e-3, -9.6e-3, draws)
    v_ref = rng.uniform(0.98 * 0.6, 1.02 * 0.6, draws)
    r_set = rng.uniform(0.99 * 41.2, 1.01 * 41.2, draws)
    r_b = rng.uniform(0.85 * 10.0, 1.15 * 10.0, draws)
    r_th = rng.uniform(0.85 * 30.0, 1.15 * 30.0, draws)
    v_pk = np.sqrt(2) * v_line - 2 * v_d
    i_reg = v_ref / r_set
    t_half = 1 / (2 * f_line)
    omega = 2 * np.pi * f_line
    theta = np.arcsin(i_reg / (omega * c_res * v_pk))
    at_end = v_pk * np.cos(theta)

    def left(t: Array) -> Array:
        falling = at_end - i_reg / c_res * (t_half - t - theta / omega)
        between: Array = v_pk * np.cos(omega * t) - falling
        return between

    before, after = np.full(draws, 1.2e-3), np.full(draws, 1.4e-3)
    at_before, at_after = left(before), left(after)
    for _ in range(12):
        with np.errstate(all="ignore"):
            step = at_after * (after - before) / (at_after - at_before)
        step[~np.isfinite(step)] = 0.0
        before, at_before = after, at_after
        after = after - step
        if np.abs(step).max() < 1e-12:
            break
        at_after = left(after)
    ripple = v_pk * (1 - np.cos(omega * after))
    v_mean = v_pk - ripple / 2
    t_b = np.full(draws, 350.0)
    for _ in range(50):
        v_string = 12 * (v_led + k_t * (t_b - 298.15))
        new = t_a + r_b * (v_string * i_reg)
        done = np.abs(new - t_b).max() < 1e-9
        t_b = new
        if done:
            break
    v_string = 12 * (v_led + k_t * (t_b - 298.15))
    p_reg = (v_mean - v_string) * i_reg
    return _counted(LIMIT - (t_a + r_th * p_reg))


def _counted(requirement: Array) -> tuple[float, float]:
    """Share and quantile; mean and deviation belong to it."""
    requirement.mean(), requirement.std()
    met = float(np.count_nonzero(requirement >= 0)) / len(requirement)
    return met, float(np.quantile(requirement, 1 - float(SHARE)))


WAYS: Final = (
    ("closed-form design", CLOSED, by_hand_closed),
    ("the demo, with a loop and a root", DEMO, by_hand_demo),
)

if __name__ == "__main__":  # in a process of its own, to see its memory
    sample(*ready(Path(sys.argv[1])), int(sys.argv[2]))
    # The peak that `resource` knows begins with that of the process we were forked from.
    status = Path("/proc/self/status").read_text(encoding="ascii")
    print(re.findall(r"VmHWM:\s+([0-9]+) kB", status)[0])  # noqa: T201
