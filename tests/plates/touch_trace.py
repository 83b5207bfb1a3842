"""Brute-force traces of what a touch draws out of a plate and of what it sends back through the other face.

Builds on the rays of ``plate_trace`` and shares no code with the project.
"""

from __future__ import annotations

import numpy as np

from .plate_trace import amplitudes, bounced, launched


def extracted(plate, disc, *, rays, seed):
    """Share of the emitted light that enters a contact on the front face, and its standard error.

    Edges swallow what meets them; everything is drawn by chance as in ``plate_trace``.
    """
    rng = np.random.default_rng(seed)
    start, ray, field, came = launched(plate, rays, rng)
    start, ray, field = start[came], ray[came], field[came]
    z, x, up = start[:, 2].copy(), np.zeros(len(start)), np.sign(ray[:, 2])
    taken, live = np.zeros(len(start)), np.arange(len(start))
    while len(live):
        step = (plate.thickness / 2 - up[live] * z[live]) * ray[live, 0] / np.maximum(np.abs(ray[live, 2]), 1e-12)
        y = start[live, 1] + ray[live, 1] / ray[live, 0] * (x[live] + step)
        inside = (x[live] + step < plate.width) & (np.abs(y) < plate.height / 2)
        live, step, y = live[inside], step[inside], y[inside]
        x[live] += step
        z[live] = up[live] * plate.thickness / 2
        under = (up[live] > 0) & (np.hypot(x[live] - disc.x, y - disc.y) < disc.diameter / 2)
        touch = under & (rng.random(len(live)) < disc.share)
        before = np.sum(np.abs(field[live]) ** 2, axis=1)
        ray[live], field[live] = bounced(
            ray[live], field[live], np.array([0.0, 0.0, 1.0]), plate.index, np.where(touch, disc.index, 1.0)
        )
        after = np.sum(np.abs(field[live]) ** 2, axis=1)
        taken[live] += np.where(touch, before - after, 0.0)
        up[live] = -up[live]
    return np.sum(taken) / rays, np.sqrt(np.sum(taken**2)) / rays


def sent_out(n_plate, n_contact, *, cone, rays, seed):
    """Share of Lambertian light from a contact that leaves by the back within ``cone`` [rad] of its normal outside.

    The contact fills directions up to asin(n_contact / n_plate) inside the plate.
    """
    rng = np.random.default_rng(seed)
    sine = min(n_contact / n_plate, 1.0) * np.sqrt(rng.random(rays))
    rs, rp, *_ = amplitudes(n_plate, 1.0, np.sqrt(1 - sine**2))
    through = 1 - (np.abs(rs) ** 2 + np.abs(rp) ** 2) / 2
    return float(np.mean(np.where(n_plate * sine < np.sin(cone), through, 0.0)))
