"""Plan and cross-section of a perimeter-read plate, to scale."""

from __future__ import annotations

from typing import Literal

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Outline, RayPath, Setting, View
from outcouple_plugins.edge_perimeter.chords import Chords, chords_of
from outcouple_plugins.edge_perimeter.light import FACES, SPOT
from outcouple_plugins.plate.parameters import edges_of
from outcouple_plugins.plate.ways import NORMALS, places_of

__all__ = ["plan", "section"]

Floats = NDArray[np.float64]

MOST_BOXES = 48
"""Emitters or detectors of one edge that are drawn one by one."""
RAYS = (0.15, 0.45, 0.75)
"""Drawn elevations as shares of the highest."""


def plan(setting: Setting) -> View:
    """The plate from above: emitters, detectors, the field, the objects and the chords under them."""
    p = setting.p
    chords = chords_of(setting)
    width, height = float(chords.width[0]), float(chords.height[0])
    depth = 0.012 * max(width, height)
    margin = min(float(setting.spread(p.field.margin)[0]), 0.49 * min(width, height))
    discs = _objects(setting)
    outlines = [Outline("guide", "plate", _box(0, 0, width, height))]
    outlines += _parts("emitter", edges_of(p.emitters.edges), chords, depth, emitters=True)
    outlines += _parts("detector", edges_of(p.detectors.edges), chords, depth, emitters=False)
    field = _box(0, 0, width - 2 * margin, height - 2 * margin)
    outlines.append(Outline("axis", "field that must see objects", field))
    outlines += [Outline("object", name, _circle(*disc)) for name, disc in discs.items()]
    return View("plan", tuple(outlines), _chord_lines(chords, list(discs.values())))


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


