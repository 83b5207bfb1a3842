"""Brute force for one prism: polarised rays with complex field vectors, drawn at random.

Shares no code with the package: own intersections, own Fresnel equations (Born & Wolf, Principles of Optics, 1.5), own
lobe. Every ray carries its field as a vector, so turning planes of incidence need no thought.
"""

from __future__ import annotations

import numpy as np


def fresnel(n1, n2, cos1):
    """(rs, rp) with p reversed on reflection, complex, for fields along fixed s and along p = d x s."""
    sin2 = n1 / n2 * np.sqrt(np.maximum(1 - cos1**2, 0))
    cos2 = np.sqrt((1 - sin2**2).astype(complex))
    rs = (n1 * cos1 - n2 * cos2) / (n1 * cos1 + n2 * cos2)
    rp = (n2 * cos1 - n1 * cos2) / (n2 * cos1 + n1 * cos2)
    return rs, rp


def unit(v):
    length = np.linalg.norm(v, axis=1, keepdims=True)
    return np.where(length > 1e-12, v / np.where(length > 0, length, 1), np.array([[0.0, 1.0, 0.0]]))


def split(field, ray, normal):
    s = unit(np.cross(np.broadcast_to(normal, ray.shape), ray))
    p = np.cross(ray, s)
    return np.sum(field * s, axis=1), np.sum(field * p, axis=1), s


def lobe(rng, count, half_angle, exponent):
    edge = np.cos(half_angle) ** (exponent + 1)
    cos = (1 - rng.random(count) * (1 - edge)) ** (1 / (exponent + 1))
    azimuth = 2 * np.pi * rng.random(count)
    sin = np.sqrt(1 - cos**2)
    return np.stack([sin * np.cos(azimuth), sin * np.sin(azimuth), cos], axis=1)


def prism_signal(
    *,
    n,
    n_out,
    base,
    stem=0.0,
    face_angle=np.pi / 4,
    source_x,
    source_r,
    detector_x,
    detector_r,
    half_angle,
    exponent=1.0,
    bonded=False,
    rays=200_000,
    seed=1,
    most_hits=2,
):
    """(mean, standard error) of the share of the lobe that lands on the detector after one or two face hits."""
    rng = np.random.default_rng(seed)
    radius = source_r * np.sqrt(rng.random(rays))
    turn = 2 * np.pi * rng.random(rays)
    point = np.stack([source_x + radius * np.cos(turn), radius * np.sin(turn), np.zeros(rays)], axis=1)
    ray = lobe(rng, rays, half_angle, exponent)
    spin = 2 * np.pi * rng.random(rays)
    across = unit(np.cross(ray, np.array([[1.0, 0.0, 0.0]])))
    field = (np.cos(spin)[:, None] * across + np.sin(spin)[:, None] * np.cross(ray, across)).astype(complex)
    up = np.array([[0.0, 0.0, 1.0]])
    if not bonded:
        field, ray = enter(field, ray, n, up)
    apex = stem + base / 2 * np.tan(face_angle)
    sine, cosine = np.sin(face_angle), np.cos(face_angle)
    planes = {  # outward normal, offset: normal . x = offset on the plane
        "left": (np.array([-sine, 0, cosine]), cosine * apex),
        "right": (np.array([sine, 0, cosine]), cosine * apex),
        "base": (np.array([0, 0, -1.0]), 0.0),
        "wall-": (np.array([-1.0, 0, 0]), base / 2),
        "wall+": (np.array([1.0, 0, 0]), base / 2),
    }
    alive = np.ones(rays, bool)
    landed = np.zeros(rays)
    hits = np.zeros(rays, int)
    for _ in range(most_hits + 1):
        names, distance = nearest(point, ray, planes)
        point = point + distance[:, None] * ray
        on_base = alive & (names == list(planes).index("base"))
        inside = np.hypot(point[:, 0] - detector_x, point[:, 1]) < detector_r
        taken = on_base & inside & (hits > 0)
        landed[taken] = leave(field[taken], ray[taken], n, up, bonded)
        alive &= ~on_base & (names < 2) & (hits < most_hits)
        for at, side in enumerate(("left", "right")):
            here = alive & (names == at)
            field[here], ray[here] = bounce(field[here], ray[here], n, n_out, planes[side][0])
            hits[here] += 1
    return landed.mean(), landed.std() / np.sqrt(rays)


def nearest(point, ray, planes):
    best, names = np.full(len(point), np.inf), np.full(len(point), -1)
    for at, (normal, offset) in enumerate(planes.values()):
        speed = ray @ normal
        with np.errstate(divide="ignore", invalid="ignore"):
            distance = (offset - point @ normal) / speed
        good = (speed > 1e-12) & (distance > 1e-12) & (distance < best)
        best[good], names[good] = distance[good], at
    return names, np.where(np.isfinite(best), best, 0.0)


def bounce(field, ray, n, n_out, normal):
    cos = ray @ normal
    es, ep, s = split(field, ray, normal)
    rs, rp = fresnel(n, n_out, cos)
    after = ray - 2 * cos[:, None] * normal
    # p along d x s on both sides: at normal incidence the returning p then points the other way, so rp = -rs there.
    return (rs * es)[:, None] * s + (rp * ep)[:, None] * np.cross(after, s), after


def enter(field, ray, n, up):
    cos = ray[:, 2]
    es, ep, s = split(field, ray, up[0])
    rs, rp = fresnel(1.0, n, cos)
    inside = np.stack([ray[:, 0] / n, ray[:, 1] / n, np.sqrt(1 - (1 - cos**2) / n**2)], axis=1)
    ts, tp = np.sqrt(1 - np.abs(rs) ** 2), np.sqrt(1 - np.abs(rp) ** 2)
    return (ts * es)[:, None] * s + (tp * ep)[:, None] * np.cross(inside, s), inside


def leave(field, ray, n, up, bonded):
    es, ep, _ = split(field, ray, -up[0])
    if bonded:
        return np.abs(es) ** 2 + np.abs(ep) ** 2
    rs, rp = fresnel(n, 1.0, -ray[:, 2])
    return np.abs(es) ** 2 * (1 - np.abs(rs) ** 2) + np.abs(ep) ** 2 * (1 - np.abs(rp) ** 2)
