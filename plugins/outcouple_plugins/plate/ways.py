"""Straight ways across a rectangular plate, seen from above, with the mirror images that reflecting edges make.

A way that is reflected at edges is straight in the plane tiled with mirror images of the plate. The emitter's image in
tile (m, n) lies at (m width + (-1)^m x, n height + (-1)^n y); the way crosses |m| vertical and |n| horizontal edges.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.light import Strips
from outcouple.optics import interface

__all__ = [
    "NORMALS",
    "Pairs",
    "Ways",
    "across_beam",
    "disc_lengths",
    "edge_reflectance",
    "pairs_of",
    "places_of",
    "reflections",
    "strips_on",
    "tiles_of",
    "ways_of",
]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

NORMALS: dict[str, tuple[float, float]] = {"left": (1, 0), "right": (-1, 0), "bottom": (0, 1), "top": (0, -1)}
"""Inward normals."""
FACING = {"left": "right", "right": "left", "bottom": "top", "top": "bottom"}
EMITTER_PLACE, DETECTOR_PLACE = 0.25, 0.75
"""Place of a part within its slot of the edge where emitters and detectors share it; 0.5 where they do not."""


@dataclass(frozen=True)
class Pairs:
    """Emitter-detector pairs, (C,) each: edges, and places along them from -1/2 to 1/2 of the edge's length."""

    emitter_edge: tuple[str, ...]
    emitter_at: Floats
    detector_edge: tuple[str, ...]
    detector_at: Floats
    emitter: Ints
    detector: Ints
    emitters: int
    detectors: int

    @property
    def count(self) -> int:
        """C."""
        return len(self.emitter_at)

    def chosen(self, which: NDArray[np.bool_]) -> Pairs:
        """Only those pairs."""
        at = np.flatnonzero(which)
        return Pairs(
            tuple(self.emitter_edge[i] for i in at),
            self.emitter_at[at],
            tuple(self.detector_edge[i] for i in at),
            self.detector_at[at],
            self.emitter[at],
            self.detector[at],
            self.emitters,
            self.detectors,
        )


def pairs_of(
    emitter_edges: Sequence[str], emitters: int, detector_edges: Sequence[str], detectors: int, *, adjacent: bool
) -> Pairs:
    """Every emitter with every detector on the edge it faces; on neighbouring edges too where ``adjacent``.

    Between neighbouring square edges in air no light passes where n > sqrt(2): what enters one within asin(1/n) of its
    normal meets the other beyond its critical angle.
    """
    rows = []
    for at_edge, edge in enumerate(emitter_edges):
        for to_edge, other in enumerate(detector_edges):
            if other == FACING[edge] or (adjacent and other != edge):
                i, j = (grid.ravel() for grid in np.meshgrid(np.arange(emitters), np.arange(detectors), indexing="ij"))
                first = EMITTER_PLACE if edge in detector_edges else 0.5
                second = DETECTOR_PLACE if other in emitter_edges else 0.5
                rows.append(
                    (
                        [edge] * len(i),
                        (i + first) / emitters - 0.5,
                        [other] * len(j),
                        (j + second) / detectors - 0.5,
                        at_edge * emitters + i,
                        to_edge * detectors + j,
                    )
                )
    if not rows:
        empty = np.zeros(0)
        none = np.zeros(0, dtype=int)
        return Pairs((), empty, (), empty, none, none, emitters * len(emitter_edges), detectors * len(detector_edges))
    edges, places, others, ends, first_ones, second_ones = zip(*rows, strict=True)
    return Pairs(
        tuple(np.concatenate(edges)),
        np.concatenate(places),
        tuple(np.concatenate(others)),
        np.concatenate(ends),
        np.concatenate(first_ones),
        np.concatenate(second_ones),
        emitters * len(emitter_edges),
        detectors * len(detector_edges),
    )


@dataclass(frozen=True)
class Ways:
    """Straight ways in the tiled plane, (S, C, W) each.

    x, y        start; dx, dy unit direction towards the detector; length [m] along the plate
    out, into   azimuth from the emitter's and from the detector's normal [rad]
    possible    False where the way would leave the plate at its start or reach the detector from outside
    m, n        tile of every way's image, (C, W)
    """

    x: Floats
    y: Floats
    dx: Floats
    dy: Floats
    length: Floats
    out: Floats
    into: Floats
    possible: NDArray[np.bool_]
    m: Ints
    n: Ints


