"""The common metrics, measured on a table of states."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from outcouple.evaluation.decision_measures import DECISION_MEASURES
from outcouple.evaluation.table import StateRow, Table
from outcouple.geometry import ContinuousCurve, MetricValue, Missing

__all__ = ["common_measures", "measure_common"]

Floats = NDArray[np.float64]
Found = MetricValue | Missing

NOT_BINARY = Missing("needs states that expect both absent and present")
NOT_CONTINUOUS = Missing("needs states that carry a number as expect")


def _worst(values: Mapping[str, Floats], samples: int, *, highest: bool) -> MetricValue:
    """The worst state's value per sample, and its name at the first."""
    if not values:
        return MetricValue(np.full(samples, np.nan))
    names = list(values)
    stack = np.stack([np.broadcast_to(values[name], (samples,)) for name in names])
    pick = np.argmax(stack, axis=0) if highest else np.argmin(stack, axis=0)
    return MetricValue(stack[pick, np.arange(samples)], names[int(pick[0])], values)


def _faintest(row: StateRow, values: Floats) -> Floats:
    """Least over the channels that see the untouched sensor at all."""
    spread = np.broadcast_to(values, np.broadcast_shapes(values.shape, row.reading.mean.shape))
    if row.score is not None:
        blind = np.isinf(np.broadcast_to(row.score.noise, spread.shape))
        spread = np.where(blind & ~np.all(blind, axis=1, keepdims=True), np.inf, spread)
    return np.asarray(np.min(spread, axis=1))


def _loudest(row: StateRow, values: Floats) -> Floats:
    return np.asarray(
        np.max(np.broadcast_to(values, np.broadcast_shapes(values.shape, row.reading.mean.shape)), axis=1)
    )


def _per_state(table: Table, of: Callable[[StateRow], Floats], *, highest: bool) -> MetricValue:
    values = {row.laid.state.name: of(row) for row in table.rows if row.laid.state.role == "normal"}
    return _worst(values, table.samples, highest=highest)


def _signal(table: Table) -> Found:
    return _per_state(table, lambda row: _faintest(row, row.reading.mean), highest=False)


def _noise(table: Table) -> Found:
    return _per_state(table, lambda row: _loudest(row, row.reading.noise), highest=True)


def _signal_to_noise(table: Table) -> Found:
    return _per_state(table, lambda row: _faintest(row, row.reading.mean / row.reading.noise), highest=False)


def _optical_share(table: Table) -> Found:
    return _per_state(table, lambda row: _faintest(row, row.result.share), highest=False)


def _worst_ratio(table: Table) -> Found:
    if table.design.geometry.reading != "level":
        return Missing("this sensor reads changes, not levels; see its touch metrics")
    absent = {row.laid.state.name: row.reading.mean for row in table.binary if row.laid.state.expect == "absent"}
    present = {row.laid.state.name: row.reading.mean for row in table.binary if row.laid.state.expect == "present"}
    if not absent or not present:
        return NOT_BINARY
    bright, dark = (absent, present) if table.design.geometry.present_reads == "low" else (present, absent)
    least = _worst({name: np.min(mean, axis=1) for name, mean in bright.items()}, table.samples, highest=False)
    most = _worst({name: np.max(mean, axis=1) for name, mean in dark.items()}, table.samples, highest=True)
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = np.where(most.values > 0, least.values / most.values, np.inf)
    return MetricValue(ratio, f"{least.at} : {most.at}")


def _margin_sigma(table: Table) -> Found:
    return NOT_BINARY if table.decided is None else _worst(table.decided.sigma, table.samples, highest=False)


def _margin_span(table: Table) -> Found:
    return NOT_BINARY if table.decided is None else _worst(table.decided.of_span, table.samples, highest=False)


def _false_alarms(table: Table) -> Found:
    if table.decided is None:
        return NOT_BINARY
    return MetricValue(table.decided.false_alarms, table.decided.worst_absent)


def _miss(table: Table) -> Found:
    return NOT_BINARY if table.decided is None else _worst(table.decided.miss, table.samples, highest=True)


def _headroom(table: Table) -> Found:
    return _per_state(table, lambda row: row.reading.headroom(), highest=False)


def _ambient_ratio(table: Table) -> Found:
    loudest = np.max(
        np.stack([np.broadcast_to(_loudest(row, row.reading.mean), (table.samples,)) for row in table.rows]),
        axis=0,
    )

    def of(row: StateRow) -> Floats:
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(np.where(loudest > 0, _loudest(row, row.reading.ambient) / loudest, np.inf))

    return _per_state(table, of, highest=True)


def _noise_equivalent_power(table: Table) -> Found:
    noise = _per_state(
        table, lambda row: _loudest(row, row.reading.noise / row.reading.per_watt.reshape(-1, 1)), highest=False
    )
    return MetricValue(noise.values, noise.at)


