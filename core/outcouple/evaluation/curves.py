"""Curves: a continuous sensor's reading against its measurand, and every sensor's main response."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import immersed
from outcouple.design import State
from outcouple.evaluation.overlay import view_of
from outcouple.evaluation.signals import LaidState, lay_state, setting_of, trial_share
from outcouple.evaluation.table import Table
from outcouple.geometry import ContinuousCurve, Curve, ResponseAxis
from outcouple.readout.chain import Reading, read

__all__ = ["POINTS", "continuous_curve", "response_curve"]

Floats = NDArray[np.float64]

POINTS = 81
TRIAL = "(trial liquid)"
DEAR = 1_000_000
"""Array elements beyond which the light of a response curve is not laid out anew for every index."""


def continuous_curve(table: Table) -> ContinuousCurve | None:
    """Reading over the span of the states' numbers; None where no state carries one."""
    rows = [row for row in table.rows if isinstance(row.laid.state.expect, float)]
    if not rows:
        return None
    numbers = np.array(sorted(float(row.laid.state.expect) for row in rows))
    grid = _grid(numbers)
    laid, reading = _along(table, rows[0].laid.state, table.design.geometry.measurand, grid)
    shape = (table.samples, len(grid))
    signal, noise = (
        np.broadcast_to(np.min(array, axis=1), (table.samples * len(grid),)).reshape(shape)
        for array in (reading.mean, reading.noise)
    )
    share = np.min(np.sum(laid.weights[:, None] * laid.share, axis=1), axis=1)
    share = np.broadcast_to(share, (table.samples * len(grid),)).reshape(shape)
    return ContinuousCurve(grid, share, signal, noise, np.gradient(signal, grid, axis=1, edge_order=2))


def _grid(numbers: Floats) -> Floats:
    """Points from a little below the least number to a little above the largest, the numbers among them."""
    low, high = numbers[0], numbers[-1]
    margin = 0.1 * (high - low) if high > low else 0.1 * abs(low)
    start, stop = max(low - margin, 0.0), high + margin
    even = np.linspace(start, stop, POINTS)
    far = np.min(np.abs(even[:, None] - numbers), axis=1) > 0.25 * (stop - start) / POINTS
    return np.sort(np.concatenate([even[far], np.unique(numbers)]))


def _along(table: Table, state: State, path: tuple[str, ...], grid: Floats) -> tuple[LaidState, Reading]:
    """One state with a parameter running over a grid, for every sample: samples outermost."""
    free = replace(state, changes={key: value for key, value in state.changes.items() if key != path})
    samples = {key: np.repeat(values, len(grid)) for key, values in table.overlaid.items()}
    samples[path] = np.tile(grid, table.samples)
    view = view_of(table.design, samples, free.changes)
    laid = lay_state(
        table.design,
        free,
        view,
        samples=table.samples * len(grid),
        nodes=len(table.rows[0].laid.weights),
        breaks_of=table.media_breaks,
        lights={},
    )
    return laid, read(table.design.geometry.readout, laid, laid.share)


def response_curve(table: Table, axis: ResponseAxis) -> Curve:
    """The main response of a nominal design (samples = 1), with its states marked."""
    spaced = np.geomspace if axis.logarithmic else np.linspace
    grid = np.asarray(spaced(axis.start, axis.stop, POINTS))
    base = table.rows[0].laid
    if axis.medium == "immersed":
        laid = _relaid(table, grid)
        covers = {face: immersed(TRIAL) for face in set(base.light.faces)}
        share = trial_share(table.design, laid, covers, {TRIAL: grid})
        reading = read(table.design.geometry.readout, laid, share)
        marks = _index_marks(table)
    else:
        _, reading = _along(table, base.state, axis.path, grid)
        marks = tuple(
            (row.laid.state.name, float(row.laid.state.expect), float(np.min(row.reading.mean[0])))
            for row in table.rows
            if isinstance(row.laid.state.expect, float)
        )
    values = np.broadcast_to(np.min(reading.mean, axis=1), grid.shape)
    return Curve(
        name="response",
        label=f"reading against {axis.label}",
        axes=((axis.label, axis.unit, grid),),
        values=np.array(values),
        kind="current" if reading.unit == "A" else "electrons",
        unit=reading.unit,
        marks=marks,
    )


def _relaid(table: Table, grid: Floats) -> LaidState:
    """The first state, its light laid out anew per index (quadrature edges at each) unless that is dear."""
    base = table.rows[0].laid
    if base.light.reach.size * grid.size > DEAR:
        return base
    nodes = len(base.weights)
    breaks = (*table.media_breaks, TRIAL)
    setting = setting_of(table.design, base.p, samples=grid.size, nodes=nodes, breaks_of=breaks, extra={TRIAL: grid})[0]
    return replace(base, light=table.design.geometry.light(setting))


def _index_marks(table: Table) -> tuple[tuple[str, float, float], ...]:
    """States whose faces carry one clear medium all over, at its index."""
    found = []
    for row in table.rows:
        media = {
            patch.backing
            for way in row.laid.ways
            for cover in way.covers.values()
            for patch in cover.patches
            if not patch.films and isinstance(patch.backing, str) and not np.any(patch.albedo)
        }
        whole = all(len(cover.patches) == 1 for way in row.laid.ways for cover in way.covers.values())
        if whole and len(media) == 1:
            index = float(row.laid.media.centre(str(media.pop()))[0])
            found.append((row.laid.state.name, index, float(np.min(row.reading.mean[0]))))
    return tuple(found)
