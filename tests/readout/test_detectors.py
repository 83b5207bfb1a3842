"""Photodiode, converter, noise budget and camera."""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from outcouple.readout import noise, photodiode
from outcouple.readout.camera import Camera, photon_transfer_fit
from outcouple.readout.constants import CHARGE
from outcouple.readout.converter import Converter, quantisation_rms
from outcouple.readout.noise import NoiseBudget

SERIES = Path(__file__).parents[1] / "reference" / "emva_photon_transfer.csv"


@pytest.mark.parametrize("detector", photodiode.DETECTORS)
def test_responsivity_stays_below_one_electron_per_photon(detector: str) -> None:
    wavelength = np.linspace(350e-9, 1100e-9, 751)
    for temperature in (233.15, 298.15, 343.15):
        got = photodiode.responsivity(wavelength, detector, temperature=temperature)
        assert np.all(got >= 0)
        assert np.all(got < photodiode.quantum_ceiling(wavelength))


def test_responsivity_within_published_words() -> None:
    """Good silicon lies within about 30 percent of 0.807 lambda(um) A/W where it is most sensitive.

    Published: handbook chapter on photodetection (2004), as excerpted.
    """
    for nm in (800, 850, 900, 940):
        ceiling = 0.807 * nm / 1000
        assert 0.7 * ceiling < float(photodiode.responsivity(nm * 1e-9, "silicon infrared")) < ceiling


def test_responsivity_outside_its_table_is_said() -> None:
    codes = {note.code for note in photodiode.responsivity_notes(np.array([850e-9, 1300e-9]))}
    assert codes == {"responsivity-typical", "responsivity-range"}
    assert float(photodiode.responsivity(1300e-9)) == 0.0
    notes = photodiode.responsivity_notes(1100e-9, temperature=2000.0)
    assert "responsivity-ceiling" in {note.code for note in notes}


def test_dark_current_doubles() -> None:
    got = photodiode.dark_current(1e-9, temperature=np.array([298.15, 308.15, 338.15]))
    assert got == pytest.approx([1e-9, 2e-9, 16e-9])
    assert float(photodiode.dark_current(1e-9, temperature=306.15, doubling=8.0)) == pytest.approx(2e-9)


def test_capacitance_falls_with_bias() -> None:
    assert float(photodiode.junction_capacitance(10e-12, reverse_bias=0.0)) == 10e-12
    assert float(photodiode.junction_capacitance(10e-12, reverse_bias=1.8)) == pytest.approx(5e-12)


def test_phototransistor_is_only_a_range() -> None:
    assert photodiode.PHOTOTRANSISTOR.spread() > 5


def test_quantisation_by_rounding() -> None:
    values = np.random.default_rng(1).uniform(0, 1000, 200_000)
    assert np.std(np.round(values) - values) == pytest.approx(float(quantisation_rms(1.0)), rel=5e-3)


def test_converter_averages_samples_but_not_its_reference() -> None:
    one = Converter(bits=12, full_scale=4.096, noise=0.3e-3, reference_noise=1e-5)
    many = Converter(bits=12, full_scale=4.096, noise=0.3e-3, reference_noise=1e-5, samples=100)
    assert float(one.step) == pytest.approx(1e-3)
    assert float(many.sample_variance()) == pytest.approx(float(one.sample_variance()) / 100)
    assert float(many.reference_variance(2.0)) == pytest.approx(4e-10)
    assert float(one.bits_used(1.024)) == pytest.approx(10.0)
    assert float(one.bits_used(1e-9)) == 0.0


@given(st.lists(st.floats(0, 1e-18), min_size=1, max_size=6))
def test_budget_shares_sum_to_one(values: list[float]) -> None:
    budget = NoiseBudget({f"cause {at}": np.array([[value]]) for at, value in enumerate(values)})
    total = sum(float(share[0, 0]) for share in budget.shares().values())
    assert total == pytest.approx(1.0 if sum(values) > 0 else 0.0)
    assert float(budget.total[0, 0]) == pytest.approx(sum(values))


def test_budget_names_the_limit_of_the_noisiest_channel() -> None:
    budget = NoiseBudget(
        {"ambient shot": np.array([[1.0, 62.0]]), "converter": np.array([[9.0, 38.0]]), "dark shot": np.zeros((1, 1))}
    )
    assert budget.limited_by() == "limited by shot noise of ambient light, 62 %"
    assert budget.limited_by(channel=0) == "limited by converter noise and quantisation, 90 %"
    names, shares = budget.limiting()
    assert names.tolist() == [["converter", "ambient shot"]]
    assert shares == pytest.approx(np.array([[0.9, 0.62]]))
    assert NoiseBudget({"converter": np.zeros((1, 1))}).limited_by() == "no noise"


def test_budget_grows_scales_and_refuses() -> None:
    budget = NoiseBudget({"converter": np.array([[4.0]])}).plus("drop statistics", 5.0).plus("converter", 3.0)
    assert float(budget.rms[0, 0]) == pytest.approx(np.sqrt(12))
    assert float(budget.scaled(2.0, "e-").total[0, 0]) == pytest.approx(48.0)
    assert float(budget.equivalent_power(2.0)[0, 0]) == pytest.approx(np.sqrt(3))
    with pytest.raises(ValueError, match="negative"):
        NoiseBudget({"converter": np.array([-1.0])})


