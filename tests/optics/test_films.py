"""Thick layers and layers of varying thickness against brute force; quadrature over lines and angles."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from scipy import integrate, stats

from outcouple import optics

LINE, WIDTH = 850e-9, 40e-9
NAMES = ("Rs", "Rp", "X", "Ts", "Tp")
ANGLES = np.radians([30, 38, 42, 42.36, 42.39, 42.5, 43, 45, 50, 60, 63.4, 64, 68, 74])


def drawn(spread: str, mean: float, deviation: float, count: int) -> np.ndarray:
    """Thicknesses at evenly spaced quantiles."""
    at = (np.arange(count) + 0.5) / count
    if spread == "exponential":
        return -mean * np.log1p(-at)
    if spread == "uniform":
        return np.maximum(mean + deviation * np.sqrt(12) * (at - 0.5), 0)
    if spread == "normal":
        return np.maximum(mean + deviation * stats.norm.ppf(at), 0)
    variance = np.log1p((deviation / mean) ** 2)
    return mean * np.exp(np.sqrt(variance) * stats.norm.ppf(at) - variance / 2)


@pytest.mark.parametrize("mean", [1e-7, 1e-6, 5e-6, 2e-5])
@pytest.mark.parametrize(
    ("spread", "error"), [("exponential", 1e-3), ("normal", 1e-3), ("lognormal", 2e-3), ("uniform", 1e-3)]
)
@pytest.mark.parametrize(("film", "contact"), [(1.0, 1.43), (1.327, 1.0), (1.38, 1.45)])
def test_thickness_average_against_brute_force(spread, error, mean, film, contact):
    """Also within hundredths of a degree of the film's critical angle (42.37 degrees for air, 63.41 for water)."""
    found = optics.thickness_average(
        (1.484, film, contact), (mean,), ANGLES, LINE, layer=0, spread=spread, deviation=0.3 * mean
    )
    depth = drawn(spread, mean, 0.3 * mean, 40001)
    brute = optics.reflectance((1.484, film, contact), (depth[:, None],), ANGLES, LINE)
    for name, mine, theirs in zip(NAMES, found, brute, strict=True):
        assert np.max(np.abs(mine - theirs.mean(axis=0))) < error, name


def test_a_fixed_quadrature_would_be_wrong_here():
    """24 nodes in the thickness miss fringes that run fast; the average here does not."""
    angle = np.radians(42.2)
    t, w = np.polynomial.legendre.leggauss(24)
    depth = -1e-5 * np.log1p(-(t + 1) / 2)
    fixed = np.sum(w / 2 * optics.reflectance((1.484, 1.0, 1.43), (depth,), angle, LINE)[0])
    brute = optics.reflectance((1.484, 1.0, 1.43), (drawn("exponential", 1e-5, 0, 100001),), angle, LINE)[0].mean()
    (mine, *_) = optics.thickness_average(
        (1.484, 1.0, 1.43), (1e-5,), angle, LINE, layer=0, spread="exponential", deviation=0.0
    )
    assert abs(fixed - brute) > 5e-3
    assert abs(float(mine) - brute) < 5e-4


def test_spread_that_reaches_zero_touches():
    """A wide normal spread about a thick mean: the share beyond zero is in full contact, the rest at random phase."""
    found = optics.thickness_average(
        (1.5, 1.38, 1.45), (4e-5,), np.radians(62.0), LINE, layer=0, spread="normal", deviation=4e-5
    )
    depth = drawn("normal", 4e-5, 4e-5, 200001)
    brute = optics.reflectance((1.5, 1.38, 1.45), (depth,), np.radians(62.0), LINE)
    for mine, theirs in zip(found, brute, strict=True):
        assert abs(complex(mine) - complex(theirs.mean())) < 0.01


def test_an_absorbing_film_of_varying_thickness():
    film = 1.6 + 2e-3j
    found = optics.thickness_average(
        (1.7, film, 1.3), (2e-5,), np.radians(50.0), LINE, layer=0, spread="normal", deviation=3e-6
    )
    depth = drawn("normal", 2e-5, 3e-6, 40001)
    brute = optics.reflectance((1.7, film, 1.3), (depth,), np.radians(50.0), LINE)
    assert float(found[0]) == pytest.approx(float(brute[0].mean()), abs=0.01)
    assert float(found[1]) == pytest.approx(float(brute[1].mean()), abs=0.01)


def test_incoherent_limit_of_a_thick_layer():
    """0.3 mm of fluoropolymer under silica: what a brute average over 20 um of thickness gives."""
    angles = np.radians([42.0, 45.0, 50.0, 60.0])
    depth = 3e-4 + np.linspace(0, 20e-6, 20001)
    brute = optics.reflectance((1.4525, 1.345, 1.327), (depth[:, None],), angles, LINE)
    mixed = optics.mixed_response((1.4525, 1.345, 1.327), (3e-4,), angles, LINE, linewidth=WIDTH)
    for mine, theirs in zip(mixed, brute, strict=True):
        assert np.max(np.abs(mine - theirs.mean(axis=0))) < 5e-4