def tiles_of(pairs: Pairs, edges: str, *, width: Floats, height: Floats, steepest: Floats) -> tuple[Ints, Ints]:
    """Tiles (m, n) of every pair's images that matter, (C, W) each; the first is the plate itself.

    steepest  largest azimuth from an edge's normal that light may have [rad], (S,)

    With reflecting edges: up to one return trip between the emitter's and the detector's edge (a polished edge in air
    returns a few percent, so two returns bring less than 0.1 %), and as many reflections at the edges beside as the
    azimuth allows (total there). Neighbouring edges keep their direct way only.
    """
    none = np.zeros((pairs.count, 1), dtype=int)
    if edges == "absorbing":
        return none, none
    level = np.array([edge in ("left", "right") for edge in pairs.emitter_edge])
    facing = np.array([FACING[a] == b for a, b in zip(pairs.emitter_edge, pairs.detector_edge, strict=True)])
    sign = np.array([-1 if edge in ("left", "bottom") else 1 for edge in pairs.emitter_edge])
    orders = [(trip, beside) for trip in (0, 1) for beside in _beside(trip, level, width, height, steepest)]
    trips, besides = (np.array(part) for part in zip(*orders, strict=True))
    along = np.where(facing[:, None], 2 * sign[:, None] * trips, 0)
    across = np.where(facing[:, None], besides, 0)
    m, n = np.where(level[:, None], along, across), np.where(level[:, None], across, along)
    return m, n


def _beside(trip: int, level: NDArray[np.bool_], width: Floats, height: Floats, steepest: Floats) -> list[int]:
    """Numbers of reflections at the edges beside the way that light within the azimuth limit can make, zero first."""
    reach = np.tan(np.minimum(steepest, np.radians(80))) * (1 + 2 * trip)
    most = max(
        [
            0,
            *(
                int(np.ceil(np.max(reach * a / b))) + 1
                for a, b, any_ in ((width, height, level), (height, width, ~level))
                if np.any(any_)
            ),
        ]
    )
    return [0, *(k for j in range(1, most + 1) for k in (j, -j))]


def places_of(edges: Sequence[str], at: Floats, width: Floats, height: Floats) -> tuple[Floats, Floats]:
    """Coordinates (S, C) of parts on edges."""
    names = np.array(edges)
    w, h = width[:, None], height[:, None]
    x = np.where(names == "left", -w / 2, np.where(names == "right", w / 2, at * w))
    y = np.where(names == "bottom", -h / 2, np.where(names == "top", h / 2, at * h))
    return x, y


def ways_of(pairs: Pairs, tiles: tuple[Ints, Ints], *, width: Floats, height: Floats) -> Ways:
    """The ways of every pair through every of its tiles; width and height of the plate (S,)."""
    xe, ye = places_of(pairs.emitter_edge, pairs.emitter_at, width, height)
    xd, yd = places_of(pairs.detector_edge, pairs.detector_at, width, height)
    m, n = tiles
    flip_x, flip_y = (-1.0) ** m, (-1.0) ** n
    x = m * width[:, None, None] + flip_x * xe[:, :, None]
    y = n * height[:, None, None] + flip_y * ye[:, :, None]
    dx, dy = xd[:, :, None] - x, yd[:, :, None] - y
    length = np.maximum(np.hypot(dx, dy), 1e-12)
    dx, dy = dx / length, dy / length
    start = np.array([NORMALS[edge] for edge in pairs.emitter_edge])
    end = np.array([NORMALS[edge] for edge in pairs.detector_edge])
    out = dx * start[:, None, 0] * flip_x + dy * start[:, None, 1] * flip_y
    into = -(dx * end[:, None, 0] + dy * end[:, None, 1])
    return Ways(
        x, y, dx, dy, length,
        np.arccos(np.clip(out, 0, 1)),
        np.arccos(np.clip(into, 0, 1)),
        (out > 1e-9) & (into > 1e-9) & ~_repeated(pairs, m, n),
        m,
        n,
    )  # fmt: skip


def _repeated(pairs: Pairs, m: Ints, n: Ints) -> NDArray[np.bool_]:
    """Ways that repeat the direct one, where a pair has fewer images than others, (C, W)."""
    first = np.arange(m.shape[1]) == 0
    return np.asarray((m == 0) & (n == 0) & ~first)


