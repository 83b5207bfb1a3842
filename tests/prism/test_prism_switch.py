"""The prism switch against brute force, closed forms and the figures of its design cases."""

from __future__ import annotations

import importlib.util
from pathlib import Path

import numpy as np
import pytest

from outcouple.design import design_from_mapping
from outcouple.evaluation import evaluate, evaluate_batch
from outcouple.evaluation.table import tabulate
from outcouple.hooks import build_host
from outcouple.testing import check_geometry
from outcouple_plugins.prism_switch import PrismSwitch

spec = importlib.util.spec_from_file_location("prism_trace", Path(__file__).with_name("prism_trace.py"))
trace = importlib.util.module_from_spec(spec)
spec.loader.exec_module(trace)


@pytest.fixture(scope="module")
def host():
    return build_host()


STATES = [
    {"name": "dry", "expect": "absent", "touching": "outside dry"},
    {"name": "wet", "expect": "present", "touching": "outside wet"},
]


def prism(host, *, index=1.489, dry=1.0, wet=1.327, base="10 mm", crosstalk="0 %", **more):
    data = {
        "geometry": "prism-switch",
        "states": STATES,
        "prism": {"material": "tip", "base": base, "crosstalk": crosstalk, **more.pop("prism", {})},
        "materials": {
            "tip": {"index": index, "kind": "solid"},
            "outside dry": {"index": dry, "kind": "gas"},
            "outside wet": {"index": wet},
        },
        **more,
    }
    return design_from_mapping(data, host=host)


def shares(design):
    return [row.result.share[0, 0] for row in tabulate(design).rows]


CASES = {
    "narrow lobe": {"half": 5, "bonded": False, "tilt": 0},
    "wide lobe": {"half": 30, "bonded": False, "tilt": 0},
    "bonded": {"half": 12, "bonded": True, "tilt": 0},
    "with a stem": {"half": 8, "bonded": False, "tilt": 0, "stem": 3},
    "steep faces": {"half": 10, "bonded": False, "tilt": 0, "face": 40},
}


@pytest.mark.parametrize("case", CASES)
def test_agrees_with_an_independent_polarised_trace(host, case):
    """Computed independently: prism_trace.py; agreement within 4 standard errors and 0.3 % of the dry share."""
    given = CASES[case]
    stem, face = given.get("stem", 0), given.get("face", 45)
    design = prism(
        host,
        prism={"stem": f"{stem} mm", "face_angle": f"{face} deg"},
        emitter={"half_angle": f"{given['half']} deg", "linewidth": "0.1 nm"},
        layout={
            "emitter_position": "-2 mm",
            "emitter_radius": "0.5 mm",
            "detector_position": "2 mm",
            "detector_radius": "1 mm",
            "detector_half_angle": "90 deg",
            "coupling": "bonded" if given["bonded"] else "air",
        },
    )
    dry_model, wet_model = shares(design)
    common = {
        "n": 1.489,
        "base": 10e-3,
        "stem": stem * 1e-3,
        "face_angle": np.radians(face),
        "source_x": -2e-3,
        "source_r": 0.5e-3,
        "detector_x": 2e-3,
        "detector_r": 1e-3,
        "half_angle": np.radians(given["half"]),
        "bonded": given["bonded"],
    }
    dry, dry_error = trace.prism_signal(n_out=1.0, **common)
    wet, wet_error = trace.prism_signal(n_out=1.327, **common)
    assert dry_model == pytest.approx(dry, abs=4 * dry_error + 3e-3 * dry)
    assert wet_model == pytest.approx(wet, abs=4 * wet_error + 3e-3 * dry * 0.02 + 5e-3 * wet)


def test_captured_share_of_a_right_angle_prism_is_the_overlap_of_two_circles(host):
    """A 90 degree pair of faces returns every two-hit ray by point reflection about its edge, so each direction moves
    the image of the source disc rigidly; integrated here over directions by a plain sum. Computed independently.

    Anchor of the design case (n 1.489, s 2 mm, radii 0.5 and 1 mm, edge 5 mm high, cos lobe cut at 5 degrees inside):
    capture 0.871, dry 0.731.
    """
    design = prism(
        host,
        emitter={"half_angle": "5 deg", "linewidth": "0.1 nm"},
        layout={
            "emitter_position": "-2 mm",
            "emitter_radius": "0.5 mm",
            "detector_position": "2 mm",
            "detector_radius": "1 mm",
            "coupling": "bonded",
            "detector_half_angle": "90 deg",
        },
    )
    light = tabulate(design).light
    capture = float(light.capture()[0, 0])
    theta = (np.arange(400) + 0.5) / 400 * np.radians(5)
    phi = (np.arange(200) + 0.5) / 200 * 2 * np.pi
    t, f = np.meshgrid(theta, phi, indexing="ij")
    weight = np.sin(t) * np.cos(t)
    dx, dy, dz = np.sin(t) * np.cos(f), np.sin(t) * np.sin(f), np.cos(t)
    h, s, a, b = 5e-3, 2e-3, 0.5e-3, 1e-3
    gap = np.hypot(s - 2 * h * dx / dz - 2e-3, 2 * h * dy / dz)
    gap = np.clip(gap, abs(b - a) + 1e-12, a + b)
    lens = (
        a**2 * np.arccos(np.clip((gap**2 + a**2 - b**2) / (2 * gap * a), -1, 1))
        + b**2 * np.arccos(np.clip((gap**2 + b**2 - a**2) / (2 * gap * b), -1, 1))
        - 0.5 * np.sqrt(np.maximum((-gap + a + b) * (gap + a - b) * (gap - a + b) * (gap + a + b), 0))
    )
    expected = float(np.sum(weight * lens / (np.pi * a**2)) / np.sum(weight))
    assert expected == pytest.approx(0.871, abs=1e-3)
    assert capture == pytest.approx(expected, rel=2e-3)
    assert shares(design)[0] == pytest.approx(0.731, abs=2e-3)


