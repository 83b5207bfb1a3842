"""The perimeter-read plate against a brute-force trace, its demos, its maps."""

from __future__ import annotations

import dataclasses
from functools import cache, partial
from pathlib import Path

import numpy as np
import pytest

from outcouple import evaluate, load_design
from outcouple.design import design_from_mapping
from outcouple.errors import UserMistake
from outcouple.evaluation import evaluate_batch
from outcouple.evaluation.batch import results_of
from outcouple.evaluation.ledger import ledger_of
from outcouple.evaluation.table import tabulate
from outcouple.testing import check_geometry
from outcouple_plugins.edge_perimeter import EdgePerimeter
from outcouple_plugins.edge_perimeter.chords import chords_of
from outcouple_plugins.edge_perimeter.maps import field_map, objects

from .plate_trace import Contact, Plate, received

judged = partial(evaluate, advice=False, views=False)

DEMOS = Path(__file__).parents[2] / "demo_configs"


@cache
def demo(name):
    return load_design(DEMOS / f"{name}.toml")


def edited(design, **sections):
    """The design with keys of its sections changed, as texts of the file."""
    raw = {**design.raw}
    for section, keys in sections.items():
        raw[section] = {**raw.get(section, {}), **keys} if isinstance(keys, dict) else keys
    return design_from_mapping(raw)


def traced_design(plate, contacts, edges="mirrored"):
    """The trace's plate as a design file: one emitter, one detector, open to all angles; ``edges`` where it has
    mirrors."""
    materials = {
        "trial plate": {"index": plate.index, "source": "test"},
        "behind": {"index": plate.back, "source": "test"},
    }
    states = [{"name": "clean", "expect": "absent", "touching": "dry"}]
    for at, disc in enumerate(contacts):
        materials[f"contact {at}"] = {"index": disc.index, "source": "test"}
        patches = [{"share": disc.share, "backing": f"contact {at}"}, {"share": 1 - disc.share, "backing": "vacuum"}]
        place = {"diameter": disc.diameter, "x": disc.x - plate.width / 2, "y": disc.y}
        states.append(
            {
                "name": f"contact {at}",
                "expect": "present",
                "object": {key: f"{value} m" for key, value in place.items()},
                "touching": {"patches": patches},
            }
        )
    parts = {}
    for name, (_, width, height, gap) in (("emitters", plate.emitter), ("detectors", plate.detector)):
        parts[name] = {"per_edge": 1, "width": f"{width} m", "height": f"{height} m", "gap": f"{gap} m"}
    parts["emitters"] |= {"edges": "left", "coupling": "bonded" if plate.bonded else "air"}
    parts["detectors"] |= {"edges": "right", "half_angle": "90 deg"}
    return design_from_mapping(
        {
            "geometry": "edge-perimeter",
            "materials": materials,
            "emitter": {"half_angle": f"{plate.half_angle} rad"},
            "plate": {
                "material": "trial plate",
                "width": f"{plate.width} m",
                "height": f"{plate.height} m",
                "thickness": f"{plate.thickness} m",
                "back": "air" if plate.back == 1.0 else "behind",
                "edges": edges if plate.mirror else "absorbing",
                "mirror": plate.mirror,
            },
            "states": states,
            **parts,
        }
    )


GLASS = Plate(1.51, 0.3, 0.08, 3e-3, (0.0, 2e-3, 1e-3, 0.1e-3), (0.0, 4e-3, 2.8e-3, 0.1e-3))
MIDDLE = (
    Contact(0.15, 0.0, 8e-3, 1.43, 0.3),
    Contact(0.15, 0.0, 8e-3, 1.43, 1.0),
    Contact(0.12, 2e-3, 9e-3, 1.52, 0.25),
    Contact(0.20, -3e-3, 12e-3, 1.33, 1.0),
)
CASES = {
    "glass": (GLASS, MIDDLE),
    "thick acrylic": (
        dataclasses.replace(GLASS, index=1.484, thickness=6e-3, detector=(0.0, 4e-3, 5.6e-3, 0.1e-3)),
        MIDDLE[:2],
    ),
    "bonded emitter": (dataclasses.replace(GLASS, bonded=True), MIDDLE[:2]),
    "wet back": (dataclasses.replace(GLASS, back=1.33), MIDDLE[:2]),
    "narrow lobe": (dataclasses.replace(GLASS, half_angle=np.radians(40)), MIDDLE[2:3]),
    "tall emitter, gap": (dataclasses.replace(GLASS, emitter=(0.0, 2e-3, 4e-3, 0.5e-3)), MIDDLE[1:2]),
    "mirrors beside": (dataclasses.replace(GLASS, mirror=0.9), MIDDLE[:1]),
}


