"""Every reference row on electronics, detection, photometry and screening, one test a row."""

from __future__ import annotations

import csv
import re
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest

from outcouple.decision import detection, eye_safety
from outcouple.readout import ambient, noise, photodiode
from outcouple.readout.camera import Camera, photons_per_pixel
from outcouple.readout.converter import ideal_snr_db, quantisation_rms
from outcouple.readout.modulation import boxcar_bandwidth, lockin_bandwidth, pole_noise_ratio
from outcouple.readout.tables import columns
from outcouple.readout.transimpedance import Transimpedance, compensation_intercept, compensation_rule

TABLE = Path(__file__).parents[1] / "reference" / "readout_scalars.csv"
ROWS = list(csv.DictReader(TABLE.read_text(encoding="utf-8").splitlines()))
STAGE = {"resistance": 1e6, "gain_bandwidth": 10e6, "input_capacitance": 20e-12}


def number(text: str, name: str) -> float:
    """The number behind ``name=`` in a row's conditions."""
    found = re.search(rf"{name}=\s*([0-9.e+-]+)", text)
    assert found, (name, text)
    return float(found.group(1))


def leading(text: str) -> float:
    found = re.match(r"[0-9.e+-]+", text)
    assert found, text
    return float(found.group(0))


def shot(text: str) -> float:
    current = {"I=1 uA, 2qI": 1e-6, "I=1 nA": 1e-9}[text]
    return float(noise.shot_density(current))


def johnson(text: str) -> float:
    ohms = 1e6 if "Mohm" in text else number(text, "R")
    return float(noise.thermal_voltage_density(ohms, temperature=number(text, "T")))


def separation(text: str) -> float:
    return float(detection.needed_separation(false_alarm=number(text, "Pfa"), detection=number(text, "Pd")))


def stage(text: str) -> Transimpedance:
    return Transimpedance(feedback_capacitance=number(text, "Cf"), **STAGE)


def camera() -> Camera:
    return Camera(quantum_efficiency=0.5, gain=0.1, dark_noise=10.0, full_well=1e5)


def sun(column: str, text: str) -> float:
    low, high = (float(part) for part in text.removesuffix(" nm").split("-"))
    table = columns("sun_am15.csv")
    inside = (table["start_nm"] >= low) & (table["start_nm"] < high)
    return float(np.sum(table[column][inside])) * ambient.STEP


def sun_efficacy(text: str) -> float:
    total = 1000.3706555734423  # W/m2, ASTM G173-03 global, 280 to 4000 nm
    return ambient.illuminance_of(ambient.STARTS + ambient.STEP / 2, columns("sun_am15.csv")["global"]) / total


def per_lux(centre: float) -> Callable[[str], float]:
    def compute(text: str) -> float:
        temperature = leading(text)
        return float(
            ambient.band_irradiance(
                "incandescent", illuminance=1.0, centre=centre, width=20e-9, temperature=temperature
            )
        )

    return compute