def test_layers_before_and_behind_an_incoherent_one_stay_coherent():
    angles = np.radians([40.0, 45.0, 50.0])
    depth = 3e-4 + np.linspace(0, 20e-6, 8001)
    indices = (1.6, 1.38, 1.345, 1.45, 1.327)
    brute = optics.reflectance(indices, (2e-7, depth[:, None], 1.5e-7), angles, LINE)
    mixed = optics.mixed_response(indices, (2e-7, 3e-4, 1.5e-7), angles, LINE, linewidth=WIDTH)
    for mine, theirs in zip(mixed, brute, strict=True):
        assert np.max(np.abs(mine - theirs.mean(axis=0))) < 1e-3


def test_two_incoherent_layers_and_absorption_keep_energy():
    angles = np.radians(np.linspace(0, 60, 31))
    indices = (1.6, 1.5 + 1e-5j, 1.4 + 2e-5j, 1.3)
    Rs, Rp, _, Ts, Tp = optics.mixed_response(indices, (2e-4, 5e-4), angles, LINE, linewidth=WIDTH)
    for R, T in ((Rs, Ts), (Rp, Tp)):
        assert np.all((R >= 0) & (T >= 0) & (R + T <= 1))
        assert np.all(1 - R - T > 0.005)


def test_a_decaying_layer_is_never_incoherent():
    (mask,) = optics.incoherent_layers((1.5, 1.0, 1.43), (1e-3,), np.radians([30, 41.7, 42, 60]), LINE, linewidth=WIDTH)
    assert mask.tolist() == [True, True, False, False]


@pytest.mark.parametrize(("gap", "contrast"), [(5e-6, 0.34), (9e-6, 0.03)])
def test_fringes_fade_with_the_gap(gap, contrast):
    """Claimed contrast of air-gap fringes for 40 nm at 850 nm, recomputed by integrating a Gaussian line."""
    wavelengths = LINE + WIDTH / 2.35482 * np.linspace(-5, 5, 4001)
    weights = stats.norm.pdf(np.linspace(-5, 5, 4001))
    weights /= weights.sum()
    phases = np.exp(4j * np.pi * gap / wavelengths)
    assert abs(np.sum(weights * phases)) == pytest.approx(contrast, abs=0.015)
    path, reach = 2 * gap, float(optics.coherence_length(LINE, WIDTH))
    assert np.exp(-3.56 * (path / reach) ** 2) == pytest.approx(contrast, abs=0.015)


@pytest.mark.parametrize(("count", "error"), [(3, 1e-7), (7, 1e-12)])
def test_line_nodes_integrate_smooth_dispersion(count, error):
    nodes, weights = optics.spectrum_nodes(np.array([850e-9]), np.array([40e-9]), count)
    assert weights.sum() == pytest.approx(1, abs=1e-14)
    brute = integrate.quad(lambda x: stats.norm.pdf(x) / (850 + 40 / 2.3548200450309493 * x), -8, 8, epsabs=1e-16)[0]
    assert float(np.sum(weights / (nodes[0] * 1e9))) == pytest.approx(brute, rel=error * 850)


CASES = [
    (1.484, 1.0, 1.43, 0.0),
    (1.484, 1.0, 1.43, 1e-7),
    (1.484, 1.0, 1.33, 3e-7),
    (1.57, 1.0, 1.52, 1e-6),
    (1.51, 1.0, 1.4, 2e-5),
]


@pytest.mark.parametrize(("count", "error"), [(11, 1e-4), (32, 2e-6)])
@pytest.mark.parametrize("case", CASES)
def test_angle_quadrature_with_edges_at_critical_angles(case, count, error):
    """Guided light of a plate against adaptive quadrature: 22 nodes in two segments to 1e-4, refined on request."""
    guide, gap, contact, width = case
    first, second = float(optics.critical_angle(guide, gap)), float(optics.critical_angle(guide, contact))
    edges = np.array([first, second, np.pi / 2])

    def taken(angle):
        found = optics.gap_transmittance(guide, gap, contact, width, angle, LINE)
        return (found[0] + found[1]) / 2 * np.sin(angle)

    nodes, weights = optics.segments(edges, count)
    whole = np.sum(weights * np.sin(nodes))
    brute = sum(
        integrate.quad(lambda a: float(taken(a)), low, high, limit=400, epsabs=1e-11)[0]
        for low, high in pairwise(edges)
    )
    assert abs(float(np.sum(weights * taken(nodes))) - brute) / whole < error


def test_segments_per_sample():
    """A segment without width weighs nothing; each sample has edges of its own."""
    nodes, weights = optics.segments(np.array([[0.0, 1.0, 1.0], [0.0, 0.5, 2.0]]), 6)
    assert nodes.shape == weights.shape == (2, 12)
    assert weights.sum(axis=1) == pytest.approx([1.0, 2.0])
    assert np.all(weights[0, 6:] == 0)
