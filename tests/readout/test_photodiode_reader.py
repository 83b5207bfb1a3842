"""The photodiode reader against arithmetic written out by hand and against samples drawn in time."""

import numpy as np
import pytest

from outcouple.readout import ambient, photodiode
from outcouple.readout.chain import read

from .lit_stub import lit

QUIET = {"dark_current": "0 A", "responsivity": "0.6 A/W", "feedback_resistance": "100 kohm", "bits": 24}
COOL = {"temperature": "25 degC"}
CHARGE, BOLTZMANN = 1.602176634e-19, 1.380649e-23


def reading(share=1e-3, **more):
    more.setdefault("environment", COOL)
    state = lit("photodiode", readout={**QUIET, **more.pop("readout", {})}, share=share, **more)
    return read("photodiode", state, state.share)


def codes(found):
    return [note.code for note in found.notes]


def test_photocurrent_is_power_times_share_times_responsivity():
    found = reading()
    assert found.unit == "A"
    assert found.mean[0, 0] == pytest.approx(10e-3 * 1e-3 * 0.6)
    assert found.per_watt[0] == pytest.approx(0.6)


def test_noise_by_cause_is_the_textbook_sum_for_a_fast_stage():
    """Shot 2 q I B, thermal 4 k T B / R, amplifier (e_n / R)^2 B and i_n^2 B: any text on photodiode amplifiers.

    The rising e_n C part is checked against integration in test_receiver_noise.
    """
    found = reading(readout={"voltage_corner": "0 Hz", "input_capacitance": "0.1 pF"})
    part = {cause: float(np.broadcast_to(v, (1, 1))[0, 0]) for cause, v in found.variances.items()}
    assert part["signal shot"] == pytest.approx(2 * CHARGE * 6e-6 * 1e3, rel=1e-3)
    assert part["resistor thermal"] == pytest.approx(4 * BOLTZMANN * 298.15 / 1e5 * 1e3, rel=1e-3)
    assert part["amplifier current"] == pytest.approx(1e-14**2 * 1e3, rel=1e-3)
    assert part["amplifier voltage"] == pytest.approx((10e-9 / 1e5) ** 2 * 1e3, rel=0.05)
    assert found.variance[0, 0] == pytest.approx(sum(part.values()))


@pytest.mark.parametrize(("kind", "left"), [("steady", 1.0), ("difference", 0.0), ("synchronous", 0.0)])
def test_modulation_drops_steady_light_but_not_its_noise(kind, left):
    found = reading(readout={"modulation": kind, "ambient_current": "2 uA"})
    assert found.mean[0, 0] == pytest.approx(6e-6 + left * 2e-6)
    assert found.unlit[0, 0] == pytest.approx(left * 2e-6)
    assert found.bandwidth[0] == pytest.approx(1e3)
    assert found.variances["ambient shot"][0, 0] == pytest.approx(2 * CHARGE * 2e-6 * 1e3, rel=0.02)
    assert found.load[0, 0] == pytest.approx(8e-6)


def test_samples_drawn_in_time_have_the_spread_of_the_noise_model():
    """White noise of signal, ambient and resistor, sampled at 1 MHz; on-less-off means of 0.5 ms."""
    found = reading(
        readout={
            "modulation": "difference",
            "ambient_current": "20 uA",
            "voltage_noise": "0 V/rtHz",
            "current_noise": "0 A/rtHz",
            "bandwidth": "2 kHz",
        }
    )
    rng = np.random.default_rng(5)
    half, rate = 500, 1e6
    thermal = 4 * BOLTZMANN * 298.15 / 1e5
    means = [
        rng.normal(level, np.sqrt((2 * CHARGE * level + thermal) * rate / 2), (4000, half)).mean(axis=1)
        for level in (26e-6, 20e-6)
    ]
    drawn = means[0] - means[1]
    assert found.mean[0, 0] == pytest.approx(drawn.mean(), abs=4 * drawn.std() / np.sqrt(4000))
    assert found.noise[0, 0] == pytest.approx(drawn.std(), rel=4 / np.sqrt(2 * 4000))


def test_outside_light_comes_through_the_etendue_of_the_sensor():
    """J G / pi with J from the sun's spectrum and the photodiode's curve, scaled to the stated responsivity."""
    found = reading(environment={"ambient": "sun", "illuminance": "10 klx", **COOL}, etendue=1e-7)
    per_area = float(ambient.current_density("sun", illuminance=1e4))
    scale = 0.6 / float(photodiode.responsivity(850e-9))
    assert found.ambient[0, 0] == pytest.approx(per_area * scale * 1e-7 / np.pi)


