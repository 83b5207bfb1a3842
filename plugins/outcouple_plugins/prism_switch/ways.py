"""Ways of light through a two-face prism, traced exactly for a direction and a slice of the emitter.

Cross-section in x-z, the prism long in y. The base plane is z = 0, the apex lies at x = 0, z = H; the emitter face
rises from (-w/2, H - (w/2) tan a) to the apex, the detector face mirrors it. Everything a ray meets is linear in its
start x0, so the part of a slice that follows a way and lands on the detector is one interval.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.light import Vector, turn_between

__all__ = ["Interval", "WayTrace", "Wedge", "trace_way"]

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Interval:
    """Range of x0; empty where ``high`` is not above ``low``."""

    low: Floats
    high: Floats

    @property
    def length(self) -> Floats:
        """Length, zero where empty."""
        return np.maximum(self.high - self.low, 0.0)

    def where_positive(self, slope: Floats, offset: Floats) -> Interval:
        """The part in which slope x0 + offset >= 0."""
        with np.errstate(divide="ignore", invalid="ignore"):
            root = np.where(slope != 0, -offset / slope, 0.0)
        low = np.where(slope > 0, np.maximum(self.low, root), self.low)
        high = np.where(slope < 0, np.minimum(self.high, root), self.high)
        high = np.where((slope == 0) & (offset < 0), low, high)
        return Interval(low, high)

    def where_below(self, square: Floats, slope: Floats, offset: Floats) -> Interval:
        """The part in which square x0^2 + slope x0 + offset <= 0, square > 0."""
        discriminant = slope**2 - 4 * square * offset
        half = np.sqrt(np.maximum(discriminant, 0.0)) / (2 * square)
        middle = -slope / (2 * square)
        high = np.minimum(self.high, np.where(discriminant > 0, middle + half, self.low))
        return Interval(np.maximum(self.low, middle - half), high)


@dataclass(frozen=True)
class Wedge:
    """Half-width, height of the apex above the base, and face angle from the base; each (S, 1, 1)."""

    half_width: Floats
    apex: Floats
    face_angle: Floats

    def normal(self, side: int) -> Vector:
        """Outward normal of the face on one side (-1 emitter, +1 detector)."""
        zero = np.zeros_like(self.face_angle)
        return Vector(side * np.sin(self.face_angle), zero, np.cos(self.face_angle))


@dataclass(frozen=True)
class Line:
    """A point that moves linearly with x0: x = ax x0 + bx and so on, after a path of at x0 + bt metres."""

    ax: Floats
    bx: Floats
    az: Floats
    bz: Floats
    at: Floats
    bt: Floats

    def onward(self, direction: Vector, a: Floats, b: Floats) -> Line:
        """The point a x0 + b metres further along a direction."""
        return Line(
            self.ax + a * direction.x,
            self.bx + b * direction.x,
            self.az + a * direction.z,
            self.bz + b * direction.z,
            self.at + a,
            self.bt + b,
        )


@dataclass(frozen=True)
class WayTrace:
    """One way: incidences, s-vectors, and how much of each slice follows it.

    follows   length of the slice of the emitter that goes this way
    lands     length of the slice that also lands on the detector
    middle    path length at the middle of ``lands`` (of ``follows`` where nothing lands)
    cosines   cosine of incidence at each hit
    turns     turn of the plane of incidence before each hit, the first from the y axis' frame given at the start
    exit      cosine of incidence on the base on the way out
    """

    follows: Floats
    lands: Floats
    middle: Floats
    cosines: tuple[Floats, ...]
    turns: tuple[Floats, ...]
    exit: Floats


def _to_face(line: Line, direction: Vector, wedge: Wedge, side: int) -> tuple[Line, Floats]:
    """The point where a ray meets a face's plane, and the cosine of incidence."""
    normal = wedge.normal(side)
    cos = direction.dot(normal)
    safe = np.where(cos > 1e-9, cos, 1.0)
    sin_a, cos_a = normal.x * side, normal.z
    a = -(line.ax * side * sin_a + line.az * cos_a) / safe
    b = (wedge.apex * cos_a - line.bx * side * sin_a - line.bz * cos_a) / safe
    return line.onward(direction, a, b), cos


def _on_face(interval: Interval, line: Line, wedge: Wedge, side: int, cos: Floats) -> Interval:
    """The part of the interval that meets the face between apex and its lower edge, from inside."""
    inside = interval.where_positive(side * line.ax, side * line.bx)
    inside = inside.where_positive(-side * line.ax, wedge.half_width - side * line.bx)
    return Interval(inside.low, np.where(cos > 1e-9, inside.high, inside.low))


def trace_way(
    sides: tuple[int, ...],
    direction: Vector,
    s_start: Vector,
    slices: Interval,
    y0: Floats,
    wedge: Wedge,
    *,
    detector_x: Floats,
    detector_radius: Floats,
) -> WayTrace:
    """Follow the rays of one direction that meet the faces in the order ``sides`` and then the base.

    direction  inside the guide, components (S, K, 1)
    s_start    s-vector of the frame in which the light starts
    slices     x0 of the emitter's slices, (S, 1, Y); y0 their y, (S, 1, Y)
    """
    one, zero = np.ones_like(direction.x), np.zeros_like(direction.x)
    line = Line(one, zero, zero, zero, zero, zero)
    part, ray, s_before = slices, direction, s_start
    cosines, turns = [], []
    for side in sides:
        line, cos = _to_face(line, ray, wedge, side)
        part = _on_face(part, line, wedge, side, cos)
        normal = wedge.normal(side)
        s_here = normal.cross(ray).unit()
        turns.append(turn_between(s_before, s_here, ray))
        cosines.append(np.clip(cos, 0.0, 1.0))
        ray, s_before = ray.mirrored(normal), s_here
    down = np.where(ray.z < -1e-9, -ray.z, 1.0)
    line = line.onward(ray, line.az / down, line.bz / down)
    part = Interval(part.low, np.where(ray.z < -1e-9, part.high, part.low))
    part = part.where_positive(line.ax, wedge.half_width + line.bx)
    part = part.where_positive(-line.ax, wedge.half_width - line.bx)
    ay, by = direction.y * line.at, y0 + direction.y * line.bt
    dx = line.bx - detector_x
    landing = part.where_below(line.ax**2 + ay**2, 2 * (line.ax * dx + ay * by), dx**2 + by**2 - detector_radius**2)
    use = np.where(landing.length > 0, (landing.low + landing.high) / 2, (part.low + part.high) / 2)
    return WayTrace(
        part.length,
        landing.length,
        np.abs(line.at * use + line.bt),
        tuple(cosines),
        tuple(turns),
        np.clip(-ray.z, 0.0, 1.0),
    )
