"""The bridge with its reservoir, told to a general solver of differential equations.

Nothing here is shared with the solver under test: Kirchhoff's laws as written, integrated by
``scipy.integrate.solve_ivp``, sums over a fine grid, and numpy's FFT.
"""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

FloatArray = NDArray[np.float64]

GRID: Final = 16384
"""Phases in half a period; the FFT sees twice as many."""


@dataclass(frozen=True)
class Point:
    """One operating point, in the order of the solver's arguments."""

    V_s: float
    f_s: float
    R_s: float
    V_D: float
    C: float
    I_set: float
    V_knee: float
    R_string: float
    V_drop: float

    @property
    def given(self) -> dict[str, float]:
        """The arguments by name."""
        return dict(vars(self))

    def offered(self, phase: float) -> float:
        """Rectified voltage behind two diodes."""
        return float(self.V_s * 2**0.5 * abs(np.sin(phase)) - 2 * self.V_D)

    def string(self, v: float) -> float:
        """String current at a reservoir voltage."""
        return min(max((v - self.V_knee - self.V_drop) / self.R_string, 0.0), self.I_set)


@dataclass(frozen=True)
class Sampled:
    """One steady half period, sampled evenly at the middle of GRID intervals."""

    phase: FloatArray
    voltage: FloatArray
    line: FloatArray
    string: FloatArray


def reference(point: Point) -> Sampled:
    """The steady half period by the way that suits the point."""
    if point.C == 0.0:
        return direct(point)
    return resistive(point) if point.R_s > 0.0 else ideal_source(point)


def resistive(point: Point, rtol: float = 1e-8) -> Sampled:
    """With a series resistance: the fixed point of the half period by bracketing."""
    w_C = 2 * np.pi * point.f_s * point.C

    def slope(phase: float, v: FloatArray) -> list[float]:
        line = max((point.offered(phase) - v[0]) / point.R_s, 0.0)
        return [(line - point.string(v[0])) / w_C]

    def follow(begin: float, phases: FloatArray | None = None) -> FloatArray:
        solved = solve_ivp(
            slope,
            (0.0, np.pi),
            [begin],
            method="LSODA",
            rtol=rtol,
            atol=1e-7,
            max_step=np.pi / 60,
            t_eval=phases,
        )
        assert solved.success
        path: FloatArray = solved.y[0]
        return path

    begin = settled(lambda v: float(follow(v)[-1]), point)
    phase = _phases()
    voltage = follow(begin, phase)
    line = [
        max((point.offered(at) - v) / point.R_s, 0.0) for at, v in zip(phase, voltage, strict=True)
    ]
    return _sampled(point, phase, voltage, np.array(line))


def ideal_source(point: Point) -> Sampled:
    """Without series resistance: the mains sets the voltage while its current is positive."""
    w_C = 2 * np.pi * point.f_s * point.C
    amplitude = point.V_s * 2**0.5

    def current(phase: float) -> float:
        return float(w_C * amplitude * np.cos(phase) + point.string(point.offered(phase)))

    end = float(brentq(current, np.pi / 2, np.pi - 1e-9, xtol=1e-13))

    def meets(phase: float, v: FloatArray) -> float:
        return float(v[0] - point.offered(phase) + 1e-9)

    meets.terminal = True  # type: ignore[attr-defined]
    meets.direction = -1  # type: ignore[attr-defined]
    fall = solve_ivp(
        lambda _, v: [-point.string(v[0]) / w_C],
        (end, 1.5 * np.pi),
        [point.offered(end)],
        rtol=1e-10,
        atol=1e-8,
        max_step=np.pi / 200,
        events=meets,
        dense_output=True,
    )
    assert fall.t_events is not None
    assert fall.sol is not None
    start = fall.t_events[0][-1] - np.pi
    phase = _phases()
    conducts = (phase >= start) & (phase <= end)
    waiting = np.where(phase < start, phase + np.pi, np.maximum(phase, end))
    offered = np.array([point.offered(at) for at in phase])
    voltage = np.where(conducts, offered, fall.sol(waiting)[0])
    line = np.where(conducts, [current(at) for at in phase], 0.0)
    return _sampled(point, phase, voltage, line)


def direct(point: Point) -> Sampled:
    """Without a reservoir: the node's voltage from its one equation, phase by phase."""
    phase = _phases()
    voltage, line = np.zeros(GRID), np.zeros(GRID)
    for at, angle in enumerate(phase):
        offered = point.offered(angle)
        if offered <= 0.0:
            continue
        drop = point.R_s

        def left(v: float, offered: float = offered, drop: float = drop) -> float:
            return offered - drop * point.string(v) - v

        voltage[at] = brentq(left, 0.0, offered + 1.0, xtol=1e-12)
        line[at] = point.string(voltage[at])
    return _sampled(point, phase, voltage, line)


def settled(half_period: Callable[[float], float], point: Point) -> float:
    """The voltage at the zero crossing that comes back half a period later."""
    low = point.V_knee + point.V_drop
    high = point.V_s * 2**0.5 - 2 * point.V_D
    return float(brentq(lambda v: half_period(v) - v, low - 1e-6, high + 1e-6, xtol=1e-6))


def _phases() -> FloatArray:
    made: FloatArray = (np.arange(GRID, dtype=float) + 0.5) * (np.pi / GRID)
    return made


def _sampled(point: Point, phase: FloatArray, voltage: FloatArray, line: FloatArray) -> Sampled:
    string = np.array([point.string(v) for v in voltage])
    return Sampled(phase, voltage, line, string)


def sums(point: Point, at: Sampled) -> dict[str, float]:
    """The solver's results from the samples, by the names of its fields."""
    capacitor = at.line - at.string if point.C else np.zeros(GRID)
    mains = point.V_s * 2**0.5 * np.sin(at.phase)
    rms, power = float(np.sqrt(np.mean(at.line**2))), float(np.mean(mains * at.line))
    orders = harmonics(at)
    mean = float(np.mean(at.string))
    string_power = np.mean((point.V_knee + point.R_string * at.string) * at.string)
    return {
        "V_max": float(at.voltage.max()),
        "V_min": float(at.voltage.min()),
        "V_mean": float(at.voltage.mean()),
        "I_s_rms": rms,
        "I_s_peak": float(at.line.max()),
        "I_D_mean": float(at.line.mean()) / 2,
        "I_C_rms": float(np.sqrt(np.mean(capacitor**2))),
        "P_in": power,
        "S_in": point.V_s * rms,
        "power_factor": power / (point.V_s * rms),
        "THD": float(np.sqrt(np.sum(orders[1:] ** 2)) / orders[0]),
        "I_string_mean": mean,
        "I_string_min": float(at.string.min()),
        "I_string_max": float(at.string.max()),
        "P_string": float(string_power),
        "P_reg": float(np.mean(at.voltage * at.string) - string_power),
        "flicker_index": float(np.mean(np.maximum(at.string - mean, 0.0)) / mean),
    }


def harmonics(at: Sampled) -> FloatArray:
    """Rms of the odd orders 1 to 39 of the line current, by numpy's FFT over a whole period."""
    whole = np.concatenate([at.line, -at.line])
    found: FloatArray = np.abs(np.fft.rfft(whole))[1:40:2] * (2**0.5 / len(whole))
    return found
