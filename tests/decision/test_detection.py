"""Gaussian thresholds, confirmation and rates: against mpmath, scipy, exact sums and counted simulations."""

from __future__ import annotations

import itertools

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import optimize, stats

from outcouple.decision import detection as d

TINY = st.floats(-300, -0.31).map(lambda x: 10**x)


@pytest.mark.parametrize("probability", [1e-300, 1e-100, 1e-20, 1e-12, 1e-6, 1e-3, 0.1, 0.4999, 0.5, 0.7, 0.999999])
def test_inverse_tail_against_forty_digits(probability: float) -> None:
    with mpmath.workdps(40):
        exact = mpmath.sqrt(2) * mpmath.erfinv(1 - 2 * mpmath.mpf(probability)) if probability > 1e-15 else None
        if exact is None:
            exact = mpmath.findroot(
                lambda z: mpmath.log(mpmath.erfc(z / mpmath.sqrt(2)) / 2) - mpmath.log(mpmath.mpf(probability)),
                float(stats.norm.isf(probability)),
            )
    assert float(d.inverse_tail(probability)) == pytest.approx(float(exact), rel=1e-12, abs=1e-12)


@given(TINY)
def test_inverse_tail_undoes_the_tail(probability: float) -> None:
    assert float(d.tail_probability(d.inverse_tail(probability))) == pytest.approx(probability, rel=1e-11)


def test_inverse_tail_at_and_beyond_the_ends() -> None:
    got = d.inverse_tail(np.array([0.0, 0.5, 1.0, -0.1, 1.1]))
    assert got[:3].tolist() == [np.inf, 0.0, -np.inf] or got[1] == pytest.approx(0.0, abs=1e-15)
    assert np.isinf(got[0])
    assert np.isinf(got[2])
    assert np.all(np.isnan(got[3:]))


def test_thresholds_for_one_false_alarm_a_year() -> None:
    """Computed for typical designs by an independent script, one decimal printed."""
    year = {"events_per_year": 1}
    assert float(d.threshold_for(rate=100, channels=200, **year)) == pytest.approx(7.0, abs=0.05)
    assert float(d.threshold_for(rate=60, channels=3e5, **year)) == pytest.approx(7.9, abs=0.05)
    assert float(d.threshold_for(rate=100, channels=2e4, **year)) == pytest.approx(7.6, abs=0.05)
    assert float(d.threshold_for(rate=100, channels=576, **year)) == pytest.approx(7.12, abs=0.02)


@given(
    st.floats(-12, -0.05).map(lambda x: 10**x),
    st.integers(1, 30).flatmap(lambda n: st.tuples(st.integers(1, n), st.just(n))),
)
@settings(deadline=None)
def test_confirmation_is_the_binomial_tail(probability: float, counts: tuple[int, int]) -> None:
    confirm, window = counts
    expected = float(stats.binom.sf(confirm - 1, window, probability))
    got = d.confirmed_probability(probability, confirm, window)
    assert float(got) == pytest.approx(expected, rel=1e-9, abs=1e-290)
    if 1e-280 < got < 0.999:
        assert float(d.inverse_confirmed(got, confirm, window)) == pytest.approx(probability, rel=1e-9)
    elif got >= 0.999:
        # So near to certain the rounding of the chance itself moves the inverse: what counts is that it leads back.
        back = d.confirmed_probability(d.inverse_confirmed(got, confirm, window), confirm, window)
        assert float(back) == pytest.approx(float(got), rel=1e-12)


def test_confirmation_at_the_ends() -> None:
    assert d.confirmed_probability(np.array([0.0, 1.0]), 2, 3).tolist() == [0.0, 1.0]
    assert float(d.confirmed_probability(0.3, 0, 3)) == 1.0
    assert float(d.confirmed_probability(0.3, 4, 3)) == 0.0
    assert d.inverse_confirmed(np.array([0.0, 1.0]), 2, 3).tolist() == [0.0, 1.0]
    with pytest.raises(ValueError, match="confirm must lie between 1 and the window, 3; got 4"):
        d.inverse_confirmed(0.1, 4, 3)


def test_large_windows() -> None:
    assert float(d.confirmed_probability(0.02, 40, 1000)) == pytest.approx(stats.binom.sf(39, 1000, 0.02), rel=1e-9)