def _chord_lines(chords: Chords, discs: list[tuple[float, float, float]]) -> tuple[RayPath, ...]:
    """Chords that pass under objects, with a vertex there; those of the middle emitters where there are no objects."""
    ways, pairs = chords.ways, chords.pairs
    limit = min(chords.emitter.highest[0], chords.detector.highest[0])
    seen = ways.possible[0, :, 0] & (ways.out[0, :, 0] < limit) & (ways.into[0, :, 0] < limit)
    per_edge = pairs.emitters // len(set(pairs.emitter_edge))
    incidence = np.pi / 2 - float(_middle_elevation(chords))
    lines = []
    for at in np.flatnonzero(seen):
        start = np.array([ways.x[0, at, 0], ways.y[0, at, 0]])
        step = np.array([ways.dx[0, at, 0], ways.dy[0, at, 0]])
        stops = _under(start, step, discs)
        if not stops and (discs or pairs.emitter[at] % per_edge != per_edge // 2):
            continue
        gone = [0.0, *stops, float(ways.length[0, at, 0])]
        points = np.array([start + length * step for length in gone])
        inner = len(stops)
        lines.append(RayPath(points, (-1, *[SPOT] * inner, -1), (0.0, *[incidence] * inner, 0.0)))
    return tuple(lines)


def _under(start: Floats, step: Floats, discs: list[tuple[float, float, float]]) -> list[float]:
    """How far along a chord the middles of the objects lie that it passes under, in order."""
    found = []
    for size, x, y in discs:
        away = np.array([x, y]) - start
        if abs(away[0] * step[1] - away[1] * step[0]) < size / 2:
            found.append(float(away @ step))
    return sorted(found)


def _middle_elevation(chords: Chords) -> float:
    """Elevation below which half of the light travels."""
    power = np.cumsum((chords.fan.s + chords.fan.p)[0][np.argsort(chords.fan.elevation[0])])
    return float(np.sort(chords.fan.elevation[0])[np.searchsorted(power, power[-1] / 2)])


def _circle(size: float, x: float, y: float) -> Floats:
    turn = np.linspace(0, 2 * np.pi, 48, endpoint=False)
    return np.stack([x + size / 2 * np.cos(turn), y + size / 2 * np.sin(turn)], axis=1)


def _parts(
    role: Literal["emitter", "detector"], edges: tuple[str, ...], chords: Chords, depth: float, *, emitters: bool
) -> list[Outline]:
    """Emitters or detectors as boxes outside their edges."""
    pairs = chords.pairs
    names, at = (pairs.emitter_edge, pairs.emitter_at) if emitters else (pairs.detector_edge, pairs.detector_at)
    own = pairs.emitter if emitters else pairs.detector
    first = np.unique(own, return_index=True)[1]
    picked = tuple(names[i] for i in first)
    x, y = places_of(picked, at[first], chords.width[:1], chords.height[:1])
    size = float(chords.beams[0 if emitters else 1][0])
    found = []
    for edge in edges:
        own_x, own_y = (part[0][np.array(picked) == edge] for part in (x, y))
        nx, ny = NORMALS[edge]
        if len(own_x) > MOST_BOXES:
            # A row too dense to draw one by one is one bar.
            ends = [np.array([np.min(part), np.max(part)]) for part in (own_x, own_y)]
            long = float(np.hypot(np.ptp(ends[0]), np.ptp(ends[1]))) + size
            own_x, own_y = (np.array([np.mean(part)]) for part in ends)
        else:
            long = size
        across, along = (depth, long) if nx else (long, depth)
        found += [
            Outline(role, role, _box(cx - nx * depth / 2, cy - ny * depth / 2, across, along))
            for cx, cy in zip(own_x, own_y, strict=True)
        ]
    return found


def _box(x: float, y: float, width: float, height: float) -> Floats:
    half = np.array([[-1, -1], [1, -1], [1, 1], [-1, 1]]) / 2
    return half * [width, height] + [x, y]


def section(setting: Setting) -> View:
    """A stretch of plate behind an emitter and under an object, to scale, with rays that climb at three elevations."""
    p = setting.p
    chords = chords_of(setting)
    thickness = float(setting.spread(p.plate.thickness)[0])
    span = min(14 * thickness, float(chords.width[0]))
    height = float(setting.spread(p.emitters.height)[0])
    offset = float(setting.spread(p.emitters.offset)[0])
    gap = float(setting.spread(p.emitters.gap)[0]) if p.emitters.coupling == "air" else 0.0
    outlines = [
        Outline("guide", "plate", _box(span / 2, 0, span, thickness)),
        Outline("emitter", "emitter", _box(-gap - 0.2 * thickness, offset, 0.4 * thickness, height)),
    ]
    spot = (0.0, 0.0)
    for name, (size, _, _) in list(_objects(setting).items())[:1]:
        spot = (span / 2 - size / 2, span / 2 + size / 2)
        outlines.append(Outline("object", name, _box(span / 2, 0.8 * thickness, size, 0.6 * thickness)))
    top = float(chords.emitter.highest[0])
    index = 1.0 if chords.emitter.bonded else float(chords.emitter.index[0])
    rays = [_climb(offset, sign * share * top, index, thickness, span, gap, spot) for share in RAYS for sign in (1, -1)]
    return View("cross-section", tuple(outlines), tuple(rays))


def _climb(
    start: float, rise: float, index: float, thickness: float, span: float, gap: float, spot: tuple[float, float]
) -> RayPath:
    """Follow one ray from the emitter through the edge along the plate; the object lies on the front over ``spot``."""
    outside = np.arcsin(np.clip(index * np.sin(rise), -1, 1))
    y = start + gap * np.tan(outside)
    points, columns, angles = [np.array([-gap, start])], [-1], [0.0]
    if abs(y) >= thickness / 2:
        return RayPath(np.array([*points, [0.0, y]]), (-1, -1), (0.0, 0.0))
    points.append(np.array([0.0, y]))
    columns.append(-1)
    angles.append(0.0)
    x, slope = 0.0, np.tan(rise)
    while x < span:
        wall = np.sign(slope) * thickness / 2
        step = min((wall - y) / slope, span - x)
        x, y = x + step, y + step * slope
        points.append(np.array([x, y]))
        reflected = x < span - 1e-12
        above = SPOT if spot[0] < x < spot[1] else FACES.index("front")
        columns.append((above if slope > 0 else FACES.index("back")) if reflected else -1)
        angles.append(np.pi / 2 - abs(rise) if reflected else 0.0)
        slope = -slope
    return RayPath(np.array(points), tuple(columns), tuple(float(angle) for angle in angles))
