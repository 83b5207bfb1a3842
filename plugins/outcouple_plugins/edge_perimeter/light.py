"""The light of a plate read around its perimeter: chords as channels."""

from __future__ import annotations

from functools import partial

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Setting
from outcouple.light import Light, Spot, Strips
from outcouple_plugins.edge_perimeter.chords import Chords, chords_of
from outcouple_plugins.plate.parameters import edges_of
from outcouple_plugins.plate.ways import edge_reflectance, reflections, strips_on

__all__ = ["FACES", "SPOT", "perimeter_light"]

Floats = NDArray[np.float64]

FACES = ("front", "spot", "back", "rim")
SPOT = FACES.index("spot")
STRIPS = 9
"""Strips across a chord's beam."""


def perimeter_light(setting: Setting) -> Light:
    """Chords as channels; rays by way, polarisation (s and p by the faces, kept apart to the end) and elevation."""
    p, spread = setting.p, setting.spread
    chords = chords_of(setting)
    ways, fan = chords.ways, chords.fan
    bundles = ways.length.shape[2]
    hop = 2 * spread(p.plate.thickness)[:, None] / np.maximum(np.tan(fan.elevation), 1e-12)
    rays = 2 * bundles
    launch = np.concatenate([fan.s, fan.p], axis=1) / bundles
    return Light(
        guide=p.plate.material,
        faces=FACES,
        launch=np.tile(launch, (1, bundles)),
        reach=_reach(setting, chords),
        angle=np.repeat(np.tile(np.pi / 2 - fan.elevation, (1, rays))[:, :, None], len(FACES), axis=2),
        hits=_hits(setting, chords, hop),
        turn=np.zeros((1, 1, len(FACES))),
        length=_rays(ways.length[..., None] / np.cos(fan.elevation)[:, None, None, :]),
        polarization=np.tile(np.repeat([1.0, -1.0], fan.elevation.shape[1]), bundles)[None, :],
        spot=Spot(SPOT, np.tile(hop, (1, rays)), partial(_strips, chords)),
        ambient=_outside(setting, chords),
        entry={"reflected at the edge": fan.reflected, "misses the edge": fan.missed},
        acceptance=_acceptance(chords),
        parted=True,
        slot=spread(p.scan.slot),
    )


def _rays(per_way: Floats) -> Floats:
    """(S, C, W, E) -> (S, C, K): both polarisations of every way."""
    both = np.repeat(per_way[:, :, :, None, :], 2, axis=3)
    return both.reshape(*both.shape[:2], -1)


def _reach(setting: Setting, chords: Chords) -> Floats:
    """Share of every ray's light that a chord's detector gets while the faces reflect all, (S, C, K).

    Flux per azimuth of one emitter times the azimuth the detector's width subtends, over all light on that elevation.
    """
    p, ways, fan = setting.p, chords.ways, chords.fan
    shape = (*np.broadcast_shapes(ways.length.shape, (setting.samples, 1, 1)), fan.elevation.shape[1])
    rise = np.broadcast_to(fan.elevation[:, None, None, :], shape)
    out, into = (np.broadcast_to(angle[..., None], shape) for angle in (ways.out, ways.into))
    s, q, _ = chords.emitter.density(out, rise)
    taken_s, taken_p = chords.detector.acceptance(into, rise)
    window = chords.beams[1][:, None, None] * np.cos(ways.into) / ways.length
    window = np.where(ways.possible, window, 0.0) / chords.pairs.emitters
    scale = (fan.weight * fan.scale[:, None])[:, None, None, :] * window[..., None]
    hits = ways.length[..., None] * np.tan(rise) / setting.spread(p.plate.thickness)[:, None, None, None]
    scale = scale * (1 - setting.spread(p.plate.haze)[:, None, None, None]) ** hits
    kept_s, kept_p = _images(setting, chords, rise)
    bundles = ways.length.shape[2]
    parts = []
    for flux, kept, got, sent in ((s, kept_s, taken_s, fan.s), (q, kept_p, taken_p, fan.p)):
        launch = sent[:, None, None, :] / bundles
        with np.errstate(divide="ignore", invalid="ignore"):
            parts.append(np.where(launch > 0, scale * flux * kept * got / launch, 0.0))
    return np.asarray(np.minimum(np.stack(parts, axis=3).reshape(*shape[:2], -1), 1.0))


