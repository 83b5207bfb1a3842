"""Water and sea water against IAPWS releases, a handbook table and Quan and Fry."""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np
import pytest

from outcouple import materials
from outcouple.materials.water import quan_fry

REFERENCE = Path(__file__).parents[1] / "reference"


def rows(name: str) -> list[dict[str, str]]:
    with (REFERENCE / name).open(encoding="utf-8") as file:
        return list(csv.DictReader(file))


def test_release_values() -> None:
    """Published: IAPWS R9-97, table 3 (two of its check values)."""
    assert materials.water_index(0.2265e-6, 298.15, density=997.047435) == pytest.approx(1.39277824, abs=5e-9)
    assert materials.water_index(0.5893e-6, 773.15, density=30.4758534) == pytest.approx(1.00949307, abs=5e-9)


def test_release_grid() -> None:
    """Computed independently: package iapws 1.5.5, densities of IAPWS-95."""
    for row in rows("water_iapws_r9_97_grid.csv"):
        found = materials.water_index(
            float(row["lambda_um"]) * 1e-6, float(row["t_C"]) + 273.15, density=float(row["rho_kg_m3_IAPWS95"])
        )
        assert found == pytest.approx(float(row["n_R9_97"]), abs=1e-9)


def test_one_atmosphere() -> None:
    """Computed independently: R9-97 at the density of IAPWS-95; ours is Kell's, within 2e-3 kg/m3."""
    for row in rows("water_iapws_1atm.csv"):
        kelvin = float(row["t_C"]) + 273.15
        assert materials.water_density(kelvin) == pytest.approx(float(row["rho"]), abs=2e-3)
        for nanometres in (450, 525, 589.3, 850, 940):
            found = materials.index("water", nanometres * 1e-9, kelvin).real
            assert found == pytest.approx(float(row[f"n_abs_{nanometres:g}nm"]), abs=1e-6)


def test_handbook_table() -> None:
    """Published: a handbook table of water, five decimals, read."""
    lines = ("0.2265", "0.36105", "0.40441", "0.589", "0.6328", "1.01398")
    for row in rows("water_handbook_table.csv"):
        found = materials.index("water", np.array([float(line) * 1e-6 for line in lines]), float(row["t_C"]) + 273.15)
        assert found.real == pytest.approx([float(row[f"pub_{line}"]) for line in lines], abs=3e-5)


def test_against_package_iapws() -> None:
    """An open implementation of the release, as an oracle."""
    oracle = pytest.importorskip("iapws._iapws")
    for density, kelvin, micrometres in ((998.0, 293.15, 0.6), (950.0, 380.0, 0.85), (0.6, 373.15, 1.0)):
        found = materials.water_index(micrometres * 1e-6, kelvin, density=density)
        assert found == pytest.approx(oracle._Refractive(density, kelvin, micrometres), abs=1e-12)


def test_quan_fry() -> None:
    """Computed independently from the published formula, relative to air, inside and outside its range."""
    for row in rows("seawater_quan_fry.csv"):
        found = quan_fry(
            float(row["lambda_nm"]) * 1e-9, float(row["T_C"]) + 273.15, salinity=float(row["S_permil"]) / 1000
        )
        assert found == pytest.approx(float(row["n_rel_air"]), abs=6e-8)


def test_sea_water_follows_quan_fry_where_they_measured() -> None:
    for row in rows("seawater_quan_fry.csv"):
        if row["outside_range"] == "Y":
            continue
        wavelength, kelvin = float(row["lambda_nm"]) * 1e-9, float(row["T_C"]) + 273.15
        found = materials.sea_water_index(wavelength, kelvin, salinity=float(row["S_permil"]) / 1000)
        assert found / materials.air_index(wavelength) == pytest.approx(float(row["n_rel_air"]), abs=4e-5)


def test_fresh_sea_water_is_water() -> None:
    across = np.linspace(400e-9, 1000e-9, 7)
    assert np.array_equal(materials.sea_water_index(across, salinity=0.0), materials.water_index(across))


def test_salt_in_the_near_infrared_keeps_the_dispersion_of_water() -> None:
    """The formula of Quan and Fry, extrapolated to 850 nm, is 2e-4 high for fresh water; ours is not."""
    outside = quan_fry(850e-9, 293.15, salinity=0.0) * materials.air_index(850e-9)
    assert outside - materials.water_index(850e-9) == pytest.approx(2e-4, abs=5e-5)
    added = materials.sea_water_index(850e-9) - materials.water_index(850e-9)
    assert added == pytest.approx(0.00619, abs=2e-5)  # their 35 per mille at 850 nm less their 0: 1.3338020 - 1.3276109
