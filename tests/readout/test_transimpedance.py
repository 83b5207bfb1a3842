"""The stage: margin, bandwidth, settling and noise against the circuit's own equations solved numerically."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from outcouple.readout.transimpedance import Transimpedance, compensation_for, compensation_intercept

CIRCUIT = {"resistance": 1e6, "gain_bandwidth": 10e6, "input_capacitance": 20e-12}


def loop_gain(stage: Transimpedance, f: np.ndarray) -> np.ndarray:
    """A beta from impedances: the divider of R || C_f against C_in, times GBW / (j f)."""
    s = 2j * np.pi * f
    feedback = stage.resistance / (1 + s * stage.resistance * stage.feedback_capacitance)
    inward = 1 / (s * stage.input_capacitance)
    return stage.gain_bandwidth / (1j * f) * inward / (inward + feedback)


@given(
    resistance=st.floats(4, 9).map(lambda x: 10**x),
    feedback=st.floats(-14, -11).map(lambda x: 10**x),
    gbw=st.floats(5.5, 9).map(lambda x: 10**x),
    inward=st.floats(-12, -9.5).map(lambda x: 10**x),
)
@settings(max_examples=60, deadline=None)
def test_phase_margin_and_response_from_impedances(
    resistance: float, feedback: float, gbw: float, inward: float
) -> None:
    stage = Transimpedance(resistance, feedback, gbw, inward)
    f = np.geomspace(gbw * 1e-9, gbw * 10, 20_001)
    loop = loop_gain(stage, f)
    cross = np.exp(np.interp(0.0, -np.log(np.abs(loop)), np.log(f)))
    margin = np.pi + np.angle(loop_gain(stage, np.array([cross]))[0])
    assert float(stage.phase_margin()) == pytest.approx(margin, abs=2e-4)
    # closed loop: Z_f A beta / (1 + A beta), over R
    s = 2j * np.pi * f
    closed = loop / (1 + loop) / (1 + s * resistance * feedback)
    np.testing.assert_allclose(stage.response(f), closed, rtol=1e-6, atol=1e-12)


@given(
    margin=st.floats(20, 85),
    resistance=st.floats(4, 9).map(lambda x: 10**x),
    inward=st.floats(-12, -9.5).map(lambda x: 10**x),
)
@settings(max_examples=40, deadline=None)
def test_compensation_gives_the_margin(margin: float, resistance: float, inward: float) -> None:
    circuit = {"resistance": resistance, "gain_bandwidth": 10e6, "input_capacitance": inward}
    capacitance = compensation_for(np.radians(margin), **circuit)
    stage = Transimpedance(feedback_capacitance=capacitance, **circuit)
    assert float(stage.phase_margin()) >= np.radians(margin) - 1e-9
    if capacitance > 0:
        assert np.degrees(float(stage.phase_margin())) == pytest.approx(margin, abs=1e-6)


def test_compensation_is_zero_where_none_is_needed() -> None:
    easy = {"resistance": 1e3, "gain_bandwidth": 1e6, "input_capacitance": 1e-12}
    assert float(compensation_for(np.radians(45), **easy)) == 0.0


def test_margin_at_the_intercept_lies_above_45_degrees() -> None:
    stage = Transimpedance(feedback_capacitance=compensation_intercept(**CIRCUIT), **CIRCUIT)
    assert 45 < np.degrees(float(stage.phase_margin())) < 66


@pytest.mark.parametrize("feedback", [0.1e-12, 0.3e-12, 0.6e-12, 1.12e-12, 5e-12])
@pytest.mark.parametrize("error", [1e-2, 1e-4])
def test_settling_covers_the_step_and_is_tight(feedback: float, error: float) -> None:
    stage = Transimpedance(feedback_capacitance=feedback, **CIRCUIT)
    p1, p2 = stage.poles()
    t = np.linspace(0, 3 * float(stage.settling_time(error)), 400_001)
    left = np.abs(np.real((p2 * np.exp(-p1 * t) - p1 * np.exp(-p2 * t)) / (p2 - p1)))
    last = t[np.nonzero(left > error)[0][-1]]
    assert last <= float(stage.settling_time(error)) * (1 + 1e-4)
    assert float(stage.settling_time(error)) < last + 0.6 / float(stage.natural_frequency)


def test_half_power_at_the_bandwidth() -> None:
    stage = Transimpedance(feedback_capacitance=0.6e-12, **CIRCUIT)
    assert abs(stage.response(stage.bandwidth())) ** 2 == pytest.approx(0.5, rel=1e-12)


def test_output_noise_density_meets_noise_gain() -> None:
    """Far below the loop's own pole, amplifier noise at the output is e_n times the noise gain."""
    stage = Transimpedance(1e6, 0.6e-12, 1e12, 20e-12, voltage_noise=15e-9)
    f = np.array([1e2, 1e4, 1e5, 1e6])
    assert stage.output_noise(f)["amplifier voltage"] == pytest.approx(15e-9 * stage.noise_gain(f), rel=1e-3)


def test_headroom() -> None:
    stage = Transimpedance(feedback_capacitance=0.6e-12, swing=3.0, **CIRCUIT)
    assert float(stage.full_scale()) == pytest.approx(3e-6)
    assert float(stage.headroom(1.5e-6)) == pytest.approx(2.0)
