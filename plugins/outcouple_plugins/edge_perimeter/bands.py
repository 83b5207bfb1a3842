"""Bands of chords over the field: which cells lie under which chord, and what an object there takes from it.

An object's loss on a way depends on how far aside of the way it lies and on how wide the beam is there. So it is
tabulated against that offset, and cells are visited only within each way's band.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple_plugins.edge_perimeter.chords import Chords

__all__ = ["Grid", "Hits", "Segments", "Tables", "hits_of", "segments_of", "tables_of"]

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

OFFSETS = 96
"""Points of a table over the offset."""
EDGE = 0.1
"""Width of the soft edge of an object, as a share of its diameter; a hard edge would tell its place infinitely well."""
TAPERED, PIECES = 2.0, 6
"""Where one end of a beam is so many times as wide as the other, its way is followed in pieces."""
SAMPLED = (1 / 6, 1 / 2, 5 / 6)
"""Where along a piece the beam's spread is taken."""
BLOCK = 400_000
"""Cells worked on at once; arrays of this size stay in the caches."""


@dataclass(frozen=True)
class Grid:
    """Middles of the cells of the field, (X,) and (Y,); cells are numbered row by row, x fastest."""

    x: Floats
    y: Floats

    @property
    def cells(self) -> int:
        """Number of cells."""
        return len(self.x) * len(self.y)

    @property
    def pitch(self) -> tuple[float, float]:
        """Distances between neighbours along x and y."""
        return float(self.x[1] - self.x[0]), float(self.y[1] - self.y[0])


@dataclass(frozen=True)
class Segments:
    """Straight pieces of ways within the plate, (M,) each.

    way     row of the way, chord times bundles plus bundle
    chord   its chord
    x, y    start; dx, dy unit direction; length
    beam    width of the even spread that varies as much as the lines of the beam do, along the piece
    """

    way: Ints
    chord: Ints
    x: Floats
    y: Floats
    dx: Floats
    dy: Floats
    length: Floats
    beam: Floats

    def taken(self, which: Ints | slice) -> Segments:
        """Only those."""
        return Segments(*(getattr(self, name)[which] for name in self.__dataclass_fields__))


def segments_of(chords: Chords, lit: NDArray[np.bool_], sample: int) -> Segments:
    """All pieces of the ways that carry light; reflected ways are folded back into the plate.

    lit  ways that carry light, (C, W)

    A beam counts as equally wide all along a piece (root mean square of its spread): good to 0.5 % of a chord's light
    where an object lies half under it.
    """
    ways = chords.ways
    at = min(sample, ways.length.shape[0] - 1)
    width, height = (float(one[sample]) for one in (chords.width, chords.height))
    beams = [float(one[sample]) for one in chords.beams]
    pieces = 1 if max(beams) <= TAPERED * min(beams) else PIECES
    chord, bundle = np.nonzero(lit)
    found = [
        _in_tile(chords, at, chord, bundle, tile, (width, height), beams, pieces)
        for tile in _tiles(ways.m[lit], ways.n[lit])
    ]
    columns = [np.concatenate(part) for part in zip(*found, strict=True)]
    way, number = columns[0].astype(int), columns[1].astype(int)
    return Segments(way, number, *columns[2:])


def _tiles(m: Ints, n: Ints) -> Iterator[tuple[int, int]]:
    across, along = ((int(np.min(part, initial=0)), int(np.max(part, initial=0))) for part in (m, n))
    for i in range(across[0], across[1] + 1):
        for j in range(along[0], along[1] + 1):
            yield i, j


