"""Light that crosses a place of a plate lit from rows of emitters along its edges, mirror images included."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Setting
from outcouple_plugins.plate.edge import Port
from outcouple_plugins.plate.fan import Fan, fan_of, port_of
from outcouple_plugins.plate.parameters import edges_of
from outcouple_plugins.plate.ways import NORMALS, edge_reflectance, places_of, reflections

__all__ = ["Flux", "Rows", "flux_at", "rows_of"]

Floats = NDArray[np.float64]

TRIPS = {"absorbing": 1, "polished": 2, "mirrored": 4}
"""Ways between the emitters' edge and the one it faces that matter to one percent: the direct one, then returns."""
STEEP = np.radians(80)
"""Azimuth beyond which images beside the way are not followed."""


@dataclass(frozen=True)
class Rows:
    """Equal emitters in rows along edges of a plate; numbers (S,)."""

    port: Port
    fan: Fan
    edges: tuple[str, ...]
    per_edge: int
    size: Floats
    width: Floats
    height: Floats
    finish: str
    mirror: Floats
    haze: Floats


@dataclass(frozen=True)
class Flux:
    """Light of emitters of power 1 together that crosses a place, by bundle (edge and trip) and elevation.

    s, p    power per metre of width across the light [1/m], (S, B, E), before absorption
    length  way along the plate, mean over the bundle's light [m], (S, B)
    slant   length under a strip of unit width along the emitters' edge, mean over the bundle, (S, B)
    """

    s: Floats
    p: Floats
    length: Floats
    slant: Floats

    @property
    def bundles(self) -> int:
        """B."""
        return int(self.length.shape[1])


def rows_of(setting: Setting) -> Rows:
    """The rows that the sections ``emitter``, ``emitters`` and ``plate`` describe."""
    p, spread = setting.p, setting.spread
    row, plate = p.emitters, p.plate
    port = port_of(
        index=setting.index(plate.material),
        thickness=spread(plate.thickness),
        height=spread(row.height),
        offset=spread(row.offset),
        gap=spread(row.gap),
        half_angle=spread(p.emitter.half_angle),
        bonded=row.coupling == "bonded",
        exponent=spread(p.emitter.exponent),
    )
    return Rows(
        port, fan_of(port, setting.breaks), edges_of(row.edges), row.per_edge, spread(row.width),
        spread(plate.width), spread(plate.height), plate.edges, spread(plate.mirror), spread(plate.haze),
    )  # fmt: skip


def flux_at(rows: Rows, x: Floats, y: Floats) -> Flux:
    """Flux at places (P,): P = S, or S = 1 and any number of places.

    Straight ways from every emitter and its images to the place. Nearer to an emitter than half its width the flux is
    that at half its width; beside the plate there is none. Bundles share one mean length: within one, absorption
    lengths differ by a third at most.
    """
    parts = [_bundle(rows, edge, trip, x, y) for edge in rows.edges for trip in range(TRIPS[rows.finish])]
    s, p, length, slant = (np.stack(part, axis=1) for part in zip(*parts, strict=True))
    on = ((np.abs(x) <= rows.width / 2) & (np.abs(y) <= rows.height / 2))[:, None, None]
    return Flux(s * on, p * on, length, slant)


def _bundle(rows: Rows, edge: str, trip: int, x: Floats, y: Floats) -> tuple[Floats, Floats, Floats, Floats]:
    nodes = rows.fan.elevation.shape[1]
    s, p = np.zeros((len(x), nodes)), np.zeros((len(x), nodes))
    weighted, slants = np.zeros(len(x)), np.zeros(len(x))
    for m, n in _tiles(rows, edge, trip):
        flux_s, flux_p, length, cosine = _image(rows, edge, m, n, x, y)
        s += np.sum(flux_s, axis=1)
        p += np.sum(flux_p, axis=1)
        light = np.sum(flux_s + flux_p, axis=2)
        weighted += np.sum(light * length, axis=1)
        slants += np.sum(light / cosine, axis=1)
    total = np.sum(s + p, axis=1)
    lit = total > 0
    safe = np.where(lit, total, 1.0)
    return s, p, np.where(lit, weighted / safe, 0.0), np.where(lit, slants / safe, 1.0)


