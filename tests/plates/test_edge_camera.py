"""The camera-read plate against brute-force traces, sums of its own, and the museum table."""

from __future__ import annotations

from functools import cache, partial
from pathlib import Path

import numpy as np
import pytest

from outcouple import evaluate, load_design
from outcouple.design import design_from_mapping
from outcouple.evaluation import evaluate_batch
from outcouple.evaluation.batch import results_of as joined
from outcouple.evaluation.table import tabulate
from outcouple.testing import check_geometry
from outcouple_plugins.edge_camera import EdgeCamera
from outcouple_plugins.edge_camera.lens import pixel_side, sight_of
from outcouple_plugins.edge_camera.measures import centroid_error, smallest_diameter

from .plate_trace import Contact, Plate
from .touch_trace import extracted, sent_out

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


def results_of(design):
    return joined(tabulate(design), None)


def traced_design(plate, discs, **plate_keys):
    """The trace's plate as a design file; what enters a contact comes back whole."""
    materials = {"trial plate": {"index": plate.index, "source": "test"}}
    states = [{"name": "clean", "expect": "absent", "touching": "dry"}]
    for at, disc in enumerate(discs):
        materials[f"contact {at}"] = {"index": disc.index, "source": "test"}
        patches = [
            {"share": disc.share, "backing": f"contact {at}", "albedo": "100 %"},
            {"share": 1 - disc.share, "backing": "vacuum"},
        ]
        place = {"diameter": disc.diameter, "x": disc.x - plate.width / 2, "y": disc.y}
        states.append(
            {
                "name": f"contact {at}",
                "expect": "present",
                "object": {key: f"{value} m" for key, value in place.items()},
                "touching": {"patches": patches},
            }
        )
    _, wide, high, gap = plate.emitter
    return design_from_mapping(
        {
            "geometry": "edge-camera",
            "materials": materials,
            "emitter": {"half_angle": "90 deg", "power": "1 W"},
            "plate": {
                "material": "trial plate",
                "width": f"{plate.width} m",
                "height": f"{plate.height} m",
                "thickness": f"{plate.thickness} m",
                **plate_keys,
            },
            "emitters": {
                "edges": "left",
                "per_edge": 1,
                "width": f"{wide} m",
                "height": f"{high} m",
                "gap": f"{gap} m",
            },
            "lens": {"columns": 200},
            "states": states,
        }
    )


def drawn_share(results, state):
    """What enters the contact as a share of the emitted light, from the reading's share taken apart again."""
    setting = results.setting
    sight = sight_of(setting, state.place["x"], state.place["y"])
    ratio = min(setting.index("contact 0")[0] / setting.index("trial plate")[0], 1.0)
    seen = min(pixel_side(setting)[0] ** 2 / (np.pi / 4 * state.place["diameter"][0] ** 2), 1.0)
    return float(state.share[0, 0] / (sight.lambertian[0] / ratio**2 * seen))


@pytest.mark.parametrize("index", [1.43, 1.327])
def test_light_drawn_by_a_contact_agrees_with_a_trace(index):
    """Computed independently: ``touch_trace.extracted``, one emitter, one disc, 700 000 rays."""
    plate = Plate(1.484, 0.2, 0.15, 5e-3, (0.0, 2e-3, 3e-3, 0.2e-3), (0, 1, 1, 0))
    disc = Contact(0.12, 0.01, 20e-3, index, 0.6)
    results = results_of(traced_design(plate, [disc]))
    found = drawn_share(results, results.expecting("present")[0])
    traced, error = extracted(plate, disc, rays=700_000, seed=4)
    assert error < 0.01 * traced
    assert abs(found - traced) < 0.01 * traced + 3 * error


def test_thicker_plates_are_touched_less():
    """Twice the thickness halves the hits; everything else alike (emitter as tall as the thinner plate)."""
    disc = Contact(0.12, 0.0, 8e-3, 1.43, 1.0)
    drawn = []
    for thickness in (5e-3, 10e-3):
        plate = Plate(1.484, 0.2, 0.15, thickness, (0.0, 2e-3, 3e-3, 0.0), (0, 1, 1, 0))
        results = results_of(traced_design(plate, [disc]))
        drawn.append(drawn_share(results, results.expecting("present")[0]))
    assert drawn[0] / drawn[1] == pytest.approx(2.0, rel=0.05)


