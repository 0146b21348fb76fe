"""Waveforms at given phases, against the numbers of the steady state."""

import numpy as np
import pytest

from calcdoc.methods.solvers.bridge import bridge_steady_state
from calcdoc.methods.solvers.given import Reason
from calcdoc.methods.solvers.waveform import bridge_waveform

CIRCUITS = [
    (230.0, 50.0, 10.0, 0.8, 1e-6, 0.04, 250.0, 300.0, 5.0),
    (230.0, 50.0, 10.0, 0.8, 10e-6, 0.04, 230.0, 300.0, 5.0),
    (230.0, 50.0, 0.0, 0.8, 1e-6, 0.04, 250.0, 300.0, 5.0),
    (230.0, 50.0, 10.0, 0.8, 0.0, 0.04, 250.0, 300.0, 5.0),
    (230.0, 50.0, 0.0, 0.8, 0.0, 0.04, 250.0, 300.0, 5.0),
    (120.0, 60.0, 50.0, 0.8, 47e-6, 0.35, 100.0, 50.0, 5.0),
]


@pytest.mark.parametrize("circuit", CIRCUITS, ids=str)
def test_waveform_is_what_the_numbers_sum_up(circuit: tuple[float, ...]) -> None:
    """Extremes, means, rms, harmonics and flicker index of fine samples are the exact ones."""
    done = bridge_steady_state(*circuit)
    phases = (np.arange(200_000) + 0.5) * (2 * np.pi / 200_000)
    wave = bridge_waveform(*circuit, phases=phases)
    assert wave.reason == Reason.NONE
    assert wave.V_C.max() == pytest.approx(done.V_max[0], rel=1e-6)
    assert wave.V_C.min() == pytest.approx(done.V_min[0], rel=1e-6, abs=1e-2)
    assert wave.V_C.mean() == pytest.approx(done.V_mean[0], rel=1e-7)
    assert np.abs(wave.I_s).max() == pytest.approx(done.I_s_peak[0], rel=1e-3)
    assert np.sqrt(np.mean(wave.I_s**2)) == pytest.approx(done.I_s_rms[0], rel=1e-4)
    assert wave.I_string.mean() == pytest.approx(done.I_string_mean[0], rel=1e-6)
    mean = wave.I_string.mean()
    index = np.maximum(wave.I_string - mean, 0.0).mean() / mean
    assert index == pytest.approx(done.flicker_index[0], abs=1e-6)
    orders = np.abs(np.fft.rfft(wave.I_s))[:40] * (2**0.5 / len(phases))
    assert orders[1::2] == pytest.approx(done.I_h[:, 0], abs=1e-4 * done.I_h[0, 0])
    assert orders[::2] == pytest.approx(np.zeros(20), abs=1e-12)


@pytest.mark.parametrize("circuit", CIRCUITS, ids=str)
def test_two_cycles_repeat(circuit: tuple[float, ...]) -> None:
    """Without phases two cycles come, whose second is the first and whose halves are turned."""
    wave = bridge_waveform(*circuit)
    assert wave.phase[[0, -1]] == pytest.approx([0.0, 4 * np.pi])
    assert wave.V_C[:360] == pytest.approx(wave.V_C[720:1080], rel=1e-6, abs=1e-6)
    assert wave.I_s[1:359] == pytest.approx(-wave.I_s[361:719], rel=1e-6, abs=1e-6)
    assert wave.I_string[1:359] == pytest.approx(wave.I_string[361:719], rel=1e-6, abs=1e-6)


def test_waveform_follows_the_circuit() -> None:
    """While line current flows, it is the voltage across R_s over R_s; reversed phases are fine."""
    wave = bridge_waveform(*CIRCUITS[0], phases=np.linspace(np.pi, -np.pi, 1001))
    offered = 230.0 * 2**0.5 * np.abs(np.sin(wave.phase)) - 1.6
    flows = np.abs(wave.I_s) > 1e-9
    assert flows.sum() > 100
    assert np.abs(wave.I_s[flows]) == pytest.approx((offered - wave.V_C)[flows] / 10.0, abs=1e-9)
    assert (offered <= wave.V_C + 1e-9)[~flows].all()


def test_idle_and_refused() -> None:
    """A string that never conducts has a flat voltage; a quantity out of range has none."""
    idle = bridge_waveform(230.0, 50.0, 10.0, 0.8, 1e-6, 0.04, 400.0, 300.0, 5.0)
    assert np.abs(idle.V_C - (230.0 * 2**0.5 - 1.6)).max() < 1e-9
    assert not idle.I_s.any()
    refused = bridge_waveform(230.0, 50.0, -1.0, 0.8, 1e-6, 0.04, 400.0, 300.0, 5.0)
    assert refused.reason == Reason.OUT_OF_RANGE
    assert np.isnan(refused.V_C).all()


def test_one_point_only() -> None:
    """Several operating points, and phases that are not numbers, are refused."""
    with pytest.raises(ValueError, match="a waveform is of one operating point, found 2"):
        bridge_waveform(np.array([1.0, 2.0]), *CIRCUITS[0][1:])  # type: ignore[arg-type]
    with pytest.raises(ValueError, match="phases are finite numbers along one axis"):
        bridge_waveform(*CIRCUITS[0], phases=[np.nan])
