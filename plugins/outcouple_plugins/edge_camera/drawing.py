"""Plan and cross-section of a camera-read plate, to scale."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Outline, RayPath, Setting, View
from outcouple_plugins.edge_camera.light import FACES, SPOT
from outcouple_plugins.plate.parameters import edges_of
from outcouple_plugins.plate.ways import NORMALS, places_of

__all__ = ["plan", "section"]

Floats = NDArray[np.float64]

MOST_BOXES = 48
RISES = (12.0, 22.0, 34.0)
"""Drawn elevations [deg]."""


def plan(setting: Setting) -> View:
    """The plate from above: emitters, objects, and straight ways from emitters to the first object."""
    width, height = _sides(setting)
    objects = _objects(setting)
    discs = [Outline("object", name, _circle(*disc)) for name, disc in objects.items()]
    x, y = next(((x, y) for _, x, y in objects.values()), (0.0, 0.0))
    boxes, starts = _emitters(setting, width, height)
    eye = float(setting.spread(setting.p.lens.pupil)[0])
    margin = min(float(setting.spread(setting.p.field.margin)[0]), 0.49 * min(width, height))
    outlines = (
        Outline("guide", "plate", _box(0, 0, width, height)),
        Outline("axis", "field that must see objects", _box(0, 0, width - 2 * margin, height - 2 * margin)),
        *boxes,
        *discs,
        Outline("detector", "camera behind the plate", _circle(max(eye, width / 60), *_eye(setting))),
    )
    limit = np.arcsin(min(1.0, 1 / float(setting.index(setting.p.plate.material)[0])))
    rays = []
    for at, normal in starts:
        way = np.array([x, y]) - at
        length = float(np.hypot(*way))
        if length > 0 and way @ normal / length > np.cos(limit):
            rays.append(RayPath(np.array([at, [x, y]]), (-1, SPOT), (0.0, 0.0)))
    return View("plan", outlines, tuple(rays))


def section(setting: Setting) -> View:
    """A stretch of plate under the first object: guided rays, and the light sent back through the back face."""
    p = setting.p
    thickness = float(setting.spread(p.plate.thickness)[0])
    disc = next(iter(_objects(setting).items()), ("object", (10e-3, 0.0, 0.0)))
    name, size = disc[0], disc[1][0]
    span = max(12 * thickness, 2.5 * size)
    tall = min(size, 4 * thickness)
    outlines = (
        Outline("guide", "plate", _box(0, 0, span, thickness)),
        Outline("object", name, _box(0, thickness / 2 + tall / 2, size, tall)),
        Outline("emitter", "emitter", _box(-span / 2 - 0.2 * thickness, 0, 0.3 * thickness, 0.7 * thickness)),
    )
    guided = [_guided(rise, thickness, span, size) for rise in RISES]
    return View("cross-section", outlines, (*guided, *_sent_back(setting, thickness, size)))


def _guided(rise: float, thickness: float, span: float, size: float) -> RayPath:
    """A ray from the edge, up at ``rise`` degrees, until it meets the object or the far end."""
    slope = np.tan(np.radians(rise))
    incidence = np.pi / 2 - np.radians(rise)
    points, columns, angles = [np.array([-span / 2, 0.0])], [-1], [0.0]
    x, y, up = -span / 2, 0.0, 1.0
    while x < span / 2:
        step = min((thickness / 2 - up * y) / slope, span / 2 - x)
        x, y = x + step, y + up * slope * step
        points.append(np.array([x, y]))
        touched = up > 0 and abs(x) < size / 2
        end = x >= span / 2 - 1e-12
        columns.append(-1 if end else SPOT if touched else FACES.index("front" if up > 0 else "back"))
        angles.append(0.0 if end else float(incidence))
        if touched:
            columns[-1] = -2 - SPOT
            break
        up = -up
    return RayPath(np.array(points), tuple(columns), tuple(angles))


def _sent_back(setting: Setting, thickness: float, size: float) -> list[RayPath]:
    """Diffuse light from the touched place: what leaves by the back, and what is kept."""
    index = float(setting.index(setting.p.plate.material)[0])
    found = []
    for degrees in (-60, -30, -15, 0, 15, 30, 60):
        angle = np.radians(degrees)
        top = np.array([0.0, thickness / 2])
        foot = top + thickness * np.array([np.tan(angle), -1.0])
        sine = index * np.sin(angle)
        if abs(sine) < 1:
            way = np.array([sine, -np.sqrt(1 - sine**2)])
            column = -2 - FACES.index("back")
        else:
            way = np.array([np.sin(angle), np.cos(angle)])
            column = FACES.index("back")
        end = foot + way * (2.5 * thickness if abs(sine) < 1 else thickness / np.cos(angle))
        found.append(RayPath(np.array([top, foot, end]), (SPOT, column, -1), (0.0, float(abs(angle)), 0.0)))
    return found


def _sides(setting: Setting) -> tuple[float, float]:
    plate = setting.p.plate
    return float(setting.spread(plate.width)[0]), float(setting.spread(plate.height)[0])


def _eye(setting: Setting) -> tuple[float, float]:
    lens = setting.p.lens
    return float(setting.spread(lens.x)[0]), float(setting.spread(lens.y)[0])


def _objects(setting: Setting) -> dict[str, tuple[float, float, float]]:
    """Diameter, x and y of the objects of all states; of several at one place the first."""
    found: dict[str, tuple[float, float, float]] = {}
    for name, state in setting.p.states.items():
        if state.object is None:
            continue
        values = (state.object.diameter, state.object.x, state.object.y)
        size, x, y = (0.0 if value is None else float(np.atleast_1d(value)[0]) for value in values)
        if all(other[1:] != (x, y) for other in found.values()):
            found[name] = (size, x, y)
    return found


def _emitters(setting: Setting, width: float, height: float) -> tuple[list[Outline], list[tuple[Floats, Floats]]]:
    """Boxes outside the edges, and where each emitter stands with its normal."""
    row = setting.p.emitters
    size, depth = float(setting.spread(row.width)[0]), 0.012 * max(width, height)
    at = (np.arange(row.per_edge) + 0.5) / row.per_edge - 0.5
    boxes, starts = [], []
    for edge in edges_of(row.edges):
        xs, ys = (part[0] for part in places_of([edge] * len(at), at, np.array([width]), np.array([height])))
        normal = np.array(NORMALS[edge], dtype=float)
        starts += [(np.array([x, y]), normal) for x, y in zip(xs, ys, strict=True)]
        long = size
        if len(xs) > MOST_BOXES:
            # A row too dense to draw one by one is one bar.
            long = float(np.ptp(xs) + np.ptp(ys)) + size
            xs, ys = np.array([np.mean(xs)]), np.array([np.mean(ys)])
        across, along = (depth, long) if normal[0] else (long, depth)
        boxes += [
            Outline("emitter", "emitter", _box(x - normal[0] * depth / 2, y - normal[1] * depth / 2, across, along))
            for x, y in zip(xs, ys, strict=True)
        ]
    return boxes, starts


def _circle(size: float, x: float, y: float) -> Floats:
    turn = np.linspace(0, 2 * np.pi, 48, endpoint=False)
    return np.stack([x + size / 2 * np.cos(turn), y + size / 2 * np.sin(turn)], axis=1)


def _box(x: float, y: float, width: float, height: float) -> Floats:
    half = np.array([[-1, -1], [1, -1], [1, 1], [-1, 1]]) / 2
    return half * [width, height] + [x, y]