def test_correlated_readings_against_drawing() -> None:
    rng = np.random.default_rng(11)
    common = rng.standard_normal((1_000_000, 1)) * np.sqrt(0.4)
    hits = np.sum(common + rng.standard_normal((1_000_000, 3)) * np.sqrt(0.6) > 1.5, axis=1) >= 2
    got = float(d.correlated_probability(1.5, 2, 3, correlation=0.4))
    assert np.mean(hits) == pytest.approx(got, abs=4 * np.sqrt(got / 1e6))


def test_correlated_readings_at_the_ends() -> None:
    z = np.array([1.0, 4.0, 6.0])
    alone = d.confirmed_probability(d.tail_probability(z), 2, 3)
    assert d.correlated_probability(z, 2, 3, correlation=0.0) == pytest.approx(alone, rel=1e-12)
    assert d.correlated_probability(z, 2, 3, correlation=1e-9) == pytest.approx(alone, rel=1e-3)
    assert d.correlated_probability(z, 2, 3, correlation=1.0) == pytest.approx(d.tail_probability(z))
    assert d.correlated_probability(z, 1, 1, correlation=0.7) == pytest.approx(d.tail_probability(z), rel=1e-9)
    assert np.all(d.correlated_probability(z, 2, 3, correlation=0.5) > alone)
    with pytest.raises(ValueError, match="between 0 and 1"):
        d.correlated_probability(z, 2, 3, correlation=1.5)


@given(st.lists(st.floats(0, 1), min_size=1, max_size=7), st.integers(0, 8))
def test_channels_by_listing_every_outcome(chances: list[float], need: int) -> None:
    expected = 0.0
    for outcome in itertools.product((0, 1), repeat=len(chances)):
        if sum(outcome) >= need:
            expected += float(np.prod([p if hit else 1 - p for p, hit in zip(chances, outcome, strict=True)]))
    assert float(d.at_least_channels(np.array(chances), need)) == pytest.approx(expected, rel=1e-9, abs=1e-12)


def test_channels_keep_tiny_chances_and_batch() -> None:
    p = np.full((2, 5), 1e-9)
    p[1] = 1e-12
    assert d.at_least_channels(p, 3) == pytest.approx([10e-27, 10e-36], rel=1e-6)
    assert d.at_least_channels(p, 1) == pytest.approx([5e-9, 5e-12], rel=1e-6)


def test_per_year_there_and_back() -> None:
    one = d.per_decision(3.0, rate=100.0, channels=50)
    assert float(d.per_year(d.any_of(one, 50), rate=100.0)) == pytest.approx(3.0, rel=1e-9)
    assert float(d.per_decision(1e12, rate=1.0)) == 1.0


@given(
    absent=st.floats(-5, 5),
    gap=st.floats(0.5, 10),
    s0=st.floats(0.1, 3),
    s1=st.floats(0.1, 3),
    rising=st.booleans(),
)
@settings(deadline=None)
def test_minimum_error_level_is_the_minimum(absent: float, gap: float, s0: float, s1: float, rising: bool) -> None:
    side = 1.0 if rising else -1.0
    present = absent + side * gap

    def errors(level: float) -> float:
        return float(stats.norm.sf(side * (level - absent) / s0) + stats.norm.sf(side * (present - level) / s1))

    level = float(d.minimum_error_level(absent=absent, absent_noise=s0, present=present, present_noise=s1))
    found = optimize.minimize_scalar(errors, bracket=(level, level + 1e-3 * s0), tol=1e-10)
    assert errors(level) <= found.fun * (1 + 1e-6)


def test_levels_between_equal_states_agree() -> None:
    states = {"absent": 1.0, "absent_noise": 0.1, "present": 0.2, "present_noise": 0.1}
    assert float(d.minimum_error_level(**states)) == pytest.approx(0.6)
    assert float(d.equal_error_level(**states)) == pytest.approx(0.6)
    weighted = float(d.minimum_error_level(**states, present_weight=100.0))
    assert weighted > 0.6  # a miss costs more: the level moves away from the present state
    unequal = {"absent": 0.0, "absent_noise": 1.0, "present": 0.1, "present_noise": 2.0}
    assert np.isnan(d.minimum_error_level(**unequal, present_weight=1e9))


