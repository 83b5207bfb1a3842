"""What a geometry may ask about a state beyond its signals: how its faces answer elsewhere, and which rays arrive."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.response import answer
from outcouple.evaluation.signals import LaidState
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
    absorption = 4 * np.pi * laid.media.index(light.guide).imag / laid.media.wavelengths
    weights = laid.weights[:, None, None]
    left: Floats = np.zeros((1, 1, 1))
    for way in laid.ways:
        arriving = np.sum(weights * way.survival.after * along(light.length, absorption), axis=1)
        left = left + way.share[:, None, None] * arriving
    return np.asarray(light.launch[:, None, :] * light.reach * left)