@pytest.mark.parametrize("case", CASES)
def test_light_and_losses_agree_with_a_brute_force_trace(case):
    """Computed independently by plate_trace.py: own Fresnel, vector fields, random starts. Within four standard errors
    and 2 % of the light, 3 % of a loss: the beam's spread by the gap, and the entry phase taken as even."""
    plate, contacts = CASES[case]
    table = tabulate(traced_design(plate, contacts))
    flux, flux_error, loss, loss_error = received(plate, contacts, rays=1_500_000, seed=5)
    got = float(table.untouched.result.share[0, 0])
    assert abs(got - flux[0]) < 4 * flux_error[0] + 0.02 * flux[0]
    for at in range(1, len(loss)):
        mine = 1 - float(table.rows[at].result.share[0, 0]) / got
        assert abs(mine - loss[at]) < 4 * loss_error[at] + 0.03 * loss[at]


def test_an_oblique_chord_agrees_with_the_trace():
    """Emitter 0 of four at y = -45 mm, detector 2 at y = 15 mm, 120 mm apart: 26.6 degrees in the plate."""
    square = dataclasses.replace(GLASS, width=0.12, height=0.12)
    start, end = -0.045, 0.015
    plate = dataclasses.replace(square, emitter=(start, *square.emitter[1:]), detector=(end, *square.detector[1:]))
    contacts = (Contact(0.06, (start + end) / 2, 9e-3, 1.43, 1.0),)
    design = edited(traced_design(square, contacts), emitters={"per_edge": 4}, detectors={"per_edge": 4})
    table = tabulate(design)
    pairs = chords_of(table.setting).pairs
    chord = int(np.flatnonzero((pairs.emitter == 0) & (pairs.detector == 2))[0])
    flux, error, loss, loss_error = received(plate, contacts, rays=2_000_000, seed=9)
    # Each of four emitters sends a quarter of the power.
    got = 4 * float(table.untouched.result.share[0, chord])
    assert abs(got - flux[0]) < 4 * error[0] + 0.03 * flux[0]
    mine = 1 - 4 * float(table.rows[1].result.share[0, chord]) / got
    assert abs(mine - loss[1]) < 4 * loss_error[1] + 0.03 * loss[1]


def test_polished_sides_reflect_all_that_runs_along():
    """Light in a plate lit through an edge in air meets the edges beside it beyond their critical angle: as good as a
    mirror of 100 % in the trace."""
    plate = dataclasses.replace(GLASS, mirror=1.0)
    flux, error, loss, loss_error = received(plate, MIDDLE[:1], rays=600_000, seed=8)
    table = tabulate(traced_design(plate, MIDDLE[:1], edges="polished"))
    got = float(table.untouched.result.share[0, 0])
    assert abs(got - flux[0]) < 4 * error[0] + 0.01 * flux[0]
    mine = 1 - float(table.rows[1].result.share[0, 0]) / got
    assert abs(mine - loss[1]) < 4 * loss_error[1] + 0.03 * loss[1]


def test_images_add_up_to_one_percent():
    """All light that enters at the left and lies within the exit's acceptance leaves at the right where the sides are
    perfect mirrors: detectors that tile the edge get the same from any emitter, and more orders change nothing."""
    plate = dataclasses.replace(GLASS, mirror=1.0)
    design = edited(
        traced_design(plate, ()),
        detectors={
            "edges": "right",
            "per_edge": 40,
            "width": "2 mm",
            "height": "3 mm",
            "gap": "0 mm",
            "half_angle": "90 deg",
        },
    )
    tiled = float(np.sum(tabulate(design).untouched.result.share))
    # Independently: a trace whose one detector is as wide as the edge.
    wide = dataclasses.replace(plate, detector=(0.0, 0.08, 3e-3, 0.0))
    flux, error, _, _ = received(wide, (), rays=300_000, seed=6)
    assert abs(tiled - flux[0]) < 4 * error[0] + 0.01 * flux[0]


def test_the_conformance_kit_passes():
    report = check_geometry(EdgePerimeter())
    assert not report.failed, str(report)
    assert report.ran > 250


