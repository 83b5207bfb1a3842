"""Contact mechanics against limits, energy balances and integrals done another way."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import integrate, optimize, special

from outcouple.contact import mechanics

POSITIVE = st.floats(1e-3, 1e3)


def test_hertz_pressure_ellipse_carries_the_force_and_bends_the_face_to_the_sphere() -> None:
    # Computed independently: the elliptic pressure is integrated, and the surface it presses (Boussinesq's
    # solution by quadrature) sinks by a^2/R at the centre and half of that at the rim.
    force, radius, modulus = 2.0, 0.012, 1.5e6
    contact = float(mechanics.hertz_radius(force=force, radius=radius, modulus=modulus))
    peak = 1.5 * float(mechanics.hertz_pressure(force=force, radius=radius, modulus=modulus))

    def pressure(r: float) -> float:
        return peak * math.sqrt(max(1 - (r / contact) ** 2, 0.0))

    carried = integrate.quad(lambda r: 2 * math.pi * r * pressure(r), 0, contact)[0]
    assert carried == pytest.approx(force, rel=1e-8)

    def sunk(at: float) -> float:  # ring of radius r sinks the surface by 4 p r K / (pi E* (r + at))
        def ring(r: float) -> float:
            return 4 * pressure(r) * r / (r + at) * special.ellipk(4 * r * at / (r + at) ** 2) / (math.pi * modulus)

        parts = [0.0, contact] if at in (0.0, contact) else [0.0, at, contact]
        return sum(integrate.quad(ring, a, b, limit=200)[0] for a, b in pairwise(parts))

    assert sunk(0.0) == pytest.approx(contact**2 / radius, rel=1e-6)
    half = contact / 2
    assert sunk(0.0) - sunk(half) == pytest.approx(half**2 / (2 * radius), rel=1e-5)


@given(force=POSITIVE, radius=POSITIVE, modulus=POSITIVE)
def test_hertz_area_times_mean_pressure_is_the_force(force: float, radius: float, modulus: float) -> None:
    given_ = {"force": force, "radius": radius, "modulus": modulus}
    assert mechanics.hertz_area(**given_) * mechanics.hertz_pressure(**given_) == pytest.approx(force, rel=1e-12)
    assert mechanics.hertz_area(**{**given_, "force": 8 * force}) == pytest.approx(
        4 * mechanics.hertz_area(**given_), rel=1e-12
    )


def test_a_rigid_counterface_leaves_the_plane_strain_modulus() -> None:
    alone = mechanics.plane_strain_modulus(modulus=1e6, poisson=0.49)
    pair = mechanics.reduced_modulus(modulus=1e6, poisson=0.49, counter_modulus=70e9, counter_poisson=0.2)
    assert pair == pytest.approx(alone, rel=2e-5)
    twins = mechanics.reduced_modulus(modulus=1e6, poisson=0.3, counter_modulus=1e6, counter_poisson=0.3)
    assert twins == pytest.approx(mechanics.plane_strain_modulus(modulus=1e6, poisson=0.3) / 2)


def test_pull_off_is_the_deepest_pull_an_adhesive_sphere_bears() -> None:
    # Computed independently: minimum of the load of Johnson, Kendall and Roberts (1971) over the contact
    # radius.
    radius, adhesion, modulus = 0.01, 0.05, 0.8e6

    def load(contact: float) -> float:
        return 4 * modulus * contact**3 / (3 * radius) - math.sqrt(8 * math.pi * adhesion * modulus * contact**3)

    deepest = optimize.minimize_scalar(load, bounds=(1e-6, 1e-3), method="bounded", options={"xatol": 1e-12})
    assert mechanics.pull_off_force(radius=radius, adhesion=adhesion) == pytest.approx(-deepest.fun, rel=1e-9)


@pytest.mark.parametrize("load", [1e-4, 0.05, 0.3, 1.0, 3.0])
def test_persson_share_solves_his_diffusion_of_pressure(load: float) -> None:
    # Computed independently: pressures start at p and spread like heat with an absorbing wall at 0; what has
    # not been absorbed when the variance has reached (E* g)^2 / 4 is in contact. J. Chem. Phys. 115, 3840
    # (2001).
    modulus, slope = 2e6, 0.15
    pressure = load * modulus * slope
    deviation = modulus * slope / 2

    def density(sigma: float) -> float:
        return (
            math.exp(-((sigma - pressure) ** 2) / (2 * deviation**2))
            - math.exp(-((sigma + pressure) ** 2) / (2 * deviation**2))
        ) / (math.sqrt(2 * math.pi) * deviation)

    share = integrate.quad(density, 0, pressure + 12 * deviation, limit=200, points=[pressure])[0]
    assert mechanics.persson_share(pressure=pressure, modulus=modulus, slope=slope) == pytest.approx(share, rel=1e-7)


def test_persson_share_starts_at_1_60() -> None:
    # Published: sqrt(8/pi) = 1.596, the slope of the theory at small load.
    modulus, slope = 1e6, 0.2
    small = 1e-5 * modulus * slope
    rise = mechanics.persson_share(pressure=small, modulus=modulus, slope=slope) / 1e-5
    assert rise == pytest.approx(1.596, abs=5e-4)
    assert mechanics.rough_slope_share(pressure=small, modulus=modulus, slope=slope) == pytest.approx(
        rise * 1e-5, rel=1e-8
    )
    assert mechanics.persson_share(pressure=1e3 * modulus, modulus=modulus, slope=slope) == 1.0


@given(st.lists(st.floats(0, 1e7), min_size=2, max_size=20), POSITIVE, st.floats(0.01, 1))
def test_shares_rise_with_pressure_and_stay_shares(pressures: list[float], pitch: float, slope: float) -> None:
    pressure = np.sort(pressures)
    rough = mechanics.persson_share(pressure=pressure, modulus=1e6, slope=slope)
    bumps = mechanics.bump_share(pressure=pressure, modulus=1e6, radius=pitch / 2, pitch=pitch)
    for share in (rough, bumps):
        assert np.all(np.diff(share) >= 0)
        assert np.all((share >= 0) & (share <= 1))


def test_bumps_follow_hertz_then_join_without_a_kink() -> None:
    modulus, radius, pitch = 1e6, 50e-6, 100e-6
    pressure = 2e3
    each = mechanics.hertz_area(force=pressure * pitch**2, radius=radius, modulus=modulus)
    texture = {"modulus": modulus, "radius": radius, "pitch": pitch}
    assert mechanics.bump_share(pressure=pressure, **texture) == pytest.approx(each / pitch**2, rel=1e-12)
    joint = 4 * modulus * pitch / (3 * radius) * (0.3 / math.pi) ** 1.5
    around = joint * np.array([1 - 1e-5, 1, 1 + 1e-5])
    share = mechanics.bump_share(pressure=around, **texture)
    assert share[1] == pytest.approx(0.3)
    assert (share[2] - share[1]) / (share[1] - share[0]) == pytest.approx(1, abs=1e-3)
    assert not mechanics.bump_notes(pressure=0.9 * joint, **texture)
    (note,) = mechanics.bump_notes(pressure=np.array([0.9, 1.1]) * joint, **texture)
    assert note.where is not None
    assert note.where.tolist() == [False, True]


def test_notes_mark_the_samples_they_hold_for() -> None:
    (note,) = mechanics.hertz_notes(force=np.array([0.01, 100.0]), radius=0.01, modulus=1e6)
    assert note.code == "hertz-range"
    assert note.where is not None
    assert note.where.tolist() == [False, True]
    assert [n.code for n in mechanics.finger_notes(force=1.0)] == ["finger-range"]
    assert [n.code for n in mechanics.finger_notes(force=30.0)] == ["finger-range", "finger-force"]


def test_a_fingertip_starts_like_a_soft_sphere_and_saturates() -> None:
    start = mechanics.finger_area(force=2e-6) / mechanics.finger_area(force=1e-6)
    assert start == pytest.approx(2 ** (2 / 3), rel=1e-3)
    assert mechanics.finger_area(force=1e9) == pytest.approx(250e-6, rel=1e-5)
    assert mechanics.finger_share(force=0.0) == 0.05
    assert mechanics.finger_share(force=1e9) == pytest.approx(0.6, rel=1e-6)
    assert mechanics.ridge_share(width=0.2e-3, period=0.5e-3) == pytest.approx(0.4)


def test_a_finger_on_glass_has_settled_in_twenty_seconds() -> None:
    # Published: first-order growth, saturation within about 20 s; PNAS 114, 10864 (2017).
    share = mechanics.settled_share(time=np.array([0.0, 20.0, 1e4]), start=0.1, end=0.5)
    assert share[0] == pytest.approx(0.1)
    assert (share[1] - 0.1) / 0.4 == pytest.approx(0.95, abs=2e-3)
    assert share[2] == pytest.approx(0.5)
