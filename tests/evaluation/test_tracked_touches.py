"""Sensors of many channels that read changes: common drift, tracked baselines, level set by noise."""

from __future__ import annotations

import importlib.util
import sys
from pathlib import Path

import numpy as np
import pytest

from outcouple import hookimpl
from outcouple.design import design_from_mapping
from outcouple.evaluation import evaluate, evaluate_batch
from outcouple.evaluation.table import tabulate
from outcouple.hooks import build_host

spec = importlib.util.spec_from_file_location(
    "stub_sensors", Path(__file__).parents[1] / "contract" / "stub_sensors.py"
)
stubs = importlib.util.module_from_spec(spec)
sys.modules["stub_sensors"] = stubs  # pydantic looks names of annotations up there
spec.loader.exec_module(stubs)

CLEAR = {"name": "clear", "expect": "absent"}
HOT = {"name": "hot", "expect": "absent", "set": {"environment.temperature": "45 degC"}}
TOUCH = {"name": "touch", "expect": "present", "touching": "hydraulic oil", "object": {"diameter": "12 mm"}}


class Plugin:
    @hookimpl
    def outcouple_geometries(self):
        return [stubs.ChordStub, stubs.CameraStub]


@pytest.fixture(scope="module")
def host():
    return build_host({"stubs": Plugin()})


def plate(host, states=(CLEAR, TOUCH), **sections):
    data = {
        "geometry": "chord-stub",
        "states": list(states),
        "environment": {"temperature": "25 degC"},
        "readout": {"feedback_resistance": "50 kohm", "bits": 24, "dark_current": "0 A", "responsivity": "0.6 A/W"},
        "decision": {"level": "given", "share": "-3 %"},
    }
    for name, keys in sections.items():
        data[name] = {**data.get(name, {}), **keys}
    return design_from_mapping(data, host=host)


def test_common_drift_is_the_same_on_every_channel(host):
    """20 K at -0.5 %/K: exp(-0.1) - 1 = -9.5 %, which reads as a touch of 9.5 % on all chords at once."""
    table = tabulate(plate(host, (CLEAR, HOT, TOUCH), emitter={"power_drift": "-0.5 %/K"}))
    change = table.row("hot").score.mean[0]
    # the rest is the detector's and the plate's own temperature over the width of the line
    assert np.ptp(change) < 1e-4
    assert change.mean() == pytest.approx(1 - np.exp(-0.1), rel=3e-3)


@pytest.mark.parametrize("confirm", [1, 5])
def test_neither_channels_nor_confirming_average_common_drift_away(host, confirm):
    settings = {"confirm": confirm, "window": confirm, "channels": 6}
    drifting = plate(host, (CLEAR, HOT, TOUCH), emitter={"power_drift": "-0.5 %/K"}, decision=settings)
    decided = tabulate(drifting).decided
    assert decided.alarm["clear"][0] < 1e-12
    assert decided.alarm["hot"][0] == pytest.approx(1.0)
    ratio = plate(
        host,
        (CLEAR, HOT, TOUCH),
        emitter={"power_drift": "-0.5 %/K"},
        decision=settings,
        readout={"reference_channel": "yes"},
    )
    assert tabulate(ratio).decided.alarm["hot"][0] < 1e-12


def test_a_tracked_baseline_swallows_slow_touches(host):
    """(1 - exp(-x)) / x = level / change at x = rise / tau; a resting touch is held tau ln(change / level)."""
    design = plate(host, decision={"tracking": "20 s"})
    change = float(np.max(tabulate(design).row("touch").score.seeing))
    found = evaluate_batch(design, {}, ["slowest_touch", "held_time"]).metrics
    x = float(found["slowest_touch"].values[0]) / 20
    assert (1 - np.exp(-x)) / x == pytest.approx(0.03 / change, rel=1e-6)
    assert float(found["held_time"].values[0]) == pytest.approx(20 * np.log(change / 0.03), rel=1e-6)


def test_the_tracker_in_time(host):
    """A first-order tracker stepped through time: a touch a tenth slower than the slowest never reaches the level."""
    design = plate(host, decision={"tracking": "20 s"})
    change = float(np.max(tabulate(design).row("touch").score.seeing))
    slowest = float(evaluate_batch(design, {}, ["slowest_touch"]).metrics["slowest_touch"].values[0])
    for rise, reaches in ((0.95 * slowest, True), (1.05 * slowest, False)):
        step, base, peak = 0.005, 0.0, 0.0
        for time in np.arange(0, 2 * rise, step):
            reading = change * min(time / rise, 1.0)
            peak = max(peak, reading - base)
            base += (reading - base) * step / 20
        assert bool(peak > 0.03) == reaches


def test_without_tracking_the_metric_says_what_is_missing(host):
    found = evaluate_batch(plate(host), {}, ["slowest_touch"]).metrics["slowest_touch"]
    assert "decision.tracking" in found.why


def test_a_level_set_by_noise_keeps_the_alarms_asked_for(host):
    design = plate(host, decision={"level": "noise", "false_alarms": 12, "confirm": 2, "window": 3})
    found = evaluate_batch(design, {}, ["false_alarms_per_year"]).metrics["false_alarms_per_year"]
    assert found.values[0] == pytest.approx(12, rel=1e-6)


def test_a_touch_surface_has_no_demand_to_miss(host):
    found = evaluate(plate(host), advice=False, views=False)
    assert found.failures == ()
    assert "demand-open" not in [note.code for note in found.notes]


@pytest.mark.parametrize(("demand", "unnoticed"), [("leak", 1.0), ("low level", 0.0)])
def test_where_present_reads_high_a_dead_emitter_errs_the_other_way(host, demand, unnoticed):
    """Light drawn out and sent back means present; without light nothing is found, which misses a leak."""
    pale = {"patches": [{"backing": "hydraulic oil", "albedo": "60 %"}]}
    design = design_from_mapping(
        {
            "geometry": "camera-stub",
            "states": [CLEAR, dict(TOUCH, touching=pale)],
            "readout": {"feedback_resistance": "10 Mohm", "dark_current": "0 A"},
            "decision": {"demand": demand},
        },
        host=host,
    )
    found = evaluate(design, advice=False, views=False)
    assert found.metrics["dead_emitter_unnoticed"].value == pytest.approx(unnoticed, abs=1e-6)
    dead = next(row for row in found.failures if row.cause.startswith("emitter dead"))
    assert dead.direction == ("dangerous" if unnoticed else "spurious")
