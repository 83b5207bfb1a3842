"""Shipped solids, liquids and metals against an open database, handbooks and absorption data."""

from __future__ import annotations

import csv
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from outcouple import materials

REFERENCE = Path(__file__).parents[1] / "reference"
LINES = (450, 525, 589.3, 850, 940)


def rows(name: str) -> list[dict[str, str]]:
    with (REFERENCE / name).open(encoding="utf-8") as file:
        return list(csv.DictReader(file))


def law_of(model: str) -> Mapping[str, Any] | None:
    """The keys of a row from the database's words "formula 2 0 1.04 0.006 ...": computed independently there."""
    words = model.split(";")[0].split()
    if words[0] != "formula":
        return None
    number, numbers = int(words[1]), [float(word) for word in words[2:]]
    pairs = list(zip(numbers[1::2], numbers[2::2], strict=True))
    match number:
        case 1:
            return {"resonances": pairs, "sellmeier_offset": numbers[0]}
        case 2:
            return {"sellmeier": pairs, "sellmeier_offset": numbers[0]}
        case 3:
            return {"square_series": [(numbers[0], 0), *pairs]}
        case 5:
            return {"series": [(numbers[0], 0), *pairs]}
        case 6:
            return {"gas": pairs, "gas_offset": numbers[0], "kind": "gas", "reference_temperature": 293.15}
    return None


@pytest.mark.parametrize(
    "row",
    [row for row in rows("optical_constants.csv") if law_of(row["model"]) and row["n_589.3"]],
    ids=lambda row: row["db_page"],
)
def test_dispersion_laws(row: dict[str, str]) -> None:
    """Same coefficients, other code: package refractiveindex 1.3.1."""
    law = law_of(row["model"])
    assert law is not None
    material = materials.material_from_mapping("trial", law)
    for line in LINES:
        if row[f"n_{line:g}"]:
            found = material.index(line * 1e-9).real
            assert found == pytest.approx(float(row[f"n_{line:g}"]), abs=1e-6)


PAGES = {
    "specs/SCHOTT-optical/N-BK7": "crown glass",
    "specs/SCHOTT-misc/BOROFLOAT33": "borosilicate",
    "specs/SCHOTT-misc/D263TECO": "thin borosilicate",
    "glass/soda-lime/Rubin-clear": "soda-lime",
    "glass/soda-lime/Rubin-lowiron": "low-iron soda-lime",
    "main/SiO2/Malitson": "fused silica",
    "main/Al2O3/Malitson-o": "sapphire",
    "organic/poly_methyl_methacrylate/Sultanova": "PMMA",
    "organic/polycarbonate/Sultanova": "polycarbonate",
    "organic/polystyrene/Sultanova": "polystyrene",
    "organic/polyetherimide/Zhang": "polyetherimide",
    "organic/polyethylene_terephthalate/Zhang": "PET",
    "other/ZeonexE48R/Sultanova": "cyclo-olefin polymer",
    "organic/cellulose/Sultanova": "cellulose",
    "organic/ethanol/Sani-formula": "ethanol",
    "organic/methanol/Moutzouris": "methanol",
    "organic/propanol/Moutzouris": "1-propanol",
    "organic/propanol/Sani-formula": "isopropanol",
    "organic/ethylene_glycol/Sani-formula": "ethylene glycol",
    "organic/toluene/Moutzouris": "toluene",
    "organic/acetone/Rheims": "acetone",
    "main/ZnSe/Connolly": "zinc selenide",
}
REFERENCE_TEMPERATURES = {"methanol": 300.15, "1-propanol": 300.15, "toluene": 300.15, "zinc selenide": 296.15}


@pytest.mark.parametrize("page", PAGES)
def test_shipped_rows(page: str) -> None:
    """Relative to air, at the temperature they were measured at; tables within their interpolation."""
    row = next(row for row in rows("optical_constants.csv") if row["db_page"] == page)
    name = PAGES[page]
    tolerance = 2e-4 if "tabulated n" in row["model"] else 1e-6
    for line in LINES:
        if row[f"n_{line:g}"]:
            found = materials.index(name, line * 1e-9, REFERENCE_TEMPERATURES.get(name, 293.15)).real
            relative = found / materials.air_index(line * 1e-9)
            assert relative == pytest.approx(float(row[f"n_{line:g}"]), abs=tolerance)