def _in_tile(
    chords: Chords,
    at: int,
    chord: Ints,
    bundle: Ints,
    tile: tuple[int, int],
    size: tuple[float, float],
    beams: list[float],
    pieces: int,
) -> tuple[Floats, ...]:
    """The parts of all ways that run through one mirror image of the plate, as columns of Segments."""
    ways = chords.ways
    x, y, dx, dy, length, out, into = (
        getattr(ways, name)[at][chord, bundle] for name in ("x", "y", "dx", "dy", "length", "out", "into")
    )
    low, high = np.zeros_like(length), length.copy()
    for start, step, middle, half in (
        (x, dx, tile[0] * size[0], size[0] / 2),
        (y, dy, tile[1] * size[1], size[1] / 2),
    ):
        with np.errstate(divide="ignore", invalid="ignore"):
            first, last = (middle - half - start) / step, (middle + half - start) / step
        moves = np.abs(step) > 1e-12
        inside = np.abs(start - middle) <= half + 1e-12
        low = np.where(moves, np.maximum(low, np.minimum(first, last)), np.where(inside, low, np.inf))
        high = np.where(moves, np.minimum(high, np.maximum(first, last)), high)
    keep = np.flatnonzero(high - low > 1e-9)
    sign_x, sign_y = (-1.0) ** tile[0], (-1.0) ** tile[1]
    found = []
    for piece in range(pieces):
        run = (high - low)[keep] / pieces
        gone = low[keep] + piece * run
        first_beam, last_beam = beams[0] * np.cos(out[keep]), beams[1] * np.cos(into[keep])
        share = np.stack([(gone + part * run) / length[keep] for part in SAMPLED])
        beam = np.sqrt(np.mean((first_beam * (1 - share)) ** 2 + (last_beam * share) ** 2, axis=0))
        found.append(
            (
                (chord * ways.length.shape[2] + bundle)[keep].astype(float),
                chord[keep].astype(float),
                sign_x * (x[keep] + gone * dx[keep] - tile[0] * size[0]),
                sign_y * (y[keep] + gone * dy[keep] - tile[1] * size[1]),
                sign_x * dx[keep],
                sign_y * dy[keep],
                run,
                beam,
            )
        )
    return tuple(np.concatenate(part) for part in zip(*found, strict=True))


@dataclass(frozen=True)
class Tables:
    """Loss of a chord to an object at an offset from one of its segments.

    step    between the offsets [m]; they run from 0
    loss    share of the chord's light, (M, U)
    slope   its derivative over the offset [1/m], (M, U)
    reach   offset beyond which there is none [m], (M,)
    """

    step: float
    loss: NDArray[np.float32]
    slope: NDArray[np.float32]
    reach: Floats


def tables_of(segments: Segments, profile: Floats, diameter: float) -> Tables:
    """Mean over the beam and over the object's soft edge of the loss along single lines.

    profile  loss of way v at an offset u of U even steps from 0 to the radius, (V, U)
    """
    radius = diameter / 2
    soft = EDGE * diameter
    widest = radius + soft / 2 + float(np.max(segments.beam, initial=0.0)) / 2
    step = widest / (OFFSETS - 2)
    offsets = np.asarray(np.arange(OFFSETS) * step, dtype=float)
    softened = _boxed(profile, radius / (profile.shape[1] - 1), offsets, np.full((1, 1), soft))[0]
    loss, slope = _boxed(softened[segments.way], step, offsets, segments.beam[:, None])
    reach = radius + soft / 2 + segments.beam / 2
    return Tables(step, loss.astype(np.float32), slope.astype(np.float32), np.minimum(reach, widest))


def _boxed(rows: Floats, step: float, offsets: Floats, width: Floats) -> tuple[Floats, Floats]:
    """Running mean of even functions over a width, at offsets, and its derivative; beyond their end they are zero."""
    whole = np.concatenate(
        [np.zeros((len(rows), 1)), np.cumsum((rows[:, 1:] + rows[:, :-1]) / 2, axis=1) * step], axis=1
    )

    def at(table: Floats, place: Floats, odd: bool) -> Floats:
        size = np.minimum(np.abs(place) / step, table.shape[1] - 1.000001)
        low = size.astype(int)
        part = size - low
        number = np.arange(len(table))[:, None]
        found = table[number, low] * (1 - part) + table[number, low + 1] * part
        if odd:
            return np.asarray(np.sign(place) * found)
        return np.asarray(np.where(np.abs(place) <= step * (table.shape[1] - 1), found, 0.0))

    right, left = offsets + width / 2, offsets - width / 2
    right, left = (np.broadcast_to(one, (len(rows), len(offsets))) for one in (right, left))
    mean = (at(whole, right, True) - at(whole, left, True)) / width
    slope = (at(rows, right, False) - at(rows, left, False)) / width
    return mean, slope


@dataclass(frozen=True)
class Hits:
    """Cells under chords, (N,) each: what an object in the middle of the cell takes from the chord.

    gx, gy  derivative of the loss over the object's x and y [1/m]; empty where not asked for
    """

    cell: Ints
    chord: Ints
    loss: NDArray[np.float32]
    gx: NDArray[np.float32]
    gy: NDArray[np.float32]