COMPUTE: tuple[tuple[str, Callable[[str], float]], ...] = (
    ("shot noise density", shot),
    ("Johnson voltage", johnson),
    ("Johnson current", lambda text: float(noise.thermal_current_density(1e6, temperature=number(text, "T")))),
    ("DC voltage where shot", lambda text: float(noise.shot_equals_thermal_voltage(300.0))),
    ("kTC noise charge", lambda text: float(noise.ktc_charge(number(text, "C"), temperature=300.0))),
    ("kTC noise", lambda text: float(noise.ktc_voltage(number(text, "C"), temperature=300.0))),
    ("ideal ADC", lambda text: float(ideal_snr_db(number(text, "N")))),
    ("rule 6.02N", lambda text: float(ideal_snr_db(number(text, "N")))),
    ("quantisation rms", lambda text: float(quantisation_rms(1.0))),
    ("lock-in output RC cascade ENBW x RC, 6 dB", lambda text: float(lockin_bandwidth(1.0, poles=1))),
    ("lock-in output RC cascade ENBW x RC, 12 dB", lambda text: float(lockin_bandwidth(1.0, poles=2))),
    ("lock-in output RC cascade ENBW x RC, 18 dB", lambda text: float(lockin_bandwidth(1.0, poles=3))),
    ("lock-in output RC cascade ENBW x RC, 24 dB", lambda text: float(lockin_bandwidth(1.0, poles=4))),
    ("single pole ENBW", lambda text: pole_noise_ratio(1)),
    ("two identical poles", lambda text: pole_noise_ratio(2)),
    ("boxcar", lambda text: float(boxcar_bandwidth(1.0))),
    ("TIA noise-gain zero", lambda text: float(stage(text).noise_gain_zero)),
    ("TIA noise-gain pole", lambda text: float(stage(f"Cf={leading(text[3:])}").noise_gain_pole)),
    ("TIA HF noise gain", lambda text: float(stage(text).noise_gain_plateau)),
    ("TIA intercept", lambda text: float(stage(text).intercept)),
    ("TIA Cf 45deg", lambda text: float(compensation_rule(**STAGE))),
    ("TIA Cf exact", lambda text: float(compensation_intercept(**STAGE))),
    ("TIA BW", lambda text: float(Transimpedance(feedback_capacitance=0.0, **STAGE).natural_frequency)),
    ("Gaussian one-sided", lambda text: float(detection.inverse_tail(number(text, "Pfa")))),
    ("needed separation", separation),
    ("BER", lambda text: float(detection.tail_probability(number(text, "Q")))),
    ("photon energy", lambda text: 1 / float(photodiode.quantum_ceiling(leading(text) * 1e-9))),
    ("responsivity at QE=1", lambda text: float(photodiode.quantum_ceiling(leading(text) * 1e-9))),
    (
        "EMVA photons/pixel constant",
        lambda text: float(photons_per_pixel(1e-2, exposure=1e-3, area=1e-12, wavelength=1e-6)),
    ),
    (
        "EMVA photons",
        lambda text: float(photons_per_pixel(1e-2, exposure=10e-3, area=25e-12, wavelength=0.85e-6)),
    ),
    ("EMVA variance", lambda text: float(camera().variance(number(text, "mu_p")))),
    ("EMVA SNR", lambda text: float(camera().snr(number(text, "mu_p")))),
    ("EMVA mu_p.min", lambda text: float(camera().threshold())),
    ("ASTM G173-03 global", lambda text: sun("global", text)),
    ("ASTM G173-03 direct", lambda text: sun("direct", text)),
    ("AM1.5G luminous", sun_efficacy),
    ("blackbody luminous", lambda text: ambient.blackbody_efficacy(leading(text))),
    ("blackbody W/m2", per_lux(850e-9)),
    ("... 930-950", per_lux(940e-9)),
    ("burn-hazard", lambda text: float(eye_safety.burn_hazard_weight(leading(text) * 1e-9))),
    ("18000 t^-0.75", lambda text: float(eye_safety.corneal_irradiance_limit(number(text, "t")))),
)


def tolerance(row: dict[str, str]) -> dict[str, float]:
    """Keyword for pytest.approx from a row's tolerance column."""
    text = row["tolerance"]
    if text.startswith("0.12 of exact"):
        return {"abs": 0.12, "rel": 0.0}
    if text.endswith("%"):
        return {"rel": leading(text) / 100}
    if text in ("exact", "1e-12") or text.startswith("1e-12"):
        return {"rel": 4e-15 if text == "exact" else 1e-12}
    if "standard rounds" in text:
        return {"rel": 1e-9}
    return {"rel": leading(text)}


@pytest.mark.parametrize("row", ROWS, ids=lambda row: f"{row['quantity'][:30]} {row['conditions'][:30]}")
def test_reference_rows(row: dict[str, str]) -> None:
    compute = next(function for start, function in COMPUTE if row["quantity"].startswith(start))
    text = f"{row['conditions']} {row['quantity']}" if row["quantity"].startswith("18000") else row["conditions"]
    assert compute(text) == pytest.approx(float(row["value"]), **tolerance(row))


def test_all_rows_are_used() -> None:
    assert len(ROWS) == 134
    used = {start for start, _ in COMPUTE}
    assert all(any(row["quantity"].startswith(start) for row in ROWS) for start in used)
