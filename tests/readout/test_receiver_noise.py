"""Noise of a reading: closed forms against quadrature in frequency and against noise run through the stage in time."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import integrate, signal

from outcouple.readout.constants import BOLTZMANN, CHARGE
from outcouple.readout.converter import Converter
from outcouple.readout.modulation import KINDS, Modulation
from outcouple.readout.receiver import receiver_budget, signal_gain, stage_moments
from outcouple.readout.transimpedance import Transimpedance

STAGE = Transimpedance(
    resistance=1e6, feedback_capacitance=0.6e-12, gain_bandwidth=10e6, input_capacitance=20e-12, voltage_noise=15e-9
)
T = 50e-6
READINGS = {
    "steady": Modulation("steady", T),
    "on-off": Modulation("on-off", T),
    "square": Modulation("square", T, 100e3),
    "sine": Modulation("sine", T, 100e3),
}


@pytest.mark.parametrize("kind", KINDS)
def test_moments_equal_quadrature_in_frequency(kind: str) -> None:
    # computed independently: rectangle rule over the reading's response times the stage's, tails included
    step = 20.0
    f = (np.arange(2_000_000) + 0.5) * step
    power = READINGS[kind].leak(f) ** 2 * np.abs(STAGE.response(f)) ** 2
    moments = stage_moments(STAGE, READINGS[kind])
    tail = np.mean(READINGS[kind].leak(f[-200_000:]) ** 2 * f[-200_000:] ** 2)
    beyond = tail * STAGE.natural_frequency**4 / (3 * f[-1] ** 3)
    assert np.sum(power) * step == pytest.approx(float(moments.white), rel=1e-6)
    assert np.sum(power * f**2) * step + beyond == pytest.approx(float(moments.rising), rel=2e-4)
    assert np.sum(power * f) * step == pytest.approx(
        float(moments.rising_flicker), rel=0.35 if kind == "on-off" else 0.06
    )


@pytest.mark.parametrize("kind", ["on-off", "square", "sine"])
def test_flicker_number_equals_quadrature(kind: str) -> None:
    reading = READINGS[kind]
    f = (np.arange(4_000_000) + 0.5) * 1.0
    expected = np.sum(reading.leak(f) ** 2 / f)  # computed independently; the tail beyond 4 MHz is below 1e-3
    assert float(reading.flicker_number()) == pytest.approx(expected, rel=2e-3)


def test_flicker_number_of_a_steady_reading() -> None:
    low, duration = 1 / 10.0, 1e-3
    f = np.geomspace(low, 1e6, 2_000_001)
    expected = integrate.trapezoid(np.sinc(f * duration) ** 2, np.log(f))
    assert float(Modulation("steady", duration).flicker_number(10.0)) == pytest.approx(expected, rel=1e-6)


@pytest.fixture(scope="module")
def outputs() -> tuple[np.ndarray, np.ndarray, float]:
    """White current noise (1 A^2/Hz one-sided) and amplifier noise run through the stage, in input amperes."""
    rng = np.random.default_rng(20)
    rate = 40e6
    count = 8_000_000
    w0 = 2 * np.pi * float(STAGE.natural_frequency)
    lag = 1 / (2 * np.pi * float(STAGE.noise_gain_zero))
    denominator = [1 / w0**2, 1 / (w0 * float(STAGE.quality)), 1.0]
    white = rng.standard_normal(count) * np.sqrt(rate / 2)
    current = signal.lfilter(*signal.bilinear([1.0], denominator, rate), white)
    white = rng.standard_normal(count) * np.sqrt(rate / 2)
    voltage = signal.lfilter(*signal.bilinear([lag, 1.0], denominator, rate), white) / 1e6
    return current, voltage, rate


def weights(kind: str, count: int) -> np.ndarray:
    """Weights of the samples of one reading of 50 us."""
    at = (np.arange(count) + 0.5) / count
    if kind == "steady":
        return np.full(count, 1 / count)
    if kind == "sine":
        return 4 / count * np.sin(2 * np.pi * 5 * at)
    periods = 1 if kind == "on-off" else 5
    return 2 / count * np.where((at * periods) % 1 < 0.5, 1.0, -1.0)


@pytest.mark.parametrize("kind", KINDS)
def test_noise_run_through_the_stage_in_time(kind: str, outputs: tuple[np.ndarray, np.ndarray, float]) -> None:
    current, voltage, rate = outputs
    count = round(T * rate)
    moments = stage_moments(STAGE, READINGS[kind])
    readings = (current.reshape(-1, count) @ weights(kind, count))[1:]
    error = np.sqrt(2 / len(readings))  # relative standard error of a variance
    assert np.var(readings) == pytest.approx(float(moments.white), rel=4 * error)
    readings = (voltage.reshape(-1, count) @ weights(kind, count))[1:]
    density = 1e-12 * (1 + 0 * float(moments.white))
    rising = density / float(STAGE.noise_gain_zero) ** 2
    expected = density * float(moments.white) + rising * float(moments.rising)
    # 0.02: the sampled filter lacks what lies beyond half of the sampling rate
    assert np.var(readings) == pytest.approx(expected, rel=4 * error + 0.02)


@pytest.mark.parametrize("kind", KINDS)
def test_gain_against_a_stage_run_in_time(kind: str) -> None:
    rate, count = 40e6, 2000
    w0 = 2 * np.pi * float(STAGE.natural_frequency)
    filter_ = signal.bilinear([1.0], [1 / w0**2, 1 / (w0 * float(STAGE.quality)), 1.0], rate)
    at = np.arange(40 * count) / count
    drive = {"steady": np.ones_like(at), "sine": (1 + np.sin(2 * np.pi * 5 * at)) / 2}.get(kind)
    if drive is None:
        drive = np.where((at * (1 if kind == "on-off" else 5)) % 1 < 0.5, 1.0, 0.0)
    last = signal.lfilter(*filter_, drive)[-count:]
    if kind == "sine":  # the reference is aligned in phase
        got = np.abs(4 / count * np.sum(last * np.exp(2j * np.pi * 5 * at[:count])))
    else:
        got = np.sum(last * weights(kind, count))
    assert float(signal_gain(STAGE, READINGS[kind])) == pytest.approx(got, rel=4e-3)


@given(
    cycles=st.floats(0.01, 40),
    kind=st.sampled_from(KINDS),
    periods=st.integers(1, 9),
    phase=st.floats(0, 6.28),
)
@settings(max_examples=60, deadline=None)
def test_ripple_never_exceeds_its_leak(cycles: float, kind: str, periods: int, phase: float) -> None:
    reading = Modulation(kind, periods * 1e-3, 1e3)
    total = float(reading.time)
    count = 40_320  # whole samples in every half-period
    at = (np.arange(count) + 0.5) / count * total
    square = np.where((at / float(reading.period)) % 1 < 0.5, 2.0, -2.0)
    weight = {"steady": np.ones(count), "sine": 4 * np.sin(2e3 * np.pi * at)}.get(kind, square) / count
    wave = np.exp(2j * np.pi * cycles * at / total)
    worst = abs(np.sum(weight * wave))
    assert float(reading.leak(cycles / total)) == pytest.approx(worst, abs=2e-4)
    assert abs(np.sum(weight * np.cos(2 * np.pi * cycles * at / total + phase))) <= worst + 1e-12


@pytest.mark.parametrize(("kind", "expected"), [("on-off", 4 / np.pi), ("square", 4 / np.pi), ("sine", 2.0)])
def test_leak_at_the_modulation_itself(kind: str, expected: float) -> None:
    reading = Modulation(kind, 1e-3, 5e3)
    assert float(reading.leak(1 / reading.period)) == pytest.approx(expected, rel=1e-9)
    assert float(reading.leak((1 + 1e-6) / reading.period)) == pytest.approx(expected, rel=1e-4)


@pytest.mark.parametrize("kind", KINDS)
def test_ramp_leak(kind: str) -> None:
    reading = Modulation(kind, 1e-3, 5e3)
    at = (np.arange(40_000) + 0.5) / 40_000 * 1e-3
    square = np.where((at / float(reading.period)) % 1 < 0.5, 2.0, -2.0)
    weight = {"steady": np.ones(40_000), "sine": 4 * np.sin(1e4 * np.pi * at)}.get(kind, square) / 40_000
    assert abs(np.sum(weight * at)) == pytest.approx(float(reading.ramp_leak()), rel=1e-4)


def test_whole_mains_periods_null_the_ripple() -> None:
    nulled = Modulation("steady", 20e-3).ripple_variance(1e-6, depth=0.4, tolerance=0.0)
    drifting = Modulation("steady", 20e-3).ripple_variance(1e-6, depth=0.4, tolerance=0.01)
    plain = Modulation("steady", 3e-3).ripple_variance(1e-6, depth=0.4, tolerance=0.0)
    assert nulled < 1e-30
    assert nulled < drifting < plain / 100


def test_figures_worked_by_hand() -> None:
    """Sunlight on a fast stage and amplifier noise through a large diode, worked by hand to two digits."""
    # 190 uA of sunlight in 100 kHz: 2.5 nA rms of shot noise
    quick = Transimpedance(100e3, 0.05e-12, 1e9, 10e-12)
    budget = receiver_budget(quick, Modulation("steady", 1 / 200e3), signal=0.0, ambient=190e-6)
    assert np.sqrt(budget.variances["ambient shot"]) == pytest.approx(2.47e-9, rel=0.02)
    assert float(quick.full_scale() / 190e-6) < 1  # 19 V would be needed
    # e_n C noise of 15 nV, 72 pF in 1 MHz against 1 Mohm: 3.9 nA against 0.13 nA, sharp band edge
    rising = np.sqrt(Transimpedance(1e6, 0.0, 1e9, 72e-12, voltage_noise=15e-9).rising_density() * 1e18 / 3)
    assert float(rising) == pytest.approx(3.9e-9, rel=0.01)
    assert np.sqrt(4 * BOLTZMANN * 293 / 1e6 * 1e6) == pytest.approx(0.13e-9, rel=0.03)


def test_budget_adds_up_and_scales() -> None:
    budget = receiver_budget(
        STAGE,
        READINGS["square"],
        signal=np.full((3, 2), 1e-7),
        ambient=np.array([[0.0], [1e-6], [1e-5]]),
        dark=2e-9,
        converter=Converter(bits=12, full_scale=3.0, samples=8),
        intensity_density=1e-12,
        ripple_depth=0.1,
    )
    assert budget.rms.shape == (3, 2)
    assert np.sum(list(budget.shares().values()), axis=0) == pytest.approx(1.0)
    assert np.all(np.diff(budget.rms[:, 0]) > 0)
    assert budget.limited_by(2).startswith("limited by")


def test_signal_shot_noise_by_counting() -> None:
    """An on-off reading of a Poisson stream has the variance of the counted electrons."""
    on, time = 1e-12, 1e-3
    slow = Transimpedance(1e6, 0.01e-12, 1e9, 1e-12)
    budget = receiver_budget(slow, Modulation("on-off", time), signal=on)
    electrons = on * time / 2 / CHARGE
    expected = electrons * (2 * CHARGE / time) ** 2
    gain = float(signal_gain(slow, Modulation("on-off", time)))
    assert float(budget.variances["signal shot"]) == pytest.approx(expected / gain**2, rel=2e-3)


def test_batch_equals_single() -> None:
    resistance = np.array([[1e5], [1e6], [1e7]])
    stage = Transimpedance(resistance, 0.6e-12, 10e6, 20e-12, voltage_noise=15e-9, voltage_corner=1e3)
    together = receiver_budget(stage, READINGS["sine"], signal=1e-7, ambient=1e-6)
    for at in range(3):
        alone = Transimpedance(resistance[at, 0], 0.6e-12, 10e6, 20e-12, voltage_noise=15e-9, voltage_corner=1e3)
        one = receiver_budget(alone, READINGS["sine"], signal=1e-7, ambient=1e-6)
        assert float(together.rms[at, 0]) == pytest.approx(float(one.rms), rel=1e-12)


def test_too_short_a_reading_is_refused() -> None:
    with pytest.raises(ValueError, match="less than one period"):
        Modulation("square", 1e-3, 500.0)
    with pytest.raises(ValueError, match="kind must be one of"):
        Modulation("triangle", 1e-3)
