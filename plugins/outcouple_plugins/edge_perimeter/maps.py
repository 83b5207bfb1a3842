"""Maps over the field: how many chords see an object at every place, and how well they tell where it is."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import MetricValue, Missing, Results, StateResult, Surface
from outcouple_plugins.edge_perimeter.bands import Grid, Hits, Segments, Tables, hits_of, segments_of, tables_of
from outcouple_plugins.edge_perimeter.chords import Chords
from outcouple_plugins.edge_perimeter.contact import spot_loss
from outcouple_plugins.edge_perimeter.measures import NO_OBJECT, arrivals_shared, chords_shared, needed, objects

__all__ = ["FieldMap", "field_map", "measured_on_maps", "surfaces_of"]

Floats = NDArray[np.float64]
Ints = NDArray[np.integer[Any]]

PROFILE = 49
"""Lines across an object on which its loss is computed."""
GHOST_PAIRS = 24
SMALLEST, LARGEST, HALVINGS = 0.1e-3, 100e-3, 5
"""Search for the smallest object: it ends at these diameters; a factor of two is halved so often, to 2 %."""


@dataclass(frozen=True)
class FieldMap:
    """One object moved over the field of one sample.

    limit     loss beyond which a chord sees, (C,)
    weight    1 over the variance of a chord's relative reading, (C,)
    diameter  of the object [m]
    several   True where a chord has more than one way
    """

    grid: Grid
    segments: Segments
    tables: Tables
    limit: Floats
    weight: Floats
    diameter: float
    several: bool

    def _blocks(self, *, slopes: bool) -> Iterator[Hits]:
        return hits_of(self.segments, self.tables, self.grid, slopes=slopes, merge=self.several)

    @cached_property
    def seen(self) -> tuple[Ints, Ints]:
        """Cells and the chords that see an object in their middle, (N,) each."""
        cells, chords = [np.zeros(0, dtype=np.int32)], [np.zeros(0, dtype=np.int32)]
        for block in self._blocks(slopes=False):
            pick = block.loss > self.limit[block.chord]
            cells.append(block.cell[pick].astype(np.int32))
            chords.append(block.chord[pick].astype(np.int32))
        return np.concatenate(cells), np.concatenate(chords)

    @cached_property
    def counts(self) -> Ints:
        """Chords that see the object, per cell."""
        total = np.zeros(self.grid.cells, dtype=int)
        for block in self._blocks(slopes=False):
            pick = block.loss > self.limit[block.chord]
            total += np.bincount(block.cell[pick], minlength=self.grid.cells)
        return total

    def position_error(self) -> Floats:
        """Cramer-Rao bound on the position in its worst direction, per cell [m]; infinite where nothing tells.

        Fisher information of x, y and the logarithm of the object's strength from independent chords, the strength
        eliminated. Reference: H. Cramer, Mathematical Methods of Statistics (1946), chapter 32.
        """
        sums = np.zeros((6, self.grid.cells))
        for block in self._blocks(slopes=True):
            weight = self.weight[block.chord]
            for at, product in enumerate(
                (
                    block.gx * block.gx,
                    block.gx * block.gy,
                    block.gy * block.gy,
                    block.gx * block.loss,
                    block.gy * block.loss,
                    block.loss * block.loss,
                )
            ):
                sums[at] += np.bincount(block.cell, weights=weight * product, minlength=self.grid.cells)
        return _worst_deviation(sums)


def _worst_deviation(sums: Floats) -> Floats:
    """Square root of the larger eigenvalue of the position's covariance."""
    xx, xy, yy, xa, ya, aa = sums
    with np.errstate(divide="ignore", invalid="ignore"):
        share = np.where(aa > 0, 1 / aa, 0.0)
        xx, xy, yy = xx - xa * xa * share, xy - xa * ya * share, yy - ya * ya * share
        least = (xx + yy) / 2 - np.sqrt(((xx - yy) / 2) ** 2 + xy**2)
        floor = 1e-9 * (xx + yy)
        return np.where(least > floor, 1 / np.sqrt(np.where(least > floor, least, 1.0)), np.inf)


def _grid(results: Results, sample: int) -> Grid | None:
    p, spread = results.setting.p, results.setting.spread
    margin = spread(p.field.margin)[sample]
    width, height = (spread(side)[sample] - 2 * margin for side in (p.plate.width, p.plate.height))
    if width <= 0 or height <= 0:
        return None
    x = (np.arange(p.field.columns) + 0.5) / p.field.columns - 0.5
    y = (np.arange(p.field.rows) + 0.5) / p.field.rows - 0.5
    return Grid(x * width, y * height)


def _row(array: Floats, sample: int) -> Floats:
    return np.asarray(array[min(sample, array.shape[0] - 1)])


