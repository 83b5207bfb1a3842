"""The failure-direction table of a design."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Final

import numpy as np

from outcouple.decision.failure_modes import (
    COMMON_FAILURES,
    DEMANDS,
    WETTED_FAILURES,
    FailureEffect,
    FailureLike,
    failure_directions,
)
from outcouple.design import Design
from outcouple.evaluation.faults import band_coverage, declared_diagnostics, faults_of
from outcouple.evaluation.table import Table
from outcouple.outcome import FailureDirection

__all__ = ["consequence", "dangerous_uncovered", "failure_table", "has_function"]

SURE: Final = 0.99
"""Chance of telling a fault from which on a fault band counts as covering it."""

HARM: Final[dict[str, str]] = {
    "high level": "the vessel overflows",
    "leak": "the leak goes unseen",
    "low level": "the pump runs dry",
}
"""What happens when the demand is missed."""


def consequence(design: Design, table: Table, reads: str) -> str:
    """ " (dangerous: ...)" or " (a spurious trip)" for falsely reading ``absent`` or ``present``; blank without demand.

    >>> HARM["low level"]
    'the pump runs dry'
    """
    demand = str(table.view.decision.demand)
    if not demand:
        return ""
    return " (a spurious trip)" if reads == DEMANDS[demand] else f" (dangerous: {HARM[demand]})"


def has_function(table: Table) -> bool:
    """Whether the sensor decides about a level or a leak, so that its failures have a direction.

    A surface that is touched in places has none unless a demand is stated.
    """
    geometry = table.design.geometry
    if table.decided is None or geometry.reading != "level":
        return False
    return bool(table.view.decision.demand) or not geometry.spot_face


def failure_table(design: Design, table: Table) -> tuple[FailureDirection, ...]:
    """Cause, effect and direction, made for this design; empty where nothing is decided."""
    words = dict(zip(("absent", "present"), design.geometry.words, strict=True)) | {"unchanged": "unchanged"}
    return tuple(
        FailureDirection(
            effect.cause,
            effect.effect,
            words[effect.reads],
            effect.direction,
            effect.covered_by,
            effect.slow,
            effect.missing,
        )
        for effect in _effects(table)
    )


def dangerous_uncovered(table: Table) -> tuple[FailureEffect, ...]:
    """The dangerous rows that no diagnostic of the design reveals."""
    return tuple(effect for effect in _effects(table) if effect.uncovered)


def _effects(table: Table) -> tuple[FailureEffect, ...]:
    if table.decided is None:
        return ()
    have = declared_diagnostics(table)
    found: list[FailureEffect] = []
    for row in _rows(table):
        banded = "fault band" in row.covered_by and _band_tells(table, row)
        found += failure_directions(
            [row],
            demand=str(table.view.decision.demand),
            present_reads=table.design.geometry.present_reads,
            diagnostics=(*have, "fault band") if banded else have,
        )
    order = ("dangerous", "open", "spurious", "none")
    return tuple(sorted(found, key=lambda effect: (order.index(effect.direction), bool(effect.covered_by))))


def _rows(table: Table) -> Sequence[FailureLike]:
    """The geometry's own rows first; what every level or leak sensor has follows, no cause told twice."""
    own: list[FailureLike] = list(table.design.geometry.failures(table.setting))
    if not has_function(table):
        return own
    told = {row.cause for row in own}
    wetted: tuple[FailureLike, ...] = () if table.design.geometry.spot_face else WETTED_FAILURES
    return (*own, *(row for row in (*COMMON_FAILURES, *wetted) if row.cause not in told))


def _band_tells(table: Table, row: FailureLike) -> bool:
    """Whether the design's fault bands surely tell such a failure: light that is gone, or a reading at full scale.

    What creeps in passes through the healthy readings first, so no band counts for it.
    """
    if row.slow or row.light_lost is None:
        return False
    if row.light_lost:
        dead = faults_of(table)[0]
        return bool(np.min(band_coverage(table, dead.mean, dead.noise)) >= SURE)
    reading = table.rows[0].reading
    full = np.broadcast_to(reading.full_scale[:, None], reading.mean.shape)
    return bool(np.min(band_coverage(table, full, reading.noise)) >= SURE)
