"""The contract carries unlike sensors: chords, a camera, a gap, turning planes, milky liquids, films and drops."""

from __future__ import annotations

import importlib.util
import sys
from pathlib import Path

import numpy as np
import pytest

from outcouple.contact.cover import Cover, Drops, Film, Patch
from outcouple.design import design_from_mapping
from outcouple.evaluation import evaluate, evaluate_batch
from outcouple.evaluation.ledger import ledger_of
from outcouple.evaluation.signals import trial_share
from outcouple.evaluation.table import tabulate
from outcouple.evaluation.transport import mean_power
from outcouple.hooks import build_host, hookimpl

spec = importlib.util.spec_from_file_location("stub_sensors", Path(__file__).with_name("stub_sensors.py"))
stubs = importlib.util.module_from_spec(spec)
sys.modules["stub_sensors"] = stubs
spec.loader.exec_module(stubs)


class Plugin:
    """A stranger's plugin with the stub sensors."""

    @hookimpl
    def outcouple_geometries(self):
        return [stubs.ChordStub, stubs.CameraStub, stubs.GapStub, stubs.TurnStub]


@pytest.fixture(scope="module")
def host():
    return build_host({"stubs": Plugin()})


def design(host, geometry, states, **more):
    more.setdefault("readout", QUIET)
    return design_from_mapping({"geometry": geometry, "states": states, **more}, host=host)


QUIET = {"feedback_resistance": "100 ohm", "dark_current": "0 A"}
"""A stage no stub saturates, with nothing in its reading but light."""
TOUCH = {
    "name": "finger",
    "expect": "present",
    "touching": "hydraulic oil",
    "object": {"diameter": "9 mm", "y": "0 mm"},
}
CLEAR = {"name": "clear", "expect": "absent"}
MILKY = {
    "name": "milky",
    "expect": "present",
    "touching": {"patches": [{"backing": "water", "albedo": "40 %"}]},
}
MIXED = {
    "name": "film and drops",
    "expect": "absent",
    "touching": {
        "patches": [
            {"share": "60 %", "films": [{"material": "water", "thickness": "8 um", "spread": "exponential"}]},
            {"share": "40 %", "backing": "water", "drops": True, "contact_angle": "40 deg"},
        ]
    },
}


@pytest.mark.parametrize("geometry", ["prism-switch", "chord-stub", "camera-stub", "turn-stub"])
def test_ledger_closes_for_every_state_and_channel(host, geometry):
    states = [CLEAR, MILKY, MIXED]
    if host.geometry(geometry).spot_face:
        states.append(TOUCH)
    table = tabulate(design(host, geometry, states))
    for row in table.rows:
        for channel in range(row.reading.mean.shape[1]):
            assert abs(ledger_of(row.laid, channel).gap) < 1e-12, (row.laid.state.name, channel)


def test_ledger_is_not_made_from_captured_light(host):
    """Losing a launched ray that no channel sees must open the ledger."""
    row = tabulate(design(host, "prism-switch", [CLEAR])).rows[0]
    unseen = np.flatnonzero(row.laid.light.reach[0, 0] == 0)[0]
    row.laid.light.launch[0, unseen] += 0.01
    assert abs(ledger_of(row.laid).gap) < 1e-12
    assert ledger_of(row.laid).losses["stays at the emitter"] == pytest.approx(-0.01)


def test_an_object_touches_only_the_chords_that_cross_it(host):
    table = tabulate(design(host, "chord-stub", [CLEAR, TOUCH]))
    clear, touch = (row.reading.mean[0] for row in table.rows)
    assert np.all(touch <= clear)
    assert 0 < np.sum(touch < 0.999 * clear) < clear.size / 2


def test_turned_planes_return_less_than_a_plain_product(host):
    """PMMA to water at 50 degrees twice: 3.7e-4 without, 0.8e-4 with a turn of 90 degrees.

    Computed independently here from Fresnel's equations; the two figures are the ones a plain product gets wrong.
    """
    states = [{"name": "wet", "expect": "present", "touching": "water"}]
    stubs.TurnStub.turn = np.pi / 2
    turned = tabulate(design(host, "turn-stub", states)).rows[0].result.share[0, 0]
    stubs.TurnStub.turn = 0.0
    straight = tabulate(design(host, "turn-stub", states)).rows[0].result.share[0, 0]
    from outcouple.materials import index

    n1, n2 = (float(index(name, 850e-9).real) for name in ("PMMA", "water"))
    c1 = np.cos(np.radians(50))
    c2 = np.sqrt(1 - (n1 * np.sin(np.radians(50)) / n2) ** 2)
    rs = ((n1 * c1 - n2 * c2) / (n1 * c1 + n2 * c2)) ** 2
    rp = ((n2 * c1 - n1 * c2) / (n2 * c1 + n1 * c2)) ** 2
    assert straight == pytest.approx((rs**2 + rp**2) / 2, rel=2e-3)
    assert turned == pytest.approx(rs * rp, rel=2e-3)
    assert straight == pytest.approx(3.7e-4, rel=0.05)
    assert turned == pytest.approx(0.8e-4, rel=0.08)


