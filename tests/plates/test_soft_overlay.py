"""The soft skin: contact against pressure, the resting gap, and the gait plate."""

from __future__ import annotations

from functools import cache, partial
from pathlib import Path
from types import SimpleNamespace

import numpy as np
import pytest

from outcouple import evaluate, load_design
from outcouple.design import design_from_mapping
from outcouple.evaluation import evaluate_batch
from outcouple.testing import check_geometry
from outcouple_plugins.soft_overlay import SoftOverlay
from outcouple_plugins.soft_overlay.measures import spread_width
from outcouple_plugins.soft_overlay.texture import bump_radius, contact_share, pull_off_pressure, rms_slope

judged = partial(evaluate, advice=False, views=False)

DEMOS = Path(__file__).parents[2] / "demo_configs"


@cache
def gait():
    return load_design(DEMOS / "gait_plate.toml")


def edited(**sections):
    raw = {**gait().raw}
    for section, keys in sections.items():
        raw[section] = {**raw.get(section, {}), **keys}
    return design_from_mapping(raw)


def skin(texture="random", **changes):
    numbers = {"modulus": 0.6e6, "poisson": 0.49, "height": 8e-6, "pitch": 25e-6, "adhesion": 5e-3, **changes}
    return SimpleNamespace(texture=texture, **numbers)


def test_slope_and_radius_are_those_of_the_relief():
    """Computed independently: finite differences of h/4 (cos kx + cos ky) on a grid."""
    height, pitch = 8e-6, 25e-6
    x = np.linspace(0, pitch, 2000, endpoint=False)
    k = 2 * np.pi / pitch
    relief = height / 4 * (np.cos(k * x)[:, None] + np.cos(k * x)[None, :])
    slopes = [(np.roll(relief, -1, axis) - relief) / (x[1] - x[0]) for axis in (0, 1)]
    assert np.ptp(relief) == pytest.approx(height)
    assert float(rms_slope(height, pitch)) == pytest.approx(np.sqrt(np.mean(slopes[0] ** 2 + slopes[1] ** 2)), rel=1e-4)
    bend = (relief[1, 0] - 2 * relief[0, 0] + relief[-1, 0]) / (x[1] - x[0]) ** 2
    assert float(bump_radius(height, pitch)) == pytest.approx(-1 / bend, rel=1e-4)


@pytest.mark.parametrize("texture", ["random", "bumps"])
def test_contact_grows_with_pressure_and_saturates(texture):
    pressures = np.linspace(0, 2e6, 200)
    shares = contact_share(skin(texture), pressures)
    assert shares[0] == 0
    assert np.all(np.diff(shares) >= 0)
    assert shares[-1] > 0.9
    assert np.all(shares <= 1)


def test_random_texture_starts_straight_with_perssons_slope():
    """sqrt(8/pi) = 1.60 over E* and slope: B. N. J. Persson, J. Chem. Phys. 115, 3840 (2001)."""
    modulus = 0.6e6 / (1 - 0.49**2)
    share = float(contact_share(skin(), 1e3))
    assert share == pytest.approx(1.60 * 1e3 / (modulus * float(rms_slope(8e-6, 25e-6))), rel=0.01)


def test_pull_off_is_that_of_johnson_kendall_and_roberts():
    """3/2 pi w R per peak (Proc. R. Soc. Lond. A 324, 301 (1971)), R = pitch^2 / (pi^2 h): 1.5 w / (pi h)."""
    assert float(pull_off_pressure(skin())) == pytest.approx(1.5 * 5e-3 / (np.pi * 8e-6))


def test_smear_is_the_half_width_of_boussinesqs_pressure():
    """Computed independently: (1 + r^2)^(-5/2) falls to half, found on a grid."""
    r = np.linspace(0, 2, 200001)
    half = r[np.argmax((1 + r**2) ** -2.5 <= 0.5)]
    assert float(spread_width(np.array(1.0), np.array(0.0))) == pytest.approx(2 * half, rel=1e-4)


