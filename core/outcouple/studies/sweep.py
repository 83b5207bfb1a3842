"""Metrics of a design over one, two or more axes, evaluated as batches."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from concurrent.futures import Executor
from dataclasses import replace
from itertools import product

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Design, Requirement
from outcouple.errors import UserMistake, nearest
from outcouple.evaluation.batch import Batch, sample_elements
from outcouple.evaluation.judge import value_for
from outcouple.evaluation.notes import design_notes
from outcouple.evaluation.table import tabulate
from outcouple.geometry import MetricValue, Missing
from outcouple.metrics import metrics_of
from outcouple.notes import Note, merge_notes
from outcouple.studies.axes import Axis, read_axes
from outcouple.studies.margins import label_of
from outcouple.studies.places import with_values
from outcouple.studies.swept import Limit, Sweep, SweptMetric
from outcouple.studies.work import Task, chunked, run_tasks

__all__ = ["NEEDS_MAP", "Sweep", "sweep", "wanted_metrics"]

Floats = NDArray[np.float64]

ALWAYS = ("margin_sigma",)
"""Metrics of every sweep, beside those that requirements name."""
NEEDS_MAP = Missing("needs a map, which was not asked for (--maps)", "open")


def sweep(
    design: Design,
    axes: Sequence[str] | Sequence[Axis],
    *,
    metrics: Sequence[str] = (),
    maps: bool = False,
    executor: Executor | None = None,
    progress: Callable[[int, int], None] | None = None,
) -> Sweep:
    """Evaluate a design over the grid of some axes.

    axes      sentences ("plate.thickness from 2 mm to 10 mm in 17"), or axes made of them
    metrics   names of metrics beside those that requirements name
    maps      also what requirements ask of metrics that cost a map; without it they stay open
    executor  any of ``concurrent.futures``; the numbers are the same with and without
    progress  called with the points done and the points of all

    An interrupt (Ctrl-C) ends it early: what was evaluated is returned, ``finished`` is false.
    Raises UserMistake for axes, metrics and values that cannot be taken.
    """
    read = tuple(axis for axis in axes if isinstance(axis, Axis)) or read_axes(design, [str(text) for text in axes])
    want = wanted_metrics(design, metrics, maps=maps)
    grid = _Grid(design, read, want)
    with np.errstate(all="ignore"):
        nominal = tabulate(design)
    grid.standing = tuple(replace(note, where=None) for note in design_notes(design, nominal))
    size = sample_elements(nominal)
    designs = _designs(design, read)
    tasks = [task for made, at in designs for task in chunked(made, *_laid(read, at, want), elements=size)]
    total, count = grid.total, 0
    try:
        for task, batch in run_tasks(tasks, executor):
            grid.take(task, batch)
            count += len(task.places)
            if progress is not None:
                progress(count, total)
    except KeyboardInterrupt:
        if count == 0:
            raise
    return grid.sweep()


def wanted_metrics(design: Design, metrics: Sequence[str], *, maps: bool = False) -> tuple[str, ...]:
    """Names of metrics to evaluate: those of requirements, those asked for, the margin. Maps only where asked for."""
    known = metrics_of(design.geometry)
    for name in metrics:
        if name not in known:
            raise UserMistake(f"--metric {name}: no such metric{nearest(name, known)}; there are: {', '.join(known)}")
    required = [one.metric for one in design.requirements if maps or known[one.metric].cost == "scalar"]
    return tuple(dict.fromkeys([*required, *metrics, *ALWAYS]))


def _designs(design: Design, axes: Sequence[Axis]) -> list[tuple[Design, tuple[int | None, ...]]]:
    """A design for every combination of the values that cannot run as arrays; None stands for a whole axis."""
    choices = [[None] if axis.runs else range(len(axis.values)) for axis in axes]
    found = []
    for at in product(*choices):
        values = {axis.place: axis.values[one] for axis, one in zip(axes, at, strict=True) if one is not None}
        found.append((with_values(design, values), at))
    return found


def _laid(
    axes: Sequence[Axis], at: Sequence[int | None], want: tuple[str, ...]
) -> tuple[dict[tuple[str, ...], Floats], tuple[str, ...], NDArray[np.int64]]:
    """Samples over the axes that run, what is wanted, and the places of the samples in the flat grid."""
    shape = tuple(len(axis.values) for axis in axes)
    indices = np.meshgrid(
        *([np.arange(size) if one is None else np.array([one]) for size, one in zip(shape, at, strict=True)]),
        indexing="ij",
    )
    places = np.ravel_multi_index([index.ravel() for index in indices], shape)
    samples = {
        axis.place.path: np.array(axis.values, dtype=float)[index.ravel()]
        for axis, index in zip(axes, indices, strict=True)
        if axis.runs
    }
    return samples, want, places


class _Grid:
    """Collects the answers of batches into arrays over the whole grid."""

    def __init__(self, design: Design, axes: tuple[Axis, ...], want: tuple[str, ...]) -> None:
        self.design, self.axes, self.want = design, axes, want
        self.shape = tuple(len(axis.values) for axis in axes)
        self.total = int(np.prod(self.shape))
        self.done = np.zeros(self.total, dtype=bool)
        self.values = {name: self._empty() for name in want}
        self.states: dict[str, dict[str, Floats]] = {name: {} for name in want}
        self.why: dict[str, dict[str, None]] = {name: {} for name in want}
        self.signals: dict[str, Floats] = {}
        self.margins = [self._empty() for _ in design.requirements]
        self.standing: tuple[Note, ...] = ()
        self.notes: dict[tuple[str, str], Note] = {}

    def _empty(self) -> Floats:
        return np.full(self.total, np.nan)

    def take(self, task: Task, batch: Batch) -> None:
        """Put one batch's answers in their places."""
        at = task.places
        families = [(state.name, state.family) for state in task.design.states]
        for name in self.want:
            found = batch.metrics[name]
            if isinstance(found, Missing):
                self.why[name][found.why] = None
                continue
            self.values[name][at] = found.values
            for state, values in found.states.items():
                self.states[name].setdefault(state, self._empty())[at] = values
        for state, values in batch.signals.items():
            self.signals.setdefault(state, self._empty())[at] = values
        for one, margin in zip(task.design.requirements, self.margins, strict=True):
            picked = value_for(one, batch.metrics.get(one.metric, NEEDS_MAP), families)
            if one.over == "nominal" and isinstance(picked, MetricValue):
                margin[at] = one.margin(picked.values)
        for note in batch.notes:
            known = self.notes.setdefault((note.code, note.text), replace(note, where=np.zeros(self.total, dtype=bool)))
            assert known.where is not None
            known.where[at] |= True if note.where is None else note.where
        self.done[at] = True

    def sweep(self) -> Sweep:
        """All of it as a sweep."""
        known = metrics_of(self.design.geometry)
        return Sweep(
            title=self.design.title,
            file=self.design.file,
            geometry=self.design.geometry.name,
            axes=self.axes,
            metrics={
                name: SweptMetric(
                    known[name],
                    self.values[name].reshape(self.shape),
                    {state: values.reshape(self.shape) for state, values in self.states[name].items()},
                    tuple(self.why[name]),
                )
                for name in self.want
            },
            signals={state: values.reshape(self.shape) for state, values in self.signals.items()},
            limits=tuple(
                Limit(one, label_of(one, known[one.metric]), margin.reshape(self.shape), self._open(one))
                for one, margin in zip(self.design.requirements, self.margins, strict=True)
            ),
            done=self.done.reshape(self.shape),
            reading=known["signal"],
            notes=merge_notes(self.notes.values()),
            standing=self.standing,
            raw=self.design.raw,
        )

    def _open(self, one: Requirement) -> str:
        if one.over != "nominal":
            return f"asked for over {one.over}, which a sweep does not run"
        if one.metric not in self.want:
            return NEEDS_MAP.why
        return "; ".join(self.why[one.metric]) if np.all(np.isnan(self.values[one.metric])) else ""
