"""Air against Ciddor's equations, computed independently."""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np
import pytest

from outcouple import materials

REFERENCE = Path(__file__).parents[1] / "reference"


def cases() -> list[dict[str, str]]:
    with (REFERENCE / "air_ciddor.csv").open(encoding="utf-8") as file:
        return list(csv.DictReader(file))


@pytest.mark.parametrize("row", cases(), ids=lambda row: f"{row['kind']}-{row['t_C']}-{row['p_Pa']}-{row['lambda_um']}")
def test_ciddor(row: dict[str, str]) -> None:
    """The moist rows are table 3 of the paper, recomputed with more digits; the paper's own last digit is 1e-9."""
    moisture = float(row["RH_or_pw"])
    found = materials.air_index(
        float(row["lambda_um"]) * 1e-6,
        temperature=float(row["t_C"]) + 273.15,
        pressure=float(row["p_Pa"]),
        humidity=moisture if row["kind"] == "RH" else 0.0,
        vapour_pressure=moisture if row["kind"] == "moist" else None,
        carbon_dioxide=float(row["xCO2_ppm"]) * 1e-6,
    )
    assert found - 1 == pytest.approx(float(row["n_minus_1"]), abs=1e-10)


def test_air_thins_with_heat_and_thickens_with_pressure() -> None:
    warm = materials.air_index(850e-9, temperature=np.array([253.15, 293.15, 333.15]))
    pressed = materials.air_index(850e-9, pressure=np.array([80e3, 100e3, 120e3]))
    assert np.all(np.diff(warm) < 0)
    assert np.all(np.diff(pressed) > 0)


def test_vapour_makes_air_thinner() -> None:
    assert materials.air_index(850e-9, humidity=1.0) < materials.air_index(850e-9)


def test_nitrogen_near_its_boiling_point_is_four_times_denser() -> None:
    """Peck and Khanna's refractivity at 0 degC, 2.98e-4, by the ideal gas law."""
    cold = materials.index("nitrogen", 589.3e-9, 77.4).real
    assert cold - 1 == pytest.approx(2.98e-4 * 273.15 / 77.4, rel=5e-3)
