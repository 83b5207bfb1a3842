"""The light of a camera-read plate: drawn out under an object, sent back diffusely, gathered by one pixel."""

from __future__ import annotations

from dataclasses import replace
from functools import partial

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Setting
from outcouple.light import Light, Relight, Spot, Strips
from outcouple_plugins.edge_camera.lens import pixel_side, sight_of
from outcouple_plugins.plate.flux import Flux, Rows, flux_at, rows_of

__all__ = ["FACES", "HAZE", "SPOT", "STRIP_WEIGHTS", "camera_light", "camera_ways", "hop_of", "strips_of"]

Floats = NDArray[np.float64]

FACES = ("front", "back", "rim", "haze", "spot")
HAZE, SPOT = FACES.index("haze"), FACES.index("spot")
STRIPS = 9
"""Strips across an object."""
_TURN = (np.arange(STRIPS) + 0.5) * np.pi / STRIPS
STRIP_HALVES, STRIP_WEIGHTS = np.sin(_TURN), np.pi / (2 * STRIPS) * np.sin(_TURN)
"""Length of each strip over a disc's diameter, and its share of the light: even in angle, exact for the disc's area."""


def camera_light(setting: Setting) -> Light:
    """One channel: the pixel that looks at the object, or at the middle of the plate while there is none.

    Rays by bundle (edge and trip), polarisation (s and p by the faces) and elevation.
    """
    rows = rows_of(setting)
    zero = np.zeros(setting.samples)
    middle = flux_at(rows, zero, zero)
    bare = camera_ways(setting, rows, middle, zero, zero, pixel_side(setting))
    known = {_key(zero, zero): middle}
    spot = Spot(SPOT, hop_of(rows, middle.bundles), strips_of, partial(_placed, setting, rows, known))
    return replace(bare, spot=spot)


def _key(x: Floats, y: Floats) -> bytes:
    return x.tobytes() + y.tobytes()


