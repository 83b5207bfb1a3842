"""Solutions in water against the tables they come from, and against measurements they do not come from."""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from outcouple import materials
from outcouple.errors import UserMistake
from outcouple.materials.solutes import SOLUTES

REFERENCE = Path(__file__).parents[1] / "reference"
D = 589.3e-9
CRC_NAMES = {
    "1,2-Ethanediol": "ethylene glycol",
    "Ethanol": "ethanol",
    "Glycerol": "glycerol",
    "Methanol": "methanol",
    "2-Propanol": "isopropanol",
    "Sodium chloride": "salt",
}


def rows(name: str) -> list[dict[str, str]]:
    with (REFERENCE / name).open(encoding="utf-8") as file:
        return list(csv.DictReader(file))


def relative(name: str, temperature: float = 293.15) -> float:
    return float(materials.index(name, D, temperature).real / materials.air_index(D))


@pytest.mark.parametrize("row", rows("sucrose_brix.csv"), ids=lambda row: row["brix_g_per_100g"])
def test_sucrose_scale(row: dict[str, str]) -> None:
    """Published: ICUMSA 1974 scale, five decimals."""
    assert relative(f"sugar {row['brix_g_per_100g']} %") == pytest.approx(float(row["nD20"]), abs=1e-5)


@pytest.mark.parametrize(
    "row",
    [row for row in rows("aqueous_mixtures_crc.csv") if row["solute"] in CRC_NAMES],
    ids=lambda row: f"{row['solute']}-{row['mass_percent']}",
)
def test_crc_solutions(row: dict[str, str]) -> None:
    """Published: CRC Handbook, four decimals."""
    assert relative(f"{CRC_NAMES[row['solute']]} {row['mass_percent']} %") == pytest.approx(
        float(row["nD20"]), abs=1e-5
    )


@pytest.mark.parametrize(
    "row",
    [row for row in rows("aqueous_mixtures_crc.csv") if row["solute"] == "Sucrose"],
    ids=lambda row: row["mass_percent"],
)
def test_crc_sucrose_agrees_with_the_finer_scale(row: dict[str, str]) -> None:
    """Published: CRC Handbook, another table than the one shipped; at 80 % the two differ by 1.1e-4."""
    tolerance = 1.2e-4 if float(row["mass_percent"]) == 80 else 6e-5
    assert relative(f"sugar {row['mass_percent']} %") == pytest.approx(float(row["nD20"]), abs=tolerance)


@pytest.mark.parametrize("row", rows("sugar_temperature_oiv.csv"), ids=lambda row: f"{row['t_C']}-degC")
def test_sugar_at_other_temperatures(row: dict[str, str]) -> None:
    """Published: OIV-MA-AS2-02, table I. The solution is what the corrected reading says it is."""
    kelvin = float(row["t_C"]) + 273.15
    for read, correction in row.items():
        if read == "t_C":
            continue
        true = (float(read) + float(correction)) / 100
        index = materials.solution_index("sugar", share=true, temperature=kelvin)
        found = materials.concentration("sugar", index).share * 100
        assert found == pytest.approx(float(read), abs=0.02)


@pytest.mark.parametrize("percent", [20, 50])
def test_glycerol_dispersion(percent: int) -> None:
    """Measured by Gupta et al., Adv. Photonics Res. 2022, 2200152, 450 nm less 589.3 nm; no part of our method."""
    label = f"water-glycerol {percent}%"
    row = next(row for row in rows("optical_constants.csv") if row["label"] == label)
    measured = float(row["n_450"]) - float(row["n_589.3"])
    solution = materials.lookup(f"water {percent} % glycerol".removeprefix("water "))
    assert (solution.index(450e-9) - solution.index(D)).real == pytest.approx(measured, abs=4e-4)


def test_sea_salt_warming_is_that_of_quan_and_fry() -> None:
    """35 g of sodium chloride per kilogram is not sea water, but warms alike: -1.17e-4 per kelvin at 25 degC."""
    salt, sea = (
        materials.lookup(name).index(D, np.array([293.15, 303.15])).real
        for name in ("salt water 3.5 %", "sea water 3.5 %")
    )
    assert np.diff(salt) == pytest.approx(np.diff(sea), abs=2e-5)


def test_pure_solutes_meet_their_liquids() -> None:
    """The tables end at the pure liquid; it lies within its stated uncertainty of the liquid's own record."""
    for solute in SOLUTES:
        if solute.limits[1] == 1.0:
            liquid = materials.lookup(solute.liquid)
            ours = materials.lookup(f"{solute.name} 100 %").index(850e-9)
            assert abs(ours.real - liquid.index(850e-9).real) < liquid.uncertainty, solute.name


