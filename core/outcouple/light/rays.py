"""Directions as component arrays, and the turn of the plane of incidence along a way."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

__all__ = ["Vector", "turn_between"]

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Vector:
    """Components of a direction, each broadcastable."""

    x: Floats
    y: Floats
    z: Floats

    def dot(self, other: Vector) -> Floats:
        """Scalar product."""
        return self.x * other.x + self.y * other.y + self.z * other.z

    def cross(self, other: Vector) -> Vector:
        """Vector product."""
        return Vector(
            self.y * other.z - self.z * other.y,
            self.z * other.x - self.x * other.z,
            self.x * other.y - self.y * other.x,
        )

    def unit(self) -> Vector:
        """The direction, or y where the length is zero."""
        length = np.sqrt(self.dot(self))
        safe = np.where(length > 1e-12, length, 1.0)
        small = length <= 1e-12
        return Vector(
            np.where(small, 0.0, self.x / safe),
            np.where(small, 1.0, self.y / safe),
            np.where(small, 0.0, self.z / safe),
        )

    def across(self, ray: Vector) -> Vector:
        """The part of this direction across a ray, as a unit vector."""
        along = self.dot(ray)
        return Vector(self.x - along * ray.x, self.y - along * ray.y, self.z - along * ray.z).unit()

    def mirrored(self, normal: Vector) -> Vector:
        """The direction after reflection at a plane."""
        twice = 2 * self.dot(normal)
        return Vector(self.x - twice * normal.x, self.y - twice * normal.y, self.z - twice * normal.z)


def turn_between(before: Vector, after: Vector, ray: Vector) -> Floats:
    """Angle from one s-vector to the next, right-handed about the ray [rad]."""
    return np.arctan2(before.cross(after).dot(ray), before.dot(after))
