"""Cautions a result must carry: explosive atmospheres, overfill, dry running, food, oxygen, pressure, people.

Screening only: nothing here passes anything. Each caution says what set it off and what decides instead.
"""

from __future__ import annotations

from typing import Final

import numpy as np
from numpy.typing import ArrayLike

from outcouple.notes import Note

__all__ = [
    "ageing_note",
    "demand_notes",
    "explosive_notes",
    "service_notes",
    "skin_note",
    "touch_note",
]

LOCAL: Final = "local codes and a licensed professional"


def explosive_notes(
    *,
    explosive: bool,
    power: ArrayLike,
    limit_power: float | None = None,
    service: str = "",
) -> tuple[Note, ...]:
    """Optical radiation where an explosive atmosphere may be present.

    explosive    the design says so
    power        optical, all emitters while on [W]
    limit_power  from the user's own certificate [W]; none is assumed
    service      what the sensor touches; fuel, solvent and oxygen set the caution off by themselves
    """
    triggered = explosive or service in ("fuel", "solvent", "oxygen", "dust")
    if not triggered:
        return ()
    text = (
        "Light can ignite an explosive atmosphere by heating absorbing particles; the electrical side (intrinsic "
        "safety) is a matter of its own. This tool holds no limit of its own"
    )
    above = limit_power is not None and bool(np.any(np.asarray(power) > limit_power))
    if limit_power is None:
        text += ": enter the certified one."
    elif above:
        text += "; the power exceeds the one you entered."
    else:
        text += "; the power stays below the one you entered, which proves nothing about irradiance or faults."
    return (
        Note(
            "explosive-atmosphere",
            text,
            severity="danger",
            trigger=f"optical power up to {np.max(np.asarray(power)) * 1e3:.3g} mW",
            decides=f"IEC 60079-28, a certified body, {LOCAL}",
        ),
    )


def demand_notes(demand: str, *, dark_is_present: bool, uncovered: int = 0, watched: bool = False) -> tuple[Note, ...]:
    """Cautions of a level or leak function.

    demand           "high level", "low level", "leak", or "" where none is stated
    dark_is_present  a low reading means wet
    uncovered        dangerous failures no diagnostic of the design reveals
    watched          a diagnostic of the design tells a dead emitter
    """
    decides = f"IEC 61508 and IEC 61511 where they apply, {LOCAL}"
    notes = []
    if not demand:
        notes.append(
            Note(
                "demand-open",
                "No demand is stated, so the dangerous direction of every failure is open.",
                decides=decides,
            )
        )
    if demand in ("high level", "leak"):
        notes.append(
            Note(
                "overfill",
                "A calculated margin is no safety rating. Overfill and spill prevention needs a device separate from "
                "the gauging, in hardware and in supply.",
                severity="danger",
                trigger=f"demand = {demand}",
                decides=decides,
            )
        )
    if demand == "low level" and dark_is_present:
        notes.append(
            Note(
                "dry-run-light-loss",
                "Light lost reads wet, so a dead emitter, a broken cable or an aged lamp hides a dry run"
                + ("; all rests on the diagnostics that tell it." if watched else "."),
                severity="caution" if watched else "danger",
                trigger="demand = low level, a low reading means wet",
                decides=f"diagnostics that reveal lost light, {decides}",
            )
        )
    if uncovered:
        plural = "failure" if uncovered == 1 else "failures"
        notes.append(
            Note(
                "dangerous-uncovered",
                f"{uncovered} dangerous {plural} would go unnoticed until the demand or a proof test.",
                severity="danger",
                trigger=f"{uncovered} rows of the failure table",
                decides=decides,
            )
        )
    return tuple(notes)


_SERVICES: Final[dict[str, tuple[str, str, str]]] = {
    "food": (
        "food-contact",
        "Materials in contact with food, drinking water or medicines need proof of compliance, and cleaning its own.",
        "material declarations and the food or drinking-water law of the place",
    ),
    "oxygen": (
        "oxygen-service",
        "Oxygen-rich service sets limits to materials, cleanliness and ignition sources that are not computed here.",
        "an oxygen-service specialist",
    ),
    "pressure": (
        "pressure",
        "No strength, seal or thermal shock is computed: a wetted tip is a part of the pressure boundary.",
        "the pressure-equipment code and a competent engineer",
    ),
}


def service_notes(*services: str) -> tuple[Note, ...]:
    """Cautions of a service: any of "food", "oxygen", "pressure"."""
    unknown = sorted(set(services) - set(_SERVICES))
    if unknown:
        raise ValueError(f"unknown services: {', '.join(unknown)}; known: {', '.join(_SERVICES)}")
    return tuple(
        Note(code, text, severity="danger", trigger=f"service = {name}", decides=f"{decides}; {LOCAL}")
        for name, (code, text, decides) in _SERVICES.items()
        if name in services
    )


def touch_note() -> Note:
    """A touch surface is no safety input."""
    return Note(
        "touch-no-safety",
        "A touch surface is not a safety input: no emergency stop, no guard, no enabling switch.",
        trigger="a touch geometry",
        decides="ISO 13849, IEC 62061 and the machine's risk assessment",
    )


def skin_note(*, reflectance: tuple[float, float] | None = None, index: tuple[float, float] | None = None) -> Note:
    """The range of people a touch figure stands for.

    reflectance, index  (low, high) used for skin; None where a single value was used
    """
    parts = []
    if reflectance is not None:
        parts.append(f"reflectance {reflectance[0]:.2f} to {reflectance[1]:.2f}")
    if index is not None:
        parts.append(f"index {index[0]:.2f} to {index[1]:.2f}")
    text = (
        f"Skin is taken as {' and '.join(parts)}: pigmentation, moisture and age of all users must lie inside."
        if parts
        else "One value stands for all skin: pigmentation (below 1 um), moisture and age change it; check the range."
    )
    return Note("skin-range", text, trigger="a finger touches", decides="a trial with the people who will use it")


def ageing_note(*, margin_at_end: ArrayLike) -> tuple[Note, ...]:
    """A caution where the margin in standard deviations turns negative at the end of life."""
    gone = np.atleast_1d(np.asarray(margin_at_end, dtype=float) < 0)
    note = Note(
        "margin-ages-away",
        "The decision fails before the emitter's end of life: read a ratio, track the level, or start brighter.",
        trigger="margin below zero at the end of life",
        where=gone,
    )
    return (note,) if note.holds() else ()