def test_coarse_patches_wet_the_whole_way_or_none_of_it(host):
    """A half-wet two-face prism keeps a half under patches larger than the beam, a quarter under finer ones."""
    half = [{"share": "50 %", "backing": "water"}, {"share": "50 %", "backing": "air"}]
    quiet = {"prism": {"material": "polysulfone", "crosstalk": "0 %"}, "emitter": {"half_angle": "1 deg"}}
    states = [
        CLEAR,
        {"name": "fine", "expect": "absent", "touching": {"patches": half}},
        {"name": "coarse", "expect": "absent", "touching": {"patches": half, "coarse": True}},
    ]
    dry, fine, coarse = (row.result.share[0, 0] for row in tabulate(design(host, "prism-switch", states, **quiet)).rows)
    assert fine / dry == pytest.approx(0.25, abs=0.02)
    assert coarse / dry == pytest.approx(0.5, abs=0.02)


def test_a_flat_film_changes_nothing_beyond_the_critical_angle_and_drops_do(host):
    quiet = {"prism": {"material": "polysulfone"}, "emitter": {"half_angle": "5 deg"}}
    base = tabulate(design(host, "prism-switch", [CLEAR], **quiet)).rows[0].laid
    faces = ("emitter", "detector")

    def share(*patches):
        found = trial_share(base_design, base, dict.fromkeys(faces, Cover(patches)), {})
        return float(np.sum(base.weights * found[0, :, 0]))

    base_design = design(host, "prism-switch", [CLEAR], **quiet)
    dry = share(Patch(1.0, "air"))
    film = share(Patch(1.0, "air", (Film("water", 30e-6, "exponential"),)))
    drops = share(Patch(0.3, Drops("water", np.radians(60))), Patch(0.7, "air"))
    assert film == pytest.approx(dry, rel=1e-3)
    assert drops < 0.7 * dry


def test_milky_liquid_adds_light_in_proportion_to_what_it_sends_back(host):
    def milky(albedo):
        touching = {"patches": [{"backing": "water", "albedo": f"{albedo} %"}]}
        return {"name": f"milky {albedo}", "expect": "present", "touching": touching}

    states = [CLEAR, milky(0), milky(20), milky(40)]
    quiet = {"prism": {"crosstalk": "0 %"}, "emitter": {"half_angle": "3 deg"}}
    _, clear, pale, white = (
        row.result.share[0, 0] for row in tabulate(design(host, "prism-switch", states, **quiet)).rows
    )
    assert clear < pale < white
    assert white - clear == pytest.approx(2 * (pale - clear), rel=1e-12)


def test_a_continuous_sensor_has_slope_and_resolution_and_no_level(host):
    states = [{"name": str(gap), "expect": f"{gap} nm"} for gap in (50, 200, 400)]
    outcome = evaluate(design(host, "gap-stub", states))
    assert outcome.level is None
    assert outcome.metrics["best_resolution"].value > 0
    assert outcome.metrics["best_bias"].value == pytest.approx(139e-9, abs=8e-9)


@pytest.mark.parametrize("geometry", ["chord-stub", "camera-stub"])
def test_a_batch_equals_single_designs(host, geometry):
    one = design(host, geometry, [CLEAR, TOUCH])
    thickness = np.array([3e-3, 5e-3, 8e-3])
    together = evaluate_batch(one, {("plate", "thickness"): thickness})
    for at, value in enumerate(thickness):
        alone = evaluate_batch(one, {("plate", "thickness"): np.array([value])})
        for state in together.signals:
            assert together.signals[state][at] == pytest.approx(alone.signals[state][0], rel=1e-12)


def test_a_state_may_change_parameters_and_the_object_may_be_sampled(host):
    skin = TOUCH | {"touching": {"patches": [{"backing": "hydraulic oil", "albedo": "60 %"}]}}
    states = [CLEAR, skin, {"name": "dead", "expect": "absent", "role": "fault", "set": {"emitter.power": "0 mW"}}]
    one = design(host, "camera-stub", states)
    table = tabulate(one, {("states", "finger", "object", "diameter"): np.array([3e-3, 9e-3])})
    assert table.row("dead").reading.mean.max() == 0
    assert table.row("finger").reading.mean[1, 0] > table.row("finger").reading.mean[0, 0]


def test_cautions_survive_a_batch_with_the_samples_they_hold_for(host):
    one = design(host, "prism-switch", [CLEAR])
    batch = evaluate_batch(one, {("layout", "detector_position"): np.array([2e-3, 6e-3, 2.1e-3])}, ["signal"])
    note = next(note for note in batch.notes if note.code == "discs-off-base")
    assert list(note.where) == [False, True, False]


def test_hits_are_not_powers():
    """A contact shorter than the hop takes its share once: 0.25 hits of a black contact keep 0.75, not 0."""
    assert mean_power(np.array(0.0), np.array(0.25)) == 0.75
    assert mean_power(np.array(0.5), np.array(2.0)) == 0.25
    assert mean_power(np.array(0.5), np.array(1.5)) == pytest.approx((0.5 + 0.25) / 2)
