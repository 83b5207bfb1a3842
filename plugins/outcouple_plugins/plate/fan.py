"""The fan of light that a row of emitters sends into a plate: elevations, and what travels at each."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from outcouple.optics import gauss_legendre, segments
from outcouple_plugins.plate.edge import Port

__all__ = ["Fan", "fan_of", "leakable_share", "port_of"]

Floats = NDArray[np.float64]

AZIMUTHS = 24
"""Nodes of the azimuth integral."""
NODES = 24
"""Elevation nodes of every segment between critical elevations: losses of a chord are good to about one percent."""


@dataclass(frozen=True)
class Fan:
    """Light of one emitter of power 1, by elevation; s and p by the faces.

    elevation  nodes [rad], (S, E); weight of each [rad], both signs of the elevation counted, (S, E)
    s, p       power on each node over all azimuths, (S, E)
    reflected  at the edge on the way in, (S,)
    missed     beside the edge, (S,)
    scale      factor that makes the quadrature exact in the sum, (S,)
    """

    elevation: Floats
    weight: Floats
    s: Floats
    p: Floats
    reflected: Floats
    missed: Floats
    scale: Floats


def port_of(
    *,
    index: Floats,
    thickness: Floats,
    height: Floats,
    offset: Floats,
    gap: Floats,
    half_angle: Floats,
    bonded: bool,
    exponent: Floats | None = None,
) -> Port:
    """A port, its arrays brought to one length (S,)."""

    def like(value: Floats) -> Floats:
        return np.broadcast_to(np.asarray(value, dtype=float), index.shape)

    return Port(
        index,
        thickness=like(thickness),
        height=like(height),
        offset=like(offset),
        gap=like(gap),
        half_angle=like(half_angle),
        bonded=bonded,
        exponent=like(np.ones(1) if exponent is None else exponent),
    )


def fan_of(port: Port, breaks: Sequence[Floats]) -> Fan:
    """Quadrature over elevation with edges at the critical elevations acos(n_contact / n), azimuth integrated.

    breaks  indices (S,) of the media that may touch the faces
    """
    elevation, weight = _elevations(port, breaks)
    t, w = gauss_legendre(AZIMUTHS)
    v = (np.asarray(t) + 1) / 2
    widest = port.widest(elevation)[:, :, None]
    azimuth = widest * (1 - (1 - v) ** 2)
    # Both signs of azimuth and of elevation carry the same.
    step = widest * (1 - v) * np.asarray(w) * 2
    rise = np.broadcast_to(elevation[:, :, None], azimuth.shape)
    s, p, reflected = (np.sum(part * step, axis=-1) * weight for part in port.density(azimuth, rise))
    lobe = _lobe_sum(port, azimuth, rise, step, weight)
    scale = 1 / lobe
    into, back = np.sum(s + p, axis=1) * scale, np.sum(reflected, axis=1) * scale
    return Fan(
        elevation=elevation,
        weight=weight,
        s=s * scale[:, None],
        p=p * scale[:, None],
        reflected=back,
        missed=np.maximum(1 - into - back, 0.0),
        scale=scale,
    )


def _lobe_sum(port: Port, azimuth: Floats, rise: Floats, step: Floats, weight: Floats) -> Floats:
    """What the quadrature makes of the whole lobe, which is 1: nothing misses an edge it touches."""
    whole = replace(
        port,
        height=np.minimum(port.height, port.thickness),
        offset=np.zeros_like(port.offset),
        gap=np.zeros_like(port.gap),
    )
    total = sum(np.sum(part * step, axis=-1) for part in whole.density(azimuth, rise))
    return np.asarray(np.sum(total * weight, axis=1))


def _elevations(port: Port, breaks: Sequence[Floats]) -> tuple[Floats, Floats]:
    """Nodes and weights (S, E) from 0 to the highest elevation, both signs counted in the weights."""
    top = port.highest
    cuts = [np.arccos(np.clip(medium / port.index, 0, 1)) for medium in breaks]
    if port.bonded:
        cuts.append(np.arccos(np.clip(1 / port.index, 0, 1)))
    inner = [np.minimum(np.broadcast_to(cut, top.shape), top) for cut in cuts]
    edges = np.sort(np.stack([np.zeros_like(top), *inner, top]), axis=0)
    # A segment that no sample has is left out; both signs count in the weights.
    some = np.any(np.diff(edges, axis=0) > 0, axis=1)
    kept = np.moveaxis(edges[np.concatenate([[True], some])], 0, -1)
    nodes, weights = segments(kept, NODES)
    return nodes, 2 * weights


def leakable_share(fan: Fan, *, index: Floats, contact: Floats) -> Floats:
    """Share of the guided light that a clear medium can take: what has n cos(elevation) below its index, (S,).

    Unguided light (n cos(elevation) < 1, from bonded emitters) counts neither as guided nor as leakable.
    """
    conserved = index[:, None] * np.cos(fan.elevation)
    power = (fan.s + fan.p) * (conserved >= 1)
    taken = power * (conserved < contact[:, None])
    return np.asarray(np.sum(taken, axis=1) / np.sum(power, axis=1))