def test_thin_fluids_measured_since() -> None:
    """Perfluorohexane, Chang et al. 2024, from the database."""
    row = next(row for row in rows("optical_constants.csv") if row["label"] == "perfluorohexane")
    found = materials.index("perfluorohexane", 850e-9, 294.9).real / materials.air_index(850e-9)
    assert found == pytest.approx(float(row["n_850"]), abs=1e-6)


CRC_LIQUIDS = {
    "ethanol": "ethanol",
    "methanol": "methanol",
    "2-propanol": "isopropanol",
    "1-propanol": "1-propanol",
    "glycerol": "glycerol",
    "ethylene glycol": "ethylene glycol",
    "propylene glycol": "propylene glycol",
    "n-hexane": "hexane",
    "n-heptane": "heptane",
    "isooctane": "isooctane",
    "cyclohexane": "cyclohexane",
    "toluene": "toluene",
    "acetone": "acetone",
    "acetic acid": "acetic acid",
    "perfluorohexane": "perfluorohexane",
}


@pytest.mark.parametrize("liquid", CRC_LIQUIDS)
def test_sodium_indices_of_liquids(liquid: str) -> None:
    """Published: CRC Handbook; within the uncertainty each record states."""
    row = next(row for row in rows("liquids_crc_nD.csv") if row["liquid"] == liquid)
    material = materials.lookup(CRC_LIQUIDS[liquid])
    found = material.index(589.3e-9, float(row["T_K"])).real / materials.air_index(589.3e-9)
    assert found == pytest.approx(float(row["nD"]), abs=material.uncertainty)


ABSORPTION = {
    "water Hale&Querry 1973 25C": ("water", 0.04),
    "water WOPP v3 (Rottgers 2011/2014) 20C S=0": ("water", 0.04),
    "water Segelstein 1981": ("water", 0.04),
    "soda-lime clear Rubin 1985": ("soda-lime", 0.04),
    "soda-lime low-iron Rubin 1985": ("low-iron soda-lime", 0.04),
    "BK7 catalogue 2017": ("crown glass", 0.04),
    "ethanol Kedenburg 2012": ("ethanol", 0.04),
    "toluene Kedenburg 2012": ("toluene", 0.04),
}


@pytest.mark.parametrize(
    "row",
    [row for row in rows("absorption_nir.csv") if row["material"] in ABSORPTION],
    ids=lambda row: f"{row['material']}-{row['lambda_nm']}",
)
def test_near_infrared_absorption(row: dict[str, str]) -> None:
    """Published: the open database, and for water two more compilations that agree within 4 %."""
    name, tolerance = ABSORPTION[row["material"]]
    found = materials.lookup(name).absorption(float(row["lambda_nm"]) * 1e-9)
    assert found == pytest.approx(float(row["alpha_per_m"]), rel=tolerance)


def test_acrylic_absorbs_less_than_thin_samples_bound() -> None:
    """Measurements on thin samples (Zhang et al. 2020) are upper bounds; the better of two sheets at 850 and 940 nm."""
    for wavelength, bound in ((850e-9, 1.552), (940e-9, 5.869)):
        assert 0.1 < materials.lookup("PMMA").absorption(wavelength) < bound


def test_absorption_and_extinction_are_one() -> None:
    """alpha = 4 pi kappa / wavelength."""
    across = np.array([0.45e-6, 0.85e-6, 0.94e-6])
    for name in ("water", "gold", "soda-lime"):
        kappa = materials.index(name, across).imag
        assert materials.lookup(name).absorption(across) == pytest.approx(4 * np.pi * kappa / across)


@pytest.mark.parametrize(
    ("metal", "nanometres", "n", "kappa"),
    [
        ("gold", 821.1, 0.16, 5.083),
        ("gold", 616.8, 0.21, 3.272),
        ("silver", 821.1, 0.04, 5.727),
        ("aluminium", 800.0, 2.7, 8.4),
    ],
)
def test_metals(metal: str, nanometres: float, n: float, kappa: float) -> None:
    """Johnson and Christy 1972, rows of their table from memory; aluminium: Rakic 1995, round values from memory."""
    loose = 0.15 if metal == "aluminium" else 0.004
    found = materials.index(metal, nanometres * 1e-9)
    assert found.real == pytest.approx(n, abs=loose)
    assert found.imag == pytest.approx(kappa, abs=loose)