def _tiles(rows: Rows, edge: str, trip: int) -> Iterator[tuple[int, int]]:
    """Tiles of the images after ``trip`` crossings of the plate, and those beside them within the azimuth limit."""
    level = edge in ("left", "right")
    far = 1 if edge in ("left", "bottom") else -1
    along = far * (trip if trip % 2 else -trip)
    beside = 0
    if rows.finish != "absorbing":
        steepest = np.minimum(np.max(rows.port.highest), STEEP)
        ratio = rows.width / rows.height if level else rows.height / rows.width
        beside = int(np.ceil(np.max(np.tan(steepest) * ratio) * (1 + trip))) + 1
    for across in range(-beside, beside + 1):
        yield (along, across) if level else (across, along)


def _image(rows: Rows, edge: str, m: int, n: int, x: Floats, y: Floats) -> tuple[Floats, Floats, Floats, Floats]:
    """Flux of one tile's images (P, N, E), s and p; length (P, N); cosine from the emitters' normal (P, N)."""
    at = (np.arange(rows.per_edge) + 0.5) / rows.per_edge - 0.5
    xe, ye = places_of([edge] * rows.per_edge, at, rows.width, rows.height)
    flip_x, flip_y = (-1.0) ** m, (-1.0) ** n
    dx = x[:, None] - (m * rows.width[:, None] + flip_x * xe)
    dy = y[:, None] - (n * rows.height[:, None] + flip_y * ye)
    length = np.maximum(np.hypot(dx, dy), rows.size[:, None] / 2)
    dx, dy = dx / length, dy / length
    nx, ny = NORMALS[edge]
    cosine = dx * nx * flip_x + dy * ny * flip_y
    shape = (*length.shape, rows.fan.elevation.shape[1])
    rise = np.broadcast_to(rows.fan.elevation[:, None, :], shape)
    azimuth = np.broadcast_to(np.arccos(np.clip(cosine, 0, 1))[..., None], shape)
    s, p, _ = rows.port.density(azimuth, rise)
    scale = (rows.fan.weight * rows.fan.scale[:, None])[:, None, :] / length[..., None]
    scale = np.where((cosine > 1e-9)[..., None], scale, 0.0) / (rows.per_edge * len(rows.edges))
    hits = length[..., None] * np.tan(rise) / rows.port.thickness[:, None, None]
    scale = scale * (1 - rows.haze[:, None, None]) ** hits
    kept_s, kept_p = _edges(rows, m, n, dx, dy, rise)
    return s * scale * kept_s, p * scale * kept_p, length, np.maximum(cosine, 1e-6)


def _edges(rows: Rows, m: int, n: int, dx: Floats, dy: Floats, rise: Floats) -> tuple[Floats, Floats]:
    """What the edges return on the way, s and p."""
    kept_s, kept_p = np.ones((1, 1, 1)), np.ones((1, 1, 1))
    index, mirror = rows.port.index[:, None, None], rows.mirror[:, None, None]
    for edges, count, normal in ((("left", "right"), m, np.abs(dx)), (("bottom", "top"), n, np.abs(dy))):
        if not count:
            continue
        azimuth = np.broadcast_to(np.arccos(np.clip(normal, 0, 1))[..., None], rise.shape)
        Rs, Rp = edge_reflectance(index, azimuth, rise)
        for edge, times in zip(edges, reflections(np.array(count)), strict=True):
            coated = rows.finish == "mirrored" and edge not in rows.edges
            kept_s = np.asarray(kept_s * (mirror if coated else Rs) ** int(times))
            kept_p = np.asarray(kept_p * (mirror if coated else Rp) ** int(times))
    return kept_s, kept_p
