"""Diffuse returns against exact transfer, counted photons, published closed forms and quadrature."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy import integrate

from outcouple.contact import diffuse

Floats = NDArray[np.float64]


def exact_reflectance(albedo: float, cosine: float) -> float:
    """Half-space, isotropic scattering, matched indices: 1 - H(mu) sqrt(1 - a), H by iteration.

    S. Chandrasekhar, Radiative Transfer (1960), ch. V:
    H(mu) = 1 / (sqrt(1 - a) + a/2 int x H(x)/(x + mu) dx).
    """
    nodes, weights = np.polynomial.legendre.leggauss(64)
    nodes, weights = (nodes + 1) / 2, weights / 2
    gap = math.sqrt(1 - albedo)
    values = np.ones_like(nodes)
    for _ in range(400):
        integral = (weights * nodes * values / (nodes + nodes[:, None])).sum(axis=1)
        values = (values + 1 / (gap + albedo / 2 * integral)) / 2
    at = 1 / (gap + albedo / 2 * (weights * nodes * values / (nodes + cosine)).sum())
    return 1 - at * gap


def test_exact_transfer_reproduces_a_published_h() -> None:
    # Published: H(1) = 2.9078 for conservative isotropic scattering (Chandrasekhar 1960, table XI; from
    # memory).
    near = 1 - 1e-10
    assert (1 - exact_reflectance(near, 1.0)) / math.sqrt(1 - near) == pytest.approx(2.9078, abs=2e-3)


@pytest.mark.parametrize("cosine", [1.0, 0.7, 0.5])
@pytest.mark.parametrize("albedo", [0.9, 0.95, 0.99, 0.999])
def test_diffuse_reflectance_is_near_exact_transfer(albedo: float, cosine: float) -> None:
    # Computed independently: exact solution of radiative transfer with matched indices.
    found = diffuse.diffuse_reflectance(
        scattering=albedo, absorption=1 - albedo, n_medium=1.4, n_guide=1.4, cosine=cosine
    )
    assert found == pytest.approx(exact_reflectance(albedo, cosine), abs=0.02)


def counted_reflectance(
    albedo: float, n_medium: float, n_guide: float, radius: float, photons: int = 20000
) -> tuple[float, float]:
    """Photons counted flight by flight: share out of the half-space, share of those within a radius."""
    rng = np.random.default_rng(5)
    place = np.zeros((photons, 3))
    heading = np.tile([0.0, 0.0, 1.0], (photons, 1))
    weight = np.ones(photons)
    out = near = 0.0
    for _ in range(4000):
        place = place + rng.exponential(size=(len(place), 1)) * heading
        above = place[:, 2] < 0
        cosine = -heading[:, 2]
        if above.any():
            crossing = place - (place[:, 2] / np.where(above, heading[:, 2], 1))[:, None] * heading
            sine = n_medium * np.sqrt(np.maximum(1 - cosine**2, 0)) / n_guide
            outer = np.sqrt(np.maximum(1 - sine**2, 0))
            s = (n_medium * cosine - n_guide * outer) / (n_medium * cosine + n_guide * outer)
            p = (n_guide * cosine - n_medium * outer) / (n_guide * cosine + n_medium * outer)
            held = np.where(sine >= 1, 1.0, (s**2 + p**2) / 2)
            leaves = np.where(above, weight * (1 - held), 0)
            out += leaves.sum()
            near += leaves[np.hypot(crossing[:, 0], crossing[:, 1]) < radius].sum()
            weight = np.where(above, weight * held, weight)
            place[above, 2] *= -1
        weight = weight * albedo
        cos = rng.uniform(-1, 1, len(place))
        azimuth = rng.uniform(0, 2 * np.pi, len(place))
        side = np.sqrt(1 - cos**2)
        heading = np.stack((side * np.cos(azimuth), side * np.sin(azimuth), cos), axis=1)
        alive = weight > 1e-3
        place, heading, weight = place[alive], heading[alive], weight[alive]
        if not len(place):
            break
    return out / photons, near / out


@pytest.mark.parametrize(("n_medium", "n_guide"), [(1.35, 1.64), (1.4, 1.0)])
def test_diffuse_reflectance_of_other_indices_is_what_photons_do(n_medium: float, n_guide: float) -> None:
    # Computed independently: photons counted in a half-space with Fresnel's law at its face; isotropic
    # scattering.
    share, near = counted_reflectance(0.97, n_medium, n_guide, radius=5.0)
    given_ = {"scattering": 0.97, "absorption": 0.03, "n_medium": n_medium, "n_guide": n_guide}
    assert diffuse.diffuse_reflectance(**given_) == pytest.approx(share, abs=0.025)
    assert diffuse.returned_within(radius=5.0, **given_) == pytest.approx(near, abs=0.04)


def test_design_figure_of_milk_in_a_plastic_tip() -> None:
    # Computed for the design of tips in milk (10/cm, 0.1/cm): 0.76, which is the matched-index value.
    given_ = {"scattering": 1000.0, "absorption": 10.0}
    assert diffuse.diffuse_reflectance(**given_, n_medium=1.35, n_guide=1.35) == pytest.approx(0.7575, abs=5e-4)
    assert diffuse.diffuse_reflectance(**given_, n_medium=1.35, n_guide=1.64) == pytest.approx(0.75, abs=0.01)


@pytest.mark.parametrize(("index", "published"), [(1.33, 0.431), (1.40, 0.493)])
def test_boundary_holds_back_what_haskell_computed(index: float, published: float) -> None:
    # Published: effective reflection coefficients of Haskell et al. (1994); from memory. A = (1 + r)/(1 - r)
    # shows in the limit of no absorption: 1 - R = s (1 + 2 A/3).
    sink = 1e-4
    albedo = 1 - sink**2 / 3
    lost = 1 - diffuse.diffuse_reflectance(
        scattering=albedo, absorption=1 - albedo, n_medium=index, n_guide=1.0, cosine=0.0
    )
    barrier = 1.5 * float(lost) / sink
    assert (barrier - 1) / (barrier + 1) == pytest.approx(published, abs=1e-3)


def test_strong_absorption_is_noted() -> None:
    (note,) = diffuse.diffuse_notes(scattering=np.array([1000.0, 1000.0]), absorption=np.array([10.0, 300.0]))
    assert note.where is not None
    assert note.where.tolist() == [False, True]
    assert diffuse.diffuse_notes(scattering=1000.0, absorption=10.0) == ()


@given(st.floats(1e-4, 10), st.floats(1e-4, 10), st.floats(1.0, 1.9))
def test_returned_share_grows_to_one(small: float, more: float, n_guide: float) -> None:
    given_ = {"scattering": 1000.0, "absorption": 20.0, "n_medium": 1.35, "n_guide": n_guide}
    near, far = diffuse.returned_within(radius=np.array([small, small + more]), **given_)
    assert 0 <= near <= far <= 1
    assert diffuse.returned_within(radius=0.0, **given_) == pytest.approx(0, abs=1e-12)
    assert diffuse.returned_within(radius=100.0, **given_) == pytest.approx(1, abs=1e-3)


def test_half_the_light_surfaces_within_about_two_spread_lengths() -> None:
    given_ = {"scattering": 1000.0, "absorption": 10.0, "n_medium": 1.35, "n_guide": 1.64}
    length = diffuse.spread_length(scattering=1000.0, absorption=10.0)
    assert length == pytest.approx(0.99e-3, rel=1e-3)
    assert diffuse.returned_within(radius=2 * length, **given_) == pytest.approx(0.5, abs=0.02)


def walsh(m: float) -> float:
    """Diffuse reflectance of a denser medium of relative index m (J. W. T. Walsh 1926)."""
    return (
        0.5
        + (m - 1) * (3 * m + 1) / (6 * (m + 1) ** 2)
        + m**2 * (m**2 - 1) ** 2 / (m**2 + 1) ** 3 * math.log((m - 1) / (m + 1))
        - 2 * m**3 * (m**2 + 2 * m - 1) / ((m**2 + 1) * (m**4 - 1))
        + 8 * m**4 * (m**4 + 1) / ((m**2 + 1) * (m**4 - 1) ** 2) * math.log(m)
    )


@pytest.mark.parametrize("index", [1.1, 1.33, 1.484, 1.9])
def test_diffuse_transmittance_is_walshs_closed_form(index: float) -> None:
    # Published: Walsh's formula as given by S. A. Prahl, dissertation (1988), eq. B41; inwards and, by the
    # n^2 law, outwards.
    inwards = 1 - walsh(index)
    assert diffuse.diffuse_transmittance(n_from=1.0, n_to=index) == pytest.approx(inwards, rel=1e-5)
    assert diffuse.diffuse_transmittance(n_from=index, n_to=1.0) == pytest.approx(inwards / index**2, rel=1e-5)


@given(st.floats(1.0, 2.0), st.floats(1.0, 2.0))
def test_diffuse_transmittance_keeps_the_second_law(one: float, other: float) -> None:
    there = diffuse.diffuse_transmittance(n_from=one, n_to=other) * one**2
    back = diffuse.diffuse_transmittance(n_from=other, n_to=one) * other**2
    assert there == pytest.approx(back, rel=2e-5)
    assert there <= min(one, other) ** 2 * (1 + 1e-9)


@pytest.mark.parametrize(("n_contact", "share"), [(1.43, 0.445), (1.327, 0.517), (1.484, 0.413), (1.52, 0.413)])
def test_escape_from_acrylic(n_contact: float, share: float) -> None:
    # Computed independently (twice) for skin, water and a full Lambertian in PMMA of 1.484.
    assert diffuse.escape_share(n_guide=1.484, n_contact=n_contact) == pytest.approx(share, abs=6e-4)


def test_escape_is_its_own_integral() -> None:
    # Computed independently: Fresnel's transmittance averaged over the directions inside the cut.
    guide, contact = 1.51, 1.40

    def crossing(sine: float) -> float:
        inner, outer = math.sqrt(1 - sine**2), math.sqrt(1 - (guide * sine) ** 2)
        s = 4 * guide * inner * outer / (guide * inner + outer) ** 2
        p = 4 * guide * inner * outer / (guide * outer + inner) ** 2
        return (s + p) * sine

    open_ = integrate.quad(crossing, 0, 1 / guide, limit=200)[0]
    found = diffuse.escape_share(n_guide=guide, n_contact=contact)
    assert found == pytest.approx(open_ / (contact / guide) ** 2, rel=1e-5)


def test_cones() -> None:
    # Published: Lambertian flux within a half-angle is its sin^2.
    assert diffuse.cone_share(half_angle=math.radians(20)) == pytest.approx(0.11697777844051097, rel=1e-12)
    half = diffuse.cone_share(half_angle=math.radians(20), n_guide=1.484, n_contact=1.327)
    assert half == pytest.approx(0.11697777844051097 * (1.484 / 1.327) ** 2, rel=1e-12)
    assert diffuse.cone_share(half_angle=math.radians(89), n_guide=1.484, n_contact=1.327) == 1.0


def test_internal_albedo_of_skin() -> None:
    # Computed for skin: 0.55 measured in air is about 0.70 of internal albedo.
    assert diffuse.internal_albedo(reflectance=0.55, n_medium=1.43) == pytest.approx(0.71, abs=0.015)
    assert diffuse.internal_albedo(reflectance=0.55, n_medium=1.0) == pytest.approx(0.55, abs=1e-12)


@given(st.floats(0.05, 0.9), st.floats(1.3, 1.6))
def test_internal_albedo_sums_its_own_bounces(albedo: float, index: float) -> None:
    # Computed independently: in through the face, out or back again, bounce by bounce.
    gloss = ((index - 1) / (index + 1)) ** 2
    out = float(diffuse.diffuse_transmittance(n_from=index, n_to=1.0))
    light, measured = 1 - gloss, gloss
    for _ in range(400):
        light *= albedo
        measured += light * out
        light *= 1 - out
    assert diffuse.internal_albedo(reflectance=measured, n_medium=index) == pytest.approx(albedo, abs=1e-6)
    bare = diffuse.internal_albedo(reflectance=measured - gloss, n_medium=index, specular_included=False)
    assert bare == pytest.approx(albedo, abs=1e-6)


@pytest.mark.parametrize("offset", [0.0, 1e-3, 6e-3])
def test_wall_return_is_the_summed_view_of_the_face(offset: float) -> None:
    # Computed independently: cos^2/(pi r^2) summed over the disc.
    distance, diameter = 3e-3, 8e-3
    radius = np.sqrt((np.arange(400) + 0.5) / 400) * diameter / 2
    azimuth = (np.arange(360) + 0.5) * 2 * np.pi / 360
    x, y = np.outer(radius, np.cos(azimuth)) - offset, np.outer(radius, np.sin(azimuth))
    seen = (distance**2 / (np.pi * (x**2 + y**2 + distance**2) ** 2)).mean() * np.pi * diameter**2 / 4
    found = diffuse.wall_return(distance=distance, diameter=diameter, reflectance=0.6, offset=offset)
    assert found == pytest.approx(0.6 * seen, rel=1e-3)


def test_walls_near_and_far() -> None:
    near, far = diffuse.wall_return(distance=np.array([1e-7, 1.0]), diameter=8e-3, reflectance=0.6)
    assert near == pytest.approx(0.6, rel=1e-6)
    assert far == pytest.approx(0.6 * 4e-3**2, rel=1e-4)
    mirror = diffuse.mirror_return(
        distance=np.array([0.0, 2e-3, 1.0]), diameter=8e-3, angle=math.radians(45), reflectance=0.9
    )
    assert mirror[0] == pytest.approx(0.9)
    # Two circles half a diameter apart overlap by 2/3 - sqrt(3)/(2 pi).
    assert mirror[1] == pytest.approx(0.9 * (2 / 3 - math.sqrt(3) / (2 * math.pi)), rel=1e-9)
    assert mirror[2] == pytest.approx(0, abs=1e-15)


def test_bubbles_and_foam() -> None:
    share = diffuse.bubble_share(density=np.array([0.0, 1e3, 1e9]), contact_area=1e-6)
    assert share == pytest.approx([0.0, 1e-3, 1.0], abs=1e-6)
    # Thrown at random (seeded), circles leave exp(-N a) of a face bare: counted at points, edges wrapped.
    rng = np.random.default_rng(3)
    centres, points = rng.random((400, 2)), rng.random((4000, 2))
    apart = np.abs(points[:, None] - centres)
    covered = (np.minimum(apart, 1 - apart) ** 2).sum(axis=2).min(axis=1) < 0.03**2
    assert diffuse.bubble_share(density=400, contact_area=math.pi * 0.03**2) == pytest.approx(covered.mean(), abs=0.05)
    wet = diffuse.foam_wet_share(gas_share=np.array([0.5, 0.7405, 0.9, 0.99, 1 - 1e-9]))
    assert np.all(np.diff(wet) < 0)
    assert wet[0] == 1.0
    # The law and the close packing of spheres meet: nothing is flattened there (Princen and Kiss 1987).
    assert wet[1] == pytest.approx(1.0, abs=0.02)
    assert wet[-1] < 1e-3
