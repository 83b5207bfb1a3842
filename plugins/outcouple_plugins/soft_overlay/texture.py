"""How much of a textured skin touches the plate at a pressure, and what lies between elsewhere."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import Cover, Film, Patch
from outcouple.contact.mechanics import bump_share, persson_share, plane_strain_modulus, pull_off_force

__all__ = ["bump_radius", "contact_share", "pull_off_pressure", "rms_slope", "skin_cover"]

Floats = NDArray[np.float64]
Number = float | Floats


def rms_slope(height: Number, pitch: Number) -> Floats:
    """Root-mean-square slope of the relief h/4 (cos kx + cos ky), h valley to peak: pi h / (2 pitch).

    >>> round(float(rms_slope(8e-6, 25e-6)), 4)
    0.5027
    """
    return np.asarray(np.pi * np.asarray(height) / (2 * np.asarray(pitch)))


def bump_radius(height: Number, pitch: Number) -> Floats:
    """Radius of curvature of the same relief's peaks [m]: pitch^2 / (pi^2 h)."""
    return np.asarray(np.asarray(pitch) ** 2 / (np.pi**2 * np.asarray(height)))


def contact_share(overlay: Any, pressure: Number) -> Floats:
    """Share of the skin that touches at a pressure [Pa]; broadcasts.

    Random textures follow Persson, lattices Hertz' bumps; the plate is rigid against the skin.
    """
    modulus = plane_strain_modulus(modulus=overlay.modulus, poisson=overlay.poisson)
    if overlay.texture == "random":
        return persson_share(pressure=pressure, modulus=modulus, slope=rms_slope(overlay.height, overlay.pitch))
    radius = bump_radius(overlay.height, overlay.pitch)
    return bump_share(pressure=pressure, modulus=modulus, radius=radius, pitch=overlay.pitch)


def pull_off_pressure(overlay: Any) -> Floats:
    """Pressure by which adhesion helps to hold the skin while it is released [Pa], (S,).

    Pull-off force of every peak over the area it stands for, 3/2 pi w R / pitch^2.
    """
    force = pull_off_force(radius=bump_radius(overlay.height, overlay.pitch), adhesion=overlay.adhesion)
    return np.asarray(force / overlay.pitch**2)


def skin_cover(overlay: Any, share: Floats) -> Cover:
    """The skin on the plate: what touches, and air gaps elsewhere.

    The relief h/4 (cos kx + cos ky) has an area of 2 / (pi h) per gap just above its peaks: gaps spread evenly from
    zero to pi h / 2 keep that, which is what tunnels; those far from the plate do not matter. They close in proportion
    to what does not touch.
    """
    mean = np.pi / 4 * np.asarray(overlay.height) * np.maximum(1 - share, 1e-3)
    gap = Film("air", mean, "uniform", mean / np.sqrt(3))
    return Cover(
        (
            Patch(share, overlay.material, albedo=overlay.albedo),
            Patch(1 - share, overlay.material, (gap,), albedo=overlay.albedo),
        )
    )
