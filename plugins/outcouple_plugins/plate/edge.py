"""How light passes the edge of a plate: from an emitter in front of it, and out to a detector behind it.

A direction inside the plate is told by its azimuth (in the plane of the plate, from the edge's normal) and its
elevation (out of that plane). The faces sort polarisation by their own normal; the edge sorts it by another: both are
followed.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.light import lobe_density

__all__ = ["Port", "edge_transmittance", "overlap_share"]

Floats = NDArray[np.float64]


def overlap_share(length: Floats, other: Floats, shift: Floats) -> Floats:
    """Share of a segment of ``length`` that a segment of length ``other`` covers when the middles lie ``shift`` apart.

    >>> float(overlap_share(np.array(2.0), np.array(2.0), np.array(0.5)))
    0.75
    """
    low = np.maximum(-length / 2, shift - other / 2)
    high = np.minimum(length / 2, shift + other / 2)
    return np.asarray(np.maximum(high - low, 0.0) / length)


@dataclass(frozen=True)
class Port:
    """One emitter or detector at an edge; every array is (S,).

    index       of the plate
    thickness   of the plate [m]
    height      of the part across the thickness [m]; offset of its middle; gap to the edge [m]
    half_angle  of its lobe or acceptance, in the medium it stands in [rad]
    bonded      True: index-matched to the edge; else behind air
    exponent    m of its lobe cos^m; detectors take all within the half-angle alike
    """

    index: Floats
    thickness: Floats
    height: Floats
    offset: Floats
    gap: Floats
    half_angle: Floats
    bonded: bool
    exponent: Floats

    @property
    def limit(self) -> Floats:
        """Sine of the largest angle from the edge's normal inside the plate, (S,)."""
        sine = np.sin(np.minimum(self.half_angle, np.pi / 2))
        return np.asarray(sine if self.bonded else sine / self.index)

    @property
    def highest(self) -> Floats:
        """Largest elevation [rad], (S,)."""
        return np.asarray(np.arcsin(np.minimum(self.limit, 1.0)))

    def widest(self, elevation: Floats) -> Floats:
        """Largest azimuth at an elevation [rad]; both (S, ...)."""
        limit = _over(self.limit, elevation)
        return np.asarray(np.arccos(np.clip(np.sqrt(np.maximum(1 - limit**2, 0)) / np.cos(elevation), 0, 1)))

    def density(self, azimuth: Floats, elevation: Floats) -> tuple[Floats, Floats, Floats]:
        """Power inside the plate per azimuth and elevation [1/rad2] of an emitter of power 1, (S, ...) each.

        s and p by the faces, and what the edge reflects. T lobe(air angle) n^2 cos(inside)/cos(air) cos(elevation): for
        a Lambertian emitter in air n^2/pi T cos^2(elevation) cos(azimuth). The share of the emitter's height whose rays
        miss the edge is left out. Valid for emitters small against the plate; the sideways shift within the gap is left
        out.
        """
        ray = self._ray(azimuth, elevation)
        lobe = lobe_density(
            ray.outside, half_angle=_over(self.half_angle, azimuth), exponent=_over(self.exponent, azimuth)
        )
        squeeze = 1.0 if self.bonded else _over(self.index, azimuth) ** 2 * ray.inside / np.maximum(ray.outside, 1e-9)
        power = np.where(ray.valid, lobe * squeeze * np.cos(elevation), 0.0)
        height = _over(self.height, azimuth)
        power = power * self._fill(height, _over(self.thickness, azimuth), ray.drift, azimuth)
        s, p = ray.across * ray.Ts + (1 - ray.across) * ray.Tp, (1 - ray.across) * ray.Ts + ray.across * ray.Tp
        return power * s / 2, power * p / 2, power * (1 - (s + p) / 2)

    def acceptance(self, azimuth: Floats, elevation: Floats) -> tuple[Floats, Floats]:
        """Share of the light arriving over the edge's whole height that a detector gets, s and p by the faces."""
        ray = self._ray(azimuth, elevation)
        taken = ray.valid & (ray.outside >= np.cos(_over(self.half_angle, azimuth)) - 1e-12)
        thickness = _over(self.thickness, azimuth)
        share = np.where(taken, self._fill(thickness, _over(self.height, azimuth), ray.drift, azimuth), 0.0)
        s, p = ray.across * ray.Ts + (1 - ray.across) * ray.Tp, (1 - ray.across) * ray.Ts + ray.across * ray.Tp
        return share * s, share * p

    def _fill(self, length: Floats, other: Floats, drift: Floats, like: Floats) -> Floats:
        """Share of a height that meets the other across the gap, mean over rays that rise and fall."""
        shift, offset = _over(self.gap, like) * drift, _over(self.offset, like)
        up, down = overlap_share(length, other, offset + shift), overlap_share(length, other, offset - shift)
        return np.asarray((up + down) / 2)

    def _ray(self, azimuth: Floats, elevation: Floats) -> _Ray:
        return _ray(_over(self.index, azimuth), azimuth, elevation, self.bonded)


@dataclass(frozen=True)
class _Ray:
    """One direction at an edge.

    inside, outside  cosines from the edge's normal
    drift            rise per advance outside
    across           cos^2 of the angle between the s-vectors of the edge and of the faces
    """

    inside: Floats
    outside: Floats
    valid: NDArray[np.bool_]
    drift: Floats
    across: Floats
    Ts: Floats
    Tp: Floats


def _ray(index: Floats, azimuth: Floats, elevation: Floats, bonded: bool) -> _Ray:
    inside = np.cos(elevation) * np.cos(azimuth)
    rise = np.sin(elevation)
    sine2 = np.maximum(1 - inside**2, 1e-300)
    across = np.clip(np.cos(azimuth) ** 2 * rise**2 / sine2, 0, 1)
    if bonded:
        one = np.ones_like(inside)
        return _Ray(inside, inside, inside > 0, rise / np.maximum(inside, 1e-9), across, one, one)
    left = 1 - index**2 * sine2
    valid = (left > 0) & (inside > 0)
    outside = np.sqrt(np.maximum(left, 0.0))
    drift = index * rise / np.maximum(outside, 1e-9)
    Ts, Tp = edge_transmittance(index, np.maximum(inside, 1e-12), outside)
    return _Ray(inside, outside, valid, drift, across, Ts, Tp)


def edge_transmittance(index: Floats, inside: Floats, outside: Floats) -> tuple[Floats, Floats]:
    """Fresnel's transmittance between air and a clear plate from both cosines at the edge, s and p by the edge.

    The plane-wave room finds the second cosine anew; here both are at hand, for every ray of every chord.

    >>> [round(float(T), 6) for T in edge_transmittance(np.array(1.5), np.array(1.0), np.array(1.0))]
    [0.96, 0.96]
    """
    s = (outside - index * inside) / (outside + index * inside)
    p = (index * outside - inside) / (index * outside + inside)
    return np.asarray(1 - s * s), np.asarray(1 - p * p)


def _over(value: Floats, like: Floats) -> Floats:
    """(S,) against (S, ...)."""
    return np.asarray(value).reshape(-1, *([1] * (like.ndim - 1)))
