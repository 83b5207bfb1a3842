"""What an emitter sends out: a generalised Lambertian lobe, cut at a half-angle."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = ["cone_share", "lobe_density"]

Floats = NDArray[np.float64]


def lobe_density(cos_angle: ArrayLike, *, half_angle: ArrayLike, exponent: ArrayLike) -> Floats:
    """Share of the lobe's power per solid angle [1/sr] at an angle from the axis.

    (m + 1) cos^m / (2 pi (1 - cos^(m+1) half_angle)) inside the cut and zero outside; integrates to 1 over the cone.
    Valid for half-angles in (0, 90 deg] and m >= 0. Reference: definition of the generalised Lambertian lobe,
    I0/Phi = (m + 1)/(2 pi) for the uncut one.

    >>> float(lobe_density(1.0, half_angle=np.pi / 2, exponent=1.0) * np.pi)
    1.0
    """
    cos = np.asarray(cos_angle, dtype=float)
    order = np.asarray(exponent, dtype=float)
    edge = np.cos(np.asarray(half_angle, dtype=float))
    norm = (order + 1) / (2 * np.pi * (1 - edge ** (order + 1)))
    inside = cos >= edge - 1e-12
    return np.where(inside, norm * np.clip(cos, 0, None) ** order, 0.0)


def cone_share(angle: ArrayLike, *, half_angle: ArrayLike, exponent: ArrayLike) -> Floats:
    """Share of the lobe's power within ``angle`` [rad] of its axis.

    (1 - cos^(m+1) angle) / (1 - cos^(m+1) half_angle), at most 1.

    >>> float(cone_share(np.radians(30), half_angle=np.pi / 2, exponent=1.0))
    0.25
    """
    order = np.asarray(exponent, dtype=float) + 1
    inner = 1 - np.cos(np.asarray(angle, dtype=float)) ** order
    outer = 1 - np.cos(np.asarray(half_angle, dtype=float)) ** order
    return np.asarray(np.minimum(inner / outer, 1.0))
