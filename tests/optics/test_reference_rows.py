"""Plane waves against reference rows (see tests/reference/README.md) and published numbers."""

from __future__ import annotations

import csv
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from outcouple import optics

REFERENCE = Path(__file__).parents[1] / "reference"


def rows(name: str) -> list[dict[str, str]]:
    with (REFERENCE / name).open(newline="", encoding="utf-8") as file:
        return list(csv.DictReader(file))


def medium(real: str, imag: str = "0") -> Any:
    return complex(float(real), float(imag)) if float(imag) else float(real)


@pytest.mark.parametrize("row", rows("gap_checks.csv"), ids=lambda row: "-".join(list(row.values())[:6]))
def test_one_gap(row):
    n_contact = medium(row["n2_re"], row["n2_im"])
    wavelength = 850e-9
    gap, angle = float(row["gap_over_lambda"]) * wavelength, np.radians(float(row["angle_deg"]))
    n_guide, n_gap = float(row["n0"]), float(row["n1_gap"])
    whole = optics.stack_response((n_guide, n_gap, n_contact), (gap,), angle, wavelength)
    Ts, Tp = optics.gap_transmittance(n_guide, n_gap, n_contact, gap, angle, wavelength)
    found = {"Rs": whole.Rs, "Rp": whole.Rp, "Ts": whole.Ts, "Tp": whole.Tp}
    for name, value in found.items():
        assert float(value) == pytest.approx(float(row[f"{name}_mpmath"]), abs=1e-10)
    assert float(Ts) == pytest.approx(float(row["Ts_mpmath"]), abs=1e-10)
    assert float(Tp) == pytest.approx(float(row["Tp_mpmath"]), abs=1e-10)


@pytest.mark.parametrize("row", rows("random_stacks.csv"), ids=lambda row: row["id"])
def test_stacks(row):
    indices = [medium(*pair) for pair in zip(row["n_real"].split(";"), row["n_imag"].split(";"), strict=True)]
    depths = [float(depth) * 1e-9 for depth in row["d_nm(inner)"].split(";")]
    angle, wavelength = np.radians(float(row["angle_deg"])), float(row["wavelength_nm"]) * 1e-9
    found = optics.stack_response(indices, depths, angle, wavelength)
    for name in ("Rs", "Rp", "Ts", "Tp"):
        assert float(getattr(found, name)) == pytest.approx(float(row[f"{name}_mp"]), abs=1e-10)


@pytest.mark.parametrize("row", rows("atr_goos_haenchen.csv"), ids=lambda row: f"{row['ire']}-{row['angle_deg']}")
def test_evanescent_depths(row):
    where = (float(row["n1"]), float(row["n2"]), np.radians(float(row["angle_deg"])), float(row["lambda_um"]) * 1e-6)
    depth = optics.penetration_depth(*where)
    if row["dp_um"] == "no TIR":
        assert np.isinf(depth)
        assert np.all(np.isnan(optics.effective_thickness(*where)))
        return
    effective = optics.effective_thickness(*where)
    shift = optics.beam_shift(*where)
    assert float(depth) * 1e6 == pytest.approx(float(row["dp_um"]), rel=1e-9)
    assert [float(d) * 1e6 for d in effective] == pytest.approx(
        [float(row["de_s_um"]), float(row["de_p_um"])], rel=1e-9
    )
    # Independent numerics with a small absorption and a phase derivative.
    assert float(effective[0]) * 1e6 == pytest.approx(float(row["de_s_numeric_smallk"]), rel=1e-7)
    assert [float(s) * 1e6 for s in shift] == pytest.approx(
        [float(row["GH_s_numeric_phase_derivative"]), float(row["GH_p_numeric"])], rel=1e-9
    )
    assert np.degrees(float(optics.critical_angle(*where[:2]))) == pytest.approx(float(row["critical_deg"]), abs=1e-10)


def test_published_penetration_depths():
    """2.0 um for zinc selenide and 0.664 um for germanium at 45 degrees, 10 um, sample 1.5: common tables of internal
    reflection elements (Harrick, 1967), to the last printed digit."""
    for index, printed in ((2.4, 2.0), (4.0, 0.664)):
        depth = float(optics.penetration_depth(index, 1.5, np.radians(45), 10e-6)) * 1e6
        assert depth == pytest.approx(printed, abs=0.006)


@pytest.mark.parametrize("row", rows("critical_angle_prism45.csv"), ids=lambda row: f"{row['solid']}-{row['medium']}")
def test_faces_at_45_degrees(row):
    n1, n2 = float(row["n1"]), float(row["n2"])
    face = optics.interface(n1, n2, np.radians(45))
    assert float(face.Rs) == pytest.approx(float(row["Rs_45"]), abs=1e-12)
    assert float(face.Rp) == pytest.approx(float(row["Rp_45"]), abs=1e-12)
    twice = (float(face.Rs) ** 2 + float(face.Rp) ** 2) / 2
    assert twice == pytest.approx(float(row["two_bounce_unpolarised_mean(Rs^2,Rp^2)"]), abs=1e-12)
    assert float(optics.interface(n1, n2, 0.0).Rs) == pytest.approx(float(row["R_normal"]), abs=1e-12)
    if row["critical_deg"]:
        assert np.degrees(float(optics.critical_angle(n1, n2))) == pytest.approx(float(row["critical_deg"]), abs=1e-10)


@pytest.mark.parametrize("row", rows("trapping_fractions.csv"), ids=lambda row: row["n"])
def test_light_trapped_in_a_slab(row):
    critical = float(optics.critical_angle(float(row["n"]), 1.0))
    assert np.degrees(critical) == pytest.approx(float(row["critical_deg"]), abs=1e-10)
    assert np.cos(critical) == pytest.approx(float(row["iso_trapped_slab=sqrt(1-1/n2)"]), abs=1e-12)
    assert np.sin(critical) ** 2 == pytest.approx(float(row["lambertian_inside_escape=1/n2"]), abs=1e-12)


def test_water_to_air():
    """48.75 degrees for water of index 1.33: common practice, no source."""
    assert np.degrees(float(optics.critical_angle(1.33, 1.0))) == pytest.approx(48.75, abs=0.01)


def test_glass_at_normal_incidence_and_brewster():
    """4 % for 1.5, Brewster 56.31 degrees, no p reflected there: common practice, no source."""
    assert float(optics.interface(1.0, 1.5, 0.0).Rs) == pytest.approx(0.04, abs=1e-12)
    brewster = float(optics.brewster_angle(1.0, 1.5))
    assert np.degrees(brewster) == pytest.approx(56.31, abs=0.005)
    assert float(optics.interface(1.0, 1.5, brewster).Rp) == pytest.approx(0.0, abs=1e-30)


def test_gold_film_on_a_prism():
    """50 nm of gold under crown glass in water, 633 nm: p dips in the low seventies; constants from memory."""
    angles = np.radians(np.linspace(65, 80, 3001))
    found = optics.stack_response((1.515, 0.18 + 3.43j, 1.332), (50e-9,), angles, 633e-9)
    assert 70 < np.degrees(angles[np.argmin(found.Rp)]) < 74
    assert found.Rp.min() < 0.05
    assert found.Rs.min() > 0.8