def hits_of(segments: Segments, tables: Tables, grid: Grid, *, slopes: bool, merge: bool) -> Iterator[Hits]:
    """Visit every cell within every segment's band, in blocks.

    merge  add up what several segments of one chord lose in the same cell
    """
    along_x = np.abs(segments.dx) * grid.pitch[1] >= np.abs(segments.dy) * grid.pitch[0]
    order = np.argsort(segments.chord, kind="stable")
    each = max(len(grid.x), len(grid.y)) * max(1, int(4 * np.max(tables.reach, initial=0.0) / min(grid.pitch)))
    for which in _whole_chords(segments.chord[order], order, max(1, BLOCK // each)):
        parts = [
            _band(segments, tables, grid, which[along_x[which] == level], level, slopes)
            for level in (True, False)
            if np.any(along_x[which] == level)
        ]
        found = parts[0] if len(parts) == 1 else _joined(parts)
        yield _merged(found, grid.cells) if merge else found


def _whole_chords(chord: Ints, order: Ints, size: int) -> Iterator[Ints]:
    """Runs of about ``size`` segments that split no chord; ``chord`` is sorted."""
    start = 0
    while start < len(chord):
        stop = min(start + size, len(chord))
        stop = int(np.searchsorted(chord, chord[stop - 1], side="right"))
        yield order[start:stop]
        start = stop


def _joined(parts: list[Hits]) -> Hits:
    return Hits(*(np.concatenate([getattr(part, name) for part in parts]) for name in Hits.__dataclass_fields__))


def _band(segments: Segments, tables: Tables, grid: Grid, which: Ints, level: bool, slopes: bool) -> Hits:
    """Cells of some segments that run mostly along x (``level``) or along y."""
    part = segments.taken(which)
    reach = tables.reach[which]
    if level:
        main, cross, x, y, dx, dy = grid.x, grid.y, part.x, part.y, part.dx, part.dy
    else:
        main, cross, x, y, dx, dy = grid.y, grid.x, part.y, part.x, part.dy, part.dx
    pitch = cross[1] - cross[0]
    gone = (main[None, :] - x[:, None]) / dx[:, None]
    middle = (y[:, None] + gone * dy[:, None] - cross[0]) / pitch
    half = (reach / np.abs(dx) / pitch)[:, None]
    first = np.ceil(middle - half).astype(np.int32)
    count = int(np.floor(2 * np.max(half, initial=0.0))) + 1
    number = first[:, :, None] + np.arange(count, dtype=np.int32)
    offset = (number - middle[:, :, None]).astype(np.float32) * (pitch * dx).astype(np.float32)[:, None, None]
    on_way = ((gone >= 0) & (gone <= part.length[:, None]))[:, :, None]
    inside = (number >= 0) & (number < len(cross)) & (np.abs(offset) <= reach[:, None, None]) & on_way
    row, line, _ = np.nonzero(inside)
    number, offset = number[inside], offset[inside]
    cell = number * len(grid.x) + line if level else line * len(grid.x) + number
    place = np.abs(offset) * np.float32(1 / tables.step)
    low = place.astype(np.int32)
    share = place - low
    table_row = which[row]
    loss = _lerp(tables.loss, table_row, low, share)
    if not slopes:
        empty = np.zeros(0, dtype=np.float32)
        return Hits(cell, part.chord[row], loss, empty, empty)
    slope = np.sign(offset) * _lerp(tables.slope, table_row, low, share)
    # The offset grows along the way's left normal (-dy, dx), whichever axis came first.
    across, back = part.dx[row].astype(np.float32), part.dy[row].astype(np.float32)
    if level:
        return Hits(cell, part.chord[row], loss, -slope * back, slope * across)
    return Hits(cell, part.chord[row], loss, slope * back, -slope * across)


def _lerp(table: NDArray[np.float32], row: Ints, low: Ints, share: NDArray[np.float32]) -> NDArray[np.float32]:
    flat = table.ravel()
    at = row * table.shape[1] + low
    return np.asarray(flat[at] * (1 - share) + flat[at + 1] * share)


def _merged(hits: Hits, cells: int) -> Hits:
    key, back = np.unique(hits.chord * cells + hits.cell, return_inverse=True)

    def added(values: NDArray[np.float32]) -> NDArray[np.float32]:
        return np.bincount(back, weights=values).astype(np.float32) if len(values) else values

    return Hits(key % cells, key // cells, added(hits.loss), added(hits.gx), added(hits.gy))