@pytest.mark.parametrize(("contact", "printed"), [(1.484, 0.413), (1.43, 0.445), (1.327, 0.517)])
def test_escape_through_the_back_agrees_with_a_trace_and_earlier_tables(contact, printed):
    """Computed independently: ``touch_trace.sent_out``; printed shares from an earlier own computation."""
    traced = sent_out(1.484, contact, cone=np.pi / 2, rays=2_000_000, seed=1)
    assert traced == pytest.approx(printed, abs=1e-3)
    plate = Plate(1.484, 0.2, 0.15, 5e-3, (0.0, 2e-3, 3e-3, 0.0), (0, 1, 1, 0))
    found = judged(traced_design(plate, [Contact(0.12, 0.0, 8e-3, contact, 1.0)]))
    assert found.metrics["escape_share"].value == pytest.approx(traced, abs=1e-3)


def test_the_lens_gets_the_light_of_its_cone():
    """A wide cone traced, the lens's share scaled by its projected solid angle: L = T L_inside / n^2."""
    plate = Plate(1.484, 0.2, 0.15, 5e-3, (0.0, 2e-3, 3e-3, 0.0), (0, 1, 1, 0))
    results = results_of(traced_design(plate, [Contact(0.1, 0.0, 8e-3, 1.43, 1.0)]))
    sight = sight_of(results.setting, np.zeros(1), np.zeros(1))
    cone = np.radians(8)
    traced = sent_out(1.484, 1.43, cone=cone, rays=4_000_000, seed=2)
    lens = float(sight.lambertian[0] / (1.43 / 1.484) ** 2)
    transmission = 0.9
    projected = float(sight.gathered[0]) / transmission
    assert lens / transmission == pytest.approx(traced * projected / (np.pi * np.sin(cone) ** 2), rel=0.01)


def test_off_axis_falls_with_the_fourth_power_and_the_filter_shifts():
    """cos^4 of the angle; band of 50 nm about a line of 40 nm summed anew here, shifted by sqrt(1 - (sin/1.8)^2)."""
    design = edited(
        demo("museum_table"),
        readout={"filter_centre": "850 nm", "filter_width": "50 nm", "filter_blocking": "0 %"},
    )
    setting = results_of(design).setting
    middle, corner = (sight_of(setting, np.array([x]), np.zeros(1)) for x in (0.0, 0.55))
    cosine = 0.75 / np.hypot(0.75, 0.55)
    assert float(corner.gathered[0] / middle.gathered[0]) == pytest.approx(cosine**4, rel=1e-9)
    line = np.linspace(700, 1000, 30001)
    weight = np.exp(-4 * np.log(2) * ((line - 850) / 40) ** 2)
    shift = 850 * np.sqrt(1 - (np.sqrt(1 - cosine**2) / 1.8) ** 2)
    parts = [np.sum(weight[np.abs(line - centre) < 25]) for centre in (850.0, shift)]
    assert float(corner.shifted[0]) == pytest.approx(parts[1] / parts[0], rel=0.01)


def test_leakable_shares_of_the_table():
    """Earlier table of hemispherical edge light in acrylic of 1.484: 0.495 into 1.43, 0.205 into water of 1.327."""
    shares = {}
    for index in (1.43, 1.327):
        plate = Plate(1.484, 0.2, 0.15, 5e-3, (0.0, 2e-3, 3e-3, 0.0), (0, 1, 1, 0))
        found = judged(traced_design(plate, [Contact(0.12, 0.0, 8e-3, index, 1.0)]))
        shares[index] = found.metrics["leakable_share"].value
    assert shares[1.43] == pytest.approx(0.495, abs=0.003)
    assert shares[1.327] == pytest.approx(0.205, abs=0.003)


def test_museum_table_passes_indoors_with_a_short_exposure():
    found = judged(demo("museum_table"))
    assert found.verdict == "pass"
    assert found.metrics["saturation_headroom"].value > 1
    assert not any(note.code in ("saturated", "shorten-exposure") for note in found.notes)


