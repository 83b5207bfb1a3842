"""Cross-section of a round tip, to scale."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Outline, RayPath, Setting, View
from outcouple.light import Vector
from outcouple_plugins.round_tip.light import MOST_HITS, columns_of, shape_of
from outcouple_plugins.round_tip.shapes import BASE, END, NOTHING, Shape

__all__ = ["cross_section"]

Floats = NDArray[np.float64]

RAYS = 7


def cross_section(setting: Setting) -> View:
    """The tip with its discs and a fan of meridional rays across the lobe."""
    p = setting.p
    shape = shape_of(setting)
    guide = _outline(shape)
    thick = 0.03 * float(shape.radius[0, 0])
    layout = {
        name: float(setting.spread(getattr(p.layout, name))[0])
        for name in ("emitter_position", "emitter_radius", "emitter_tilt", "detector_position", "detector_radius")
    }
    outlines = (
        Outline("guide", "tip", guide),
        Outline("emitter", "emitter", _bar(layout["emitter_position"], layout["emitter_radius"], thick)),
        Outline("detector", "detector", _bar(layout["detector_position"], layout["detector_radius"], thick)),
    )
    n = 1.0 if p.layout.coupling == "bonded" else float(setting.index(p.tip.material)[0])
    lobe = float(setting.spread(p.emitter.half_angle)[0])
    rays = tuple(
        _trace(shape, layout["emitter_position"], float(np.arcsin(np.clip(np.sin(angle) / n, -1, 1))))
        for angle in layout["emitter_tilt"] + lobe * np.linspace(-0.95, 0.95, RAYS)
    )
    return View("cross-section", outlines, rays)


def _outline(shape: Shape) -> Floats:
    radius, height, end = (float(np.ravel(v)[0]) for v in (shape.radius, shape.height, shape.end))
    if shape.kind == "dome":
        turn = np.linspace(0, np.pi, 91)
        return np.stack([radius * np.cos(turn), radius * np.sin(turn)], axis=1)
    top = [[end, height], [-end, height]] if shape.kind == "truncated" else [[0.0, height]]
    return np.array([[-radius, 0.0], [radius, 0.0], *top])


def _bar(centre: float, radius: float, thick: float) -> Floats:
    return np.array(
        [[centre - radius, -thick], [centre + radius, -thick], [centre + radius, 0.0], [centre - radius, 0.0]]
    )


def _trace(shape: Shape, x: float, angle: float) -> RayPath:
    """One ray in the plane of the drawing, until it meets the base."""
    one = Shape(shape.kind, shape.radius[:1], shape.angle[:1], shape.end[:1])
    per_hit = len(columns_of(shape.kind)) // MOST_HITS
    point = _vector(x, 0.0, 0.0)
    ray = _vector(np.sin(angle), 0.0, np.cos(angle))
    points, columns, angles = [(x, 0.0)], [-1], [0.0]
    for hit in range(MOST_HITS + 1):
        met = one.meet(point, ray)
        kind = int(met.kind[0, 0])
        if kind == NOTHING:
            break
        step = met.distance
        point = Vector(point.x + step * ray.x, point.y + step * ray.y, point.z + step * ray.z)
        points.append((float(point.x[0, 0]), float(point.z[0, 0])))
        angles.append(float(np.arccos(np.clip(ray.dot(met.normal), 0, 1))[0, 0]))
        last = kind == BASE or hit == MOST_HITS
        columns.append(-1 if last else hit * per_hit + (kind == END))
        if last:
            break
        ray = ray.mirrored(met.normal)
    return RayPath(np.array(points), tuple(int(c) for c in columns), tuple(angles))


def _vector(x: float, y: float, z: float) -> Vector:
    return Vector(*(np.full((1, 1), value) for value in (x, y, z)))