def test_a_measured_irradiance_wins_and_is_taken_in_the_band():
    found = reading(environment={"irradiance": "10 W/m2", **COOL}, etendue=1e-7)
    assert found.ambient[0, 0] == pytest.approx(10 * 0.6 * 1e-7 / np.pi)


def test_light_named_without_a_size_and_a_sensor_without_a_view_are_told():
    assert "ambient-unstated" in codes(reading(environment={"ambient": "sun"}))
    assert "ambient-unseen" in codes(reading(environment={"ambient": "sun", "illuminance": "1 klx"}))


def test_lamps_ripple_and_steady_daylight_does_not():
    lamps = {"ambient": "led lamps", "irradiance": "10 W/m2", **COOL}
    sky = {"ambient": "daylight", "irradiance": "10 W/m2", **COOL}
    rippling = reading(environment=lamps, etendue=1e-7, readout={"modulation": "difference"})
    steady = reading(environment=sky, etendue=1e-7, readout={"modulation": "difference"})
    assert rippling.variances["ripple"][0, 0] > 0
    assert not np.any(steady.variances["ripple"])


@pytest.mark.parametrize(("kind", "period"), [("difference", 2e-3), ("synchronous", 1e-4)])
def test_light_that_changes_within_a_reading_stays_in_it(kind, period):
    """20 %/s of 2 uA; on minus off of a ramp is its slope times half a period (2 ms, or 0.1 ms at 10 kHz)."""
    found = reading(
        readout={"modulation": kind, "ambient_current": "2 uA"}, environment={"ambient_change": "20 %/s", **COOL}
    )
    assert np.sqrt(found.variances["ambient change"][0, 0]) == pytest.approx(0.2 * 2e-6 * period / 2)


def test_the_stage_ends_at_its_full_scale():
    """3 V over 100 kohm: 30 uA."""
    found = reading(share=0.01)
    assert found.full_scale[0] == pytest.approx(30e-6)
    assert found.mean[0, 0] == pytest.approx(30e-6)
    assert found.headroom()[0] == pytest.approx(0.5)


def test_outside_light_alone_can_blind_a_modulated_stage():
    found = reading(readout={"modulation": "difference", "ambient_current": "29 uA"})
    assert found.mean[0, 0] == pytest.approx(1e-6)
    blind = reading(readout={"modulation": "difference", "ambient_current": "40 uA"})
    assert blind.mean[0, 0] == 0.0


def test_a_phototransistor_multiplies_light_and_its_shot_noise_and_is_slow():
    plain = reading(share=1e-6)
    times = reading(share=1e-6, readout={"detector": "phototransistor", "transistor_gain": 400})
    assert times.mean[0, 0] == pytest.approx(400 * plain.mean[0, 0])
    shots = [float(one.variances["signal shot"][0, 0]) for one in (times, plain)]
    assert shots[0] == pytest.approx(400**2 * shots[1], rel=0.2)
    assert times.stage["stage_bandwidth"][0] < 0.02 * plain.stage["stage_bandwidth"][0]
    assert "phototransistor-spread" in codes(times)


def test_gain_of_a_phototransistor_varies_per_sample():
    gains = np.array([150.0, 400.0, 1000.0])
    found = reading(share=1e-6, readout={"detector": "phototransistor"}, samples={"readout.transistor_gain": gains})
    assert found.mean[:, 0] == pytest.approx(found.mean[0, 0] * gains / 150)


def test_drift_age_drive_and_fouling_dim_the_light():
    """exp(-0.005 x 40) = 0.8187; 0.7 left by age; 0.9^2 through fouled windows; 1.5 times the current."""
    emitter = {"power_drift": "-0.5 %/K", "age_left": "70 %", "drive": "150 %"}
    found = reading(emitter=emitter, environment={"temperature": "65 degC", "fouling": "10 %"})
    assert found.mean[0, 0] == pytest.approx(6e-6 * 0.8187308 * 0.7 * 0.81 * 1.5)


