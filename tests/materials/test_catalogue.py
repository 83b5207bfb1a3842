"""Names, a user's own materials, and the list."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from outcouple import materials
from outcouple.errors import UserMistake
from outcouple.materials import Catalogue, builtin_catalogue, material_from_mapping


@pytest.mark.parametrize("written", ["PMMA", "pmma", "acrylic", "Acrylic  glass", "acrylic-glass", "acrylic_glass"])
def test_aliases_and_capitals(written: str) -> None:
    assert materials.lookup(written).name == "PMMA"


def test_an_unknown_name_gets_the_nearest() -> None:
    with pytest.raises(UserMistake) as caught:
        materials.index("polycarbonat", 850e-9)
    assert caught.value.lines == ("'polycarbonat': unknown material (did you mean 'polycarbonate'?)",)
    assert builtin_catalogue().unknown("polycarbonat") == (
        "unknown material (did you mean 'polycarbonate'?)",
        "outcouple list materials shows them all",
    )


def test_names_and_aliases_are_unique() -> None:
    seen: dict[str, str] = {}
    for material in builtin_catalogue():
        for text in (material.name, *material.aliases):
            key = text.casefold().replace("-", " ")
            assert seen.setdefault(key, material.name) == material.name, text


def test_enough_of_every_kind() -> None:
    kinds = [material.kind for material in builtin_catalogue()]
    least = {"solid": 25, "elastomer": 3, "liquid": 30, "gas": 5, "tissue": 6, "metal": 4}
    assert set(kinds) == set(least) == set(materials.KINDS)
    assert all(kinds.count(kind) >= count for kind, count in least.items())


def test_scalars_give_scalars_and_arrays_broadcast() -> None:
    assert np.ndim(materials.index("water", 850e-9)) == 0
    assert materials.index("water", np.full((4, 1), 850e-9), np.full((1, 3), 300.0)).shape == (4, 3)
    assert materials.index("gold", np.full(5, 633e-9)).dtype == complex


def test_own_materials_do_not_touch_the_shipped_ones() -> None:
    mine = builtin_catalogue().with_materials({"mystery resin": {"index": 1.55, "aliases": ["resin"]}})
    assert mine.lookup("resin").index(850e-9) == 1.55
    assert mine.lookup("water").name == "water"
    assert mine.lookup("sugar 20 %").name == "sugar 20 %"
    assert "mystery resin" in mine.names()
    assert not builtin_catalogue().knows("mystery resin")


def test_an_own_material_may_take_a_shipped_name_and_build_on_it() -> None:
    mine = builtin_catalogue().with_materials({"PMMA": {"based_on": "PMMA", "offset": 0.002}})
    shift = mine.lookup("PMMA").index(850e-9, 300.0) - materials.index("PMMA", 850e-9, 300.0)
    assert shift.real == pytest.approx(0.002)
    assert shift.imag == 0


def test_own_materials_may_build_on_each_other_in_any_order() -> None:
    mine = builtin_catalogue().with_materials(
        {"aged oil": {"based_on": "fresh oil", "offset": 0.003}, "fresh oil": {"index": 1.47, "dn_dT": -4e-4}}
    )
    assert mine.lookup("aged oil").index(850e-9, 303.15).real == pytest.approx(1.469)


def test_a_circle_is_found() -> None:
    with pytest.raises(UserMistake, match="goes round in a circle"):
        builtin_catalogue().with_materials({"a": {"based_on": "b"}, "b": {"based_on": "a"}})


def test_based_on_scaled_to_a_measured_index() -> None:
    """The index is met where it was measured, the dispersion follows by Lorentz-Lorenz."""
    mine = builtin_catalogue().with_materials(
        {"my diesel": {"based_on": "diesel", "index": 1.4655, "relative_to": "air", "source": "own measurement"}}
    )
    found = mine.lookup("my diesel")
    assert found.index(589.3e-9).real == pytest.approx(1.4655 * materials.air_index(589.3e-9), abs=1e-9)
    theirs = materials.lookup("diesel")
    assert (found.index(500e-9) - found.index(850e-9)).real == pytest.approx(
        (theirs.index(500e-9) - theirs.index(850e-9)).real, rel=0.01
    )
    assert found.verified == "published"


@pytest.mark.parametrize(
    ("row", "wavelength", "temperature", "index"),
    [
        ({"index": 1.5}, 850e-9, 293.15, 1.5),
        ({"index": 1.5, "dn_dT": -1e-4}, 850e-9, 303.15, 1.499),
        ({"index": 1.5, "relative_to": "air"}, 850e-9, 293.15, 1.5 * 1.00027007),
        ({"wavelengths": [0.8e-6, 0.9e-6], "index": [1.51, 1.50]}, 850e-9, 293.15, 1.505),
        ({"cauchy": [1.5, 0.004]}, 500e-9, 293.15, 1.516),
        ({"series": [[1.5, 0], [0.004, -2]]}, 500e-9, 293.15, 1.516),
        ({"square_series": [[2.25, 0]]}, 500e-9, 293.15, 1.5),
        ({"sellmeier": [[1.25, 0.0]]}, 500e-9, 293.15, 1.5),
        ({"resonances": [[1.25, 0.0]]}, 500e-9, 293.15, 1.5),
        ({"gas": [[0.03, 100.0]], "kind": "gas", "reference_temperature": 300.0}, 1e-6, 600.0, 1 + 0.03 / 99 / 2),
        (
            {
                "index": 1.2,
                "dn_dT": -1e-3,
                "hold_temperature": True,
                "temperature_range": [70.0, 100.0],
                "reference_temperature": 80.0,
            },
            1e-6,
            300.0,
            1.18,
        ),
    ],
)
def test_ways_of_giving_an_index(row: dict[str, Any], wavelength: float, temperature: float, index: float) -> None:
    """Closed forms, by hand."""
    assert material_from_mapping("x", row).index(wavelength, temperature).real == pytest.approx(index, abs=1e-8)


def test_ways_of_giving_absorption() -> None:
    flat = material_from_mapping("x", {"index": 1.5, "absorption": 2.0})
    listed = material_from_mapping(
        "x", {"index": 1.5, "absorption": [1.0, 3.0], "absorption_wavelengths": [0.8e-6, 0.9e-6]}
    )
    kappa = material_from_mapping(
        "x", {"wavelengths": [0.8e-6, 0.9e-6], "index": [1.5, 1.5], "extinction": [1e-7, 2e-7]}
    )
    assert flat.absorption(0.6e-6) == 2.0
    assert listed.absorption(0.85e-6) == pytest.approx(2.0)
    assert kappa.index(0.9e-6).imag == pytest.approx(2e-7)
    assert flat.index(0.85e-6).imag == pytest.approx(2.0 * 0.85e-6 / (4 * np.pi))


@pytest.mark.parametrize(
    ("row", "line"),
    [
        (
            {},
            "materials.x: no index given; write one of index, sellmeier, resonances, cauchy, series, "
            "square_series, gas, based_on, law",
        ),
        ({"indx": 1.5, "index": 1.5}, "materials.x.indx: unknown key (did you mean 'index'?)"),
        ({"index": 1.5, "cauchy": [1.5]}, "materials.x: the index is given twice, by index and cauchy; keep one"),
        ({"index": [1.5, 1.6]}, "materials.x.index: a list needs wavelengths"),
        ({"index": "1.5"}, "materials.x.index = '1.5': a number"),
        ({"index": -1.5}, "materials.x.index = -1.5: must be above 0"),
        (
            {"index": 1.5, "kind": "liqid"},
            "materials.x.kind = 'liqid': one of solid, elastomer, liquid, gas, tissue, metal (did you mean 'liquid'?)",
        ),
        (
            {"wavelengths": [0.9e-6, 0.8e-6], "index": [1.5, 1.5]},
            "materials.x.wavelengths: a list of at least two rising lengths",
        ),
        ({"sellmeier": [1.0, 2.0]}, "materials.x.sellmeier: a list of pairs of numbers"),
        ({"index": 1.5, "dn_dT": 1e-5, "thermal": [0.0] * 6}, "materials.x: dn_dT and thermal exclude each other"),
        (
            {"index": 1.5, "temperature_range": [300.0, 200.0]},
            "materials.x.temperature_range: two numbers, smaller first",
        ),
        ({"index": 1.5, "dn_dT": "x"}, "materials.x.dn_dT = 'x': a number"),
        ({"index": 1.5, "uncertainty": -1.0}, "materials.x.uncertainty = -1.0: must not be below 0"),
        ({"index": 1.5, "absorption": -1.0}, "materials.x.absorption: must not be below 0"),
        (
            {"index": 1.5, "offset": 0.1},
            'materials.x.offset: goes with based_on alone; write based_on = "PMMA" and offset = 0.002',
        ),
        (
            {"wavelengths": [1e-6, 2e-6], "index": 1.5},
            "materials.x.index: a list of as many numbers as wavelengths has",
        ),
        (
            {"wavelengths": [1e-6, 2e-6], "index": [1.5, 1.5], "based_on": "water"},
            "materials.x.wavelengths: go with a list of index, without based_on",
        ),
        ({"index": [1.5, 1.5], "based_on": "water"}, "materials.x.index: a list needs wavelengths"),
        (
            {"index": 1.5, "absorption": 1.0, "absorption_wavelengths": [1e-6, 2e-6]},
            "materials.x.absorption: a list of as many numbers as absorption_wavelengths has",
        ),
        ({"index": 1.5, "extinction": [1e-7]}, "materials.x.extinction: a list needs wavelengths"),
        ({"index": 1.5, "extinction": 1e-7}, "materials.x.extinction: a list needs wavelengths"),
        ({"index": 1.5, "aliases": "glue"}, "materials.x.aliases: a list of names"),
        ({"based_on": "watr"}, "materials.x.based_on: 'watr': unknown material (did you mean 'water'?)"),
    ],
)
def test_mistakes_are_named(row: dict[str, Any], line: str) -> None:
    with pytest.raises(UserMistake) as caught:
        material_from_mapping("x", row, lookup=materials.lookup)
    assert caught.value.lines == (line,)


def test_all_mistakes_of_a_file_show_at_once() -> None:
    with pytest.raises(UserMistake) as caught:
        builtin_catalogue().with_materials({"a": {"index": 0.0}, "b": {"indx": 1.5}})
    assert len(caught.value.lines) == 3


def test_search_is_nearest_first() -> None:
    found = materials.search(like=1.47, wavelength=850e-9, temperature=333.15, kind="liquid")
    distances = [abs(row.index - 1.47) for row in found]
    assert distances == sorted(distances)
    assert {row.kind for row in found} == {"liquid"}


def test_table_shows_everything_by_name() -> None:
    shown = materials.table(wavelength=850e-9, temperature=293.15)
    assert [row.name for row in shown] == list(materials.names())
    water = next(row for row in shown if row.name == "water")
    assert water.index == pytest.approx(1.32777, abs=5e-6)
    assert water.absorption == pytest.approx(4.33, abs=0.01)
    assert next(row for row in shown if row.name == "fluoropolymer").absorption is None


def test_table_of_own_materials() -> None:
    mine = Catalogue({"jelly": {"index": 1.34, "kind": "liquid"}})
    assert [row.name for row in materials.table(mine)] == ["jelly"]


@pytest.mark.parametrize(
    ("name", "default", "tolerance"),
    [
        ("PMMA", 1.484, 0.002),
        ("polycarbonate", 1.57, 0.002),
        ("polysulfone", 1.615, 0.003),
        ("polyetherimide", 1.64, 0.025),
        ("cyclo-olefin polymer", 1.52, 0.005),
        ("borosilicate", 1.465, 0.001),
        ("crown glass", 1.510, 0.001),
        ("soda-lime", 1.516, 0.001),
        ("glass-ceramic", 1.54, 0.008),
        ("fused silica", 1.4525, 0.0005),
        ("sapphire", 1.759, 0.001),
        ("silicone", 1.405, 0.006),
        ("fluoropolymer", 1.345, 0.002),
        ("water", 1.3278, 0.0001),
        ("ethanol", 1.355, 0.001),
        ("50 % glycol", 1.375, 0.003),
        ("gasoline", 1.42, 0.001),
        ("sugar 65 %", 1.445, 0.001),
        ("epidermis mid", 1.42, 0.004),
    ],
)
def test_default_indices_of_the_trade(name: str, default: float, tolerance: float) -> None:
    """Round values at 850 nm engineers carry in their heads; from memory, so the tolerances are wide."""
    assert materials.index(name, 850e-9).real == pytest.approx(default, abs=tolerance)
