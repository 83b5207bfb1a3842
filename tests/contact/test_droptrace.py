"""Traced drops against a second trace that shares no code with the first, and against earlier figures."""

from __future__ import annotations

import cmath
import math

import numpy as np
import pytest
from numpy.typing import NDArray

from outcouple.contact.droptrace import trace_drop

Vector = tuple[float, float, float]
DEG = math.pi / 180


def dot(a: Vector, b: Vector) -> float:
    return a[0] * b[0] + a[1] * b[1] + a[2] * b[2]


def cross(a: Vector, b: Vector) -> Vector:
    return (a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0])


def unit(a: Vector) -> Vector:
    size = math.sqrt(dot(a, a))
    return (a[0] / size, a[1] / size, a[2] / size)


def mirrored(a: Vector, normal: Vector) -> Vector:
    along = 2 * dot(a, normal)
    return (a[0] - along * normal[0], a[1] - along * normal[1], a[2] - along * normal[2])


def bounce(
    n_from: float, n_to: float, ray: Vector, normal: Vector, field: list[complex]
) -> tuple[list[complex], float]:
    """Reflected field (three complex components) and transmitted power; the normal points along the ray.

    Written with the boundary conditions themselves: along s, and along p before and after.
    """
    cos_i = dot(ray, normal)
    sin_t = n_from / n_to * math.sqrt(max(1 - cos_i**2, 0.0))
    cos_t = cmath.sqrt(1 - sin_t**2)
    if sin_t > 1:
        cos_t = 1j * abs(cos_t)
    r_s = (n_from * cos_i - n_to * cos_t) / (n_from * cos_i + n_to * cos_t)
    r_p = (n_to * cos_i - n_from * cos_t) / (n_to * cos_i + n_from * cos_t)
    side = cross(normal, ray)
    s = unit(side) if dot(side, side) > 1e-24 else unit(cross(normal, (0.3, 0.8, 0.52)))
    out = mirrored(ray, normal)
    p_in, p_out = cross(s, ray), cross(out, s)  # both lean the same way along the normal
    e_s = sum(f * c for f, c in zip(field, s, strict=True))
    e_p = sum(f * c for f, c in zip(field, p_in, strict=True))
    if dot(p_in, normal) * dot(p_out, normal) < 0:
        p_out = (-p_out[0], -p_out[1], -p_out[2])
    after = [r_s * e_s * a + r_p * e_p * b for a, b in zip(s, p_out, strict=True)]
    passed = (1 - abs(r_s) ** 2) * abs(e_s) ** 2 + (1 - abs(r_p) ** 2) * abs(e_p) ** 2
    return after, passed


def follow(
    start: Vector,
    ray: Vector,
    field: list[complex],
    n_guide: float,
    n_drop: float,
    phi: float,
    specular: Vector,
) -> tuple[float, float, list[tuple[float, float]]]:
    """One ray until it is faint: lost at first, lost at all meetings, (deviation, power) of what returns."""
    ball, sunk = 1 / math.sin(phi), -1 / math.tan(phi)  # footprint of radius 1
    point, first, lost, back = start, -1.0, 0.0, []
    for _ in range(300):
        rel = (point[0], point[1], point[2] - sunk)
        b = dot(rel, ray)
        to_cap = -b + math.sqrt(max(b * b - dot(rel, rel) + ball**2, 0.0))
        to_base = -point[2] / ray[2] if ray[2] < 0 and point[2] > 0 else math.inf
        if to_base < to_cap:
            point = (point[0] + to_base * ray[0], point[1] + to_base * ray[1], 0.0)
            field, passed = bounce(n_drop, n_guide, ray, (0.0, 0.0, -1.0), field)
            out = (ray[0] * n_drop / n_guide, ray[1] * n_drop / n_guide)
            if passed > 0:
                exit_ray = (out[0], out[1], -math.sqrt(max(1 - out[0] ** 2 - out[1] ** 2, 0.0)))
                back.append((math.acos(min(dot(exit_ray, specular), 1.0)), passed))
            ray = mirrored(ray, (0.0, 0.0, -1.0))
        else:
            point = tuple(p + to_cap * r for p, r in zip(point, ray, strict=True))  # type: ignore[assignment]
            normal = unit((point[0], point[1], point[2] - sunk))
            field, passed = bounce(n_drop, 1.0, ray, normal, field)
            first = passed if first < 0 else first
            lost += passed
            ray = mirrored(ray, normal)
        if sum(abs(f) ** 2 for f in field) < 1e-4:
            break
    return max(first, 0.0), lost, back


def second_trace(n_guide: float, n_drop: float, angle: float, phi: float, acceptance: float) -> NDArray[np.float64]:
    """Rows s and p: first exit, all exits, kept within the acceptance (base reflection included)."""
    sine = n_guide * math.sin(angle) / n_drop
    inside = (sine, 0.0, math.sqrt(1 - sine**2))
    specular = (math.sin(angle), 0.0, -math.cos(angle))
    found = np.zeros((2, 3))
    rings, spokes = 18, 25
    for row, axis in enumerate(((0.0, 1.0, 0.0), (inside[2], 0.0, -inside[0]))):
        incident = (math.sin(angle), 0.0, math.cos(angle))
        along = (0.0, 1.0, 0.0) if row == 0 else (math.cos(angle), 0.0, -math.sin(angle))
        _, enters = bounce(n_guide, n_drop, incident, (0.0, 0.0, 1.0), [complex(c) for c in along])
        for ring in range(rings):
            for spoke in range(spokes):
                radius = math.sqrt((ring + 0.5) / rings)
                azimuth = 2 * math.pi * (spoke + (ring * 0.382) % 1) / spokes
                start = (radius * math.cos(azimuth), radius * math.sin(azimuth), 0.0)
                field = [complex(math.sqrt(enters) * c) for c in axis]
                one, every, back = follow(start, inside, field, n_guide, n_drop, phi, specular)
                found[row] += (one, every, sum(power for off, power in back if off <= acceptance))
        found[row] /= rings * spokes
        found[row, 2] += 1 - enters
    return found


