"""Cautions that belong to a design as a whole."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from outcouple.decision.cautions import (
    ageing_note,
    demand_notes,
    explosive_notes,
    service_notes,
    skin_note,
    touch_note,
)
from outcouple.decision.eye_safety import eye_notes
from outcouple.decision.service_media import cracking_notes, envelope_notes, service_of
from outcouple.design import Design
from outcouple.evaluation.decision_measures import DECISION_MEASURES
from outcouple.evaluation.failures import dangerous_uncovered, has_function
from outcouple.evaluation.faults import DEAD, faults_of, told_as_fault
from outcouple.evaluation.table import Table
from outcouple.geometry import MetricValue
from outcouple.notes import Note

__all__ = ["design_notes", "media_of"]

ESTIMATE = Note(
    "estimate",
    "A calculated estimate under stated assumptions: no certification, no safety case, no substitute for a competent "
    "engineer. Verify it on hardware.",
    severity="info",
    decides="tests on hardware; local codes and licensed practice",
)
MANY = 3
"""Decisive inputs left at their defaults from which on a result is more a sketch than a design."""
SKIN = ("epidermis", "keratin", "sebum", "sweat")


def design_notes(design: Design, table: Table) -> tuple[Note, ...]:
    """The estimate's own caution, and those of the design's purpose and conditions."""
    return (
        *_safety(table),
        *_purpose(design, table),
        *_envelope(design, table),
        *_unverified(design),
        ESTIMATE,
    )


def media_of(table: Table) -> tuple[str, ...]:
    """Materials on the faces of any state, each once."""
    found: dict[str, None] = {}
    for row in table.rows:
        for way in row.laid.ways:
            for cover in way.covers.values():
                found.update(dict.fromkeys(cover.media()))
    return tuple(found)


def _safety(table: Table) -> Iterator[Note]:
    """Eyes and explosive atmospheres, by the emitter at its brightest."""
    view = table.view
    emitter, environment = view.emitter, view.environment
    power = np.asarray(emitter.power * emitter.drive)
    yield from eye_notes(
        kind=str(emitter.kind),
        wavelength=emitter.wavelength,
        power=power,
        exponent=emitter.exponent,
        half_angle=emitter.half_angle,
        duty=emitter.duty,
        size=emitter.source_size,
    )
    limit = environment.optical_limit
    yield from explosive_notes(
        explosive=environment.explosive == "yes",
        power=power,
        limit_power=None if limit is None else float(limit[0]),
        service=next((one for one in _services(table) if one != "food"), ""),
    )


def _services(table: Table) -> tuple[str, ...]:
    """Services the design states or its media point to."""
    stated = str(table.view.environment.service)
    return tuple(dict.fromkeys([*([stated] if stated != "none" else []), *service_of(media_of(table))]))


def _purpose(design: Design, table: Table) -> Iterator[Note]:
    services = [one for one in _services(table) if one in ("food", "oxygen")]
    if np.any(table.view.environment.overpressure > 0):
        services.append("pressure")
    yield from service_notes(*services)
    if "touch" in design.geometry.jobs:
        yield touch_note()
    if any(name.startswith(SKIN) for name in media_of(table)):
        yield skin_note()
    yield from _ageing(table)
    if not has_function(table):
        return
    dead = list(_dead_emitter(design, table))
    yield from demand_notes(
        str(table.view.decision.demand),
        dark_is_present=design.geometry.present_reads == "low",
        uncovered=len(dangerous_uncovered(table)),
        watched=not dead,
    )
    yield from dead


def _ageing(table: Table) -> Iterator[Note]:
    """Said where states that are told rightly when new are not at the end of the emitter's life."""
    aged = DECISION_MEASURES["margin_at_end_of_life"](table)
    if isinstance(aged, MetricValue) and table.decided is not None:
        new = np.min(np.stack(list(table.decided.sigma.values())), axis=0)
        yield from ageing_note(margin_at_end=np.where(new >= 0, aged.values, np.inf))


def _dead_emitter(design: Design, table: Table) -> Iterator[Note]:
    """Said of every design whose dead emitter passes for a healthy sensor that misses the demand."""
    unnoticed = DECISION_MEASURES["dead_emitter_unnoticed"](table)
    if not isinstance(unnoticed, MetricValue) or not np.any(unnoticed.values > 0.5):
        return
    dead = next(fault for fault in faults_of(table) if fault.name == DEAD)
    wrong = design.geometry.words[1 if dead.expect == "absent" else 0]
    yield Note(
        "dead-emitter",
        f"A dead emitter reads {wrong} and nothing in the design tells it. Add a reference photodiode "
        "(readout.reference_channel), a drive monitor (decision.diagnostics) or a fault band below the darkest healthy "
        "reading (decision.fault_low).",
        severity="danger",
        trigger=f"{float(told_as_fault(table, dead)[0]):.0%} told as a fault".replace("%", " %"),
        decides="a test with the emitter's lead cut",
        where=unnoticed.values > 0.5,
    )


def _envelope(design: Design, table: Table) -> Iterator[Note]:
    material = table.light.guide
    hottest = max(float(np.max(row.laid.p.environment.temperature)) for row in table.rows)
    yield from envelope_notes(material, hottest=hottest)
    yield from cracking_notes(material, _services(table))


def _unverified(design: Design) -> Iterator[Note]:
    left = design.unverified()
    if len(left) >= MANY:
        yield Note(
            "unverified-defaults",
            f"{len(left)} inputs that decide the result stand at defaults nobody has confirmed: state them, or take "
            "the result as a sketch.",
            trigger=", ".join(left),
            decides="the design's own data",
        )