def slope(name: str, wavelength: float, kelvin: float) -> float:
    low, high = materials.index(name, wavelength, np.array([kelvin - 0.5, kelvin + 0.5])).real
    return float(high - low)


@pytest.mark.parametrize(
    ("name", "nanometres", "kelvin", "expected", "tolerance"),
    [
        # computed independently from the makers' coefficients
        ("crown glass", 589, 293.15, 1.3818e-6, 0.5e-7),
        ("crown glass", 850, 293.15, 1.0533e-6, 0.5e-7),
        ("crown glass", 940, 293.15, 1.0009e-6, 0.5e-7),
        ("crown glass", 450, 293.15, 1.896e-6, 0.5e-7),
        # computed independently: IAPWS R9-97, package iapws
        ("water", 589, 293.15, -8.989e-5, 2e-7),
        ("water", 589, 298.15, -1.0618e-4, 2e-7),
        ("water", 850, 293.15, -8.652e-5, 2e-7),
        ("water", 850, 298.15, -1.0248e-4, 2e-7),
        ("water", 940, 293.15, -8.534e-5, 2e-7),
        # computed independently: Ciddor 1996
        ("air", 589, 290.65, -9.48e-7, 5e-9),
        # read: tables of optical polymers; they differ by more than the tolerances
        ("polycarbonate", 589, 293.15, -1.2e-4, 0.2e-4),
        ("polystyrene", 589, 293.15, -1.4e-4, 0.2e-4),
        ("PMMA", 633, 293.15, -1.0e-4, 0.15e-4),
        # read: International Tables for Crystallography C, table 3.3.2.1
        ("glycerol", 589, 293.15, -2.2e-4, 0.2e-4),
        ("kerosene", 589, 293.15, -3.5e-4, 0.5e-4),
        ("mineral oil", 589, 293.15, -4.0e-4, 0.5e-4),
        # read: Kerl and Varchmin 1995, from pages whose index is off but whose slope is not
        ("heptane", 589, 303.15, -5.17e-4, 0.1e-4),
        # computed from the database pages at 20 and 40 degC
        ("biodiesel", 589, 303.15, -4.0e-4, 0.3e-4),
    ],
)
def test_temperature_coefficients(
    name: str, nanometres: float, kelvin: float, expected: float, tolerance: float
) -> None:
    assert slope(name, nanometres * 1e-9, kelvin) == pytest.approx(expected, abs=tolerance)


@pytest.mark.parametrize(
    ("name", "nanometres", "kelvin", "index", "tolerance"),
    [
        ("liquid nitrogen", 589.3, 77.15, 1.19876, 5e-6),
        ("liquid oxygen", 589.3, 90.15, 1.2243, 5e-5),
        ("liquid hydrogen", 589.3, 20.15, 1.1096, 5e-5),
        ("liquid argon", 589.3, 85.15, 1.2312, 3e-3),
        ("sulfuric acid", 589.3, 293.15, 1.4183, 4.5e-4),
    ],
)
def test_inorganic_liquids(name: str, nanometres: float, kelvin: float, index: float, tolerance: float) -> None:
    """Published: CRC Handbook, 86th ed., index of refraction of inorganic liquids (argon comes from another source)."""
    assert materials.index(name, nanometres * 1e-9, kelvin).real == pytest.approx(index, abs=tolerance)


@pytest.mark.parametrize(
    ("liquid", "vapour", "kelvin", "ratio"),
    [
        ("liquid nitrogen", "nitrogen", 77.35, 806.1 / 1.2506),
        ("liquid hydrogen", "hydrogen", 20.37, 70.85 / 0.08989),
        ("liquid oxygen", "oxygen", 90.19, 1141.2 / 1.4290),
        ("liquid helium", "helium", 4.22, 124.9 / 0.17850),
    ],
)
def test_cryogens_are_dense_gases(liquid: str, vapour: str, kelvin: float, ratio: float) -> None:
    """Lorentz-Lorenz from the gas at 0 degC and the ratio of densities; densities from memory."""
    gas = materials.index(vapour, 589.3e-9, 273.15).real
    refraction = ratio * (gas**2 - 1) / (gas**2 + 2)
    dense = np.sqrt((1 + 2 * refraction) / (1 - refraction))
    assert materials.index(liquid, 589.3e-9, kelvin).real == pytest.approx(dense, abs=4e-3)
