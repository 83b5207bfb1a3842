"""Outside light as a design states it, at each channel: through the optical filter, within the sensor's own etendue."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.notes import Note
from outcouple.readout.ambient import ambient_notes, etendue_current, mean_sensitivity, sensed_density
from outcouple.readout.reading import Lit

__all__ = ["outside_light", "outside_notes"]

Floats = NDArray[np.float64]


def outside_light(lit: Lit, sensitivity: Floats, at_peak: Floats) -> Floats:
    """Reading per second or photocurrent that outside light brings to each channel, (S, C).

    sensitivity  of the detector at `ambient.band_centres`, reading per watt
    at_peak      the same at the emitter's peak, (S,), for an irradiance measured with no kind of light named

    The surroundings are taken as evenly bright over the channel's etendue.
    """
    if not _shines(lit.p):
        return np.zeros((1, lit.etendue.shape[1]))
    return etendue_current(_per_area(lit.p, sensitivity, at_peak)[:, None], etendue=lit.etendue)


def _shines(p: Any) -> bool:
    environment = p.environment
    if environment.irradiance is not None:
        return bool(np.any(environment.irradiance > 0))
    return environment.ambient != "none" and bool(np.any(environment.illuminance > 0))


def _measurable(p: Any) -> bool:
    """Whether this kind of read-out takes a measured photocurrent of outside light."""
    return hasattr(p.readout, "ambient_current")


def _per_area(p: Any, sensitivity: Floats, at_peak: Floats) -> Floats:
    environment, readout = p.environment, p.readout
    band = {"centre": readout.filter_centre, "width": readout.filter_width}
    if environment.irradiance is None:
        return sensed_density(
            environment.ambient,
            sensitivity,
            illuminance=environment.illuminance,
            transmission=1.0 if readout.filter_centre is None else readout.filter_transmission,
            blocking=readout.filter_blocking,
            **band,
        )
    if environment.ambient == "none":
        return np.asarray(environment.irradiance * at_peak)
    return np.asarray(environment.irradiance * mean_sensitivity(environment.ambient, sensitivity, **band))


def outside_notes(lit: Lit) -> tuple[Note, ...]:
    """What to know about the outside light of a design."""
    environment = lit.p.environment
    if not _shines(lit.p):
        if environment.ambient != "none":
            return (
                Note(
                    "ambient-unstated",
                    f"The light from outside is {environment.ambient}, but neither its illuminance nor its "
                    "irradiance is stated: it counts as none.",
                ),
            )
        return ()
    notes = list(ambient_notes(environment.ambient))
    if not np.any(lit.etendue > 0):
        remedy = "; give the measured photocurrent (readout.ambient_current)" if _measurable(lit.p) else ""
        text = f"This geometry states no view of the outside, so outside light counts as none{remedy}."
        notes.append(Note("ambient-unseen", text))
    return tuple(notes)
