"""The steady state of a bridge with reservoir, against a loop over scipy's solver.

The loop does what an engineer would write: follow half periods until the voltage at the zero
crossing repeats itself, then once more with samples for sums and FFT. Tolerances and samples
are the loosest found that stay within 0.1 % of the exact pieces; a test checks that.
"""

import math
from dataclasses import dataclass
from typing import Final, Literal

import numpy as np
from scipy.integrate import solve_ivp
from scipy.stats import qmc

from calcdoc.methods.solvers.bridge import BridgeSteadyState, bridge_steady_state
from tests.helpers.bridge_ode import FloatArray, Point

LOW: Final = (100.0, 0.5e-6, 5e-3, 2.0, 0.3, 0.4, 20.0, 1.0)
HIGH: Final = (277.0, 100e-6, 350e-3, 200.0, 1.2, 1.3, 400.0, 12.0)
"""Line, capacitance, current, resistance, diode, knee over line, slope, dropout."""
SAMPLES: Final = 1024
MOST_HALF_PERIODS: Final = 500
SETTLED: Final = 2e-5


@dataclass(frozen=True)
class Way:
    """How scipy is asked."""

    method: Literal["RK45", "LSODA"]
    rtol: float
    least_steps: int
    """In half a period, so that no conduction is stepped over."""


DEFAULT: Final = Way("RK45", 1e-7, 10)
FASTEST: Final = Way("LSODA", 1e-6, 20)
"""Scipy's default method, and the one that costs least here, at tolerances that give 0.1 %."""


def points(count: int) -> list[Point]:
    """A Latin hypercube of operating points."""
    drawn = qmc.scale(qmc.LatinHypercube(len(LOW), rng=7).random(count), LOW, HIGH)
    return [
        Point(V, 50.0, R, V_D, C, I_set, knee * V, slope, drop)
        for V, C, I_set, R, V_D, knee, slope, drop in drawn.tolist()
    ]


def columns(of: list[Point]) -> dict[str, FloatArray]:
    """Operating points as columns."""
    return {name: np.array([point.given[name] for point in of]) for name in of[0].given}


def solved(given: dict[str, FloatArray]) -> BridgeSteadyState:
    """All points at once."""
    return bridge_steady_state(**given)


def by_scipy(of: list[Point], way: Way) -> list[tuple[float, float, FloatArray]]:
    """One point after the other: mean voltage, rms of the line current, harmonics."""
    return [_one(point, way) for point in of]


def _one(point: Point, way: Way) -> tuple[float, float, FloatArray]:
    w_C, amplitude = 2 * math.pi * point.f_s * point.C, 2**0.5 * point.V_s
    begins, offset = point.V_knee + point.V_drop, 2 * point.V_D

    def slope(phase: float, v: FloatArray) -> list[float]:
        line = (amplitude * abs(math.sin(phase)) - offset - v[0]) / point.R_s
        string = min(max((v[0] - begins) / point.R_string, 0.0), point.I_set)
        return [(max(line, 0.0) - string) / w_C]

    def follow(begin: float, phases: FloatArray | None = None) -> FloatArray:
        path: FloatArray = solve_ivp(
            slope,
            (0.0, math.pi),
            [begin],
            method=way.method,
            rtol=way.rtol,
            atol=way.rtol,
            max_step=math.pi / way.least_steps,
            t_eval=phases,
        ).y[0]
        return path

    begin = amplitude - offset
    for _ in range(MOST_HALF_PERIODS):
        before, begin = begin, float(follow(begin)[-1])
        if abs(begin - before) <= SETTLED * begin:
            break
    phase = (np.arange(SAMPLES, dtype=float) + 0.5) * (math.pi / SAMPLES)
    voltage = follow(begin, phase)
    line = np.maximum(amplitude * np.sin(phase) - offset - voltage, 0.0) / point.R_s
    whole = np.fft.rfft(np.concatenate([line, -line]))[1:40:2]
    orders = np.abs(whole) * (2**0.5 / (2 * SAMPLES))
    return float(voltage.mean()), float(np.sqrt(np.mean(line**2))), orders
