"""Laws of the steady state of bridge, reservoir, string and regulator."""

from collections.abc import Iterable
from typing import Final

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from calcdoc.methods.solvers.bridge import BridgeSteadyState, bridge_steady_state
from calcdoc.methods.solvers.given import Reason

pytestmark = pytest.mark.property

Circuit = dict[str, float]

CIRCUITS: Final = st.fixed_dictionaries(
    {
        "V_s": st.floats(20.0, 400.0),
        "f_s": st.floats(40.0, 400.0),
        "R_s": st.one_of(st.just(0.0), st.floats(1e-3, 1e3)),
        "V_D": st.floats(0.0, 1.5),
        "C": st.one_of(st.just(0.0), st.floats(1e-9, 1e-3)),
        "I_set": st.floats(1e-3, 1.0),
        "V_knee": st.floats(0.0, 500.0),
        "R_string": st.one_of(st.just(0.0), st.floats(0.1, 5e3)),
        "V_drop": st.floats(0.0, 20.0),
    }
)
POWERS: Final = ("P_in", "S_in", "P_string", "P_reg", "P_R", "P_D")
VOLTAGES: Final = ("V_max", "V_min", "V_mean", "ripple")
CURRENTS: Final = (
    "I_s_rms",
    "I_s_peak",
    "I_D_mean",
    "I_C_rms",
    "I_h",
    "I_string_mean",
    "I_string_min",
    "I_string_max",
)
SHARES: Final = ("power_factor", "THD", "displacement_factor", "flicker_index", "conduction_angle")


def solved(circuit: Circuit) -> BridgeSteadyState:
    """The one operating point."""
    return bridge_steady_state(**circuit)


def scaled(circuit: Circuit, **by: float) -> Circuit:
    """Some quantities times a factor."""
    return {name: value * by.get(name, 1.0) for name, value in circuit.items()}


def same(
    first: BridgeSteadyState, second: BridgeSteadyState, names: Iterable[str], factor: float
) -> None:
    """Results of the second are those of the first times a factor.

    Where a string has no slope its current is known to some 1e-9 of the set current: to the
    rounding of the voltage over the slope it is computed with.
    """
    floor = 1e-8 * max(1.0, factor)
    for name in names:
        one, other = getattr(first, name) * factor, getattr(second, name)
        size = np.nanmax(np.abs(one), initial=0.0)
        assert other == pytest.approx(one, rel=1e-6, abs=1e-6 * size + floor, nan_ok=True), name


@given(CIRCUITS)
def test_energy_and_charge_balance(circuit: Circuit) -> None:
    """What the source gives is used up, and the rectified current is the string's on average."""
    done = solved(circuit)
    assert done.reason[0] in {Reason.NONE, Reason.NO_CURRENT}
    used = done.P_string + done.P_reg + done.P_R + done.P_D
    assert done.P_in == pytest.approx(used, rel=1e-7, abs=1e-12)
    assert abs(done.balance[0]) < 1e-7
    assert 2 * done.I_D_mean == pytest.approx(done.I_string_mean, rel=1e-6, abs=1e-12)


@given(CIRCUITS)
def test_order_of_results(circuit: Circuit) -> None:
    """Extremes enclose means, rms exceeds mean, harmonics stay within the rms, shares within 1."""
    done = solved(circuit)
    slack = 1e-9 * circuit["V_s"]
    assert (done.V_min - slack <= done.V_mean).all()
    assert (done.V_mean <= done.V_max + slack).all()
    assert done.V_max[0] <= max(2**0.5 * circuit["V_s"] - 2 * circuit["V_D"], 0.0) + slack
    assert done.I_string_max[0] <= circuit["I_set"]
    assume(done.reason[0] == Reason.NONE)
    assert done.I_string_min[0] <= done.I_string_mean[0] * (1 + 1e-9)
    assert done.I_string_mean[0] <= done.I_string_max[0] * (1 + 1e-9)
    assert 2 * done.I_D_mean[0] <= done.I_s_rms[0] * (1 + 1e-9)
    assert done.I_s_rms[0] <= done.I_s_peak[0] * (1 + 1e-9)
    assert np.sqrt(np.sum(done.I_h**2)) <= done.I_s_rms[0] * (1 + 1e-9)
    assert 0.0 < done.power_factor[0] <= 1.0
    assert done.THD[0] <= done.THD_total[0] * (1 + 1e-6) + 1e-6
    assert 0.0 <= done.flicker_index[0] < 1.0
    assert 0.0 <= done.percent_flicker[0] <= 100.0
    fundamental = circuit["V_s"] * done.I_h[0, 0] * done.displacement_factor[0]
    assert done.P_in[0] == pytest.approx(fundamental, rel=1e-6)


@given(CIRCUITS, st.floats(0.01, 100.0))
def test_voltages_and_currents_scale(circuit: Circuit, k: float) -> None:
    """All voltages and the set current times k: voltages and currents times k, powers times k²."""
    one = solved(circuit)
    two = solved(scaled(circuit, V_s=k, V_D=k, V_knee=k, V_drop=k, I_set=k))
    same(one, two, VOLTAGES + CURRENTS, k)
    same(one, two, POWERS, k * k)
    same(one, two, SHARES, 1.0)


@given(CIRCUITS, st.floats(0.01, 100.0))
def test_impedances_scale(circuit: Circuit, k: float) -> None:
    """Resistances times k, capacitance and current over k: currents and powers over k."""
    one = solved(circuit)
    two = solved(scaled(circuit, R_s=k, R_string=k, C=1 / k, I_set=1 / k))
    same(one, two, VOLTAGES + SHARES, 1.0)
    same(one, two, CURRENTS + POWERS, 1 / k)


@given(CIRCUITS, st.floats(0.1, 10.0))
def test_frequency_and_capacitance(circuit: Circuit, k: float) -> None:
    """Only the product of frequency and capacitance matters."""
    one, two = solved(circuit), solved(scaled(circuit, f_s=k, C=1 / k))
    same(one, two, VOLTAGES + CURRENTS + POWERS + SHARES, 1.0)


@given(CIRCUITS, st.floats(1.0, 1.5))
def test_more_line_voltage(circuit: Circuit, k: float) -> None:
    """More line voltage raises valley, crest and string current, and never lowers them."""
    one, two = solved(circuit), solved(scaled(circuit, V_s=k))
    slack = 1e-9 * circuit["V_s"]
    assert two.V_min[0] >= one.V_min[0] - slack
    assert two.V_max[0] >= one.V_max[0] - slack
    assert two.I_string_mean[0] >= one.I_string_mean[0] - 1e-9


@given(CIRCUITS, st.floats(1.01, 1e3))
def test_ideal_ripple_below_the_simple_formula(circuit: Circuit, times: float) -> None:
    """A regulated string on an ideal source: ripple below I/(2·f·C), lossless but for diodes."""
    I_set, f_s, V_D = circuit["I_set"], circuit["f_s"], circuit["V_D"]
    C = times * I_set / (2 * f_s * (2**0.5 * circuit["V_s"] - 2 * V_D))
    none = {"R_s": 0.0, "V_knee": 0.0, "V_drop": 0.0, "R_string": 0.0}
    done = solved({**circuit, **none, "C": C})
    assert done.percent_flicker[0] == 0.0
    assert done.ripple[0] <= I_set / (2 * f_s * C) * (1 + 1e-9)
    assert done.I_C_rms[0] == pytest.approx((done.I_s_rms[0] ** 2 - I_set**2) ** 0.5, rel=1e-6)
    assert done.P_in[0] == pytest.approx((done.V_mean[0] + 2 * V_D) * I_set, rel=1e-6)