def _stage(name: str) -> Callable[[Table], Found]:
    """A figure of the read-out's stage; of the state that is worst off."""

    def of(table: Table) -> Found:
        figures = {row.laid.state.name: row.reading.stage for row in table.rows if row.laid.state.role == "normal"}
        if not all(name in stage for stage in figures.values()):
            return Missing("this kind of read-out has no such stage")
        return _worst({state: stage[name] for state, stage in figures.items()}, table.samples, highest=name in LARGEST)

    return of


LARGEST = ("stage_settling", "bits_used")
"""Figures of the stage whose largest value over the states counts."""

MEASURES: Mapping[str, Callable[[Table], Found]] = {
    "signal": _signal,
    "noise": _noise,
    "signal_to_noise": _signal_to_noise,
    "optical_share": _optical_share,
    "worst_ratio": _worst_ratio,
    "margin_sigma": _margin_sigma,
    "margin_span": _margin_span,
    "false_alarms_per_year": _false_alarms,
    "miss_probability": _miss,
    "saturation_headroom": _headroom,
    "ambient_ratio": _ambient_ratio,
    "noise_equivalent_power": _noise_equivalent_power,
    "stage_bandwidth": _stage("stage_bandwidth"),
    "phase_margin": _stage("phase_margin"),
    "stage_settling": _stage("stage_settling"),
    "bits_used": _stage("bits_used"),
    **DECISION_MEASURES,
}


def _slope(table: Table, curve: ContinuousCurve) -> Found:
    relative = np.abs(curve.slope) / np.max(curve.signal, axis=1, keepdims=True)
    return MetricValue(np.max(relative, axis=1))


def _best_at(curve: ContinuousCurve) -> NDArray[np.int64]:
    with np.errstate(divide="ignore"):
        return np.asarray(np.argmin(np.where(curve.slope != 0, curve.noise / np.abs(curve.slope), np.inf), axis=1))


def _best_bias(table: Table, curve: ContinuousCurve) -> Found:
    return MetricValue(curve.values[np.argmax(np.abs(curve.slope), axis=1)])


def _at_states(table: Table, curve: ContinuousCurve) -> dict[str, Floats]:
    found = {}
    with np.errstate(divide="ignore"):
        resolved = np.where(curve.slope != 0, curve.noise / np.abs(curve.slope), np.inf)
    for row in table.rows:
        if isinstance(row.laid.state.expect, float):
            at = int(np.argmin(np.abs(curve.values - row.laid.state.expect)))
            found[row.laid.state.name] = resolved[:, at]
    return found


def _resolution(table: Table, curve: ContinuousCurve) -> Found:
    return _worst(_at_states(table, curve), table.samples, highest=True)


def _best_resolution(table: Table, curve: ContinuousCurve) -> Found:
    rows, at = np.arange(len(curve.slope)), _best_at(curve)
    return MetricValue(curve.noise[rows, at] / np.abs(curve.slope[rows, at]))


def _density(table: Table, curve: ContinuousCurve) -> Found:
    best = _best_resolution(table, curve)
    assert isinstance(best, MetricValue)
    return MetricValue(best.values / np.sqrt(table.rows[0].reading.bandwidth))


def _monotonic_span(table: Table, curve: ContinuousCurve) -> Found:
    """The run of one sign of slope that holds most of the states' numbers."""
    numbers = [row.laid.state.expect for row in table.rows if isinstance(row.laid.state.expect, float)]
    inside = (curve.values >= min(numbers)) & (curve.values <= max(numbers))
    spans = []
    for slope in curve.slope:
        turns = np.flatnonzero(np.sign(slope[1:]) * np.sign(slope[:-1]) < 0) + 1
        edges = np.concatenate([[0], turns, [len(slope) - 1]])
        counts = [np.sum(inside[a : b + 1]) for a, b in pairwise(edges)]
        best = int(np.argmax(counts))
        spans.append(curve.values[edges[best + 1]] - curve.values[edges[best]])
    return MetricValue(np.array(spans))


CONTINUOUS: Mapping[str, Callable[[Table, ContinuousCurve], Found]] = {
    "slope": _slope,
    "best_bias": _best_bias,
    "resolution": _resolution,
    "best_resolution": _best_resolution,
    "resolution_density": _density,
    "monotonic_span": _monotonic_span,
}


def common_measures() -> tuple[str, ...]:
    """Names of all common metrics."""
    return (*MEASURES, *CONTINUOUS)


def measure_common(names: Sequence[str], table: Table, curve: ContinuousCurve | None) -> dict[str, Found]:
    """The common metrics among ``names``."""
    found: dict[str, Found] = {}
    for name in names:
        if name in MEASURES:
            found[name] = MEASURES[name](table)
        elif name in CONTINUOUS:
            found[name] = NOT_CONTINUOUS if curve is None else CONTINUOUS[name](table, curve)
    return found