def test_noise_level_and_hysteresis() -> None:
    assert float(d.noise_level(absent=1.0, absent_noise=0.1, z=5, rising=False)) == pytest.approx(0.5)
    assert float(d.noise_level(absent=1.0, absent_noise=0.1, z=5)) == pytest.approx(1.5)
    assert [float(x) for x in d.hysteresis_levels(0.5, band=0.1)] == pytest.approx([0.55, 0.45])


def test_times() -> None:
    assert float(d.response_time(rate=100, confirm=3, settling=1e-3)) == pytest.approx(31e-3)
    assert float(d.release_time(rate=100, confirm=3, window=4, settling=1e-3)) == pytest.approx(21e-3)


def hits(z: float, count: int, seed: int) -> np.ndarray:
    return np.random.default_rng(seed).standard_normal(count) > z


@pytest.mark.parametrize(("confirm", "window"), [(1, 1), (2, 2), (2, 3), (3, 5)])
def test_alarm_rates_by_counting(confirm: int, window: int) -> None:
    """Alarmed windows and distinct alarms in four million readings at a moderate level."""
    fired = hits(1.5, 4_000_000, 42)
    running = np.convolve(fired, np.ones(window), mode="valid")
    alarmed = running >= confirm
    p = d.tail_probability(1.5)
    windows = float(d.confirmed_probability(p, confirm, window))
    onsets = float(d.onset_probability(p, confirm, window))
    # neighbouring windows overlap: the error of their count is up to sqrt(window) larger
    assert np.mean(alarmed) == pytest.approx(windows, abs=4 * np.sqrt(window * windows / 4e6))
    counted = np.mean(alarmed[1:] & ~alarmed[:-1])
    assert counted == pytest.approx(onsets, abs=4 * np.sqrt(onsets / 4e6))


def test_crossings_by_counting() -> None:
    """Upward crossings of noise with a sharp band edge, made in the frequency domain."""
    rng = np.random.default_rng(6)
    count, rate, bandwidth = 2**22, 20e3, 1e3
    spectrum = np.zeros(count // 2 + 1, dtype=complex)
    inside = round(bandwidth / rate * count)
    spectrum[1:inside] = rng.standard_normal(inside - 1) + 1j * rng.standard_normal(inside - 1)
    noise = np.fft.irfft(spectrum)
    noise /= np.std(noise)
    for z in (1.5, 2.5):
        counted = np.sum((noise[1:] > z) & (noise[:-1] <= z))
        expected = float(d.crossing_rate(z, bandwidth=bandwidth)) * count / rate
        # sampling at 20 times the band edge misses under 1 % of the crossings
        assert counted == pytest.approx(expected, abs=4 * np.sqrt(expected) + 0.01 * expected)


def test_crossing_threshold_undoes_the_rate() -> None:
    z = d.crossing_threshold(events_per_year=5.0, bandwidth=1e3, channels=4)
    assert float(d.crossing_rate(z, bandwidth=1e3)) * 4 * d.SECONDS_PER_YEAR == pytest.approx(5.0)


def test_misses_by_counting() -> None:
    """Two-of-three confirmation of a state 2.5 deviations beyond the level."""
    fired = ~hits(2.5, 3_000_000, 9)
    missed = np.sum(fired.reshape(-1, 3), axis=1) < 2
    expected = float(1 - d.confirmed_probability(d.tail_probability(-2.5), 2, 3))
    assert np.mean(missed) == pytest.approx(expected, abs=4 * np.sqrt(expected / 1e6))


def test_hysteresis_bounds_the_chatter() -> None:
    """Switching of a signal that rests in the middle of the dead band stays below the crossing rate of half of it."""
    rng = np.random.default_rng(12)
    noise = np.convolve(rng.standard_normal(400_000), np.sinc((np.arange(-200, 201)) / 10) * np.hamming(401), "same")
    noise /= np.std(noise)
    outside = np.where(noise > 1.0, 1, np.where(noise < -1.0, -1, 0))
    kept = outside[outside != 0]
    counted = np.sum((kept[1:] == 1) & (kept[:-1] == -1))
    bound = float(d.crossing_rate(1.0, bandwidth=0.05)) * noise.size  # the kernel cuts at 1/20 per sample
    assert 0 < counted < bound


def test_correlation_far_out_is_sure_and_quick() -> None:
    far = np.array([-1e7, 1e7])
    assert d.correlated_probability(far, 2, 3, correlation=0.4) == pytest.approx([1.0, 0.0])
