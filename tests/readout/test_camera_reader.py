"""The camera reader against EMVA 1288 arithmetic written out here by hand, and against counting photons."""

import numpy as np
import pytest

from outcouple.readout.chain import read

from .lit_stub import lit

H, C = 6.62607015e-34, 299792458.0
PHOTON = H * C / 850e-9
CAMERA = {
    "quantum_efficiency": "30 %",
    "exposure": "8 ms",
    "dark_noise": "6 e-",
    "nonuniformity": "1 %",
    "dark_nonuniformity": "2 e-",
    "dark_current": "100 e-",
    "gain": "0.1 DN/e-",
}
COOL = {"temperature": "25 degC"}


def reading(share=1e-9, **more):
    more.setdefault("environment", COOL)
    state = lit("camera", readout={**CAMERA, **more.pop("readout", {})}, share=share, **more)
    return read("camera", state, state.share)


def test_electrons_are_photons_times_quantum_efficiency():
    """10 mW x 5e-11 x 8 ms / (h c / 850 nm) x 0.3, plus 100 e-/s of dark current for 8 ms."""
    found = reading(5e-11)
    electrons = 10e-3 * 5e-11 * 8e-3 / PHOTON * 0.3
    assert found.unit == "e-"
    assert found.mean[0, 0] == pytest.approx(electrons + 0.8)
    assert found.per_watt[0] * 10e-3 * 5e-11 == pytest.approx(electrons)


def test_noise_is_the_linear_model_written_out():
    """sigma^2 = mu_e + mu_d + sigma_d^2 + 1/(12 K^2) + DSNU^2 + (PRNU mu_e)^2, EMVA 1288 Release 4.0 Linear."""
    found = reading(5e-11)
    electrons = 10e-3 * 5e-11 * 8e-3 / PHOTON * 0.3
    expected = electrons + 0.8 + 36 + 1 / 12 / 0.01 + 4 + (0.01 * electrons) ** 2
    assert found.variance[0, 0] == pytest.approx(expected)


def test_a_difference_drops_outside_light_and_pays_its_noise_twice():
    outside = {"environment": {"ambient": "sun", "illuminance": "2 klx", **COOL}, "etendue": 5e-14}
    plain, two = (reading(1e-11, readout={"modulation": kind}, **outside) for kind in ("steady", "difference"))
    alone = reading(1e-11)
    assert plain.mean[0, 0] > 1.5 * alone.mean[0, 0]
    assert two.mean[0, 0] == pytest.approx(alone.mean[0, 0] - 0.8)
    assert two.variances["ambient shot"][0, 0] == pytest.approx(2 * plain.variances["ambient shot"][0, 0])


def test_outside_light_counts_as_electrons_of_its_spectrum():
    """Irradiance 1 W/m2 at the peak within the band: E G / pi x t / (h c / 850 nm) x 0.3."""
    found = reading(environment={"irradiance": "1 W/m2", **COOL}, etendue=1e-11)
    assert found.ambient[0, 0] == pytest.approx(1e-11 / np.pi * 8e-3 / PHOTON * 0.3)


def test_a_strobe_shortens_the_light_and_not_the_ambient():
    outside = {"environment": {"ambient": "daylight", "illuminance": "1 klx", **COOL}, "etendue": 1e-12}
    whole, short = reading(1e-11, **outside), reading(1e-11, readout={"strobe": "2 ms"}, **outside)
    assert short.ambient[0, 0] == whole.ambient[0, 0]
    assert short.per_watt[0] == pytest.approx(whole.per_watt[0] / 4)


def test_filter_keeps_the_line_and_most_daylight_out():
    outside = {"environment": {"ambient": "daylight", "illuminance": "1 klx", **COOL}, "etendue": 1e-12}
    bare = reading(1e-11, **outside)
    banded = reading(1e-11, readout={"filter_centre": "850 nm", "filter_width": "50 nm"}, **outside)
    assert banded.ambient[0, 0] < 0.2 * bare.ambient[0, 0]
    # a Gaussian of 40 nm full width at half maximum: erf(25/40 x 2 sqrt(ln 2)) = 0.8590 within 50 nm
    share = 0.9 * 0.8590 + 0.001 * (1 - 0.8590)
    lit_part = banded.load[0, 0] - banded.ambient[0, 0] - 0.8
    assert lit_part == pytest.approx(share * (bare.load[0, 0] - bare.ambient[0, 0] - 0.8), rel=1e-3)


@pytest.mark.parametrize(
    ("changed", "capacity"), [({}, 10000), ({"bits": 8}, 2550), ({"full_well": "1 ke-"}, 1000)], ids=str
)
def test_saturation_ends_the_reading(changed, capacity):
    """The full well, or 2^bits - 1 grey values at 0.1 DN/e-, whichever comes first."""
    found = reading(1e-7, readout=changed)
    assert found.mean[0, 0] == capacity
    assert found.full_scale[0] == capacity
    assert found.headroom()[0] < 1


def test_samples_and_channels_broadcast():
    power = np.array([1e-3, 2e-3, 4e-3])
    found = reading([1e-11, 3e-11], samples={"emitter.power": power})
    lit_part = found.mean - 0.8
    assert lit_part.shape == (3, 2)
    assert lit_part[:, 0] == pytest.approx(lit_part[0, 0] * power / power[0])
    assert lit_part[:, 1] == pytest.approx(3 * lit_part[:, 0])


def test_counted_photons_have_the_mean_and_spread_stated():
    """20 000 exposures drawn by hand: Poisson photoelectrons and dark charge, Gaussian read-out, rounding to DN."""
    found = reading(5e-11, readout={"nonuniformity": "0 %", "dark_nonuniformity": "0 e-"})
    rng = np.random.default_rng(11)
    electrons = 10e-3 * 5e-11 * 8e-3 / PHOTON * 0.3
    charge = rng.poisson(electrons, 20000) + rng.poisson(0.8, 20000) + rng.normal(0, 6, 20000)
    grey = np.round(0.1 * charge) / 0.1
    assert found.mean[0, 0] == pytest.approx(grey.mean(), abs=4 * grey.std() / np.sqrt(20000))
    assert found.noise[0, 0] == pytest.approx(grey.std(), rel=4 / np.sqrt(2 * 20000))
