"""Where a ray inside a tip of revolution meets its surface next.

The axis is z, the base plane z = 0; everything is in metres and broadcasts over samples and rays.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.light import Vector

__all__ = ["BASE", "END", "NOTHING", "SIDE", "Meeting", "Shape"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

NOTHING, SIDE, END, BASE = 0, 1, 2, 3
NEAR = 1e-7
"""Distance, in radii, within which a ray has only just left the surface it starts on."""


@dataclass(frozen=True)
class Meeting:
    """What a ray meets first: kind, distance [m], outward normal there."""

    kind: Ints
    distance: Floats
    normal: Vector


@dataclass(frozen=True)
class Shape:
    """One kind of tip over samples.

    kind    "cone", "dome" or "truncated"
    radius  of the base [m], (S, 1)
    angle   of the side from the base [rad], (S, 1)
    end     radius of the flat end [m], (S, 1)
    """

    kind: str
    radius: Floats
    angle: Floats
    end: Floats

    @property
    def height(self) -> Floats:
        """Of the tip above the base [m], (S, 1)."""
        if self.kind == "dome":
            return self.radius
        narrowing = self.radius - self.end if self.kind == "truncated" else self.radius
        return np.asarray(np.maximum(narrowing, 0.0) * np.tan(self.angle))

    def meet(self, point: Vector, ray: Vector) -> Meeting:
        """The first meeting of rays that start inside or on the surface."""
        side = self._side(point, ray)
        with np.errstate(divide="ignore", invalid="ignore"):
            base = np.where(ray.z < 0, -point.z / ray.z, np.inf)
            end = np.where(ray.z > 0, (self.height - point.z) / ray.z, np.inf)
        if self.kind != "truncated":
            end = np.full_like(end, np.inf)
        near = NEAR * self.radius
        distances = [np.where(found > near, found, np.inf) for found in (side, end, base)]
        stack = np.stack(np.broadcast_arrays(*distances))
        first = np.argmin(stack, axis=0)
        distance = np.min(stack, axis=0)
        kind = np.where(np.isfinite(distance), first + 1, NOTHING)
        distance = np.where(np.isfinite(distance), distance, 0.0)
        there = _along(point, ray, distance)
        return Meeting(kind, distance, self._normal(there, kind))

    def _side(self, point: Vector, ray: Vector) -> Floats:
        """Distance to the side, infinite where it is not met."""
        if self.kind == "dome":
            along = point.dot(ray)
            rest = point.dot(point) - self.radius**2
            root = -along + np.sqrt(np.maximum(along**2 - rest, 0.0))
            return np.asarray(np.where(point.z + root * ray.z > 0, root, np.inf))
        slope = 1 / np.square(np.tan(self.angle))
        left = self.radius * np.tan(self.angle) - point.z
        a = ray.x**2 + ray.y**2 - slope * ray.z**2
        b = point.x * ray.x + point.y * ray.y + slope * left * ray.z
        c = point.x**2 + point.y**2 - slope * left**2
        root = np.sqrt(np.maximum(b**2 - a * c, 0.0))
        with np.errstate(divide="ignore", invalid="ignore"):
            candidates = [(-b - root) / a, (-b + root) / a, -c / (2 * b)]
        best = np.full(np.broadcast_shapes(a.shape, b.shape, c.shape), np.inf)
        for at, distance in enumerate(candidates):
            # The third is the root of a ray along a side line, where the equation is linear.
            usable = (np.abs(a) > 1e-14) if at < 2 else (np.abs(a) <= 1e-14)
            z = point.z + distance * ray.z
            good = usable & (distance > NEAR * self.radius) & (z >= 0) & (z <= self.height + 1e-12) & (b**2 >= a * c)
            best = np.where(good & (distance < best), distance, best)
        return np.asarray(best)

    def _normal(self, there: Vector, kind: Ints) -> Vector:
        if self.kind == "dome":
            outward = Vector(there.x / self.radius, there.y / self.radius, there.z / self.radius)
        else:
            across = np.maximum(np.hypot(there.x, there.y), 1e-15)
            sine, cosine = np.sin(self.angle), np.cos(self.angle)
            outward = Vector(sine * there.x / across, sine * there.y / across, np.broadcast_to(cosine, across.shape))
        return Vector(
            np.where(kind == SIDE, outward.x, 0.0),
            np.where(kind == SIDE, outward.y, 0.0),
            np.where(kind == SIDE, outward.z, np.where(kind == BASE, -1.0, 1.0)),
        )


def _along(point: Vector, ray: Vector, distance: Floats) -> Vector:
    return Vector(point.x + distance * ray.x, point.y + distance * ray.y, point.z + distance * ray.z)
