"""Brute force for one cone: polarised rays with complex field vectors, drawn at random.

Shares no code with the package: the cone is met by bisection on its implicit equation, Fresnel after Born & Wolf
(Principles of Optics, 1.5), polarisation as a vector, so turning planes need no thought.
"""

from __future__ import annotations

from itertools import pairwise

import numpy as np


def _unit(v):
    return v / np.maximum(np.linalg.norm(v, axis=1, keepdims=True), 1e-30)


def _fresnel(n1, n2, cos1):
    sin2 = n1 / n2 * np.sqrt(np.maximum(1 - cos1**2, 0))
    cos2 = np.sqrt((1 - sin2**2).astype(complex))
    return (n1 * cos1 - n2 * cos2) / (n1 * cos1 + n2 * cos2), (n2 * cos1 - n1 * cos2) / (n2 * cos1 + n1 * cos2)


def cone_signal(
    *,
    n,
    n_out,
    radius,
    source_x,
    source_r,
    detector_x,
    detector_r,
    half_angle,
    polarization="none",
    rays=60_000,
    seed=3,
):
    """(mean, standard error) of the share of a Lambertian lobe that lands on the detector; apex angle 90 degrees.

    polarization  "none", or the field inside along ("s") or across ("p") the y axis, weakened by the base's mean loss
    """
    rng = np.random.default_rng(seed)
    r, turn = source_r * np.sqrt(rng.random(rays)), 2 * np.pi * rng.random(rays)
    point = np.stack([source_x + r * np.cos(turn), r * np.sin(turn), np.zeros(rays)], axis=1)
    cos = np.sqrt(1 - rng.random(rays) * np.sin(half_angle) ** 2)
    azimuth = 2 * np.pi * rng.random(rays)
    outside = np.stack([*(np.sqrt(1 - cos**2) * f(azimuth) for f in (np.cos, np.sin)), cos], axis=1)
    ray = np.stack([outside[:, 0] / n, outside[:, 1] / n, np.sqrt(1 - (1 - cos**2) / n**2)], axis=1)
    spin = 2 * np.pi * rng.random(rays)
    s = _unit(np.cross(np.array([[0.0, 0.0, 1.0]]), ray))
    rs, rp = _fresnel(1.0, n, cos)
    ts, tp = np.sqrt(1 - np.abs(rs) ** 2), np.sqrt(1 - np.abs(rp) ** 2)
    field = (np.cos(spin) * ts)[:, None] * s + (np.sin(spin) * tp)[:, None] * np.cross(ray, s)
    if polarization != "none":
        y = np.array([[0.0, 1.0, 0.0]])
        along = _unit(y - ray[:, 1:2] * ray)
        field = np.sqrt((ts**2 + tp**2) / 2)[:, None] * (along if polarization == "s" else np.cross(ray, along))
    field = field.astype(complex)
    landed, alive = np.zeros(rays), np.ones(rays, bool)
    for _ in range(5):
        side = _to_cone(point, ray, radius)
        with np.errstate(divide="ignore", invalid="ignore"):
            base = np.where(ray[:, 2] < 0, -point[:, 2] / ray[:, 2], np.inf)
        base = np.where(base > 1e-9, base, np.inf)
        down = alive & (base < side)
        foot = point + np.where(np.isfinite(base), base, 0)[:, None] * ray
        hit = down & (np.hypot(foot[:, 0] - detector_x, foot[:, 1]) < detector_r)
        landed[hit] = _leave(field[hit], ray[hit], n)
        alive &= ~down & np.isfinite(side)
        point = point + np.where(alive, side, 0)[:, None] * ray
        normal = np.stack([point[:, 0], point[:, 1], np.hypot(point[:, 0], point[:, 1])], axis=1)
        normal = np.where(alive[:, None], _unit(normal), np.array([[0.0, 0.0, 1.0]]))
        cos = np.clip(np.sum(ray * normal, axis=1), 0, 1)
        s = np.cross(normal, ray)
        s = np.where(np.linalg.norm(s, axis=1, keepdims=True) > 1e-12, _unit(s), np.array([[0.0, 1.0, 0.0]]))
        rs, rp = _fresnel(n, n_out, cos)
        after = ray - 2 * np.sum(ray * normal, axis=1)[:, None] * normal
        es, ep = np.sum(field * s, axis=1), np.sum(field * np.cross(ray, s), axis=1)
        field = (rs * es)[:, None] * s + (rp * ep)[:, None] * np.cross(after, s)
        ray = after
    return landed.mean(), landed.std() / np.sqrt(rays)


def _to_cone(point, ray, radius):
    """Distance to the cone x^2 + y^2 = (radius - z)^2 by scan and bisection; infinite where none is met above z = 0."""

    def inside(t):
        at = point + t[:, None] * ray
        return radius - at[:, 2] - np.hypot(at[:, 0], at[:, 1])

    grid = np.linspace(1e-6, 3, 601) * radius
    low, high = np.full(len(point), np.inf), np.full(len(point), np.inf)
    for a, b in pairwise(grid):
        one, two = inside(np.full(len(point), a)), inside(np.full(len(point), b))
        new = ~np.isfinite(low) & (one > 0) & (two <= 0)
        low[new], high[new] = a, b
    found = np.isfinite(low)
    lo, hi = np.where(found, low, 0.0), np.where(found, high, 0.0)
    for _ in range(50):
        middle = (lo + hi) / 2
        out = inside(middle) <= 0
        lo, hi = np.where(out, lo, middle), np.where(out, middle, hi)
    return np.where(found & (point[:, 2] + hi * ray[:, 2] > 0), hi, np.inf)


def _leave(field, ray, n):
    s = np.cross(np.array([[0.0, 0.0, -1.0]]), ray)
    s = np.where(np.linalg.norm(s, axis=1, keepdims=True) > 1e-12, _unit(s), np.array([[0.0, 1.0, 0.0]]))
    es, ep = np.sum(field * s, axis=1), np.sum(field * np.cross(ray, s), axis=1)
    rs, rp = _fresnel(n, 1.0, np.clip(-ray[:, 2], 0, 1))
    return np.abs(es) ** 2 * (1 - np.abs(rs) ** 2) + np.abs(ep) ** 2 * (1 - np.abs(rp) ** 2)