def reflections(count: Ints) -> tuple[Ints, Ints]:
    """How many of ``count`` reflections at two facing edges happen at the one of lower coordinate, and at the other.

    >>> [int(part) for part in reflections(np.array(-3))]
    [2, 1]
    """
    most, least = -(-np.abs(count) // 2), np.abs(count) // 2
    return np.where(count < 0, most, least), np.where(count < 0, least, most)


def edge_reflectance(index: Floats, azimuth: Floats, elevation: Floats) -> tuple[Floats, Floats]:
    """Reflectance of a polished edge in air for s and p by the faces, as a mean over both of the edge's own."""
    inside = np.cos(elevation) * np.cos(azimuth)
    face = interface(index, 1.0, np.arccos(np.clip(inside, 0, 1)))
    across = np.clip(np.cos(azimuth) ** 2 * np.sin(elevation) ** 2 / np.maximum(1 - inside**2, 1e-300), 0, 1)
    return across * face.Rs + (1 - across) * face.Rp, (1 - across) * face.Rs + across * face.Rp


def disc_lengths(
    ways: Ways, *, radius: Floats, x: Floats, y: Floats, offsets: Floats, width: Floats, height: Floats
) -> Floats:
    """Metres of every strip of every way that lie under a disc at (x, y), (S, C, W, B).

    offsets  of the strips from the middle of the beam at the disc [m], (S, C, W, B)

    A reflected way crosses images of the disc in the tiles it passes; their lengths add up.
    """
    total = np.zeros((*np.broadcast_shapes(ways.length.shape, (radius.shape[0], 1, 1)), offsets.shape[-1]))
    for m in range(int(ways.m.min()), int(ways.m.max()) + 1):
        for n in range(int(ways.n.min()), int(ways.n.max()) + 1):
            crossed = _between(m, ways.m) & _between(n, ways.n)
            if not np.any(crossed):
                continue
            cx, cy = m * width + (-1.0) ** m * x, n * height + (-1.0) ** n * y
            ex, ey = cx[:, None, None] - ways.x, cy[:, None, None] - ways.y
            gone, beside = ex * ways.dx + ey * ways.dy, ex * ways.dy - ey * ways.dx
            half = np.sqrt(np.maximum(radius[:, None, None, None] ** 2 - (beside[..., None] + offsets) ** 2, 0.0))
            low = np.clip(gone[..., None] - half, 0.0, ways.length[..., None])
            high = np.clip(gone[..., None] + half, 0.0, ways.length[..., None])
            total += np.where(crossed[None, :, :, None], high - low, 0.0)
    return total


def _between(tile: int, image: Ints) -> NDArray[np.bool_]:
    """Tiles that a way from its image to the plate passes."""
    return np.asarray((np.minimum(image, 0) <= tile) & (tile <= np.maximum(image, 0)))


def across_beam(share: Floats, width: Floats, other: Floats) -> Floats:
    """Offset from the middle of a beam below which 1/2 + ``share`` of its lines lie.

    The offset of a line is the sum of two even spreads of ``width`` and ``other``: flat in the middle, straight slopes.

    >>> [float(across_beam(np.array(q), np.array(2.0), np.array(1.0))) for q in (0.25, 0.5)]
    [0.5, 1.5]
    """
    wide, narrow = np.maximum(width, other), np.minimum(width, other)
    mass = np.abs(share)
    tail = (wide + narrow) / 2 - np.sqrt(2 * wide * narrow * (0.5 - mass))
    return np.asarray(np.sign(share) * np.where(mass * 2 * wide <= wide - narrow, mass * wide, tail))


def strips_on(
    ways: Ways,
    *,
    diameter: Floats,
    x: Floats,
    y: Floats,
    widths: tuple[Floats, Floats],
    count: int,
    width: Floats,
    height: Floats,
) -> Strips:
    """Contact of a disc on every way, in ``count`` strips across a beam.

    widths  (S,) of the emitter and of the detector

    Straight lines from anywhere on the emitter to anywhere on the detector lie trapezoidally about the middle of the
    beam; strips carry equal shares of them.
    """
    share = (np.arange(count) + 0.5) / count - 0.5
    gone = np.clip(((x[:, None, None] - ways.x) * ways.dx + (y[:, None, None] - ways.y) * ways.dy) / ways.length, 0, 1)
    first = widths[0][:, None, None] * np.abs(np.cos(ways.out))
    last = widths[1][:, None, None] * np.abs(np.cos(ways.into))
    return Strips(
        disc_lengths(
            ways,
            radius=diameter / 2,
            x=x,
            y=y,
            offsets=across_beam(share, (first * (1 - gone))[..., None], (last * gone)[..., None]),
            width=width,
            height=height,
        )
    )
