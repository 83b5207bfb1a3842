"""What broken sensors read, and how surely that is told as a fault."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.decision.failure_modes import DEMANDS, DIAGNOSTICS
from outcouple.decision.score import Score, absent_chance, present_chance
from outcouple.decision.three_way import Bands, fault_coverage
from outcouple.evaluation.table import StateRow, Table

__all__ = ["DEAD", "Fault", "band_coverage", "declared_diagnostics", "faults_of", "told_as_fault", "wrong_chances"]

Floats = NDArray[np.float64]

DEAD = "(dead emitter)"
"""Name of the state that every level sensor is asked about, stated or not."""
WATCHERS = ("reference", "drive monitor")
"""Diagnostics that tell a dead emitter by itself."""


@dataclass(frozen=True)
class Fault:
    """A broken sensor's reading.

    expect       what is really there
    mean, noise  of the reading, (S, C)
    unlit        True where the emitter gives no light
    """

    name: str
    expect: str
    mean: Floats
    noise: Floats
    unlit: bool


def declared_diagnostics(table: Table) -> tuple[str, ...]:
    """Names of the diagnostics the design has; a fault band is not among them, since it covers what it covers."""
    view = table.view.decision.diagnostics
    found = {name for name in DIAGNOSTICS if name != "fault band" and getattr(view, name.replace(" ", "_"))}
    if getattr(table.view.readout, "reference_channel", "no") == "yes":
        found.add("reference")
    return tuple(name for name in DIAGNOSTICS if name in found)


def faults_of(table: Table) -> tuple[Fault, ...]:
    """The dead emitter, in the state the demand asks for, and the faults the design states."""
    rows = [row for row in table.rows if isinstance(row.laid.state.expect, str)]
    stated = [_stated(row) for row in rows if row.laid.state.role == "fault"]
    truth = DEMANDS[str(table.view.decision.demand)] or "absent"
    like = next((row for row in rows if row.laid.state.expect == truth and row.laid.state.role == "normal"), None)
    if like is None:
        return tuple(stated)
    dead = Fault(DEAD, truth, like.reading.unlit, like.reading.unlit_noise, unlit=True)
    return (dead, *stated)


def _stated(row: StateRow) -> Fault:
    unlit = not np.any(np.asarray(row.laid.p.emitter.power))
    return Fault(row.laid.state.name, str(row.laid.state.expect), row.reading.mean, row.reading.noise, unlit)


def told_as_fault(table: Table, fault: Fault) -> Floats:
    """Chance that a broken sensor is told as one, (S,): by its fault bands, or by what watches a dead emitter."""
    if fault.unlit and set(WATCHERS) & set(declared_diagnostics(table)):
        return np.ones(table.samples)
    return band_coverage(table, fault.mean, fault.noise)


def band_coverage(table: Table, mean: Floats, noise: Floats) -> Floats:
    """Chance that a reading falls into the fault bands, (S,); of its surest channel. 0 without bands."""
    bands = _bands(table)
    if bands is None:
        return np.zeros(table.samples)
    quiet = np.maximum(noise, 1e-300)
    return np.broadcast_to(np.max(fault_coverage(bands, mean=mean, noise=quiet), axis=1), (table.samples,))


def _bands(table: Table) -> Bands | None:
    """The fault bands in units of the reading, (S, C); None without."""
    low, high = table.view.decision.fault_low, table.view.decision.fault_high
    bright = "absent" if table.design.geometry.present_reads == "low" else "present"
    like = next((row for row in table.binary if row.laid.state.expect == bright), None)
    if like is None or (low is None and high is None):
        return None
    full = like.reading.mean
    bottom = np.full(full.shape, -np.inf) if low is None else low[:, None] * full
    top = np.full(full.shape, np.inf) if high is None else high[:, None] * full
    return Bands(low=bottom, level=bottom, high=top)


def wrong_chances(table: Table, wanted: Callable[[str], bool]) -> dict[str, Floats]:
    """Chance per decision, (S,), that a state is told as the other one and not as a fault.

    wanted  says for what is really there ("absent" or "present") whether the state counts

    States of the design, then its faults and the dead emitter.
    """
    decided = table.decided
    if decided is None:
        return {}
    found = {name: chance for name, chance in {**decided.alarm, **decided.miss}.items() if wanted(_expect(table, name))}
    for fault in faults_of(table) if table.design.geometry.reading == "level" else ():
        if wanted(fault.expect):
            sign = -1.0 if table.design.geometry.present_reads == "low" else 1.0
            score = Score(fault.name, fault.expect, sign * fault.mean, np.maximum(fault.noise, 1e-300))
            chance = present_chance if fault.expect == "absent" else absent_chance
            found[fault.name] = chance(score, decided.on, table.view.decision) * (1 - told_as_fault(table, fault))
    return found


def _expect(table: Table, name: str) -> str:
    return str(table.row(name).laid.state.expect)
