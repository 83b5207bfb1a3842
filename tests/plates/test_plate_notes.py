"""What plates say of their own limits, and the glow that is no touch."""

from __future__ import annotations

from functools import partial
from pathlib import Path

import pytest

from outcouple import evaluate, load_design
from outcouple.design import design_from_mapping

DEMOS = Path(__file__).parents[2] / "demo_configs"

judged = partial(evaluate, advice=False, views=False)


def museum(*, finger=None, **sections):
    """The museum table, its finger and sections changed."""
    raw = load_design(DEMOS / "museum_table.toml").raw
    states = [{**state, **(finger or {})} if state["name"] == "finger" else state for state in raw["states"]]
    changed = {name: {**raw.get(name, {}), **keys} for name, keys in sections.items()}
    return design_from_mapping({**raw, **changed, "states": states})


def codes(design):
    return {note.code for note in judged(design).notes}


@pytest.mark.parametrize(("place", "beyond"), [("0 mm", False), ("594 mm", False), ("596 mm", True), ("-2 m", True)])
def test_an_object_of_10_mm_that_hangs_over_the_edge_at_600_mm_is_named(place, beyond):
    found = judged(museum(finger={"object": {"diameter": "10 mm", "x": place}}))
    texts = [note.text for note in found.notes if note.code == "object-beyond-plate"]
    assert bool(texts) == beyond
    assert all("'finger'" in text for text in texts)


def test_the_perimeter_read_plate_names_objects_beyond_it_too():
    raw = load_design(DEMOS / "theatre_console.toml").raw
    touched = next(state for state in raw["states"] if "object" in state)
    states = [
        {**state, "object": {**state["object"], "x": "1 m"}} if state is touched else state for state in raw["states"]
    ]
    assert "object-beyond-plate" not in codes(design_from_mapping(raw))
    assert "object-beyond-plate" in codes(design_from_mapping({**raw, "states": states}))


def test_the_filter_is_said_to_shift_only_where_it_cuts_the_line():
    """At the corner, 0.66 m off an axis 0.75 m long, the band of an 850 nm filter stands near 793 nm; 150 nm still
    hold the line."""
    assert "filter-shifts-off-axis" in codes(museum())
    assert "filter-shifts-off-axis" not in codes(museum(readout={"filter_width": "150 nm"}))


def test_sun_puts_the_palm_in_its_own_shade():
    assert "palm-in-its-own-shade" not in codes(museum())
    assert "palm-in-its-own-shade" in codes(load_design(DEMOS / "museum_table_sun.toml"))


def test_lamps_are_said_to_lie_bare_only_while_they_shine():
    assert "broken-plate-bares-lamps" in codes(museum())
    assert "broken-plate-bares-lamps" not in codes(museum(emitter={"power": "0 W"}))


@pytest.mark.parametrize(("diameter", "uneven"), [("17 mm", False), ("18 mm", True)])
def test_objects_above_the_shortest_hop_glow_unevenly(diameter, uneven):
    """2 x 8 mm x sqrt(1.484^2 - 1) = 17.5 mm, by hand."""
    assert ("large-objects-uneven" in codes(museum(finger={"object": {"diameter": diameter}}))) == uneven


@pytest.mark.parametrize("place", [{"x": "0 mm"}, {"x": "450 mm", "y": "250 mm"}, {"x": "-560 mm"}])
def test_an_object_that_touches_nothing_has_no_radiance_of_its_own(place):
    """The hazy plate glows at its place all the same: what stays once that glow is told apart is no touch."""
    touches = [{"object": {"diameter": "10 mm", **place}, **more} for more in ({"touching": "dry"}, {})]
    bare, touched = (judged(museum(finger=finger, plate={"haze": "2 %"})) for finger in touches)
    finger, untouched = (next(s for s in bare.states if s.name == name) for name in ("finger", "untouched"))
    assert 0 < finger.share <= untouched.share
    own = [found.metrics["touch_radiance"].states["finger"] for found in (bare, touched)]
    assert abs(own[0]) < 1e-3 * own[1]