def test_shot_noise_by_counting() -> None:
    """A boxcar of 1/(2B) over a Poisson stream has the variance 2 q I B."""
    rng = np.random.default_rng(3)
    current, time = 1e-12, 1e-4
    counts = rng.poisson(current * time / CHARGE, 400_000)
    measured = np.var(counts * CHARGE / time)
    assert measured == pytest.approx(float(noise.shot_variance(current, bandwidth=1 / (2 * time))), rel=1e-2)


CAMERA = Camera(
    quantum_efficiency=0.3,
    gain=0.1,
    dark_noise=6.0,
    full_well=10_000.0,
    dark_current=100.0,
    dark_nonuniformity=2.0,
    nonuniformity=0.01,
    bits=10,
)


def test_photon_transfer_recovers_the_camera() -> None:
    """Simulated 12-bit camera, gain 0.1 DN/e-: responsivity 0.049316 DN/photon by a straight line through all its
    unsaturated points gives the quantum efficiency 0.49316 at that gain.
    """
    rows = list(csv.DictReader(SERIES.read_text(encoding="utf-8").splitlines()))
    data = {key: np.array([float(row[key]) for row in rows]) for key in rows[0]}
    assert len(rows) == 50
    fit = photon_transfer_fit(
        data["u_p"],
        mean=data["u_y"],
        dark_mean=data["u_ydark"],
        variance=data["s2_y"],
        dark_variance=data["s2_ydark"],
    )
    assert fit.gain == pytest.approx(0.1, rel=5e-3)
    assert fit.quantum_efficiency == pytest.approx(0.49316, rel=1e-2)
    assert fit.used == 12
    assert fit.saturation == pytest.approx(28857.384)


def test_photon_transfer_of_the_linear_model_is_exact() -> None:
    photons = np.linspace(0, 40_000, 60)
    mean = np.minimum(CAMERA.mean(photons), 1000.0)
    variance = np.where(mean < 1000.0, CAMERA.variance(photons), 0.0)
    dark = np.full_like(photons, float(CAMERA.variance(0.0)))
    fit = photon_transfer_fit(photons, mean=mean, dark_mean=0 * photons, variance=variance, dark_variance=dark)
    assert fit.gain == pytest.approx(0.1, rel=1e-12)
    assert fit.quantum_efficiency == pytest.approx(0.3, rel=1e-12)
    assert fit.dark_noise == pytest.approx(6.0, rel=1e-12)


def test_photon_transfer_needs_points() -> None:
    one = np.array([1.0, 2.0])
    with pytest.raises(ValueError, match="fewer than two"):
        photon_transfer_fit(one, mean=one, dark_mean=0 * one, variance=one[::-1], dark_variance=0 * one)


def test_camera_noise_by_drawing_frames() -> None:
    """Electrons drawn, amplified and rounded have the model's mean and variance."""
    rng = np.random.default_rng(5)
    photons, size = 5000.0, 400_000
    electrons = rng.poisson(0.3 * photons, size) + rng.normal(0, 6.0, size) + rng.poisson(50.0, size)
    grey = np.round(0.1 * electrons)
    assert np.mean(grey) == pytest.approx(float(CAMERA.mean(photons, dark_electrons=50.0)), rel=1e-3)
    assert np.var(grey) == pytest.approx(float(CAMERA.variance(photons, dark_electrons=50.0)), rel=1e-2)


def test_camera_limits() -> None:
    assert float(CAMERA.snr(CAMERA.threshold())) == pytest.approx(1.0)
    assert float(CAMERA.capacity()) == 10_000.0
    assert float(Camera(0.3, 0.2, 6.0, 10_000.0, bits=10).capacity()) == pytest.approx(1023 / 0.2)
    assert float(CAMERA.saturation_margin(20_000.0, dark_electrons=4000.0)) == pytest.approx(1.0)
    exposure = CAMERA.exposure_for(photon_rate=1e6, fill=0.5)
    assert float(CAMERA.electrons(1e6 * exposure)) == pytest.approx(5000.0)
    assert float(CAMERA.dark_electrons(exposure=0.5, temperature=306.15)) == pytest.approx(100.0)
    assert float(CAMERA.dynamic_range()) == pytest.approx(10_000 / 0.3 / float(CAMERA.threshold()))


def test_total_snr_saturates_at_the_nonuniformity() -> None:
    assert float(CAMERA.total_snr(1e9)) == pytest.approx(100.0, rel=1e-3)
    assert float(CAMERA.total_snr(1000.0)) < float(CAMERA.snr(1000.0))


def test_difference_frame_doubles_ambient_and_drops_its_pattern() -> None:
    plain = CAMERA.budget(signal=1000.0, ambient=10_000.0)
    difference = CAMERA.budget(signal=1000.0, ambient=10_000.0, difference=True)
    assert float(difference.variances["ambient shot"]) == pytest.approx(2 * float(plain.variances["ambient shot"]))
    assert float(difference.variances["nonuniformity"]) == pytest.approx((0.01 * 300) ** 2)
    assert plain.unit == "e-"
    averaged = CAMERA.budget(signal=1000.0, pixels=4)
    assert float(averaged.rms) == pytest.approx(float(CAMERA.budget(signal=1000.0).rms) / 2)