def _placed(setting: Setting, rows: Rows, known: dict[bytes, Flux], diameter: Floats, x: Floats, y: Floats) -> Light:
    """The light for an object at (x, y); several objects at one place share the light that crosses it."""
    key = _key(x, y)
    if key not in known:
        known[key] = flux_at(rows, x, y)
    there = camera_ways(setting, rows, known[key], x, y, diameter, round_area=True)
    glow, back = there.relight
    bundles = known[key].bundles
    weight = _crossing_share(there, back, bundles)
    # What crosses the object is a small part of each bundle; the rest passes beside it.
    beside = np.repeat(weight[:, 0, :, 0], there.rays // bundles, axis=1)[:, None, :]
    fed = replace(back, feed=np.divide(back.feed, beside, out=np.zeros_like(back.feed), where=beside > 0))
    spot = Spot(SPOT, hop_of(rows, bundles), partial(_weighted, weight))
    return replace(there, relight=(glow, fed), spot=spot)


def _crossing_share(light: Light, back: Relight, bundles: int) -> Floats:
    """Share of every bundle's light that crosses the object, (S, 1, B, 1)."""
    launch = light.launch.reshape(light.launch.shape[0], bundles, -1)
    crossing = (light.launch * back.feed[:, 0]).reshape(*launch.shape)
    return np.asarray(np.minimum(np.sum(crossing, axis=2) / np.sum(launch, axis=2), 1.0))[:, None, :, None]


def _weighted(weight: Floats, diameter: Floats, x: Floats, y: Floats) -> Strips:
    lengths = strips_of(diameter, x, y).lengths
    return Strips(np.repeat(lengths, weight.shape[2], axis=2), weight * STRIP_WEIGHTS)


def hop_of(rows: Rows, bundles: int) -> Floats:
    """Metres along the plate between two hits of a ray on one face, (S, K)."""
    hop = 2 * rows.port.thickness[:, None] / np.maximum(np.tan(rows.fan.elevation), 1e-12)
    return np.tile(hop, (1, 2 * bundles))


def strips_of(diameter: Floats, x: Floats, y: Floats) -> Strips:
    """Strips across a disc that the light crosses."""
    return Strips((diameter[:, None] * STRIP_HALVES)[:, None, None, :], STRIP_WEIGHTS[None, None, None, :])


def camera_ways(
    setting: Setting, rows: Rows, flux: Flux, x: Floats, y: Floats, wide: Floats, *, round_area: bool = False
) -> Light:
    """The ways to a place at (x, y) that is ``wide`` across the light, and from it to the pixel.

    flux        light that crosses the place
    round_area  True: the place is a disc; else a square as large as the pixel

    What a place smaller than the pixel sends is seen whole; of a larger one the pixel sees its own footprint.
    """
    p = setting.p
    sight, side = sight_of(setting, x, y), pixel_side(setting)
    bundles, fan = flux.bundles, rows.fan
    launch = np.tile(np.concatenate([fan.s, fan.p], axis=1) / bundles, (1, bundles))
    crossing = _rays(flux.s, flux.p)
    with np.errstate(divide="ignore", invalid="ignore"):
        per_metre = np.where(launch > 0, crossing / launch, 0.0)[:, None, :]
    area = np.pi / 4 * wide**2 if round_area else wide**2
    seen = np.minimum(side**2 / area, 1.0)
    length = _along(flux, fan.elevation)
    glow = Relight(HAZE, per_metre * side[:, None, None], sight.lambertian[:, None], np.zeros((1, 1)), length)
    inside = (sight.sine / rows.port.index)[:, None]
    back = Relight(SPOT, per_metre * wide[:, None, None], (sight.lambertian * seen)[:, None], inside, length)
    etendue = side**2 * sight.gathered * sight.shifted * sight.crossing**2
    return Light(
        guide=p.plate.material,
        faces=FACES,
        launch=launch,
        reach=np.zeros((1, 1, launch.shape[1])),
        angle=np.repeat(np.tile(np.pi / 2 - fan.elevation, (1, 2 * bundles))[:, :, None], len(FACES), axis=2),
        hits=_hits(setting, rows, flux, side),
        turn=np.zeros((1, 1, len(FACES))),
        length=length,
        polarization=np.tile(np.repeat([1.0, -1.0], fan.elevation.shape[1]), bundles)[None, :],
        read="drawn",
        relight=(glow, back),
        ambient=(etendue * setting.spread(p.outside.reflectance * p.outside.lit))[:, None],
        entry={"reflected at the edge": fan.reflected, "misses the edge": fan.missed},
    )


def _rays(s: Floats, p: Floats) -> Floats:
    """(S, B, E) each -> (S, K)."""
    both = np.stack([s, p], axis=2)
    return both.reshape(both.shape[0], -1)


def _along(flux: Flux, elevation: Floats) -> Floats:
    """Metres of guide up to the place, (S, 1, K)."""
    slant = flux.length[:, :, None] / np.cos(elevation)[:, None, :]
    return _rays(slant, slant)[:, None, :]


def _hits(setting: Setting, rows: Rows, flux: Flux, side: Floats) -> Floats:
    """Hits up to the place on front, back and rim; within a pixel's footprint on both hazy faces, (S, 1, K, H).

    On the spot nothing is hit unless an object lies there.
    """
    hop = hop_of(rows, 1)[:, : rows.fan.elevation.shape[1]]
    under = np.minimum(setting.spread(setting.p.plate.rim)[:, None] * flux.slant, flux.length)
    metres = {"front": flux.length - under, "back": flux.length, "rim": under, "haze": 2 * side[:, None] + 0 * under}
    hits = np.zeros((flux.length.shape[0], 1, flux.bundles * 2 * hop.shape[1], len(FACES)))
    for face, way in metres.items():
        each = way[:, :, None] / hop[:, None, :]
        hits[:, 0, :, FACES.index(face)] = _rays(each, each)
    return hits