def test_theatre_console_has_576_facing_pairs_and_those_within_the_azimuth_limit_carry_light():
    """4 x 12 x 12 facing pairs; asin(1/1.51) = 41.5 degrees lets 526 of them see each other with emitters and detectors
    side by side in each slot of an edge, 516 if they stood at the same places: counted here on their coordinates."""
    design = demo("theatre_console")
    setting = tabulate(design).setting
    assert chords_of(setting).pairs.count == 576
    counts = []
    for first, second in ((0.25, 0.75), (0.5, 0.5)):
        total = 0
        for along, across in ((320, 520), (520, 320)):
            gap = (np.arange(12) + first)[:, None] / 12 * along - (np.arange(12) + second) / 12 * along
            total += 2 * int(np.sum(np.arctan(np.abs(gap) / across) < np.arcsin(1 / 1.51)))
        counts.append(total)
    assert counts == [526, 516]
    assert judged(design, want=["chords"]).metrics["chords"].value == counts[0]


def test_theatre_console_sets_its_level_at_seven_sigma():
    """One false alarm a year over 576 chords at 100 Hz: z = 7.12 (earlier computation). 526 lit chords: 7.11. The tail
    here by bisection on erfc."""
    from math import erfc, sqrt

    found = judged(demo("theatre_console"))
    rate = 1 / (365.25 * 86400 * 100 * found.metrics["chords"].value)
    low, high = 6.0, 8.0
    for _ in range(60):
        middle = (low + high) / 2
        low, high = (middle, high) if erfc(middle / sqrt(2)) / 2 > rate else (low, middle)
    assert low == pytest.approx(7.11, abs=0.01)
    table = tabulate(demo("theatre_console"))
    seeing = ~table.rows[0].score.blind[0]
    sigmas = []
    for row in table.rows:
        if row.laid.state.expect == "absent" and row.laid.state.role == "normal":
            mean, noise = (np.broadcast_to(part, (1, 576))[0, seeing] for part in (row.score.mean, row.score.noise))
            sigmas.append((table.decided.level[0, seeing] - mean) / noise)
    # The level of every chord is set by the absent state that reaches highest.
    assert np.min(sigmas, axis=0) == pytest.approx(low, abs=1e-3)


def test_theatre_console_passes_and_tells_foam_by_its_extent():
    """A glove of index 1.52 can take all guided light of 1.51; foam darkens most chords at once."""
    found = judged(demo("theatre_console"), maps=True)
    assert found.verdict == "pass"
    assert found.metrics["leakable_share"].value == pytest.approx(1.0, abs=1e-9)
    assert found.metrics["extent_ratio"].states["cleaning foam"] > 10
    told = [note.text for note in found.notes if note.code == "amplitude-cannot-tell"]
    assert len(told) == 1
    assert "cleaning foam" in told[0]
    assert "area can" in told[0]


def test_a_flat_film_does_not_darken_a_plate():
    """In-plane index is conserved through a flat film; all it can do is absorb: the film's own absorption along the way
    of the most oblique chord, (4 pi k / wavelength) 2 d hits / cos, is below 2 %."""
    table = tabulate(demo("theatre_console"))
    film = table.row("disinfectant film")
    assert 0 < np.max(film.score.mean[~film.score.blind]) < 0.02
    clear = [dict(state) for state in demo("theatre_console").raw["states"]]
    clear[2]["touching"] = {**clear[2]["touching"], "liquid": "clear film"}
    materials = {**demo("theatre_console").raw["materials"], "clear film": {"index": 1.38, "source": "test"}}
    score = tabulate(edited(demo("theatre_console"), states=clear, materials=materials)).row("disinfectant film").score
    assert np.max(np.abs(score.mean[~score.blind])) < 1e-9


def test_cooktop_fails_on_oil_and_says_what_else_could_tell_it():
    """Leakable share of 1.54: water 0.104, skin 0.297, oil 0.421 (earlier computation): oil takes more than a finger,
    so amplitude cannot reject it; an oil drop of a finger's size leaves time alone."""
    found = judged(demo("cooktop_strip"), maps=True)
    assert found.verdict == "fail"
    assert "oil drop" in found.headline
    assert found.metrics["immunity_ratio"].states["oil drop"] < 1
    told = {note.text.split("'")[1]: note.text for note in found.notes if note.code == "amplitude-cannot-tell"}
    assert "area hardly, it darkens 2 chords, a touch 2." in told["oil drop"]
    assert "Time can" in told["oil drop"]
    assert "area can" in told["boiled-over water"]