def _profiles(results: Results, state: StateResult, chords: Chords, diameter: float, sample: int) -> Floats:
    """Loss of every way to a disc on lines across it, as a share of its chord's light, (C W, U)."""
    arrivals = _row(arrivals_shared(results), sample)
    channels, rays = arrivals.shape
    bundles = chords.ways.length.shape[2]
    total = np.sum(arrivals, axis=1)[:, None, None]
    shares = arrivals.reshape(channels, bundles, rays // bundles)
    shares = np.divide(shares, total, out=np.zeros_like(shares), where=total > 0)
    offsets = np.linspace(0, 1, PROFILE)
    lengths = diameter * np.sqrt(1 - offsets**2)
    lost = _row(spot_loss(state, np.broadcast_to(lengths, (results.setting.samples, PROFILE))), sample)
    # Every bundle holds the same elevations: one table of losses serves all.
    return np.asarray(shares.reshape(channels * bundles, -1) @ lost[: rays // bundles])


def field_map(results: Results, state: StateResult, sample: int, diameter: float | None = None) -> FieldMap | None:
    """The field under one object; None where the margin leaves no field."""
    key = f"map {state.name} {sample} {diameter}"
    if key not in results.memo:
        results.memo[key] = _field_map(results, state, sample, diameter)
    found: FieldMap | None = results.memo[key]
    return found


def _field_map(results: Results, state: StateResult, sample: int, diameter: float | None) -> FieldMap | None:
    grid = _grid(results, sample)
    if grid is None:
        return None
    chords = chords_shared(results)
    assert state.place is not None
    assert results.untouched is not None
    size = float(state.place["diameter"][sample]) if diameter is None else diameter
    profile = _profiles(results, state, chords, size, sample)
    bundles = chords.ways.length.shape[2]
    lit = np.any(profile > 0, axis=1).reshape(-1, bundles)
    segments = segments_of(chords, lit, sample)
    signal, noise = (_row(part, sample) for part in (results.untouched.signal, results.untouched.noise))
    noise = np.broadcast_to(noise, signal.shape)
    share = _row(results.untouched.share, sample)
    carries = (signal > 0) & (share > 0)
    relative = np.divide(noise, signal, out=np.full(signal.shape, np.inf), where=carries)
    level = np.broadcast_to(_row(results.decision.level, sample), signal.shape)
    certainty = results.setting.spread(results.setting.p.field.certainty)[sample]
    with np.errstate(invalid="ignore"):
        limit = np.where(np.isinf(relative), np.inf, level + certainty * relative)
    weight = np.where(np.isinf(relative), 0.0, 1 / relative**2)
    tables = tables_of(segments, profile, size)
    return FieldMap(grid, segments, tables, limit, weight, size, bundles > 1)


def measured_on_maps(names: Sequence[str], results: Results) -> dict[str, MetricValue | Missing]:
    """Those of ``names`` that need maps, over every sample and object."""
    found: dict[str, MetricValue | Missing] = {}
    states = objects(results)
    for name in names:
        if not states:
            found[name] = NO_OBJECT
        elif results.decision is None:
            found[name] = Missing("needs states that expect both absent and present")
        else:
            found[name] = _over_states(name, results, states)
    return found


def _over_states(name: str, results: Results, states: Sequence[StateResult]) -> MetricValue | Missing:
    of, highest = MEASURES[name]
    area = max((one.area for one in results.requirements if one.metric == name), default=1.0)
    values = {}
    for state in states:
        row = []
        for sample in range(results.setting.samples):
            field = field_map(results, state, sample)
            if field is None:
                return Missing("the margin leaves no field on the plate")
            row.append(of(field, results, state, sample, area))
        values[state.name] = np.array(row, dtype=float)
    stack = np.stack(list(values.values()))
    pick = np.argmax(stack, axis=0) if highest else np.argmin(stack, axis=0)
    return MetricValue(stack[pick, np.arange(stack.shape[1])], list(values)[int(pick[0])], values)


def _kept_by(values: Floats, area: float, *, highest: bool) -> float:
    """The value that a share of the cells keeps: reaches at least, or at most where ``highest``."""
    ordered = np.sort(values) if highest else np.sort(values)[::-1]
    return float(ordered[max(int(np.ceil(area * len(ordered))) - 1, 0)])


def _coverage(field: FieldMap, results: Results, state: StateResult, sample: int, area: float) -> float:
    return float(np.mean(field.counts >= needed(results)))


def _least_chords(field: FieldMap, results: Results, state: StateResult, sample: int, area: float) -> float:
    return _kept_by(field.counts.astype(float), area, highest=False)


def _blind_spot(field: FieldMap, results: Results, state: StateResult, sample: int, area: float) -> float:
    from scipy.ndimage import distance_transform_edt  # only where a map is asked for

    shape = (len(field.grid.y), len(field.grid.x))
    blind = np.pad((field.counts < needed(results)).reshape(shape), 1)
    pitch_x, pitch_y = field.grid.pitch
    depth = float(np.max(distance_transform_edt(blind, sampling=(pitch_y, pitch_x))))
    # The nearest seeing cell's edge lies half a cell before its middle.
    return max(2 * depth - min(pitch_x, pitch_y), 0.0) if depth > 0 else 0.0


def _position_error(field: FieldMap, results: Results, state: StateResult, sample: int, area: float) -> float:
    return _kept_by(field.position_error(), area, highest=True)


def _smallest(field: FieldMap, results: Results, state: StateResult, sample: int, area: float) -> float:
    def seen_everywhere(diameter: float) -> bool:
        trial = _field_map(results, state, sample, diameter)
        assert trial is not None
        return _kept_by(trial.counts.astype(float), area, highest=False) >= needed(results)

    low = high = field.diameter
    if seen_everywhere(field.diameter):
        while seen_everywhere(low := low / 2):
            high = low
            if low < SMALLEST:
                return low
    else:
        while not seen_everywhere(high := high * 2):
            low = high
            if high > LARGEST:
                return np.inf
    for _ in range(HALVINGS):
        middle = float(np.sqrt(low * high))
        low, high = (low, middle) if seen_everywhere(middle) else (middle, high)
    return high


def _dead_emitter(field: FieldMap, results: Results, state: StateResult, sample: int, area: float) -> float:
    cell, chord = field.seen
    cells, pairs = field.grid.cells, chords_shared(results).pairs
    own = np.bincount(pairs.emitter[chord] * cells + cell, minlength=pairs.emitters * cells).reshape(-1, cells)
    whole, need = np.sum(own, axis=0), needed(results)
    return float(np.max(np.mean((whole >= need) & (whole - own < need), axis=1)))


def _ghosts(field: FieldMap, results: Results, state: StateResult, sample: int, area: float) -> float:
    cell, chord = field.seen
    cells = field.grid.cells
    good = np.bincount(cell, minlength=cells) >= needed(results)
    x, y = np.tile(field.grid.x, len(field.grid.y)), np.repeat(field.grid.y, len(field.grid.x))
    places = _spread_out(2 * GHOST_PAIRS, cells)
    chords = len(field.limit)
    shares = []
    for first, second in places.reshape(-1, 2):
        dark = np.zeros(chords, dtype=bool)
        dark[chord[(cell == first) | (cell == second)]] = True
        clear = np.bincount(cell[~dark[chord]], minlength=cells)
        away = (np.hypot(x - x[first], y - y[first]) > field.diameter) & (
            np.hypot(x - x[second], y - y[second]) > field.diameter
        )
        shares.append(np.mean(good & (clear == 0) & away))
    return float(np.mean(shares))


def _spread_out(count: int, cells: int) -> Ints:
    """Cells that lie about evenly over the field, the same ones every time (golden-ratio steps)."""
    golden = (np.sqrt(5) - 1) / 2
    return np.asarray(np.mod(0.5 + golden * np.arange(count), 1) * cells, dtype=int)


Measure = Callable[[FieldMap, Results, StateResult, int, float], float]

MEASURES: Mapping[str, tuple[Measure, bool]] = {
    "coverage": (_coverage, False),
    "least_chords": (_least_chords, False),
    "blind_spot": (_blind_spot, True),
    "position_error": (_position_error, True),
    "smallest_object": (_smallest, True),
    "dead_emitter_loss": (_dead_emitter, True),
    "ghost_share": (_ghosts, True),
}
"""Measure by name, and whether its largest value is the worst."""


def surfaces_of(results: Results) -> tuple[Surface, ...]:
    """Chords per object and position error over the field, of the first object."""
    states = objects(results)
    if not states or results.decision is None:
        return ()
    field = field_map(results, states[0], 0)
    if field is None:
        return ()
    shape = (len(field.grid.y), len(field.grid.x))
    axes = (("y", "mm", field.grid.y), ("x", "mm", field.grid.x))
    chords = Surface(
        name="chords_per_object",
        label=f"chords that see {states[0].name!r}",
        axes=axes,
        values=field.counts.reshape(shape).astype(float),
        limit=float(needed(results)),
    )
    error = Surface(
        name="position_error_map",
        label=f"position error of {states[0].name!r}",
        axes=axes,
        values=field.position_error().reshape(shape),
        kind="length",
        unit="mm",
    )
    return chords, error
