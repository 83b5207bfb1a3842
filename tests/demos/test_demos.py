"""Every demo design runs, and the ones made to fail do so for the stated reason.

Names and numbers of the demos are invented; what they must show is physics and is recomputed in the tests of its room.
"""

from __future__ import annotations

import tomllib
import warnings
from functools import cache
from pathlib import Path

import numpy as np
import pytest

from outcouple import evaluate, load_design
from outcouple.design import design_from_mapping
from outcouple.hooks import build_host

DEMOS = sorted((Path(__file__).parents[2] / "demo_configs").glob("*.toml"))


@cache
def outcome(name):
    return evaluate(load_design(next(file for file in DEMOS if file.stem == name)))


@pytest.mark.parametrize("file", DEMOS, ids=lambda file: file.stem)
def test_every_demo_runs_and_states_requirements(file):
    found = outcome(file.stem)
    assert found.requirements
    assert found.verdict in ("pass", "fail", "open")
    assert found.states[0].stages[0].share == 1.0
    assert "nan" not in found.headline


def test_day_tank_passes_limited_by_crosstalk():
    """Claims of the design case: margin 6.74 deg with n 1.615 (the catalogue's polysulfone is 1.609 at 940 nm: 6.58),
    50:1 by crosstalk of 2 %, a film does nothing. The tip here absorbs and loses a tenth dry: 45:1."""
    found = outcome("oil_tank_overfill")
    assert found.verdict == "pass"
    assert np.degrees(found.metrics["dry_angle_margin"].value) == pytest.approx(6.6, abs=0.2)
    assert 44 < found.metrics["worst_ratio"].value < 50
    assert "crosstalk" in found.limiting
    assert abs(found.metrics["film_effect"].value) < 0.02
    dry, film = found.states[0], found.states[1]
    assert film.signal == pytest.approx(dry.signal, rel=0.01)


def test_silica_rung_passes_and_sapphire_fails_because_nitrogen_never_frustrates_it():
    """Sapphire at 45 degrees: 1.76 sin 45 = 1.244 > 1.20, so the wet face reflects all (R = 1.00)."""
    silica, sapphire = outcome("dewar_ladder_silica"), outcome("dewar_ladder_sapphire")
    assert silica.verdict == "pass"
    assert np.degrees(silica.metrics["dry_angle_margin"].value) == pytest.approx(1.4, abs=0.1)
    assert sapphire.verdict == "fail"
    assert sapphire.metrics["worst_ratio"].value == pytest.approx(1.0, abs=1e-6)
    assert "liquid nitrogen" in sapphire.headline


def test_solid_fluoropolymer_fails_dry_and_a_skin_on_silica_passes():
    """n 1.345: critical angle 48.0 degrees, beyond the 45 degree face even in air."""
    solid, skin = outcome("acid_bench_fluoropolymer"), outcome("acid_bench_silica_skin")
    assert solid.verdict == "fail"
    assert "dry angle margin" in solid.headline
    assert np.degrees(solid.metrics["dry_angle_margin"].value) == pytest.approx(-3.0, abs=0.2)
    assert skin.verdict == "pass"


def test_force_cell_shows_that_temperature_dominates():
    """Slope 0.0031/nm near 139 nm (s polarised, crown glass, 45 degrees); 12 nm/K over 5 K swamps 0.1 nm."""
    found = outcome("force_cell")
    assert found.verdict == "fail"
    assert found.metrics["best_bias"].value == pytest.approx(139e-9, abs=6e-9)
    assert found.metrics["slope"].value == pytest.approx(0.0031e9, rel=0.06)
    assert found.metrics["best_resolution"].value < 0.2e-9
    assert found.metrics["thermal_error"].value == pytest.approx(60e-9)
    assert "temperature" in found.headline


@pytest.mark.parametrize("file", DEMOS, ids=lambda file: file.stem)
def test_no_demo_saturates_its_read_out(file):
    found = outcome(file.stem)
    assert found.metrics["saturation_headroom"].value > 1
    assert "saturated" not in [note.code for note in found.notes]


def test_coffee_reservoir_is_red_because_a_dead_emitter_lets_the_pump_run_dry():
    """Light lost reads wet, and the demand is low level; with a fault band the same design passes."""
    found = outcome("coffee_reservoir")
    assert found.verdict == "fail"
    assert [one.metric for one in found.requirements if one.verdict == "fail"] == ["dead_emitter_unnoticed"]
    assert found.headline.startswith("FAIL: a dead emitter reads wet (dangerous: the pump runs dry)")
    row = found.failures[0]
    assert (row.cause, row.direction, row.reads) == ("emitter dead, cable open, supply lost", "dangerous", "wet")
    text = next(file for file in DEMOS if file.stem == "coffee_reservoir").read_text()
    mended = tomllib.loads(text)
    mended["decision"]["fault_low"] = "2 %"
    assert evaluate(design_from_mapping(mended, host=build_host())).verdict == "pass"


def test_day_tank_fails_safe_on_a_dead_emitter_and_carries_its_banners():
    found = outcome("oil_tank_overfill")
    assert found.failures[0].direction == "dangerous"
    dead = next(row for row in found.failures if row.cause.startswith("emitter dead"))
    assert (dead.reads, dead.direction) == ("wet", "spurious")
    dangers = {note.code for note in found.notes if note.severity == "danger"}
    assert {"explosive-atmosphere", "overfill"} <= dangers


@pytest.mark.parametrize("name", ["dewar_ladder_silica", "dewar_ladder_sapphire"])
def test_cold_tips_read_positive_currents_without_a_warning(name):
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        found = evaluate(load_design(next(file for file in DEMOS if file.stem == name)))
    assert min(state.signal for state in found.states) > 0
    assert "electronics-temperature" not in [note.code for note in found.notes]


def test_advice_names_what_a_designer_may_choose():
    facts = ("environment.", "decision.", "readout.voltage_corner", "readout.intensity_noise")
    for file in DEMOS:
        for one in outcome(file.stem).advice:
            # Diagnostics are built in or not, as the designer chooses.
            assert not one.path.startswith(facts) or one.path.startswith("decision.diagnostics.")
            assert one.value_before != one.value_after