def test_seventy_kelvin_fade_a_third_of_the_light():
    """70 K at 0.5 %/K: 35 % of the power stated at 25 degC (to 90 degC: 32.5 %, against 20 degC 34.1 %)."""
    table = tabulate(demo("cooktop_strip"))
    hot, cold = table.row("hot, baseline still cold").reading.mean, table.untouched.reading.mean
    lit = table.untouched.result.share > 0
    fading = (1 - 0.005 * 65) / (1 + 0.005 * 5)
    # The photodiode's own temperature moves it a few percent the other way.
    assert np.median(hot[lit] / cold[lit]) == pytest.approx(fading, abs=0.09)


def map_of(design, sample=0):
    table = tabulate(design)
    results = results_of(table, None)
    return field_map(results, objects(results)[0], sample), table


def test_more_ambient_light_shrinks_the_coverage():
    """Maps come after the decision: noise sets the level, the level decides what a chord sees."""
    weak = edited(demo("theatre_console"), emitter={"power": "3 mW"})
    values = [
        judged(edited(weak, readout={"ambient_current": current}), maps=True, want=["coverage", "position_error"])
        for current in ("5 uA", "10 uA", "20 uA")
    ]
    coverage = [one.metrics["coverage"].value for one in values]
    error = [one.metrics["position_error"].value for one in values]
    assert coverage[0] > coverage[1] > coverage[2]
    assert error[0] < error[1] < error[2]