def test_resting_leak_agrees_with_an_own_sum_over_gaps_and_directions():
    """Computed independently: tunnelling through an air gap by the slab formula, gaps even from 0 to pi h / 2,
    air-coupled hemisphere in the plate."""
    n, skin_index, wavelength, height = 1.51, 1.41, 850e-9, 8e-6
    u, v = (grid.ravel() for grid in np.meshgrid((np.arange(200) + 0.5) / 200, (np.arange(200) + 0.5) / 200))
    # Lambertian outside about the edge's normal x; inside the tangential parts shrink by the index.
    sine, turn = np.sqrt(u) / n, 2 * np.pi * v
    cosine_in, cosine_out = np.sqrt(1 - sine**2), np.sqrt(1 - u)
    edge_s = ((cosine_out - n * cosine_in) / (cosine_out + n * cosine_in)) ** 2
    edge_p = ((n * cosine_out - cosine_in) / (n * cosine_out + cosine_in)) ** 2
    power = 1 - (edge_s + edge_p) / 2
    cosine = np.abs(sine * np.sin(turn))
    gaps = (np.arange(600) + 0.5) / 600 * np.pi * height / 2
    taken = 0.0
    for one in range(0, len(u), 4000):
        part = slice(one, one + 4000)
        taken += float(np.sum(power[part] * tunnelled(n, skin_index, cosine[part], gaps, wavelength)))
    found = judged(edited(emitters={"gap": "0 mm", "height": "10 mm"})).metrics["unpressed_leak"].value
    assert found == pytest.approx(taken / np.sum(power), rel=0.08)
    assert found < 0.01


def tunnelled(n1, n3, cos1, gaps, wavelength):
    """Mean transmittance over s and p and over the gaps of air between two clear media; a slab's Airy sum."""
    conserved = n1 * np.sqrt(1 - cos1**2)
    kz = [np.sqrt((n**2 - conserved**2).astype(complex)) for n in (n1, 1.0, n3)]
    kz = [np.where(k.imag < 0, -k, k) for k in kz]
    total = np.zeros(len(cos1))
    for scale in ((1, 1, 1), (n1**2, 1.0, n3**2)):
        a, b, c = (k / s for k, s in zip(kz, scale, strict=True))
        first, second = (a - b) / (a + b), (b - c) / (b + c)
        for gap in gaps:
            phase = np.exp(2j * (2 * np.pi / wavelength) * kz[1] * gap)
            r = (first + second * phase) / (1 + first * second * phase)
            total += 1 - np.abs(r) ** 2
    return total / (2 * len(gaps))


def test_lower_texture_leaks_more():
    leaks = [judged(edited(overlay={"height": f"{h} um"})).metrics["unpressed_leak"].value for h in (2, 8)]
    assert leaks[0] > 3 * leaks[1]


def test_gait_plate_passes_and_says_what_it_was_asked():
    """Claims of the design case: monotonic to 500 kPa, hysteresis at most 10 %, 3 mm, resting leak below 1 %."""
    found = judged(gait())
    assert found.verdict == "pass"
    assert found.metrics["monotonic_span"].value >= 500e3
    assert found.metrics["contact_hysteresis"].value <= 0.10
    assert found.metrics["spatial_resolution"].value <= 3e-3
    assert found.metrics["unpressed_leak"].value < 0.01
    assert found.metrics["residual_contact"].value < 0.05


def test_a_sticky_skin_has_hysteresis():
    sticky = judged(edited(overlay={"adhesion": "0.5 N/m"})).metrics["contact_hysteresis"].value
    assert sticky > 5 * judged(gait()).metrics["contact_hysteresis"].value


def test_a_soft_coarse_skin_saturates():
    soft = judged(edited(overlay={"modulus": "0.05 MPa"}))
    assert soft.metrics["contact_slope_left"].value < 1e-3


def test_batch_agrees_with_single_designs():
    path, values = ("overlay", "height"), np.array([4e-6, 8e-6, 10e-6])
    want = ["contact_share", "unpressed_leak", "activation_pressure", "signal", "resolution"]
    together = evaluate_batch(gait(), {path: values}, want)
    for at, value in enumerate(values):
        alone = evaluate_batch(gait(), {path: np.array([value])}, want)
        for name in want:
            assert together.metrics[name].values[at] == pytest.approx(alone.metrics[name].values[0], rel=1e-9)


def test_keeps_the_contract():
    report = check_geometry(SoftOverlay())
    assert not report.failed, str(report)
