"""Common metrics of the decision: its two directions of error, its times, its life."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Final

import numpy as np
from numpy.typing import NDArray

from outcouple.decision.detection import per_year, release_time, response_time
from outcouple.decision.failure_modes import DEMANDS
from outcouple.decision.score import kth
from outcouple.evaluation.failures import dangerous_uncovered
from outcouple.evaluation.faults import DEAD, band_coverage, faults_of, told_as_fault, wrong_chances
from outcouple.evaluation.table import StateRow, Table
from outcouple.geometry import MetricValue, Missing
from outcouple.readout.drift import held_time, slowest_rise

__all__ = ["DECISION_MEASURES", "END_OF_LIFE"]

Floats = NDArray[np.float64]
Found = MetricValue | Missing

END_OF_LIFE: Final = 0.7
"""Share of its light an emitter has left at its end of life, by custom; from memory."""
NOT_BINARY = Missing("needs states that expect both absent and present")
NO_DEMAND = Missing("no demand is stated, so the dangerous direction is open", "open")
NOT_LEVEL = Missing("this sensor reads changes against a tracked baseline, not levels")


def _worst(values: Mapping[str, Floats], samples: int, *, highest: bool) -> MetricValue:
    names = list(values)
    stack = np.stack([np.broadcast_to(values[name], (samples,)) for name in names])
    pick = np.argmax(stack, axis=0) if highest else np.argmin(stack, axis=0)
    return MetricValue(stack[pick, np.arange(samples)], names[int(pick[0])], values)


def _demanded(table: Table) -> str | Missing:
    """The state in which the function must act."""
    if table.decided is None:
        return NOT_BINARY
    demand = str(table.view.decision.demand)
    return DEMANDS[demand] if demand else NO_DEMAND


def _dangerous(table: Table) -> Found:
    target = _demanded(table)
    if isinstance(target, Missing):
        return target
    return _worst(wrong_chances(table, lambda expect: expect == target), table.samples, highest=True)


def _spurious(table: Table) -> Found:
    """False trips, and healthy readings that are told as faults."""
    target = _demanded(table)
    if isinstance(target, Missing):
        return target
    chances = wrong_chances(table, lambda expect: expect != target)
    for fault in faults_of(table):
        chances.pop(fault.name, None)
    for row in table.binary:
        name, reading = row.laid.state.name, row.reading
        chances[name] = chances.get(name, 0.0) + band_coverage(table, reading.mean, reading.noise)
    rates = {name: per_year(np.minimum(p, 1.0), rate=table.view.decision.rate) for name, p in chances.items()}
    return _worst(rates, table.samples, highest=True)


def _coverage(table: Table) -> Found:
    if table.decided is None:
        return NOT_BINARY
    if table.design.geometry.reading != "level":
        return NOT_LEVEL
    return _worst({f.name: told_as_fault(table, f) for f in faults_of(table)}, table.samples, highest=False)


def _uncovered(table: Table) -> Found:
    target = _demanded(table)
    if isinstance(target, Missing):
        return target
    rows = dangerous_uncovered(table)
    return MetricValue(np.full(table.samples, float(len(rows))), rows[0].cause if rows else "")


def _dead_unnoticed(table: Table) -> Found:
    """Chance that a dead emitter passes for a healthy sensor that says the wrong thing."""
    target = _demanded(table)
    if isinstance(target, Missing):
        return target
    if table.design.geometry.reading != "level":
        return NOT_LEVEL
    chances = wrong_chances(table, lambda expect: expect == target)
    return MetricValue(np.broadcast_to(chances[DEAD], (table.samples,)), DEAD)


def _response(table: Table) -> Found:
    decision = table.view.decision
    settling = table.rows[0].reading.settling
    found = response_time(rate=decision.rate, confirm=decision.confirm, settling=settling)
    return MetricValue(np.broadcast_to(found, (table.samples,)))


def _release(table: Table) -> Found:
    decision = table.view.decision
    found = release_time(
        rate=decision.rate,
        confirm=decision.confirm,
        window=decision.window,
        settling=table.rows[0].reading.settling,
    )
    return MetricValue(np.broadcast_to(found, (table.samples,)))


def _touches(table: Table) -> Mapping[str, tuple[Floats, Floats]] | Missing:
    """Per present state the change of the channel that decides and its level, (S,) each."""
    if table.design.geometry.reading != "change":
        return Missing("this sensor reads levels; only a tracked baseline swallows a slow change")
    if table.decided is None:
        return NOT_BINARY
    if table.view.decision.tracking is None:
        return Missing("no tracking of the baseline is stated (decision.tracking)")
    need, level = int(table.view.decision.channels), table.decided.on
    found = {}
    for row in table.binary:
        if row.laid.state.expect == "present" and row.score is not None:
            over = kth(row.score.seeing / np.maximum(level, 1e-300), need)
            found[row.laid.state.name] = (over, np.ones_like(over))
    return found


def _slowest_touch(table: Table) -> Found:
    return _tracked(table, lambda over, level, tau: slowest_rise(over, level=level, time_constant=tau))


def _held(table: Table) -> Found:
    return _tracked(table, lambda over, level, tau: held_time(np.maximum(over, 0.0), level=level, time_constant=tau))


def _tracked(table: Table, of: Callable[[Floats, Floats, Floats], Floats]) -> Found:
    touches = _touches(table)
    if isinstance(touches, Missing):
        return touches
    tau = table.view.decision.tracking
    values = {name: of(np.maximum(over, 1e-12), level, tau) for name, (over, level) in touches.items()}
    return _worst(values, table.samples, highest=False)


def _end_of_life(table: Table) -> Found:
    """Margins where all light has aged and the level stands where it was set when new."""
    if table.decided is None:
        return NOT_BINARY
    if table.design.geometry.reading != "level":
        return NOT_LEVEL
    kept = 1.0 if getattr(table.view.readout, "reference_channel", "no") == "yes" else END_OF_LIFE
    return _worst({row.laid.state.name: _aged(table, row, kept) for row in table.binary}, table.samples, highest=False)


def _aged(table: Table, row: StateRow, kept: float) -> Floats:
    decided, reading = table.decided, row.reading
    assert decided is not None
    sign = -1.0 if table.design.geometry.present_reads == "low" else 1.0
    side, level = (1.0, decided.on) if row.laid.state.expect == "present" else (-1.0, decided.off)
    mean = sign * (reading.unlit + kept * (reading.mean - reading.unlit))
    return side * kth((mean - level) / reading.noise, int(table.view.decision.channels))


DECISION_MEASURES: Mapping[str, Callable[[Table], Found]] = {
    "dangerous_probability": _dangerous,
    "spurious_per_year": _spurious,
    "dead_emitter_unnoticed": _dead_unnoticed,
    "undetected_dangerous_causes": _uncovered,
    "fault_band_coverage": _coverage,
    "margin_at_end_of_life": _end_of_life,
    "response_time": _response,
    "release_time": _release,
    "slowest_touch": _slowest_touch,
    "held_time": _held,
}