def test_no_solute_is_water() -> None:
    for solute in SOLUTES:
        nothing = materials.lookup(f"{solute.name} 0 %")
        for wavelength, kelvin in ((D, 293.15), (850e-9, 310.0)):
            water = materials.index("water", wavelength, kelvin).real
            assert nothing.index(wavelength, kelvin).real == pytest.approx(water, abs=6e-6), solute.name


@pytest.mark.parametrize(
    ("written", "name"),
    [
        ("sugar 50 %", "sugar 50 %"),
        ("50 % sugar", "sugar 50 %"),
        ("Sucrose 50%", "sugar 50 %"),
        ("ethylene glycol 50 %", "ethylene glycol 50 %"),
        ("50 % glycol", "ethylene glycol 50 %"),
        ("glycol 50 % mix", "ethylene glycol 50 %"),
        ("ethanol 30 % in water", "ethanol 30 %"),
        ("salt water 3.5 %", "salt 3.5 %"),
        ("sea water 3.5 %", "sea water 3.5 %"),
        ("2-propanol 70 %", "isopropanol 70 %"),
    ],
)
def test_names(written: str, name: str) -> None:
    assert materials.lookup(written).name == name
    assert materials.builtin_catalogue().knows(written)


def test_a_share_outside_the_table_is_refused_by_name() -> None:
    with pytest.raises(UserMistake) as caught:
        materials.lookup("sugar 90 %")
    assert caught.value.lines == ("'sugar 90 %': sugar in water is known from 0 to 85 %",)


def test_an_unknown_solute_gets_the_nearest() -> None:
    with pytest.raises(UserMistake) as caught:
        materials.lookup("ethanoll 30 %")
    assert caught.value.lines == ("'ethanoll 30 %': no table of 'ethanoll' in water (did you mean 'ethanol'?)",)


@given(st.floats(0.0, 0.85), st.floats(450e-9, 950e-9), st.floats(280.0, 310.0))
def test_sugar_share_comes_back(share: float, wavelength: float, kelvin: float) -> None:
    index = materials.solution_index("sugar", share=share, wavelength=wavelength, temperature=kelvin)
    found = materials.concentration("sugar", index, wavelength=wavelength, temperature=kelvin)
    assert found.share == pytest.approx(share, abs=1e-5)
    assert not found.notes


def test_shares_broadcast() -> None:
    shares = np.array([0.0, 0.2, 0.6])[:, None]
    across = np.array([[450e-9, 589.3e-9, 850e-9, 940e-9]])
    found = materials.solution_index("sugar", share=shares, wavelength=across)
    assert found.shape == (3, 4)
    assert found[2, 1] == pytest.approx(1.44193 * materials.air_index(D), abs=1e-5)


@pytest.mark.parametrize(
    ("solute", "top", "near", "single"), [("ethanol", 1.3658, 0.8, 1.34), ("methanol", 1.3431, 0.5, 1.3310)]
)
def test_alcohols_have_a_maximum(solute: str, top: float, near: float, single: float) -> None:
    """Trap: above half strength the index of these mixtures does not tell the concentration (CRC Handbook)."""
    found = materials.concentration(solute, np.array([top - 0.001, single, 1.40]) * materials.air_index(D))
    assert [note.code for note in found.notes] == ["concentration-ambiguous", "concentration-range"]
    ambiguous, outside = found.notes
    assert ambiguous.where is not None
    assert outside.where is not None
    assert ambiguous.where.tolist() == [True, False, False]
    assert outside.where.tolist() == [False, False, True]
    assert found.share[0] < near < found.other[0]
    assert np.isnan(found.other[1])
    assert np.isnan(found.share[2])


def test_below_water_methanol_is_told_by_its_falling_side() -> None:
    found = materials.concentration("methanol", 1.3300 * materials.air_index(D))
    assert 0.95 < found.share < 1.0
    assert np.isnan(found.other)


def test_lorentz_lorenz_mixes() -> None:
    """Glycol half and half by mass, densities 998, 1113.5 and mixed 1065 kg/m3: within 1e-3 of CRC's table."""
    water, glycol = 0.5 / 0.998, 0.5 / 1.1135
    before = water + glycol
    mixed = materials.lorentz_lorenz(
        [1.33299, 1.4318], [water / before, glycol / before], contraction=1 - 1 / (1.065 * before)
    )
    assert mixed == pytest.approx(relative("ethylene glycol 50 %"), abs=1e-3)


@given(st.floats(1.0, 2.0), st.floats(1.0, 2.0), st.floats(0.0, 1.0))
def test_a_mixture_lies_between_its_parts(first: float, second: float, share: float) -> None:
    mixed = materials.lorentz_lorenz([first, second], [share, 1 - share])
    assert min(first, second) - 1e-12 <= mixed <= max(first, second) + 1e-12


def test_shares_must_sum_to_one() -> None:
    with pytest.raises(ValueError, match="must sum to 1"):
        materials.lorentz_lorenz([1.3, 1.4], [0.5, 0.6])
