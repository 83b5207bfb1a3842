"""A brute-force trace of a plate lit at one edge, with one contact on its front face.

Shares no code with the project: own Fresnel formulas, own directions, every ray follows its field as a complex vector
from reflection to reflection. Everything is drawn by chance: where on the emitter a ray starts, where it goes, and at
each hit under the object whether it meets contact or air (``share`` of the footprint touches). Edges beside the way
swallow what meets them or carry mirrors.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np


@dataclass(frozen=True)
class Plate:
    """Plate from x = 0 (emitter's edge) to x = width (detector's edge), |y| < height / 2, |z| < thickness / 2."""

    index: float
    width: float
    height: float
    thickness: float
    emitter: tuple[float, float, float, float]
    """y, width, height of the emitter and its gap to the edge."""
    detector: tuple[float, float, float, float]
    """y, width, height of the detector and its gap to the edge."""
    half_angle: float = np.pi / 2
    bonded: bool = False
    back: float = 1.0
    mirror: float = 0.0
    """Reflectance of mirrors on the edges beside the way; 0 where these swallow what meets them."""


@dataclass(frozen=True)
class Contact:
    """A disc on the front face: middle (from the emitter's edge, y), diameter, index, share that touches."""

    x: float
    y: float
    diameter: float
    index: float
    share: float


def launched(plate, count, rng):
    """Start in the edge plane, direction inside, field after the edge (unit flux before), and which rays came in."""
    y0, wide, high, gap = plate.emitter
    start = np.zeros((count, 3))
    start[:, 1] = y0 + wide * (rng.random(count) - 0.5)
    start[:, 2] = high * (rng.random(count) - 0.5)
    # Lambertian: sin^2 of the polar angle is even.
    sine = np.sin(plate.half_angle) * np.sqrt(rng.random(count))
    turn = 2 * np.pi * rng.random(count)
    outside = np.stack([np.sqrt(1 - sine**2), sine * np.cos(turn), sine * np.sin(turn)], axis=1)
    start += outside * (gap / np.maximum(outside[:, :1], 1e-9)) * [0, 1, 1]
    came = (np.abs(start[:, 2]) < plate.thickness / 2) & (np.abs(start[:, 1]) < plate.height / 2)
    field = transverse(outside, rng)
    if plate.bonded:
        return start, outside, field, came
    normal = np.array([1.0, 0.0, 0.0])
    inside, field = refracted(outside, field, normal, 1.0, plate.index)
    return start, inside, field, came


def transverse(ray, rng):
    """A random linear polarisation across each ray."""
    seed = rng.normal(size=ray.shape)
    across = seed - np.sum(seed * ray, axis=1, keepdims=True) * ray
    return (across / np.linalg.norm(across, axis=1, keepdims=True)).astype(complex)


def amplitudes(n1, n2, cos1):
    """Fresnel rs, rp, ts, tp; |Ei rs|^2 is a share of flux, |t|^2 needs n2 cos2 / (n1 cos1)."""
    sine2 = (n1 / n2) ** 2 * (1 - cos1**2)
    cos2 = np.sqrt((1 - sine2).astype(complex))
    rs = (n1 * cos1 - n2 * cos2) / (n1 * cos1 + n2 * cos2)
    rp = (n2 * cos1 - n1 * cos2) / (n2 * cos1 + n1 * cos2)
    return rs, rp, 1 + rs, (n1 / n2) * (1 + rp), cos2


def frame(ray, normal):
    """s and p unit vectors of each ray at a surface."""
    s = np.cross(ray, normal)
    size = np.linalg.norm(s, axis=1, keepdims=True)
    s = np.where(size > 1e-12, s / np.maximum(size, 1e-12), [0.0, 1.0, 0.0])
    return s, np.cross(s, ray)


def refracted(ray, field, normal, n1, n2):
    """Directions and fields behind a surface, fields scaled so that their square stays the flux."""
    cos1 = np.abs(ray @ normal)
    s, p = frame(ray, normal)
    _, _, ts, tp, cos2 = amplitudes(n1, n2, cos1)
    through = np.real(cos2) > 1e-12
    scale = np.sqrt(np.where(through, n2 * np.real(cos2) / (n1 * cos1), 0.0))
    out = n1 / n2 * (ray - (ray @ normal)[:, None] * normal)
    out = out + (np.sign(ray @ normal) * np.real(cos2))[:, None] * normal
    out = np.where(through[:, None], out, ray)
    s2, p2 = frame(out, normal)
    es, ep = np.sum(field * s, axis=1), np.sum(field * p, axis=1)
    return out, ((ts * es * scale)[:, None] * s2 + (tp * ep * scale)[:, None] * p2)


def bounced(ray, field, normal, n1, n2):
    """Directions and fields after reflection; n2 per ray."""
    cos1 = np.abs(ray @ normal)
    s, p = frame(ray, normal)
    rs, rp, _, _, _ = amplitudes(n1, n2, cos1)
    es, ep = np.sum(field * s, axis=1), np.sum(field * p, axis=1)
    out = ray - 2 * (ray @ normal)[:, None] * normal
    s2, p2 = frame(out, normal)
    return out, (rs * es)[:, None] * s2 + (rp * ep)[:, None] * p2


def followed(plate, start, ray, field, contacts, rng):
    """Flux of every ray at the detector's edge, one row without and one with each contact: same rays, same chances."""
    n = plate.index
    count, states = len(start), 1 + len(contacts)
    fields = np.repeat(field[None], states, axis=0)
    z, x = start[:, 2].copy(), np.zeros(count)
    up = np.sign(ray[:, 2])
    live = np.arange(count)
    while len(live):
        slope = np.abs(ray[live, 2]) / ray[live, 0]
        room = plate.thickness / 2 - up[live] * z[live]
        step = room / np.maximum(slope, 1e-12)
        hit = x[live] + step < plate.width
        live, step = live[hit], step[hit]
        x[live] += step
        z[live] = up[live] * plate.thickness / 2
        y, _ = folded(plate, start[live, 1] + ray[live, 1] / ray[live, 0] * x[live])
        chance = rng.random(len(live))
        front = up[live] > 0
        for state in range(states):
            beyond = np.where(front, 1.0, plate.back)
            if state:
                disc = contacts[state - 1]
                under = np.hypot(x[live] - disc.x, y - disc.y) < disc.diameter / 2
                beyond = np.where(front & under & (chance < disc.share), disc.index, beyond)
            turned, after = bounced(ray[live], fields[state, live], np.array([0.0, 0.0, 1.0]), n, beyond)
            fields[state, live] = after
        ray[live] = turned
        up[live] = -up[live]
    z = z + up * np.abs(ray[:, 2]) / ray[:, 0] * (plate.width - x)
    return fields, z, ray


def folded(plate, y):
    """Place within the plate of a straight way's y, and how many edges it crossed."""
    crossed = np.floor(y / plate.height + 0.5)
    sign = np.where(crossed % 2 == 0, 1.0, -1.0)
    return sign * (y - crossed * plate.height), np.abs(crossed)


def received(plate, contacts, *, rays, seed):
    """Mean flux at the detector per emitted ray and its standard error, without and with each contact; and of the
    losses against the first, (1 + contacts,) each."""
    rng = np.random.default_rng(seed)
    yd, wide, high, gap = plate.detector
    start, ray, field, came = launched(plate, rays, rng)
    y_end, crossed = folded(plate, start[:, 1] + ray[:, 1] / np.maximum(ray[:, 0], 1e-9) * plate.width)
    came &= (ray[:, 0] > 1e-6) & (np.abs(y_end - yd) < wide / 2 + 2 * gap) & ((crossed == 0) | (plate.mirror > 0))
    start, ray, field, y_end, crossed = start[came], ray[came], field[came], y_end[came], crossed[came]
    fields, z, ray = followed(plate, start, ray.copy(), field, contacts, rng)
    got = []
    for one in fields:
        out, last = refracted(ray, one, np.array([1.0, 0.0, 0.0]), plate.index, 1.0)
        drift = gap / np.maximum(out[:, 0], 1e-9)
        lands = (np.abs(y_end + drift * out[:, 1] - yd) < wide / 2) & (np.abs(z + drift * out[:, 2]) < high / 2)
        flux = np.sum(np.abs(last) ** 2, axis=1) * plate.mirror**crossed
        got.append(np.where(lands, flux, 0.0))
    got = np.array(got)
    total = np.sum(got, axis=1)
    error = np.sqrt(np.sum(got**2, axis=1))
    loss = 1 - total / total[0]
    # A ratio's error from paired rays.
    paired = np.sqrt(np.sum((got - (1 - loss)[:, None] * got[0]) ** 2, axis=1)) / total[0]
    return total / rays, error / rays, loss, paired
