"""Cross-section of a prism switch, to scale."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Outline, RayPath, Setting, View
from outcouple_plugins.prism_switch.light import apex_height

__all__ = ["cross_section"]

Floats = NDArray[np.float64]

RAYS = 7


def cross_section(setting: Setting) -> View:
    """The prism with its discs and a fan of rays across the lobe, traced in the plane."""
    p = setting.p
    one = {
        name: float(setting.spread(value)[0])
        for name, value in (
            ("half", p.prism.base / 2),
            ("alpha", p.prism.face_angle),
            ("stem", p.prism.stem),
            ("xs", p.layout.emitter_position),
            ("rs", p.layout.emitter_radius),
            ("tilt", p.layout.emitter_tilt),
            ("xd", p.layout.detector_position),
            ("rd", p.layout.detector_radius),
            ("lobe", p.emitter.half_angle),
        )
    }
    apex = float(apex_height(setting)[0])
    guide = np.array(
        [
            [-one["half"], 0.0],
            [one["half"], 0.0],
            [one["half"], one["stem"]],
            [0.0, apex],
            [-one["half"], one["stem"]],
        ]
    )
    thick = 0.04 * one["half"]
    outlines = (
        Outline("guide", "prism", guide),
        Outline("emitter", "emitter", _bar(one["xs"], one["rs"], thick)),
        Outline("detector", "detector", _bar(one["xd"], one["rd"], thick)),
    )
    n = 1.0 if p.layout.coupling == "bonded" else float(setting.index(p.prism.material)[0])
    rays = []
    for angle in one["tilt"] + one["lobe"] * np.linspace(-0.95, 0.95, RAYS):
        inside = np.arcsin(np.clip(np.sin(angle) / n, -1, 1))
        rays.append(_trace(one["xs"], inside, guide, n))
    return View("cross-section", outlines, tuple(rays))


def _bar(centre: float, radius: float, thick: float) -> Floats:
    return np.array(
        [[centre - radius, -thick], [centre + radius, -thick], [centre + radius, 0.0], [centre - radius, 0.0]]
    )


def _trace(x: float, angle: float, guide: Floats, n: float) -> RayPath:
    """Follow one ray around the outline until it meets the base or four faces."""
    sides = {2: 1, 3: 0}
    point, step = np.array([x, 0.0]), np.array([np.sin(angle), np.cos(angle)])
    points, columns, angles = [point], [-1], [0.0]
    for _ in range(4):
        side, distance = _next_side(point, step, guide)
        if side < 0:
            break
        point = point + distance * step
        edge = guide[(side + 1) % 5] - guide[side]
        normal = np.array([edge[1], -edge[0]]) / np.hypot(*edge)
        incidence = float(np.arccos(np.clip(step @ normal, -1, 1)))
        points.append(point)
        columns.append(sides.get(side, -1))
        angles.append(incidence)
        if side not in sides:
            break
        step = step - 2 * (step @ normal) * normal
    return RayPath(np.array(points), tuple(columns), tuple(angles))


def _next_side(point: Floats, step: Floats, guide: Floats) -> tuple[int, float]:
    best, found = np.inf, -1
    for side in range(5):
        a, b = guide[side], guide[(side + 1) % 5]
        edge = b - a
        cross = step[0] * edge[1] - step[1] * edge[0]
        if abs(cross) < 1e-15:
            continue
        gap = a - point
        t = (gap[0] * edge[1] - gap[1] * edge[0]) / cross
        u = (gap[0] * step[1] - gap[1] * step[0]) / cross
        if t > 1e-9 and -1e-9 <= u <= 1 + 1e-9 and t < best:
            best, found = float(t), side
    return found, best