@pytest.mark.parametrize(
    ("n_guide", "n_drop", "angle", "phi", "acceptance"),
    [
        (1.484, 1.327, 45, 10, 5),
        (1.484, 1.327, 45, 40, 30),
        (1.484, 1.327, 55, 80, 60),
        (1.51, 1.46, 60, 100, 40),
        (1.40, 1.55, 50, 30, 25),
        (1.75, 1.36, 30, 60, 50),
    ],
)
def test_two_traces_agree(n_guide: float, n_drop: float, angle: float, phi: float, acceptance: float) -> None:
    # Computed independently: ray by ray with complex field vectors, 450 rays over the whole footprint.
    second = second_trace(n_guide, n_drop, angle * DEG, phi * DEG, acceptance * DEG)
    cap = trace_drop(n_guide=n_guide, n_drop=n_drop, angle=angle * DEG, contact_angle=phi * DEG)
    first_trace = np.stack((cap.first, cap.lost, cap.within(acceptance * DEG)), axis=-1)
    assert first_trace == pytest.approx(second, abs=0.015)


@pytest.mark.parametrize(
    ("n_guide", "degrees", "published"),
    [(1.484, *row) for row in ((1, 0.0), (3, 0.0), (10, 0.24), (20, 0.39), (40, 0.53), (60, 0.63), (80, 0.745))]
    + [(1.51, *row) for row in ((10, 0.17), (40, 0.52), (90, 0.77))],
)
def test_first_exit_from_water_drops_at_45_degrees(n_guide: float, degrees: float, published: float) -> None:
    # Computed independently (two traces that agree to 0.01) for PMMA and crown glass at 850 nm, water 1.327.
    cap = trace_drop(n_guide=n_guide, n_drop=1.327, angle=45 * DEG, contact_angle=degrees * DEG)
    assert cap.first.mean() == pytest.approx(published, abs=0.007)


@pytest.mark.parametrize(("degrees", "wide", "narrow"), [(3, 0.99, 0.45), (10, 0.155, 0.05), (40, 0.03, 0.01)])
def test_drops_turn_what_they_return(degrees: float, wide: float, narrow: float) -> None:
    # Computed independently: share still within 5 and 2.6 degrees of specular, PMMA/water at 45 degrees.
    cap = trace_drop(n_guide=1.484, n_drop=1.327, angle=45 * DEG, contact_angle=degrees * DEG)
    assert cap.within(5 * DEG).mean() == pytest.approx(wide, abs=0.006)
    assert cap.within(2.6 * DEG).mean() == pytest.approx(narrow, abs=0.005)


def test_all_exits_lose_a_little_more_than_the_first() -> None:
    # Computed independently: 0.745 at first exit, 0.76 in all, for 80 degrees.
    cap = trace_drop(n_guide=1.484, n_drop=1.327, angle=45 * DEG, contact_angle=80 * DEG)
    assert cap.lost.mean() == pytest.approx(0.76, abs=0.005)


def test_more_rays_change_little() -> None:
    given = {"n_guide": 1.51, "n_drop": 1.4, "angle": 52 * DEG, "contact_angle": 50 * DEG}
    few, many = trace_drop(**given, rays=2000), trace_drop(**given, rays=32000)
    assert few.lost == pytest.approx(many.lost, abs=3e-3)
    assert few.within(20 * DEG) == pytest.approx(many.within(20 * DEG), abs=3e-3)


@pytest.mark.parametrize("phi", [0.5, 15, 90, 120])
@pytest.mark.parametrize(("n_guide", "n_drop"), [(1.3, 1.6), (1.9, 1.2), (1.5, 1.5)])
def test_power_is_kept(n_guide: float, n_drop: float, phi: float) -> None:
    angle = 0.9 * math.asin(min(n_drop / n_guide, 1.0))
    cap = trace_drop(n_guide=n_guide, n_drop=n_drop, angle=angle, contact_angle=phi * DEG, rays=500)
    assert cap.base + cap.lost + cap.power.sum(axis=0) == pytest.approx(np.ones(2), abs=1e-12)
    assert np.all(cap.unsettled < 2e-3)
    assert np.all(cap.unsettled >= -1e-12)
    assert np.all(cap.first <= cap.lost + 1e-12)


def test_beyond_the_critical_angle_of_the_base_the_drop_is_not_seen() -> None:
    cap = trace_drop(n_guide=1.6, n_drop=1.3, angle=60 * DEG, contact_angle=40 * DEG)
    assert cap.base == pytest.approx(np.ones(2), abs=1e-12)
    assert cap.lost == pytest.approx(np.zeros(2), abs=1e-12)
