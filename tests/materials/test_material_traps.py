"""Traps found in optical data, each with the test that keeps this catalogue out of it."""

from __future__ import annotations

import csv
import json
from importlib.resources import files
from pathlib import Path

import numpy as np
import pytest

from outcouple import materials

REFERENCE = Path(__file__).parents[1] / "reference"


def constants() -> list[dict[str, str]]:
    with (REFERENCE / "optical_constants.csv").open(encoding="utf-8") as file:
        return list(csv.DictReader(file))


def test_catalogue_indices_are_made_absolute_and_water_is_not_lifted_twice() -> None:
    """Catalogues are relative to air, IAPWS is not: 2.7e-4 of the index apart."""
    glass = next(row for row in constants() if row["db_page"] == "specs/SCHOTT-optical/N-BK7")
    lifted = materials.index("crown glass", 589.3e-9).real - float(glass["n_589.3"])
    assert lifted == pytest.approx(1.5167 * 2.724e-4, rel=1e-3)
    water = materials.index("water", 589.3e-9).real
    assert water / materials.air_index(589.3e-9) == pytest.approx(1.33299, abs=6e-6)  # ICUMSA 1974, relative to air


def test_every_handbook_row_says_what_it_is_relative_to() -> None:
    """A liquid scaled to a handbook's sodium-D index, and any law of a catalogue, names its reference medium."""
    folder = files("outcouple") / "data" / "materials"
    laws = {"sellmeier", "resonances", "series", "square_series"}
    for stem in ("solids", "liquids"):
        for name, row in json.loads((folder / f"{stem}.json").read_text(encoding="utf-8")).items():
            if laws & row.keys() and name != "liquid argon":  # measured in vacuum against a fit of absolute indices
                assert row.get("relative_to") == "air", name


def test_extrapolation_answers_with_a_caution() -> None:
    pmma = materials.lookup("PMMA")
    across, kelvin = np.array([400e-9, 850e-9, 1.3e-6]), np.array([293.15, 293.15, 200.0])
    assert np.all(np.isfinite(pmma.index(across, kelvin)))
    wavelength, temperature, absorption = pmma.notes(across, kelvin)
    assert wavelength.code == temperature.code == "material-range"
    assert absorption.code == "material-absorption"
    assert wavelength.where is not None
    assert temperature.where is not None
    assert wavelength.where.tolist() == [True, False, True]
    assert temperature.where.tolist() == [False, False, True]
    assert wavelength.trigger == "400 nm to 1300 nm"
    assert temperature.text == (
        "The index of PMMA is known for temperatures from -20 degC to 80 degC; outside, it is estimated."
    )


def test_inside_its_ranges_a_published_material_raises_no_caution() -> None:
    assert materials.lookup("crown glass").notes(850e-9, 293.15) == ()


@pytest.mark.parametrize("name", materials.names())
def test_far_outside_every_material_still_gives_a_number(name: str) -> None:
    across = np.array([200e-9, 850e-9, 2e-6])[:, None]
    found = materials.index(name, across, np.array([[77.0, 293.15, 600.0]]))
    assert found.shape == (3, 3)
    assert np.all(np.isfinite(found))
    assert np.all(found.real > 0)
    assert np.all(found.imag >= 0)


def test_a_cryogen_asked_warm_stays_what_it_is() -> None:
    """dn/dT drawn on from 77 K to a warm room would give a liquid thinner than a gas."""
    nitrogen = materials.lookup("liquid nitrogen")
    assert nitrogen.index(850e-9, 293.15).real == pytest.approx(1.19, abs=0.01)
    assert [note.code for note in nitrogen.notes(850e-9, 293.15)] == ["material-range"]


def test_hexane_is_not_the_page_that_is_two_hundredths_low() -> None:
    """Kerl's page gives 1.3544 at 589 nm, 20 degC; the CRC Handbook 1.3727 at 25 degC."""
    assert materials.index("hexane", 589.3e-9, 298.15).real == pytest.approx(1.3727 * 1.000272, abs=1e-3)


def test_heptane_is_not_the_page_that_is_a_thousandth_high() -> None:
    page = next(row for row in constants() if row["label"] == "n-heptane 293K")
    relative = materials.index("heptane", 589.3e-9).real / materials.air_index(589.3e-9)
    assert relative < float(page["n_589.3"]) - 5e-4


def test_water_absorbs_29_per_metre_at_940_not_19() -> None:
    """Kedenburg's page is 35 % low there; Hale and Querry, Segelstein and WOPP agree on 29."""
    assert materials.lookup("water").absorption(940e-9) == pytest.approx(29.1, abs=0.3)


def test_water_index_is_not_the_three_digit_one() -> None:
    """Hale and Querry give 1.3290 at 850 nm, 1e-3 high; their extinction is used, their index is not."""
    assert materials.index("water", 850e-9, 298.15).real == pytest.approx(1.32730, abs=5e-5)


@pytest.mark.parametrize(
    ("name", "like"), [("PMMA", "PMMA"), ("soda-lime", "soda-lime"), ("polycarbonate", "polycarbonate")]
)
def test_the_spread_between_sources_is_carried(name: str, like: str) -> None:
    """PMMA spreads 1.4785 to 1.4859 at 850 nm over five data sets, soda-lime 1.507 to 1.516."""
    material = materials.lookup(name)
    found = [float(row["n_850"]) for row in constants() if row["label"].startswith(like) and row["n_850"]]
    assert len(found) > 1
    ours = material.index(850e-9).real / materials.air_index(850e-9)
    assert max(abs(ours - value) for value in found) <= material.uncertainty + 2e-4


def test_birefringent_crystals_say_so() -> None:
    """Sapphire: the extraordinary index is 0.008 lower (Malitson and Dodge, from the open database)."""
    extraordinary = next(row for row in constants() if row["label"] == "sapphire extraordinary")
    sapphire = materials.lookup("sapphire")
    difference = sapphire.index(850e-9).real / materials.air_index(850e-9) - float(extraordinary["n_850"])
    assert difference == pytest.approx(0.008, abs=2e-4)
    assert any("0.008" in note.text for note in sapphire.notes(850e-9))


def test_what_is_from_memory_says_so() -> None:
    """Every unverified record carries the caution, and every record names a reference."""
    for material in materials.builtin_catalogue():
        assert material.source, material.name
        from_memory = material.verified == "unverified"
        notes = [note.code for note in material.notes(850e-9, sum(material.temperature_range) / 2)]
        assert ("material-unverified" in notes) == from_memory, material.name
        if material.absorbs is not None:
            assert material.absorbs.source, material.name


def test_no_uncertainty_is_missing_or_absurd() -> None:
    for material in materials.builtin_catalogue():
        assert 0 <= material.uncertainty <= 0.3, material.name
        if material.kind in ("liquid", "solid", "elastomer", "tissue"):
            assert material.uncertainty >= 1e-5, material.name
