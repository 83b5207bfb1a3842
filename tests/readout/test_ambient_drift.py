"""Outside light in a band and slow changes."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from outcouple.readout import ambient, drift
from outcouple.readout.modulation import RIPPLE_DEPTH, lamp_ripple, slot_time, slots_per_frame

NEAR = {"centre": 850e-9, "width": 20e-9}


@pytest.mark.parametrize("kind", [kind for kind in ambient.KINDS if kind != "none"])
def test_every_spectrum_is_one_lux(kind: str) -> None:
    centres = ambient.STARTS + ambient.STEP / 2
    # 5e-3: the lamps' table was scaled on another grid, with the lines inside
    assert ambient.illuminance_of(centres, ambient.irradiance_per_lux(kind)) == pytest.approx(1.0, rel=5e-3)


def test_infrared_per_lux_in_order() -> None:
    """LED lamps nearly nil, fluorescent little, daylight and filament lamps high: 100 times and more apart."""
    got = {
        kind: float(ambient.band_irradiance(kind, illuminance=1000.0, **NEAR))
        for kind in ("led lamps", "fluorescent", "daylight", "sun", "incandescent")
    }
    assert got["led lamps"] < got["fluorescent"] < got["daylight"] < got["incandescent"]
    assert got["incandescent"] > 100 * got["fluorescent"]
    assert got["daylight"] == pytest.approx(1000 * 19.5211 / 108.925 / 1000.37, rel=5e-3)  # ASTM G173-03, CIE 1924


def test_sun_at_940_against_850() -> None:
    """Water vapour: 0.46 (50 nm band), 0.31 (20 nm band) of the 850 nm band; computed independently for G173 global."""
    for width, share in ((50e-9, 0.46), (20e-9, 0.31)):
        at = [
            float(ambient.band_irradiance("daylight", illuminance=1e5, centre=centre, width=width))
            for centre in (940e-9, 850e-9)
        ]
        assert at[0] / at[1] == pytest.approx(share, abs=0.01)


@given(st.floats(400, 1000), st.floats(1, 200), st.floats(0.1, 0.9))
def test_bands_add(centre: float, width: float, cut: float) -> None:
    def band(low: float, high: float) -> float:
        return float(
            ambient.band_irradiance("sun", illuminance=1.0, centre=(low + high) / 2 * 1e-9, width=(high - low) * 1e-9)
        )

    low, high = centre - width / 2, centre + width / 2
    middle = low + cut * width
    assert band(low, middle) + band(middle, high) == pytest.approx(band(low, high), rel=1e-9)


def test_current_density_filters() -> None:
    plain = ambient.current_density("daylight", illuminance=1e4)
    through = ambient.current_density("daylight", illuminance=1e4, transmission=0.8, **NEAR)
    leaky = ambient.current_density("daylight", illuminance=1e4, transmission=0.8, blocking=1e-3, **NEAR)
    band = ambient.band_irradiance("daylight", illuminance=1e4, **NEAR)
    assert float(through) == pytest.approx(0.8 * 0.60 * float(band), rel=1e-2)  # table value at 850 nm
    assert float(through) < float(leaky) < float(plain)
    assert float(leaky - through) == pytest.approx(1e-3 * float(plain), rel=0.1)
    assert float(ambient.current_density("none", illuminance=1e4)) == 0.0


def test_a_black_package_takes_the_visible_away() -> None:
    both = [
        float(ambient.current_density("fluorescent", illuminance=500.0, detector=name))
        for name in ("silicon infrared", "silicon daylight filter")
    ]
    assert both[1] < both[0] / 20


def test_etendue_of_a_bare_chip_sees_all() -> None:
    area = 7.5e-6
    got = ambient.etendue_current(ambient.current_density("sun", illuminance=1e4), etendue=np.pi * area)
    assert float(got) == pytest.approx(area * float(ambient.current_density("sun", illuminance=1e4)))


def test_unknown_light_is_refused() -> None:
    with pytest.raises(ValueError, match="kind must be one of"):
        ambient.irradiance_per_lux("moon")
    assert ambient.ambient_notes("none") == ()
    assert set(RIPPLE_DEPTH) == set(ambient.KINDS)
    assert all(ambient.ambient_notes(kind) for kind in ambient.KINDS if kind != "none")


def test_lamp_ripple_runs_to_2500_hz() -> None:
    assert lamp_ripple(mains=50.0)[0] == (100.0, 1.0)
    assert lamp_ripple(mains=50.0)[-1] == (2500.0, 1 / 25)
    assert lamp_ripple(mains=60.0)[-1][0] == 2400.0


def test_slots() -> None:
    assert float(slot_time(rate=100, channels=200, share=0.8)) == pytest.approx(40e-6)
    assert int(slots_per_frame(rate=100, reading=40e-6, settling=10e-6)) == 200


def test_ten_kelvin_are_a_whole_finger() -> None:
    """10 K at 0.5 %/K: 5 % (by hand; the usual range 0.3 to 0.9 %/K brackets it)."""
    assert 1 - float(drift.power_factor(308.15)) == pytest.approx(0.05, abs=2e-3)
    usual = drift.POWER_PER_KELVIN
    assert usual.low < usual.value < usual.high < 0


def test_ageing_and_fouling() -> None:
    assert float(drift.age_factor(30e3, life=30e3)) == pytest.approx(0.7)
    assert float(drift.age_factor(0.0, life=30e3)) == 1.0
    assert float(drift.fouling_factor(0.1, passes=2)) == pytest.approx(0.81)
    assert float(drift.peak_wavelength(850e-9, temperature=338.15)) == pytest.approx(860e-9)
    assert float(drift.current_factor(0.05, reference=0.1, exponent=1.0)) == pytest.approx(0.5)


@given(st.floats(-0.6, 0.5), st.floats(-0.6, 0.5))
def test_ratio_cancels_what_is_common(common: float, own: float) -> None:
    assert float(drift.ratio_change(source=common, reference=common)) == pytest.approx(0.0)
    both = (1 + common) * (1 + own) - 1
    assert float(drift.ratio_change(source=both, reference=common)) == pytest.approx(own)


def test_ratio_noise_by_drawing() -> None:
    rng = np.random.default_rng(8)
    shared = rng.normal(0, 0.01, 400_000)
    signal = 1 + shared + rng.normal(0, 0.004, shared.size)
    reference = 1 + shared + rng.normal(0, 0.003, shared.size)
    expected = drift.ratio_noise(np.hypot(0.01, 0.004), reference=np.hypot(0.01, 0.003), common=0.01)
    assert float(expected) == pytest.approx(0.005)
    assert np.std(signal / reference) == pytest.approx(float(expected), rel=1e-2)


def test_tracker_against_a_tracker_run_in_time() -> None:
    tau, rise, amplitude, step = 2.0, 3.0, 0.1, 1e-4
    baseline, peak = 0.0, 0.0
    for at in range(60_000):
        value = amplitude * min(at * step / rise, 1.0)
        peak = max(peak, value - baseline)
        baseline += (value - baseline) * step / tau
    assert float(drift.tracked_peak(amplitude, rise=rise, time_constant=tau)) == pytest.approx(peak, rel=1e-3)
    assert float(drift.tracked_peak(amplitude, rise=0.0, time_constant=tau)) == amplitude
    assert float(drift.tracked_ramp(0.5, time=1e9, time_constant=tau)) == pytest.approx(1.0)


@given(st.floats(0.01, 0.99), st.floats(0.1, 100))
def test_slowest_rise_just_reaches_the_level(share: float, tau: float) -> None:
    rise = drift.slowest_rise(1.0, level=share, time_constant=tau)
    assert float(drift.tracked_peak(1.0, rise=rise, time_constant=tau)) == pytest.approx(share, rel=1e-9)


def test_swallowed_outright() -> None:
    assert float(drift.slowest_rise(0.1, level=0.2, time_constant=5.0)) == 0.0
    assert float(drift.held_time(0.1, level=0.2, time_constant=5.0)) == 0.0
    assert float(drift.held_time(0.2, level=0.1, time_constant=5.0)) == pytest.approx(5 * np.log(2))
    assert float(drift.time_constant_limit(1e-4, allowed=1e-3)) == pytest.approx(10.0)