@pytest.mark.parametrize("edges", ["absorbing", "mirrored"])
def test_maps_agree_with_states_that_put_the_object_there(edges):
    """The light's own strips and exact hits at twelve places against the tables of the map: chords that see within the
    soft edge, the sum of their losses within 2 % (mirrored edges: 3 %, ways near a fold) and 0.4 % of one chord's
    light: maps take one mean width of a beam along its way, which tells where an object lies half under it."""
    small = {"emitters": {"edges": "left", "per_edge": 6}, "detectors": {"edges": "right", "per_edge": 6}}
    design = edited(demo("theatre_console"), **small, plate={"edges": edges})
    field, table = map_of(design)
    rng = np.random.default_rng(3)
    cells = rng.integers(0, field.grid.cells, 12)
    x, y = field.grid.x[cells % len(field.grid.x)], field.grid.y[cells // len(field.grid.x)]
    path = ("states", "gloved finger", "object")
    moved = tabulate(design, {(*path, "x"): x, (*path, "y"): y}).row("gloved finger").score
    seen = (moved.mean > field.limit) & ~moved.blind
    assert np.max(np.abs(np.sum(seen, axis=1) - field.counts[cells])) <= 1
    total = np.zeros(field.grid.cells)
    for block in field._blocks(slopes=False):
        np.add.at(total, block.cell, block.loss)
    exact = np.sum(np.where(moved.blind, 0.0, moved.mean), axis=1)
    assert total[cells] == pytest.approx(exact, rel=0.03 if edges == "mirrored" else 0.02, abs=4e-3)
    assert table.light.check() is None


def test_position_error_is_the_inverse_of_the_information_of_all_chords():
    """At one cell: derivatives of all losses by moving the state's object by 0.4 mm, strength as a third unknown, the
    matrix inverted as it stands. The state's object has a hard edge, the map's a soft one: 10 %."""
    design = demo("theatre_console")
    field, table = map_of(design)
    cell = 61 * 200 + 103
    x, y = field.grid.x[103], field.grid.y[61]
    step = 0.4e-3
    path = ("states", "gloved finger", "object")
    places = {
        (*path, "x"): np.array([x, x + step, x - step, x, x]),
        (*path, "y"): np.array([y, y, y, y + step, y - step]),
    }
    loss = tabulate(design, places).row("gloved finger").score.mean
    untouched = table.untouched.reading
    lit = table.untouched.result.share[0] > 0
    slopes = np.stack([(loss[1] - loss[2]) / (2 * step), (loss[3] - loss[4]) / (2 * step), loss[0]])[:, lit]
    noise = np.broadcast_to(untouched.noise, untouched.mean.shape)[0, lit] / untouched.mean[0, lit]
    information = (slopes / noise**2) @ slopes.T
    covariance = np.linalg.inv(information)[:2, :2]
    assert field.position_error()[cell] == pytest.approx(np.sqrt(np.max(np.linalg.eigvalsh(covariance))), rel=0.1)


def test_maps_stay_open_until_asked_and_carry_axes_and_units():
    design = demo("theatre_console")
    closed = judged(design)
    assert closed.verdict == "open"
    assert closed.metrics["coverage"].status == "open"
    assert closed.surfaces == ()
    opened = judged(design, maps=True)
    chords, error = opened.surfaces
    assert chords.values.shape == (120, 200) == tuple(len(axis[2]) for axis in chords.axes)
    assert [axis[:2] for axis in error.axes] == [("y", "mm"), ("x", "mm")]
    assert error.kind == "length"
    assert np.max(np.abs(chords.axes[1][2])) < 0.26 - 0.025
    assert chords.limit == 1.0


def test_a_dead_emitter_costs_its_chords_alone():
    """Counted from the map itself with the worst emitter's chords struck out."""
    weak = edited(demo("theatre_console"), decision={"channels": 9})
    field, table = map_of(weak)
    pairs = chords_of(table.setting).pairs
    cell, chord = field.seen
    whole = np.bincount(cell, minlength=field.grid.cells)
    lost = []
    for emitter in range(48):
        left = np.bincount(cell[pairs.emitter[chord] != emitter], minlength=field.grid.cells)
        lost.append(np.mean((whole >= 9) & (left < 9)))
    found = judged(weak, maps=True, want=["dead_emitter_loss"]).metrics["dead_emitter_loss"].value
    assert found == pytest.approx(max(lost), abs=1e-12)
    assert found > 0


def test_a_larger_object_is_seen_by_more_chords_and_the_smallest_is_the_edge_of_being_seen():
    weak = edited(demo("theatre_console"), emitter={"power": "6 mW"}, field={"columns": 60, "rows": 40})
    found = judged(weak, maps=True, want=["smallest_object", "coverage"])
    smallest = found.metrics["smallest_object"].value
    states = [dict(state) for state in weak.raw["states"]]
    for factor, whole in ((1.03, True), (0.95, False)):
        states[1]["object"] = {"diameter": f"{smallest * factor} m"}
        coverage = judged(edited(weak, states=states), maps=True, want=["coverage"]).metrics["coverage"].value
        assert (coverage == 1.0) is whole


def test_a_batch_of_maps_agrees_with_single_designs():
    design = edited(demo("theatre_console"), field={"columns": 40, "rows": 30})
    names = ["coverage", "least_chords", "position_error", "blind_spot"]
    powers = np.array([0.002, 0.01, 0.048])
    together = evaluate_batch(design, {("emitter", "power"): powers}, names).metrics
    for at, power in enumerate(powers):
        alone = evaluate_batch(design, {("emitter", "power"): np.array([power])}, names).metrics
        for name in names:
            assert together[name].values[at] == pytest.approx(alone[name].values[0], rel=1e-9)


def test_light_followed_in_parts_is_the_light_followed_whole(monkeypatch):
    """Parts of channels only bound the memory: shares, arrivals and ledgers are those of all channels at once."""
    whole = tabulate(demo("theatre_console")).rows
    monkeypatch.setattr("outcouple.evaluation.signals.PART", 5_000)
    parts = tabulate(demo("theatre_console")).rows
    for one, other in zip(whole, parts, strict=True):
        assert other.result.share == pytest.approx(one.result.share, rel=1e-12)
        arrivals = other.result.arrivals()
        assert np.sum(arrivals, axis=2) == pytest.approx(one.result.share, rel=1e-9)
        assert abs(ledger_of(other.laid, 40).gap) < 1e-12
        assert ledger_of(other.laid, 40).losses == pytest.approx(ledger_of(one.laid, 40).losses, rel=1e-9, abs=1e-15)


def test_the_curve_runs_through_the_states_and_saturates():
    """Loss of the straightest chord against the diameter: zero at zero, through the state's own mark, at first in
    proportion (rare hits), later less (rays lose no more than all)."""
    found = evaluate(demo("theatre_console"), advice=False)
    curve, loss = found.curve, found.metrics["crossing_loss"].value
    (name, diameter, marked) = curve.marks[0]
    assert (name, diameter, marked) == ("gloved finger", 9e-3, pytest.approx(loss))
    assert np.interp(diameter, curve.axes[0][2], curve.values) == pytest.approx(loss, rel=1e-3)
    assert curve.values[0] == 0
    slopes = np.diff(curve.values)
    assert slopes[0] > slopes[-1] > 0
    assert {view.name for view in found.views} == {"plan", "cross-section"}


def test_daylight_reaches_detectors_only_through_what_is_left_open():
    """The share left open scales the outside light and nothing else."""
    lit = {"environment": {"ambient": "daylight", "illuminance": "20 klx"}, "readout": {"ambient_current": None}}
    raw = {**demo("theatre_console").raw}
    raw["environment"] = {**raw["environment"], **lit["environment"]}
    raw["readout"] = {key: value for key, value in raw["readout"].items() if key != "ambient_current"}
    ambient = []
    for share in ("0 %", "1 %", "2 %"):
        raw["detectors"] = {**raw["detectors"], "outside_share": share}
        ambient.append(float(np.max(tabulate(design_from_mapping(raw)).untouched.reading.ambient)))
    assert ambient[0] == 0
    assert ambient[1] > 0
    assert ambient[2] == pytest.approx(2 * ambient[1], rel=1e-9)


def test_an_object_off_the_chords_darkens_none_and_one_on_the_rim_stays_finite():
    design = edited(demo("theatre_console"))
    path = ("states", "gloved finger", "object")
    x = np.array([0.0, 0.259, 0.26, 0.4])
    row = tabulate(design, {(*path, "x"): x, (*path, "y"): np.zeros(4)}).row("gloved finger")
    assert np.all(np.isfinite(row.reading.mean))
    assert np.all(row.score.mean[3] == 0)


def test_edges_that_do_not_face_each_other_are_refused_by_name():
    with pytest.raises(UserMistake) as refused:
        judged(edited(demo("theatre_console"), emitters={"edges": "left"}, detectors={"edges": "top"}))
    assert str(refused.value) == (
        "no emitter faces a detector: emitters.edges = 'left', detectors.edges = 'top'; in air, light passes only "
        "between edges that face each other"
    )


@pytest.mark.parametrize(
    "sections",
    [{"emitters": {"offset": "20 mm"}}, {"detectors": {"offset": "20 mm"}}, {"emitter": {"half_angle": "0.001 deg"}}],
    ids=["emitters beside the edge", "detectors beside it", "pencils of light between the detectors"],
)
def test_a_plate_without_a_single_chord_sees_nothing_and_says_so(sections):
    found = judged(edited(demo("theatre_console"), **sections), maps=True)
    assert found.verdict == "fail"
    assert found.metrics["chords"].value == 0
    assert found.metrics["coverage"].value == 0
    assert found.metrics["touch_loss"].value == 0
    assert found.metrics["position_error"].value == np.inf


def test_a_palm_all_over_has_no_place_and_says_so():
    """A contact without an object's size darkens chords but has no map and no touch loss."""
    states = [dict(state) for state in demo("theatre_console").raw["states"]]
    del states[1]["object"]
    found = judged(edited(demo("theatre_console"), states=states), maps=True)
    for name in ("touch_loss", "chords_darkened", "coverage", "immunity_ratio"):
        assert found.metrics[name].value is None
        assert found.metrics[name].why
    assert found.metrics["margin_sigma"].states["gloved finger"] > 100


def test_a_margin_that_leaves_no_field_says_so():
    found = judged(edited(demo("theatre_console"), field={"margin": "200 mm"}), maps=True)
    assert found.metrics["coverage"].why == "the margin leaves no field on the plate"


def test_what_lies_behind_the_plate_takes_light_in_every_state():
    """A back wet with water keeps 0.85 of what crown glass guides (1 - leakable share 0.155 of an open fan)."""
    dry = tabulate(demo("theatre_console")).untouched.result.share
    wet = tabulate(edited(demo("theatre_console"), plate={"back": "water"})).untouched.result.share
    lit = dry > 0
    kept = np.sum(wet[lit]) / np.sum(dry[lit])
    assert 0.8 < kept < 0.95
    assert np.all(wet[lit] <= dry[lit] * (1 + 1e-12))


def test_inputs_that_do_not_fit_are_cautioned():
    codes = {note.code for note in judged(edited(demo("theatre_console"), decision={"rate": "5 kHz"})).notes}
    assert "decisions-outrun-scan" in codes
    codes = {note.code for note in judged(edited(demo("theatre_console"), emitters={"coupling": "bonded"})).notes}
    assert "bonded-emitters-shed" in codes