def test_one_hit_ways_open_up_in_wide_lobes_and_carry_the_wet_reading(host):
    """At 30 degrees inside they are about 40 % of the capture and most of the wet signal (claim of the design case)."""
    wide = prism(
        host,
        emitter={"half_angle": "30 deg"},
        layout={
            "emitter_radius": "0.5 mm",
            "detector_radius": "1 mm",
            "coupling": "bonded",
            "detector_half_angle": "90 deg",
        },
    )
    table = tabulate(wide)
    found = PrismSwitch().measure(["one_hit_share"], _results(table))["one_hit_share"]
    assert 0.3 < found.values[0] < 0.5
    way = table.rows[1].laid.ways[0].survival.after[0, 1, 0]
    landed = table.light.launch[0] * way * table.light.reach[0, 0]
    one = table.light.hits[0, 0].sum(axis=-1) == 1
    assert landed[one].sum() > 0.5 * landed.sum()


def _results(table):
    from outcouple.evaluation.batch import results_of

    return results_of(table, None)


@pytest.mark.parametrize(
    ("index", "margin"), [(1.484, 2.6), (1.510, 3.5), (1.57, 5.44), (1.615, 6.74), (1.64, 7.4), (1.759, 10.4)]
)
def test_dry_angle_margin_is_45_degrees_less_the_critical_angle(host, index, margin):
    """Margins of common tips as the design cases claim them, last digit printed; recomputed from asin(1/n)."""
    value = evaluate(prism(host, index=index, dry=1.0)).metrics["dry_angle_margin"].value
    assert np.degrees(value) == pytest.approx(45 - np.degrees(np.arcsin(1 / index)), abs=1e-9)
    assert np.degrees(value) == pytest.approx(margin, abs=0.06)


@pytest.mark.parametrize(
    ("index", "liquid", "returned"),
    [
        (1.484, 1.327, 1.3e-4),
        (1.57, 1.327, 9.5e-4),
        (1.615, 1.327, 2.2e-3),
        (1.759, 1.327, 2.3e-2),
        (1.4525, 1.20, 1.9e-3),
    ],
)
def test_wet_return_of_a_collimated_beam(host, index, liquid, returned):
    """Two hits at 45 degrees, s and p averaged after the product; figures of the design cases, 4 %."""
    narrow = prism(host, index=index, wet=liquid, emitter={"half_angle": "0.2 deg", "linewidth": "0.1 nm"})
    dry, wet = shares(narrow)
    assert wet / dry == pytest.approx(returned, rel=0.05)


def test_a_liquid_below_the_window_never_switches(host):
    """Sapphire in liquid nitrogen: sin 45 x 1.759 = 1.244 > 1.20, so the faces still reflect all."""
    dry, wet = shares(prism(host, index=1.759, wet=1.20, emitter={"half_angle": "2 deg"}))
    assert wet == pytest.approx(dry, rel=1e-6)
    window = evaluate(prism(host, index=1.615, emitter={"half_angle": "1 deg"})).metrics["lowest_index"].value
    assert window == pytest.approx(1.615 * np.sin(np.radians(45)), abs=0.02)


def test_index_match_loses_everything(host):
    _, wet = shares(prism(host, index=1.489, wet=1.489))
    assert wet == pytest.approx(0.0, abs=1e-15)


def test_batch_equals_single_designs(host):
    base = np.array([7e-3, 9e-3, 11e-3])
    batch = evaluate_batch(prism(host), {("prism", "base"): base})
    for at, one in enumerate(base):
        alone = evaluate_batch(prism(host, base=f"{one * 1e3} mm"), {})
        for state in batch.signals:
            assert batch.signals[state][at] == pytest.approx(alone.signals[state][0], rel=1e-9)


def test_keeps_the_contract(host, capsys):
    report = check_geometry(PrismSwitch(), host)
    with capsys.disabled():
        print(f"\n{report}")
    assert not report.failed, report
    assert report.ran > 150
