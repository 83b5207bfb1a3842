"""Cone, dome and truncated cone: brute force, closed forms, the prism, limits, demos."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from outcouple import load_design
from outcouple.design import design_from_mapping
from outcouple.evaluation import evaluate, evaluate_batch
from outcouple.evaluation.table import tabulate
from outcouple.testing import check_geometry
from outcouple_plugins.round_tip import RoundTip

sys.path.insert(0, str(Path(__file__).parent))
from cone_trace import cone_signal

DEMOS = Path(__file__).parents[2] / "demo_configs"
MEDIA = {
    name: {"index": index, "source": "made for this test"}
    for name, index in (
        ("acrylic", 1.484),
        ("void", 1.0),
        ("watery", 1.327),
        ("carbonate", 1.57),
        ("like acrylic", 1.484),
    )
}


def design(tip=None, emitter=None, layout=None, *, wet="watery", geometry="round-tip", **more):
    return design_from_mapping(
        {
            "geometry": geometry,
            "materials": MEDIA,
            "emitter": {"linewidth": "0.1 nm", **(emitter or {})},
            ("tip" if geometry == "round-tip" else "prism"): {"material": "acrylic", "crosstalk": "0 %", **(tip or {})},
            "layout": {"emitter_radius": "0.5 mm", "detector_radius": "1 mm", **(layout or {})},
            "states": [
                {"name": "dry", "expect": "absent", "touching": "void"},
                {"name": "wet", "expect": "present", "touching": wet},
            ],
            **more,
        }
    )


def shares(found):
    return {row.laid.state.name: float(row.result.share[0, 0]) for row in tabulate(found).rows}


@pytest.mark.parametrize(("half_angle", "n_out", "state"), [(7, 1.0, "dry"), (25, 1.0, "dry"), (25, 1.327, "wet")])
def test_a_cone_against_brute_force(half_angle, n_out, state):
    """Independent polarised trace (cone_trace.py); the plugin's set of rays is good to a few per cent of a share."""
    found = shares(design(emitter={"half_angle": f"{half_angle} deg"}))[state]
    mean, error = cone_signal(
        n=1.484,
        n_out=n_out,
        radius=4e-3,
        source_x=-2e-3,
        source_r=0.5e-3,
        detector_x=2e-3,
        detector_r=1e-3,
        half_angle=np.radians(half_angle),
    )
    assert found == pytest.approx(mean, abs=4 * error + 0.03 * mean)


@pytest.mark.parametrize("polarization", ["s", "p"])
@pytest.mark.parametrize(("at", "n_out", "state"), [(1, 1.0, "dry"), (1, 1.327, "wet"), (2, 1.327, "wet")])
def test_turns_of_polarised_skew_light_against_field_vectors(polarization, at, n_out, state):
    """cone_trace.py with polarised light; wet p is 16 (offset 2 mm) and 7 times too dark where turns are left out."""
    source, detector, half_angle = {1: (2.5e-3, 2.5e-3, 30), 2: (0.5e-3, 1e-3, 25)}[at]
    found = shares(
        design(
            emitter={"half_angle": f"{half_angle} deg", "polarization": polarization},
            layout={
                "emitter_position": f"-{at} mm",
                "detector_position": f"{at} mm",
                "emitter_radius": f"{source} m",
                "detector_radius": f"{detector} m",
                "detector_half_angle": "90 deg",
            },
        )
    )[state]
    mean, error = cone_signal(
        n=1.484,
        n_out=n_out,
        radius=4e-3,
        source_x=-at * 1e-3,
        source_r=source,
        detector_x=at * 1e-3,
        detector_r=detector,
        half_angle=np.radians(half_angle),
        polarization=polarization,
    )
    assert found == pytest.approx(mean, abs=4 * error + 0.03 * mean)


@pytest.mark.parametrize(
    ("material", "n", "liquid", "n_l", "claimed"),
    [("acrylic", 1.484, "watery", 1.327, 0.37), ("carbonate", 1.57, "watery", 1.327, 0.48)],
)
def test_floor_of_a_uniformly_filled_dome(material, n, liquid, n_l, claimed):
    """(1 - (n_l/n)^2) / (1 - 1/n^2): axis-parallel light on the whole dome, kept by the first total reflection."""
    exact = (1 - (n_l / n) ** 2) / (1 - 1 / n**2)
    assert exact == pytest.approx(claimed, abs=0.006)
    row = tabulate(
        design(
            {"shape": "dome", "material": material},
            {"half_angle": "0.01 deg"},
            {"emitter_position": "0 mm", "emitter_radius": "4 mm", "coupling": "bonded"},
        )
    ).rows[0]
    angle, launch = row.laid.light.angle[0, :, 0], row.laid.light.launch[0]
    dry = np.sum(launch[np.sin(angle) > 1 / n])
    wet = np.sum(launch[np.sin(angle) > n_l / n])
    assert wet / dry == pytest.approx(exact, abs=0.005)