def _images(setting: Setting, chords: Chords, rise: Floats) -> tuple[Floats, Floats]:
    """What the edges return on every way, s and p, broadcast against (S, C, W, E)."""
    ways, p = chords.ways, setting.p
    kept_s, kept_p = np.ones((1, 1, 1, 1)), np.ones((1, 1, 1, 1))
    if p.plate.edges == "absorbing":
        return kept_s, kept_p
    used = {*edges_of(p.emitters.edges), *edges_of(p.detectors.edges)}
    index = setting.index(p.plate.material)[:, None, None, None]
    mirror = setting.spread(p.plate.mirror)[:, None, None, None]
    for edges, count, normal in (
        (("left", "right"), ways.m, np.abs(ways.dx)),
        (("bottom", "top"), ways.n, np.abs(ways.dy)),
    ):
        azimuth = np.broadcast_to(np.arccos(np.clip(normal, 0, 1))[..., None], rise.shape)
        Rs, Rp = edge_reflectance(index, azimuth, rise)
        for edge, times in zip(edges, reflections(count), strict=True):
            power = times[None, :, :, None]
            mirrored = p.plate.edges == "mirrored" and edge not in used
            kept_s = np.asarray(kept_s * (mirror if mirrored else Rs) ** power)
            kept_p = np.asarray(kept_p * (mirror if mirrored else Rp) ** power)
    return kept_s, kept_p


def _hits(setting: Setting, chords: Chords, hop: Floats) -> Floats:
    """Hits of every ray on front, spot (nothing, unless an object lies there), back and rim, (S, C, K, H)."""
    ways = chords.ways
    rim = setting.spread(setting.p.plate.rim)[:, None, None]
    edge_cosines = 1 / np.maximum(np.cos(ways.out), 1e-6) + 1 / np.maximum(np.cos(ways.into), 1e-6)
    under = np.minimum(rim * edge_cosines, ways.length)
    per_metre = 1 / hop[:, None, None, :]
    samples, channels, bundles = np.broadcast_shapes(ways.length.shape, (setting.samples, 1, 1))
    hits = np.zeros((samples, channels, bundles * 2 * hop.shape[1], len(FACES)))
    for face, metres in (("front", ways.length - under), ("back", ways.length), ("rim", under)):
        if face != "rim" or np.any(rim):
            hits[..., FACES.index(face)] = _rays(metres[..., None] * per_metre)
    return hits


def _outside(setting: Setting, chords: Chords) -> Floats:
    """Etendue with which a detector sees the outside: its own, times the share that plate and frame leave open."""
    detectors = setting.p.detectors
    area = setting.spread(detectors.width * detectors.height)
    open_share = setting.spread(detectors.outside_share)
    etendue = np.pi * np.sin(setting.spread(detectors.half_angle)) ** 2 * area * open_share
    return np.asarray(etendue[:, None])


def _acceptance(chords: Chords) -> Floats:
    """Half-angle of the cone that holds as much solid angle as the window a turned ray must still hit, (S,).

    Drops turn rays; a detector gets those that stay within its own width in azimuth, at any elevation it takes. Mean
    over the direct chords.
    """
    ways = chords.ways
    window = np.where(ways.possible[..., 0], np.cos(ways.into[..., 0]) / ways.length[..., 0], 0.0)
    azimuth = chords.beams[1] * np.sum(window, axis=1) / np.sum(ways.possible[..., 0], axis=1)
    return np.asarray(np.sqrt(azimuth * 2 * np.sin(chords.detector.highest) / np.pi))


def _strips(chords: Chords, diameter: Floats, x: Floats, y: Floats) -> Strips:
    return strips_on(
        chords.ways,
        diameter=diameter,
        x=x,
        y=y,
        widths=chords.beams,
        count=STRIPS,
        width=chords.width,
        height=chords.height,
    )
