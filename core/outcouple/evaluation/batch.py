"""Metrics of a design over samples: the one door of sweeps, corners, comparisons and what-if steps."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Design
from outcouple.evaluation.curves import POINTS, continuous_curve
from outcouple.evaluation.measures import measure_common
from outcouple.evaluation.overlay import Samples, check_samples, samples_count
from outcouple.evaluation.signals import trial_share
from outcouple.evaluation.table import StateRow, Table, tabulate
from outcouple.geometry import ContinuousCurve, MetricValue, Missing, Results
from outcouple.metrics import metrics_of
from outcouple.notes import Note, merge_notes

__all__ = ["Batch", "evaluate_batch", "measure", "results_of", "sample_elements"]

Floats = NDArray[np.float64]

ELEMENTS = 2_000_000
"""Array elements a chunk may hold; keeps the peak of a batch near 300 MB whatever its length."""
SAMPLES = 256
"""Samples a chunk may hold: beyond, arrays only grow, and nothing gets faster."""
SPREAD = 8
"""What the average over a film's thickness costs, in evaluations."""


@dataclass(frozen=True)
class Batch:
    """Metrics over S samples.

    metrics  name -> MetricValue with arrays (S,), or Missing
    signals  state -> mean reading of the faintest channel, (S,)
    notes    cautions, masks over the samples
    """

    samples: int
    metrics: Mapping[str, MetricValue | Missing]
    signals: Mapping[str, Floats]
    notes: tuple[Note, ...]


def evaluate_batch(
    design: Design, samples: Samples, want: Sequence[str] | None = None, *, elements: int | None = None
) -> Batch:
    """Evaluate a design with arrays (S,) laid over numeric inputs, in chunks of bounded memory.

    want      names of metrics; None for all scalar ones
    elements  array elements of one sample (see :func:`sample_elements`), where the caller knows them
    Raises UserMistake where a sample leaves its input's bounds.
    """
    check_samples(design, samples)
    names = wanted(design, want)
    count = samples_count(samples)
    if elements is None and count > 1:
        elements = sample_elements(tabulate(design, {path: values[:1] for path, values in samples.items()}))
    size = max(1, min(count, SAMPLES, ELEMENTS // (elements or ELEMENTS)))
    parts = []
    for start in range(0, count, size):
        part = {path: values[start : start + size] for path, values in samples.items()}
        table = tabulate(design, part)
        parts.append((table.samples, measure(table, names), _signals(table), table.notes))
    return _joined(parts, names)


def wanted(design: Design, want: Sequence[str] | None) -> tuple[str, ...]:
    """The metrics asked for, all scalar ones where nothing is said."""
    known = metrics_of(design.geometry)
    if want is None:
        return tuple(name for name, metric in known.items() if metric.cost == "scalar")
    return tuple(want)


def sample_elements(table: Table) -> int:
    """Array elements one sample of a design needs at its widest."""
    light = next(iter(table.lights.values()))
    channels = max(light.hits.shape[1], light.length.shape[1])
    nodes = max(len(row.laid.weights) for row in table.rows)
    along = POINTS if any(isinstance(row.laid.state.expect, float) for row in table.rows) else 1
    if any(_spreads(row) for row in table.rows):
        along *= SPREAD
    return along * int(nodes * light.rays * max(channels, len(light.faces)) + light.reach[0].size)


def _spreads(row: StateRow) -> bool:
    """True where a film's thickness is averaged over a distribution."""
    covers = row.result.covers.values()
    return any(film.spread != "none" for cover in covers for patch in cover.patches for film in patch.films)


def _signals(table: Table) -> dict[str, Floats]:
    return {
        row.laid.state.name: np.broadcast_to(np.min(row.reading.mean, axis=1), (table.samples,)) for row in table.rows
    }


def measure(table: Table, names: Sequence[str], results: Results | None = None) -> dict[str, MetricValue | Missing]:
    """All metrics in ``names`` on one table; ``results`` where they are at hand already."""
    curve = continuous_curve(table) if results is None else results.curve
    common = measure_common(names, table, curve)
    own = [name for name in names if name not in common]
    found = dict(common)
    if own:
        results = results or results_of(table, curve)
        measured = table.design.geometry.measure(own, results)
        for name in own:
            found[name] = measured.get(name, Missing("was not evaluated here", "open"))
    return found


def results_of(table: Table, curve: ContinuousCurve | None) -> Results:
    """What a geometry's own metrics are measured on."""
    base = table.rows[0].laid

    def metric(name: str) -> MetricValue | Missing:
        return measure_common([name], table, curve).get(name, Missing(f"{name} is not a common metric"))

    return Results(
        setting=table.setting,
        light=table.light,
        states=tuple(row.result for row in table.rows),
        decision=table.decided,
        requirements=table.design.requirements,
        curve=curve,
        trial=lambda covers, extra: np.sum(
            base.weights[:, None] * trial_share(table.design, base, covers, extra), axis=1
        ),
        metric=metric,
        untouched=None if table.untouched is None else table.untouched.result,
    )


def _joined(
    parts: Sequence[tuple[int, Mapping[str, MetricValue | Missing], Mapping[str, Floats], tuple[Note, ...]]],
    names: Sequence[str],
) -> Batch:
    metrics: dict[str, MetricValue | Missing] = {}
    for name in names:
        found = [part[1][name] for part in parts]
        values = [one for one in found if isinstance(one, MetricValue)]
        if len(values) < len(found):
            metrics[name] = next(one for one in found if isinstance(one, Missing))
            continue
        states = {
            state: np.concatenate([np.broadcast_to(one.states[state], one.values.shape) for one in values])
            for state in values[0].states
        }
        metrics[name] = MetricValue(np.concatenate([one.values for one in values]), values[0].at, states)
    signals = {state: np.concatenate([part[2][state] for part in parts]) for state in parts[0][2]}
    notes, total, start = [], sum(part[0] for part in parts), 0
    for size, _, _, found_notes in parts:
        for note in found_notes:
            where = np.zeros(total, dtype=bool)
            where[start : start + size] = True if note.where is None else note.where
            notes.append(Note(note.code, note.text, note.severity, note.trigger, note.decides, where))
        start += size
    return Batch(total, metrics, signals, merge_notes(notes))
