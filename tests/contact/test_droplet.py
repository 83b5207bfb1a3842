"""The table of drops against fresh traces, its limits and its shapes."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from outcouple.contact import droptable
from outcouple.contact.droplet import drop_answer, drop_notes, drop_powers, reflection_spread, zone_angle
from outcouple.contact.droptrace import trace_drop

DEG = math.pi / 180


def table_and_trace(seed: int, count: int, *, share_grazing: float) -> tuple[np.ndarray, np.ndarray]:
    """Errors (count, 2) in kept and returned light, unpolarised, at random places of the whole range."""
    rng = np.random.default_rng(seed)
    errors, places = [], []
    for _ in range(count):
        n_drop, n_guide = rng.uniform(1.2, 1.6), rng.uniform(1.3, 1.9)
        critical = math.asin(1 / n_guide)
        angle = rng.uniform(critical, 85 * DEG) if rng.random() > share_grazing else rng.uniform(0, 89 * DEG)
        phi, acceptance = 10 ** rng.uniform(-0.3, math.log10(120)) * DEG, 10 ** rng.uniform(0, 1.9) * DEG
        cap = trace_drop(n_guide=n_guide, n_drop=n_drop, angle=angle, contact_angle=phi)
        kept, returned = drop_powers(
            n_guide=n_guide,
            n_drop=n_drop,
            angle=np.array([[angle]]),
            contact_angle=phi,
            acceptance=acceptance,
        )
        errors.append((kept[0, 0].mean() - cap.within(acceptance).mean(), (returned[0, 0] + cap.lost).mean() - 1))
        places.append((n_guide, n_drop, angle / DEG, phi / DEG, acceptance / DEG))
    return np.abs(errors), np.array(places)


def test_table_against_fresh_traces() -> None:
    # Computed independently of the table's nodes: fresh traces at random places, against the stated errors.
    errors, places = table_and_trace(11, 250, share_grazing=0.3)
    largest = errors.max(axis=1)
    alike = np.abs(places[:, 0] / places[:, 1] - 1) < 0.1
    assert np.median(largest) < 0.001
    assert np.quantile(largest, 0.98) < 0.025
    assert largest[~alike].max() < 0.04, places[~alike][largest[~alike].argmax()]
    assert largest.max() < 0.1, places[largest.argmax()]


def test_stored_nodes_are_traces() -> None:
    # Regression pin against the script that made the table: three nodes traced again.
    for place in ((1, 3, 6, 13), (2, 5, 11, 8), (0, 6, 2, 20)):
        n_drop, ratio, phi, zone = (axis[at] for axis, at in zip(droptable._AXES, place, strict=True))
        inside = zone_angle(zone, n_drop=n_drop, ratio=ratio, contact_angle=phi)
        angle = math.asin(math.sin(inside) / ratio)
        cap = trace_drop(n_guide=n_drop * ratio, n_drop=n_drop, angle=angle, contact_angle=phi, rays=3000)
        spread = float(reflection_spread(ratio=ratio, inside=inside, contact_angle=phi))
        given_ = {
            "n_guide": n_drop * ratio,
            "n_drop": n_drop,
            "angle": np.array([[angle]]),
            "contact_angle": phi,
        }
        kept, returned = drop_powers(acceptance=0.6 * spread, **given_)
        assert kept[0, 0] == pytest.approx(cap.within(0.6 * spread), abs=2e-3)
        assert returned[0, 0] == pytest.approx(1 - cap.lost, abs=2e-3)


@pytest.mark.parametrize(("degrees", "lost"), [(0.5, 0), (3, 0.0), (10, 0.241), (20, 0.395), (40, 0.538), (80, 0.76)])
def test_water_drops_on_acrylic_at_45_degrees(degrees: float, lost: float) -> None:
    # Computed independently: all exits, PMMA 1.484 and water 1.327.
    kept, turned = drop_answer(
        n_guide=1.484,
        n_drop=1.327,
        angle=np.array([[45 * DEG]]),
        contact_angle=degrees * DEG,
        acceptance=5 * DEG,
    )
    assert 1 - kept - turned == pytest.approx(lost, abs=0.012)


def test_a_flat_film_loses_nothing_beyond_the_critical_angle() -> None:
    angle = np.array([[43.0, 45.0, 60.0, 80.0]]) * DEG
    kept, turned = drop_answer(n_guide=1.484, n_drop=1.327, angle=angle, contact_angle=0.0, acceptance=1 * DEG)
    assert kept == pytest.approx(np.ones((1, 4)), abs=1e-3)
    assert turned == pytest.approx(np.zeros((1, 4)), abs=1e-3)


def test_a_flat_film_before_the_critical_angle_is_two_faces() -> None:
    # Computed independently: intensities of two faces added over all bounces, s and p.
    n_guide, n_drop, angle = 1.484, 1.327, 20 * DEG

    def face(n_from: float, n_to: float, sine: float) -> np.ndarray:
        one, other = math.sqrt(n_from**2 - sine**2), math.sqrt(n_to**2 - sine**2)
        s = (one - other) / (one + other)
        p = (n_to**2 * one - n_from**2 * other) / (n_to**2 * one + n_from**2 * other)
        return np.array([s, p]) ** 2

    sine = n_guide * math.sin(angle)
    near, far = face(n_guide, n_drop, sine), face(n_drop, 1.0, sine)
    film = near + (1 - near) ** 2 * far / (1 - near * far)
    kept, _ = drop_powers(n_guide=n_guide, n_drop=n_drop, angle=np.array([[angle]]), contact_angle=0.0, acceptance=0.1)
    assert kept[0, 0] == pytest.approx(film, abs=2e-3)


def test_samples_and_rays_answer_as_one_by_one() -> None:
    rng = np.random.default_rng(2)
    guide, drop = rng.uniform(1.3, 1.9, 5), rng.uniform(1.2, 1.6, 5)
    phi, acceptance = rng.uniform(0.01, 2, 5), rng.uniform(0.01, 1, 5)
    angle = rng.uniform(0, 1.5, (5, 7))
    kept, turned = drop_answer(n_guide=guide, n_drop=drop, angle=angle, contact_angle=phi, acceptance=acceptance)
    assert kept.shape == turned.shape == (5, 7)
    for s in range(5):
        for k in range(7):
            one, other = drop_answer(
                n_guide=float(guide[s]),
                n_drop=float(drop[s]),
                angle=angle[s : s + 1, k : k + 1],
                contact_angle=float(phi[s]),
                acceptance=float(acceptance[s]),
            )
            assert one[0, 0] == pytest.approx(kept[s, k], abs=1e-12)
            assert other[0, 0] == pytest.approx(turned[s, k], abs=1e-12)


def test_one_row_of_angles_serves_all_samples() -> None:
    kept, _ = drop_answer(
        n_guide=1.5,
        n_drop=1.33,
        angle=np.array([[0.8, 1.0]]),
        contact_angle=np.array([0.1, 0.5, 1.0]),
        acceptance=0.1,
    )
    assert kept.shape == (3, 2)


@settings(max_examples=150)
@given(
    st.floats(1.3, 1.9),
    st.floats(1.2, 1.6),
    st.floats(0, math.pi / 2),
    st.floats(0, 120 * DEG),
    st.floats(0, math.pi),
)
def test_shares_are_shares_and_grow_with_acceptance(
    n_guide: float, n_drop: float, angle: float, phi: float, acceptance: float
) -> None:
    kept, returned = drop_powers(
        n_guide=n_guide,
        n_drop=n_drop,
        angle=np.array([[angle]]),
        contact_angle=phi,
        acceptance=np.array([acceptance, acceptance + 0.05, 10.0]),
    )
    assert np.all(kept >= 0)
    assert np.all(returned <= 1 + 1e-6)
    assert np.all(np.diff(kept, axis=0) >= -1e-6)
    assert np.all(kept <= returned + 1e-9)


def test_notes_outside_the_table() -> None:
    assert drop_notes(n_guide=1.484, n_drop=1.327, contact_angle=0.5) == ()
    notes = drop_notes(n_guide=2.0, n_drop=np.array([1.3, 1.7]), contact_angle=np.array([2.5, 0.1]))
    assert [note.code for note in notes] == ["drop-range"] * 3
    assert [None if note.where is None else note.where.tolist() for note in notes] == [
        [False, True],
        None,
        [True, False],
    ]
    assert notes[2].text == (
        "The contact angle of the drop lies outside the table of traced drops (0 to 120 deg); "
        "the answer is that of the edge."
    )
