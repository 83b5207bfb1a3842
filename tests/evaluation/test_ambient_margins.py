"""Outside light costs margin wherever it should, and saturation never passes silently."""

from __future__ import annotations

import numpy as np
import pytest

from outcouple.evaluation import evaluate, evaluate_batch

from .tanks import DRY, WET, tank

MARGINS = ["margin_sigma", "margin_span", "worst_ratio", "signal_to_noise", "saturation_headroom", "ambient_ratio"]
LIGHT = np.array([2e-4, 4e-4])


def measured(**sections):
    found = evaluate_batch(tank(**sections), {("readout", "ambient_current"): LIGHT}, MARGINS)
    return found.metrics


def doubled(value):
    return float(value[1] / value[0])


def test_steady_reading_twice_the_ambient_lowers_contrast_and_every_margin_of_the_wet_state():
    """Light of 0.2 and 0.4 mA on readings of about 2.3 mA dry: it stays in the reading of both states."""
    found = measured(decision={"level": "given", "share": "50 %"})
    assert doubled(found["worst_ratio"].values) < 0.7
    assert doubled(found["margin_span"].states["wet"]) < 1
    assert doubled(found["margin_sigma"].states["wet"]) < 1
    assert doubled(found["saturation_headroom"].values) < 1
    assert doubled(found["ambient_ratio"].values) > 1


@pytest.mark.parametrize("modulation", ["difference", "synchronous"])
def test_modulated_reading_twice_the_ambient_lowers_every_margin_in_noise_and_none_in_span(modulation):
    found = measured(readout={"modulation": modulation, "bits": 24})
    for state in ("dry", "wet"):
        assert doubled(found["margin_sigma"].states[state]) < 0.999
        assert doubled(found["signal_to_noise"].states[state]) < 0.999
        assert doubled(found["saturation_headroom"].states[state]) < 1
    assert doubled(found["margin_span"].values) == pytest.approx(1)
    assert doubled(found["worst_ratio"].values) == pytest.approx(1)


def test_shot_noise_of_ambient_grows_as_its_root():
    """Where outside light makes nearly all of the noise, twice of it costs a factor of root 2."""
    bright = {"modulation": "difference", "bits": 32, "voltage_noise": "0 V/rtHz"}
    bright |= {"feedback_resistance": "4 kohm", "full_scale": "50 V"}
    design = tank(readout=bright, emitter={"power": "0.01 mW"})
    found = evaluate_batch(design, {("readout", "ambient_current"): np.array([5e-3, 1e-2])}, ["margin_sigma"])
    assert doubled(found.metrics["margin_sigma"].values) == pytest.approx(1 / np.sqrt(2), rel=0.01)


def test_outside_light_of_the_environment_reaches_the_reading():
    sun = evaluate(tank(environment={"ambient": "sun", "illuminance": "20 klx"}), advice=False, views=False)
    none = evaluate(tank(), advice=False, views=False)
    assert sun.metrics["ambient_ratio"].value > 0
    assert sun.metrics["worst_ratio"].value < none.metrics["worst_ratio"].value
    assert "ambient-sun" in [note.code for note in sun.notes]


def test_saturation_names_the_states_and_what_to_change():
    found = evaluate(tank(readout={"feedback_resistance": "5 kohm"}), advice=False, views=False)
    note = next(note for note in found.notes if note.code == "saturated")
    assert note.severity == "danger"
    assert "'dry'" in note.text
    assert "'wet'" not in note.text
    assert "readout.feedback_resistance" in note.text
    assert found.metrics["saturation_headroom"].value < 1
    assert found.states[0].signal == pytest.approx(3 / 5e3)


def test_saturation_by_outside_light_says_so():
    found = evaluate(tank(readout={"ambient_current": "8 mA", "modulation": "difference"}), advice=False, views=False)
    note = next(note for note in found.notes if note.code == "saturated")
    assert "keep outside light away" in note.text
    assert found.metrics["worst_ratio"].value == pytest.approx(np.inf) or found.states[0].signal == 0


def test_saturation_of_a_batch_is_told_for_the_samples_it_holds_for():
    design = tank()
    batch = evaluate_batch(design, {("readout", "feedback_resistance"): np.array([500.0, 5e4, 600.0])}, ["signal"])
    note = next(note for note in batch.notes if note.code == "saturated")
    assert note.where.tolist() == [False, True, False]


def test_two_saturated_states_cannot_be_told_apart():
    found = evaluate(
        tank(readout={"feedback_resistance": "1 Mohm"}, requirements=[{"metric": "margin_sigma", "at_least": 5}])
    )
    assert found.verdict == "fail"
    assert found.metrics["worst_ratio"].value == pytest.approx(1)


def test_an_electronics_of_its_own_temperature_keeps_a_cold_tip_readable():
    cold = [dict(DRY, set={"environment.temperature": "77 K"}), WET]
    alone = evaluate(tank(states=cold), advice=False, views=False)
    apart = evaluate(tank(states=cold, readout={"electronics_temperature": "20 degC"}), advice=False, views=False)
    codes = [[note.code for note in found.notes] for found in (alone, apart)]
    assert "electronics-temperature" in codes[0]
    assert "electronics-temperature" not in codes[1]
    assert min(state.signal for state in alone.states) > 0


def test_a_warm_emitter_shifts_its_line():
    """0.25 nm/K over 40 K moves the peak by 10 nm, and with it the light that a narrow filter passes."""
    drift = {"peak_drift": "0.25 nm/K", "linewidth": "5 nm"}
    narrow = {"filter_centre": "940 nm", "filter_width": "10 nm", "filter_transmission": "100 %"}
    signals = [
        evaluate(
            tank(emitter=drift, readout=narrow, environment={"temperature": temperature}), advice=False, views=False
        )
        .states[0]
        .signal
        for temperature in ("25 degC", "65 degC")
    ]
    # a Gaussian 5 nm wide at half maximum: 98.15 % within 5 nm of its peak, 0.93 % from 5 to 15 nm, and 0.1 % blocked
    assert signals[1] / signals[0] == pytest.approx(0.01027 / 0.98147, rel=0.1)