def test_meridional_rays_of_a_cone_are_those_of_a_prism():
    """A thin beam through the axis plane of a 90 degree cone does what it does in a two-face prism."""
    narrow = {"half_angle": "0.2 deg"}
    layout = {"emitter_radius": "20 um", "detector_radius": "0.5 mm", "coupling": "bonded"}
    cone = shares(design(None, narrow, layout))
    prism = shares(design({"base": "8 mm"}, narrow, layout, geometry="prism-switch"))
    assert cone["dry"] == pytest.approx(prism["dry"], rel=2e-3)
    assert cone["wet"] == pytest.approx(prism["wet"], rel=0.05)


def test_a_liquid_like_the_tip_takes_all():
    found = shares(design(wet="like acrylic"))
    assert found["wet"] == pytest.approx(0.0, abs=1e-12)
    assert found["dry"] > 0.1


def test_a_truncated_tip_reflects_three_times_at_60_degrees():
    row = tabulate(
        design(
            {"shape": "truncated", "face_angle": "60 deg", "diameter": "12 mm", "end_diameter": "6 mm"},
            {"half_angle": "0.1 deg"},
            {
                "emitter_position": "-4.5 mm",
                "detector_position": "4.5 mm",
                "emitter_radius": "50 um",
                "detector_radius": "1 mm",
            },
        )
    ).rows[0]
    light = row.laid.light
    came_back = light.reach[0, 0] > 0
    assert np.mean(came_back) > 0.9
    assert np.all(np.sum(light.hits[0, 0, came_back], axis=-1) == 3)
    angles = light.angle[0, came_back][light.hits[0, 0, came_back] > 0]
    assert np.degrees(angles) == pytest.approx(60, abs=1.0)


def test_a_mask_keeps_the_rim_dark():
    wide = {"half_angle": "5 deg"}
    layout = {
        "emitter_position": "0 mm",
        "emitter_radius": "3.9 mm",
        "detector_position": "0 mm",
        "detector_radius": "3.9 mm",
    }
    bare = evaluate(design({"shape": "dome"}, wide, layout), advice=False)
    masked = evaluate(design({"shape": "dome", "opening": "7 mm"}, wide, layout), advice=False)
    assert masked.metrics["wet_floor"].value < 0.9 * bare.metrics["wet_floor"].value
    assert any(note.code == "dome-rim" for note in bare.notes)
    radius = bare.metrics["annulus_outer"].value
    assert radius == pytest.approx(4e-3 * 1.327 / 1.484, rel=1e-6)


def test_sixteen_times_as_many_rays_say_the_same(monkeypatch):
    from outcouple_plugins.round_tip import light

    few = shares(design(emitter={"half_angle": "20 deg"}))
    monkeypatch.setattr(light, "RAYS", 24576)
    many = shares(design(emitter={"half_angle": "20 deg"}))
    assert few["dry"] == pytest.approx(many["dry"], rel=0.015)
    assert few["wet"] == pytest.approx(many["wet"], rel=0.06)


def test_a_batch_is_its_samples():
    base = design()
    samples = {("tip", "diameter"): np.array([7e-3, 8e-3, 9e-3]), ("tip", "face_angle"): np.radians([44.0, 45.0, 47.0])}
    names = ["worst_ratio", "dry_angle_margin", "wet_floor", "offset_sensitivity", "switching_point"]
    whole = evaluate_batch(base, samples, names)
    for at in range(3):
        one = evaluate_batch(base, {path: values[at : at + 1] for path, values in samples.items()}, names)
        for name in names:
            assert one.metrics[name].values[0] == pytest.approx(whole.metrics[name].values[at], rel=1e-9), name


def test_the_liquid_switches_on_its_way_up():
    found = evaluate(design(), advice=False)
    assert 0 < found.metrics["switching_point"].value < 4e-3
    assert 0 < found.metrics["switching_span"].value < 4e-3


@pytest.mark.parametrize("shape", ["cone", "dome", "truncated"])
def test_ledgers_close(shape):
    from outcouple.evaluation.ledger import ledger_of

    for row in tabulate(design({"shape": shape})).rows:
        assert abs(ledger_of(row.laid).gap) < 1e-12


def test_keeps_the_contract():
    report = check_geometry(RoundTip())
    print(report)
    assert report.ran > 100
    assert not report.failed, str(report)


def test_dairy_tank_is_red_on_a_dead_source():
    """Milk sends light back and a dead source reads wet, the dangerous direction of a pump that must not run dry."""
    found = evaluate(load_design(DEMOS / "dairy_balance_tank.toml"))
    assert found.verdict == "fail"
    assert "dead emitter" in found.headline
    milk = next(state for state in found.states if state.name == "milk")
    dry = next(state for state in found.states if state.expect == "absent")
    assert 0.02 < milk.signal / dry.signal < 0.2
    assert any(row.direction == "dangerous" for row in found.failures if "emitter dead" in row.cause)


def test_truncated_fluoropolymer_tip_passes():
    """Critical angle 48.0 degrees for 1.345: three hits at 60 degrees reflect dry, and not in water or acid."""
    assert np.degrees(np.arcsin(1 / 1.345)) == pytest.approx(48.0, abs=0.1)
    found = evaluate(load_design(DEMOS / "acid_bench_truncated.toml"))
    assert found.verdict == "pass", found.headline
    wet = [state for state in found.states if state.expect == "present"]
    dry = next(state for state in found.states if state.expect == "absent")
    assert all(state.signal < 0.1 * dry.signal for state in wet)
