"""A beam about one axis, as nodes over its lobe: for guides that meet their faces the same way with every ray."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Setting
from outcouple.light import Vector, lobe_density
from outcouple.optics import gauss_legendre

__all__ = ["beam_directions"]

Floats = NDArray[np.float64]

POLAR, AZIMUTH = 12, 8
"""Nodes over the angle from the beam's axis and around it (half; the other half mirrors it)."""


def beam_directions(setting: Setting, n_guide: Floats, bonded: bool) -> tuple[Vector, Floats, Floats]:
    """Directions inside the guide about z, cosine from the axis outside, and the share of the lobe of each, (S, K).

    The beam enters a face square to its axis; ``bonded`` leaves out refraction. Half the azimuth stands for all of it.
    """
    p = setting.p
    half = setting.spread(p.emitter.half_angle)[:, None, None]
    u, wu = gauss_legendre(POLAR)
    v, wv = gauss_legendre(AZIMUTH)
    polar = half * (u[:, None] + 1) / 2
    azimuth = np.pi * (v[None, :] + 1) / 2
    cos = np.cos(polar)
    density = lobe_density(cos, half_angle=half, exponent=setting.spread(p.emitter.exponent)[:, None, None])
    weight = density * np.sin(polar) * half * (wu[:, None] / 2) * np.pi * wv[None, :]
    weight = weight / np.sum(weight, axis=(1, 2), keepdims=True)
    n_in = 1.0 if bonded else n_guide[:, None, None]
    x, y = np.sin(polar) * np.cos(azimuth) / n_in, np.sin(polar) * np.sin(azimuth) / n_in
    z = np.sqrt(1 - x**2 - y**2)
    flat = [np.broadcast_to(array, weight.shape).reshape(setting.samples, -1) for array in (x, y, z, cos, weight)]
    return Vector(*flat[:3]), flat[3], flat[4]