def test_the_museum_tables_finger_is_as_bright_as_reckoned_by_hand():
    """Claims of the design case: about 0.8 W/m2/sr, and 3e4 electrons in 8 ms.

    It took the skin's reflectance in air, 0.55, for its albedo, here 0.70, and light sent back as Lambertian in the
    plate, here in skin of 1.43: together 1.37 of it. The rest, about 0.85, is its mean flux and hop against the fan
    followed here. Electrons are summed anew from the radiance.
    """
    found = judged(demo("museum_table"))
    radiance = found.metrics["touch_radiance"].states["finger"]
    assert radiance == pytest.approx(0.8 * (0.70 / 0.55) * (1.484 / 1.43) ** 2 * 0.85, rel=0.05)
    pixel, pupil, distance, lens = 1.2 / 1280, np.pi / 4 * 2.5e-3**2, 0.75, 0.9
    setting = results_of(demo("museum_table")).setting
    band = float(np.broadcast_to(setting.p.readout.filter_transmission, (1,))[0])
    line = np.linspace(-4, 4, 4001) * 40 / (2 * np.sqrt(2 * np.log(2)))
    weight = np.exp(-4 * np.log(2) * (line / 40) ** 2)
    inside = np.sum(weight[np.abs(line) < 25]) / np.sum(weight)
    power = radiance * pixel**2 * pupil / distance**2 * lens * band * inside
    electrons = power * 1.5e-3 * 0.25 * 850e-9 / (6.62607015e-34 * 299792458)
    rise = found.states[1].signal - found.states[0].signal
    assert rise == pytest.approx(electrons, rel=0.03)
    assert 2e4 < electrons * 8 / 1.5 < 6e4


def test_the_museum_tables_8_ms_fill_the_pixels():
    """Claim of the design case: 8 ms bring several times the full well of 10 ke-; the tool says so and names a time."""
    found = judged(edited(demo("museum_table"), readout={"exposure": "8 ms"}))
    assert found.verdict == "fail"
    assert found.metrics["saturation_headroom"].value < 0.5
    assert any("Shorten the exposure" in note.text for note in found.notes)


def test_museum_table_in_the_sun_fails():
    """45 W/m2 on a half-white hand: 0.5 45 / pi = 7.2 W/m2/sr, above the finger's own light."""
    found = judged(demo("museum_table_sun"))
    assert found.verdict == "fail"
    half = found.metrics["outside_radiance"].states["untouched"]
    assert half == pytest.approx(0.5 * 45 / np.pi, rel=0.1)
    assert any("Outside light" in note.text for note in found.notes)


def test_doubling_the_outside_light_lowers_signal_over_noise():
    base = edited(demo("museum_table"), readout={"exposure": "1 ms"}, environment={"ambient": "sun"})
    got = [
        judged(edited(base, environment={"irradiance": f"{irradiance} W/m2"})).metrics["object_snr"].value
        for irradiance in (1, 2)
    ]
    assert got[1] < got[0]


def test_mirrors_and_polish_brighten_the_face_and_haze_makes_it_glow():
    plate = Plate(1.484, 0.2, 0.15, 5e-3, (0.0, 2e-3, 3e-3, 0.0), (0, 1, 1, 0))
    disc = Contact(0.12, 0.0, 8e-3, 1.43, 1.0)
    light = {}
    for finish in ("absorbing", "polished", "mirrored"):
        found = judged(traced_design(plate, [disc], edges=finish))
        light[finish] = found.metrics["face_irradiance"].value
    assert light["absorbing"] < light["polished"] < light["mirrored"]
    dull = results_of(traced_design(plate, [disc], haze="0.1 %"))
    clear = results_of(traced_design(plate, [disc]))
    assert clear.expecting("absent")[0].share[0, 0] == 0
    assert dull.expecting("absent")[0].share[0, 0] > 0


