"""What a geometry may ask about a state beyond its signals: how its faces answer elsewhere, and which rays arrive."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.response import answer
from outcouple.evaluation.signals import LaidState, guide_absorption
from outcouple.evaluation.transport import along

__all__ = ["arrivals_of", "reply_of"]

Floats = NDArray[np.float64]


def reply_of(laid: LaidState, face: str, angle: Floats) -> tuple[tuple[Floats, Floats, Floats], ...]:
    """Share (S,) of every build-up, and what it makes of one face at incidences (S, K): R for s and p, (S, K) each.

    Mean over the emitter's line.
    """
    found = []
    weights = laid.weights[:, None]
    for way in laid.ways:
        acceptance = np.asarray(laid.light.acceptance, dtype=float)
        said = answer(way.covers[face], laid.light.guide, angle, laid.media, acceptance=acceptance)
        found.append((way.share, np.sum(weights * said.Rs, axis=1), np.sum(weights * said.Rp, axis=1)))
    return tuple(found)


def arrivals_of(laid: LaidState) -> Floats:
    """Share of the emitter's power on every ray at every channel, (S, C, K): mean over the line, no diffuse returns."""
    light = laid.light
    absorption = guide_absorption(light, laid.media)
    weights = laid.weights[:, None, None]
    total = np.zeros((max(laid.setting.samples, light.reach.shape[0]), light.channels, light.rays))
    for way in laid.ways:
        start = 0
        for part in way.parts(len(laid.weights)):
            arriving = np.sum(weights * part.kept.after * along(part.light.length, absorption), axis=1)
            stop = start + part.light.channels
            sent = part.light.launch[:, None, :] * part.light.reach
            total[:, start:stop] += way.share[:, None, None] * sent * arriving
            start = stop
    return total