def test_a_ratio_to_a_reference_cancels_what_both_see_and_keeps_the_rest():
    old = {"emitter": {"age_left": "70 %"}, "readout": {"reference_channel": "yes", "intensity_noise": "1 %"}}
    plain, ratio = reading(), reading(**old)
    assert ratio.mean[0, 0] == pytest.approx(plain.mean[0, 0])
    assert "emitter intensity" not in ratio.variances
    fouled = reading(environment={"fouling": "10 %", **COOL}, readout={"reference_channel": "yes"})
    assert fouled.mean[0, 0] == pytest.approx(0.81 * plain.mean[0, 0])


def test_a_reference_brings_its_own_shot_and_thermal_noise():
    """1 % of 10 mW on it: about 60 uA; relative shot variance 2 q B / I, thermal 4 k T B / (R I^2), R I = 1.5 V."""
    found = reading(readout={"reference_channel": "yes"})
    current = 10e-3 * 0.01 * float(photodiode.responsivity(850e-9))
    relative = 2 * CHARGE * 1e3 / current + 4 * BOLTZMANN * 298.15 * 1e3 / (1.5 * current)
    assert found.variances["reference channel"][0, 0] == pytest.approx((6e-6) ** 2 * relative)


def test_a_dead_emitter_leaves_no_light_and_no_infinite_ratio():
    found = reading(emitter={"power": "0 W"}, readout={"reference_channel": "yes"})
    assert found.mean[0, 0] == 0.0
    assert np.isfinite(found.noise).all()


def test_cold_vessels_do_not_turn_the_photocurrent_round():
    """A straight temperature coefficient would give a negative responsivity at 77 K and 940 nm."""
    cold = lit("photodiode", readout={}, emitter={"wavelength": "940 nm"}, environment={"temperature": "77 K"})
    found = read("photodiode", cold, cold.share)
    assert found.mean[0, 0] > 0
    assert "electronics-temperature" in codes(found)
    warm = lit("photodiode", readout={"electronics_temperature": "20 degC"}, environment={"temperature": "77 K"})
    assert "electronics-temperature" not in codes(read("photodiode", warm, warm.share))


def test_responsivity_stays_between_nothing_and_one_electron_per_photon():
    temperature = np.array([4.0, 77.0, 300.0, 700.0])
    got = photodiode.responsivity(1050e-9, temperature=temperature)
    assert np.all((got >= 0) & (got <= photodiode.quantum_ceiling(1050e-9)))
    told = [n.code for n in photodiode.responsivity_notes(np.full(4, 1050e-9), temperature=temperature)]
    assert "responsivity-cold" in told


def test_a_time_slot_ends_the_integration():
    long = reading(readout={"integration": "1 ms"})
    short = reading(readout={"integration": "1 ms"}, slot=50e-6)
    assert long.bandwidth[0] == pytest.approx(500)
    settling = 50e-6 - 0.5 / short.bandwidth[0]
    assert 0 < settling < 25e-6
    slow = reading(readout={"feedback_resistance": "10 Mohm", "feedback_capacitance": "2 pF"}, slot=50e-6)
    assert "slot-short" in codes(slow)


def test_a_stage_too_slow_for_its_modulation_is_told_and_costs_signal_to_noise():
    fast = reading(readout={"modulation": "synchronous", "modulation_frequency": "10 kHz"})
    slow = reading(
        readout={"modulation": "synchronous", "modulation_frequency": "10 kHz", "feedback_capacitance": "1 nF"}
    )
    assert "stage-slow" in codes(slow)
    assert "stage-slow" not in codes(fast)
    assert slow.noise[0, 0] > fast.noise[0, 0]


def test_a_stage_with_little_capacitance_rings_and_says_so():
    assert "stage-rings" in codes(reading(readout={"feedback_capacitance": "0.01 pF", "input_capacitance": "1 nF"}))
    assert np.degrees(reading().stage["phase_margin"][0]) == pytest.approx(65, abs=0.1)


def test_samples_and_channels_broadcast():
    resistance = np.array([1e4, 1e5])
    found = reading([1e-3, 2e-3, 4e-3], samples={"readout.feedback_resistance": resistance})
    assert found.mean.shape == (2, 3)
    assert found.noise.shape == (2, 3)
    assert found.full_scale == pytest.approx(3 / resistance)
    alone = reading([1e-3, 2e-3, 4e-3], readout={"feedback_resistance": "10 kohm"})
    assert found.variance[0] == pytest.approx(alone.variance[0])
