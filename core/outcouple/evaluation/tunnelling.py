"""How much of a design's totally reflected light a narrow gap lets through, by its width and by what lies behind it."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from outcouple.evaluation.table import Table
from outcouple.geometry import Surface
from outcouple.optics import gap_transmittance

__all__ = ["tunnelling_map"]

Floats = NDArray[np.float64]

ANGLES = 32
"""Incidences that stand for the light, each for as much of it."""
GAPS, INDICES = 61, 45
LEAST_INDEX = 1.2
WIDEST = 0.6
"""Widest gap, in wavelengths: little crosses beyond."""


def tunnelling_map(table: Table) -> Surface | None:
    """Mean transmittance of s and p at the nominal design's first wetted face; None where no light is beyond its
    critical angle there. The gap holds what the first state has on the face, air where that is no single medium."""
    angles = _incidences(table)
    if not len(angles):
        return None
    light, setting = table.light, table.setting
    n_guide, n_gap = float(setting.index(light.guide)[0]), _outside(table)
    beyond = angles[n_guide * np.sin(angles) > n_gap]
    if not len(beyond):
        return None
    wavelength = float(np.ravel(setting.p.emitter.wavelength)[0])
    gaps = np.linspace(0.0, WIDEST * wavelength, GAPS)
    behind = np.linspace(LEAST_INDEX, n_guide + 0.05, INDICES)
    found = gap_transmittance(n_guide, n_gap, behind[:, None, None], gaps[:, None], beyond, wavelength)
    return Surface(
        name="tunnelling",
        label="totally reflected light that crosses a gap",
        axes=(("index behind the gap", "", behind), ("gap", "nm", gaps)),
        values=np.mean((found[0] + found[1]) / 2, axis=-1),
        kind="ratio",
        unit="%",
    )


def _incidences(table: Table) -> Floats:
    """Angles of incidence at the first hit, evenly by the light that channel sees that sees most."""
    light = table.light
    column = next((at for at in range(len(light.faces)) if np.any(light.hits[0, ..., at] > 0)), None)
    if column is None:
        return np.zeros(0)
    rays = light.rays
    launch = np.broadcast_to(light.launch[0], (rays,))
    reach = np.broadcast_to(light.reach[0], (light.channels, rays))
    weight = launch * reach[int(np.argmax(reach @ launch))]
    weight = np.where(np.max(np.broadcast_to(light.hits[0, ..., column], reach.shape), axis=0) > 0, weight, 0.0)
    if light.read == "drawn" or not np.any(weight > 0):
        weight = launch
    if not np.any(weight > 0):
        return np.zeros(0)
    angle = np.broadcast_to(light.angle[0, :, column], (rays,))
    order = np.argsort(angle)
    share = np.cumsum(weight[order]) / np.sum(weight)
    return np.asarray(angle[order][np.searchsorted(share, (np.arange(ANGLES) + 0.5) / ANGLES)])


def _outside(table: Table) -> float:
    """Index of the one medium that the first state has on all faces, else of air."""
    media = {medium for cover in table.rows[0].result.covers.values() for medium in cover.media()}
    name = media.pop() if len(media) == 1 else "air"
    return float(table.setting.index(name)[0])