def test_reflected_light_on_the_face_agrees_with_a_mirrored_sum():
    """All edges dark but a mirror: the face's light sums up straight ways from mirror images, here one by one in a
    plate so wide that only the far mirror matters."""
    plate = Plate(1.484, 0.2, 2.0, 5e-3, (0.0, 2e-3, 3e-3, 0.0), (0, 1, 1, 0))
    near = Contact(0.12, 0.0, 8e-3, 1.43, 1.0)
    direct = judged(traced_design(plate, [near])).metrics["face_irradiance"].value
    both = judged(traced_design(plate, [near], edges="mirrored", mirror="90 %")).metrics["face_irradiance"].value
    # Flux of a point source per width falls with the distance: 0.12 m direct, 0.28 m by the mirror, 0.52 m after the
    # emitters' edge, whose polish returns about 5 %, and 0.68 m after the mirror again.
    far = 0.12 * (0.9 / 0.28 + 0.9 * 0.05 / 0.52 + 0.9**2 * 0.05 / 0.68)
    assert both / direct == pytest.approx(1 + far, rel=0.02)


def test_centroid_bound_is_reached_by_no_better_than_a_simulated_fit():
    """Computed independently: Fisher information of a disc of 12 pixels, derivatives by moving it numerically."""
    diameter, side, snr = 12.0, 1.0, 20.0
    fine = (np.arange(40 * 20) + 0.5) / 20 - 20
    x, y = np.meshgrid(fine, fine)

    def image(shift):
        disc = (np.hypot(x - shift, y) < diameter / 2).astype(float)
        return disc.reshape(40, 20, 40, 20).mean(axis=(1, 3))

    found = []
    for phase in (0.0, 0.2, 0.4):
        slope = (image(phase + 0.1) - image(phase - 0.1)) / 0.2
        found.append(1 / (snr * np.sqrt(np.sum(slope**2))))
    bound = float(centroid_error(np.array(diameter), np.array(side), np.array(snr)))
    assert bound == pytest.approx(np.mean(found), rel=0.15)


def test_smallest_object_is_where_signal_over_noise_meets_the_certainty():
    at = smallest_diameter(*(np.array([value]) for value in (10e-3, 1e-3, 4.0, 4.0 * np.sqrt(np.pi / 4 * 100), 8.0)))
    assert 4.0 * np.sqrt(np.pi / 4) * float(at[0]) / 1e-3 == pytest.approx(8.0)


def test_maps_agree_with_the_object_moved_there():
    """The map scales one reading; a design with the object at the other place is followed anew."""
    base = edited(demo("museum_table"), readout={"exposure": "0.5 ms"})
    raw = base.raw
    states = [dict(state) for state in raw["states"]]
    moved = [
        {**state, "object": {**state["object"], "x": "-450 mm", "y": "200 mm"}} if state["name"] == "finger" else state
        for state in states
    ]
    here = results_of(base)
    there = results_of(design_from_mapping({**raw, "states": moved}))
    from outcouple_plugins.edge_camera.maps import _drawn

    finger = next(state for state in here.states if state.name == "finger")
    drawn = _drawn(here, finger, 0, np.array([0.0, -0.45]), np.array([0.0, 0.2]))
    rest = here.expecting("absent")[0].signal[0, 0]
    rises = [
        next(s for s in results.states if s.name == "finger").signal[0, 0] - results.expecting("absent")[0].signal[0, 0]
        for results in (here, there)
    ]
    assert rest > 0
    assert drawn[1] / drawn[0] == pytest.approx(rises[1] / rises[0], rel=0.03)


def test_maps_come_only_when_asked_for():
    found = judged(demo("museum_table"), maps=True)
    names = {surface.name for surface in found.surfaces}
    assert {"irradiance_map", "object_snr_map", "position_error_map"} <= names
    assert 0 < found.metrics["uniformity"].value < 1


def test_batch_agrees_with_single_designs():
    path = ("plate", "thickness")
    values = np.array([6e-3, 8e-3, 9e-3])
    want = ["object_snr", "contrast", "face_irradiance", "touch_radiance"]
    together = evaluate_batch(demo("museum_table"), {path: values}, want)
    for at, value in enumerate(values):
        alone = evaluate_batch(demo("museum_table"), {path: np.array([value])}, want)
        for name in want:
            assert together.metrics[name].values[at] == pytest.approx(alone.metrics[name].values[0], rel=1e-9)


def test_keeps_the_contract():
    report = check_geometry(EdgeCamera())
    assert not report.failed, str(report)
