"""Quadrature over an emitter's lobe, with edges where a face's critical angle is crossed."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.light import lobe_density
from outcouple.optics import gauss_legendre, segments

__all__ = ["Directions", "lobe_directions"]

Floats = NDArray[np.float64]

ACROSS = 6
"""Nodes out of the plane of the cross-section (half of it; the other half is its mirror image)."""
ALONE = 16
"""Nodes in the plane where no critical angle lies within the lobe."""
SEGMENT = 8
"""Nodes in the plane per segment between critical angles."""


@dataclass(frozen=True)
class Directions:
    """Directions inside the guide, (S, K) each, and the share of the lobe each stands for before any loss.

    base  cosine of incidence on the base on the way in, in the medium the lobe is in
    """

    x: Floats
    y: Floats
    z: Floats
    weight: Floats
    base: Floats


def lobe_directions(
    *,
    n_guide: Floats,
    half_angle: Floats,
    exponent: Floats,
    tilt: Floats,
    bonded: bool,
    face_angle: Floats,
    breaks: tuple[Floats, ...],
) -> Directions:
    """Nodes and weights over the lobe, all arguments (S,).

    In the frame of the lobe a direction is (R sin d, v, R cos d) with R^2 = 1 - v^2, so the solid angle is dv dd; the
    in-plane angle d is cut into segments at the critical angles ``breaks`` (indices of outer media) of both faces.
    Endpoint maps sin^2 take up the square roots at critical angles.
    """
    n_in = np.ones_like(n_guide) if bonded else n_guide
    u, wu = gauss_legendre(ACROSS)
    phi = (u + 1) * np.pi / 4
    v = np.sin(half_angle)[:, None] * np.sin(phi)
    wv = np.sin(half_angle)[:, None] * np.cos(phi) * wu * np.pi / 4
    radius = np.sqrt(1 - v**2)
    widest = np.arccos(np.clip(np.cos(half_angle)[:, None] / radius, -1, 1))
    edges = _edges(n_guide, n_in, tilt, face_angle, breaks, v, widest)
    local, weight = segments(edges, ALONE if edges.shape[-1] == 2 else SEGMENT)
    weight = 2 * weight * wv[..., None]
    density = lobe_density(
        radius[..., None] * np.cos(local),
        half_angle=half_angle[:, None, None],
        exponent=exponent[:, None, None],
    )
    share = weight * density
    share = share / np.sum(share, axis=(1, 2), keepdims=True)
    return _inside(local + tilt[:, None, None], v, radius, share, n_in)


def _inside(angle: Floats, v: Floats, radius: Floats, weight: Floats, n_in: Floats) -> Directions:
    """Refract lobe directions into the guide; what would leave backwards is dropped with its weight."""
    samples = v.shape[0]
    base = radius[..., None] * np.cos(angle)
    dx = radius[..., None] * np.sin(angle) / n_in[:, None, None]
    dy = np.broadcast_to(v[..., None] / n_in[:, None, None], dx.shape)
    dz = np.sqrt(np.maximum(1 - dx**2 - dy**2, 1e-18))
    forward = base > 1e-6
    kept = np.where(forward, weight, 0.0)
    return Directions(*(a.reshape(samples, -1) for a in (dx, dy, dz, kept, np.clip(base, 0.0, 1.0))))


def _edges(
    n_guide: Floats,
    n_in: Floats,
    tilt: Floats,
    face_angle: Floats,
    breaks: tuple[Floats, ...],
    v: Floats,
    widest: Floats,
) -> Floats:
    """Sorted edges of the in-plane segments in the lobe's frame, (S, V, E), without angles outside the lobe."""
    found = [-widest, widest]
    inside_radius = np.sqrt(1 - (v / n_in[:, None]) ** 2)
    outside_radius = np.sqrt(1 - v**2)
    alpha = face_angle[:, None]
    for medium in breaks:
        ratio = np.clip(medium / n_guide, 0, 1)[:, None]
        cos = np.sqrt(1 - ratio**2) / inside_radius
        if np.all(cos >= 1):
            continue
        incidence = np.arccos(np.clip(cos, -1, 1))
        first, second = incidence - alpha, np.pi - 3 * alpha - incidence
        for inner in (first, second, -first, -second):
            sine = n_in[:, None] * inside_radius * np.sin(inner) / outside_radius
            local = np.arcsin(np.clip(sine, -1, 1)) - tilt[:, None]
            edge = np.clip(np.where((np.abs(sine) < 1) & (cos < 1), local, widest), -widest, widest)
            if np.any(np.abs(edge) < widest - 1e-9):
                found.append(edge)
    return np.sort(np.stack(np.broadcast_arrays(*found), axis=-1), axis=-1)
