"""The light of a prism switch: every way from the emitter over one or two faces to the base."""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Setting
from outcouple.light import Light, Relight, Vector
from outcouple.optics import interface
from outcouple_plugins.prism_switch.directions import Directions, lobe_directions
from outcouple_plugins.prism_switch.ways import Interval, WayTrace, Wedge, trace_way
from outcouple_plugins.tip_returns import returns_of

__all__ = ["COLUMNS", "apex_height", "prism_light"]

Floats = NDArray[np.float64]

SLICES = 8
"""Slices of the emitting disc across y, per direction."""
GOLDEN = 0.6180339887498949
COLUMNS = ("emitter", "detector", "emitter")
"""Faces of the hit columns: the two-hit way in either order fits into three."""
EMITTER, DETECTOR = -1, 1
WAYS: tuple[tuple[tuple[int, ...], tuple[int, ...]], ...] = (
    ((EMITTER, DETECTOR), (0, 1)),
    ((DETECTOR, EMITTER), (1, 2)),
    ((EMITTER,), (0,)),
    ((DETECTOR,), (1,)),
)
"""Faces of each way in order, and the hit columns they fill."""


def apex_height(setting: Setting) -> Floats:
    """Height of the apex above the base plane [m], (S,)."""
    prism = setting.p.prism
    return setting.spread(prism.stem + prism.base / 2 * np.tan(prism.face_angle))


@dataclass(frozen=True)
class _Start:
    """What a ray brings along: its frame, its polarisation and the share of the lobe that got into the guide."""

    direction: Vector
    s_vector: Vector
    polarization: Floats
    weight: Floats
    reflected: Floats


def prism_light(setting: Setting) -> Light:
    """Lay out all one-hit and two-hit ways; everything else stays in the ledger as light that passes the detector."""
    p = setting.p
    n_guide = setting.index(p.prism.material)
    bonded = p.layout.coupling == "bonded"
    directions = lobe_directions(
        n_guide=n_guide,
        half_angle=setting.spread(p.emitter.half_angle),
        exponent=setting.spread(p.emitter.exponent),
        tilt=setting.spread(p.layout.emitter_tilt),
        bonded=bonded,
        face_angle=setting.spread(p.prism.face_angle),
        breaks=setting.breaks,
    )
    start = _start(directions, n_guide, bonded, p.emitter.polarization)
    traces = _traces(setting, start)
    return _assemble(setting, start, traces, bonded)


def _start(directions: Directions, n_guide: Floats, bonded: bool, polarization: str) -> _Start:
    direction = Vector(*(array[:, :, None] for array in (directions.x, directions.y, directions.z)))
    up = Vector(*(np.full((1, 1, 1), value) for value in (0.0, 0.0, 1.0)))
    along = Vector(*(np.full((1, 1, 1), value) for value in (0.0, 1.0, 0.0)))
    # A polarised emitter keeps its field along or across y; an unpolarised one is sorted by the base it enters through.
    s_vector = up.cross(direction).unit() if polarization == "none" else along.across(direction)
    if bonded:
        Ts = Tp = np.ones_like(directions.weight)
    else:
        face = interface(1.0, n_guide[:, None], np.arccos(directions.base))
        Ts, Tp = 1 - face.Rs, 1 - face.Rp
    mean = (Ts + Tp) / 2
    # at grazing incidence nothing enters, and its polarisation is of no account
    sorted_by_base = np.divide(Ts - Tp, Ts + Tp, out=np.zeros_like(mean), where=mean > 0)
    q = {"none": sorted_by_base, "s": np.ones_like(mean), "p": -np.ones_like(mean)}[polarization]
    return _Start(direction, s_vector, q, directions.weight * mean, directions.weight * (1 - mean))


def _slices(setting: Setting, rays: int) -> tuple[Interval, Floats, Floats]:
    """The emitting disc in slices across y: x0 range (S, K, Y), y0, and the disc's share per metre of slice.

    Every direction has its slices a little elsewhere (golden-ratio steps), so that slices and directions never beat.
    """
    layout = setting.p.layout
    shift = (np.arange(rays) * GOLDEN % 1.0)[:, None]
    phi = (np.arange(SLICES) + shift) / SLICES * np.pi - np.pi / 2
    radius = setting.spread(layout.emitter_radius)[:, None, None]
    centre = setting.spread(layout.emitter_position)[:, None, None]
    half = radius * np.cos(phi)
    # A pi/Y midpoint rule in phi; cos^2 sums exactly over any equal spacing, so a whole disc counts 1.
    per_metre = np.cos(phi) / (SLICES * radius)
    return Interval(centre - half, centre + half), radius * np.sin(phi), per_metre


def _traces(setting: Setting, start: _Start) -> list[tuple[WayTrace, Floats, Floats]]:
    """Each way's trace with the shares of the disc that follow it and that land, (S, K)."""
    p = setting.p
    wedge = Wedge(
        setting.spread(p.prism.base / 2)[:, None, None],
        apex_height(setting)[:, None, None],
        setting.spread(p.prism.face_angle)[:, None, None],
    )
    slices, y0, per_metre = _slices(setting, start.weight.shape[1])
    found = []
    for sides, _ in WAYS:
        trace = trace_way(
            sides,
            start.direction,
            start.s_vector,
            slices,
            y0,
            wedge,
            detector_x=setting.spread(p.layout.detector_position)[:, None, None],
            detector_radius=setting.spread(p.layout.detector_radius)[:, None, None],
        )
        follows = np.sum(trace.follows * per_metre, axis=-1)
        lands = np.sum(trace.lands * per_metre, axis=-1)
        found.append((trace, follows, lands))
    return found


@dataclass(frozen=True)
class _Rays:
    """The rays of one way, (S, K) and (S, K, H)."""

    launch: Floats
    reach: Floats
    length: Floats
    polarization: Floats
    angle: Floats
    hits: Floats
    turn: Floats


def _way_rays(
    setting: Setting, start: _Start, columns: tuple[int, ...], found: tuple[WayTrace, Floats, Floats], bonded: bool
) -> _Rays | None:
    """The rays of a way, those left out that no sample launches; None where none is left."""
    trace, follows, lands = found
    launch = start.weight * np.minimum(follows, 1.0)
    used = np.any(launch > 0, axis=0)
    if not np.any(used):
        return None
    shape = (launch.shape[0], int(np.sum(used)), len(COLUMNS))
    angle, hits, turn = np.zeros(shape), np.zeros(shape), np.zeros(shape)
    for at, column in enumerate(columns):
        angle[:, :, column] = np.arccos(trace.cosines[at][:, used, 0])
        hits[:, :, column] = 1.0
        turn[:, :, column] = np.broadcast_to(trace.turns[at][:, :, 0], launch.shape)[:, used]
    landing = np.minimum(np.where(follows > 0, lands / np.where(follows > 0, follows, 1.0), 0.0), 1.0)
    reach = landing[:, used] * _exit(setting, trace.exit[:, used, 0], bonded)
    length = np.mean(trace.middle, axis=-1)[:, used]
    return _Rays(launch[:, used], reach, length, start.polarization[:, used], angle, hits, turn)


def _assemble(setting: Setting, start: _Start, traces: list[tuple[WayTrace, Floats, Floats]], bonded: bool) -> Light:
    ways = [
        way
        for (_, columns), found in zip(WAYS, traces, strict=True)
        if (way := _way_rays(setting, start, columns, found, bonded)) is not None
    ]
    ways.append(_others(start, ways))
    joined = _Rays(*(np.concatenate([getattr(way, field.name) for way in ways], axis=1) for field in fields(_Rays)))
    capture = np.sum(joined.launch * joined.reach, axis=1)
    layout = setting.p.layout
    radius = setting.spread(layout.detector_radius)
    return Light(
        guide=setting.p.prism.material,
        faces=COLUMNS,
        launch=joined.launch,
        reach=joined.reach[:, None, :],
        angle=joined.angle,
        hits=joined.hits[:, None, :, :],
        turn=joined.turn,
        length=joined.length[:, None, :],
        polarization=joined.polarization,
        relight=_relights(setting, joined.launch.shape[1]),
        stray=(setting.spread(setting.p.prism.crosstalk) * capture)[:, None],
        ambient=(np.pi**2 * radius**2 * np.sin(setting.spread(layout.detector_half_angle)) ** 2)[:, None],
        entry={
            "reflected at the base on the way in": np.sum(start.reflected, axis=1),
            "leaves the emitter away from the base": 1 - np.sum(start.weight + start.reflected, axis=1),
        },
        acceptance=np.arctan(radius / apex_height(setting)),
    )


def _others(start: _Start, ways: list[_Rays]) -> _Rays:
    """Everything that goes another way, as one ray that meets no face and reaches nothing."""
    samples = start.weight.shape[0]
    left = np.sum(start.weight, axis=1) - sum((np.sum(way.launch, axis=1) for way in ways), np.zeros(samples))
    flat, deep = np.zeros((samples, 1)), np.zeros((samples, 1, len(COLUMNS)))
    return _Rays(np.maximum(left, 0.0)[:, None], flat, flat, flat, deep, deep, deep)


def _exit(setting: Setting, cosine: Floats, bonded: bool) -> Floats:
    """Transmission of the base on the way out, zero beyond the detector's half-angle."""
    n_guide = setting.index(setting.p.prism.material)
    sine = np.sqrt(np.maximum(1 - cosine**2, 0.0))
    outside = sine if bonded else n_guide[:, None] * sine
    taken = outside <= np.sin(setting.spread(setting.p.layout.detector_half_angle))[:, None]
    if bonded:
        return taken.astype(float)
    face = interface(n_guide[:, None], 1.0, np.arccos(np.clip(cosine, 0, 1)))
    return np.where(taken, 1 - (face.Rs + face.Rp) / 2, 0.0)


def _relights(setting: Setting, rays: int) -> tuple[Relight, ...]:
    """What the detector sees of light sent back at each face."""
    p = setting.p
    alpha, half = setting.spread(p.prism.face_angle), setting.spread(p.prism.base / 2)

    def face(x: Floats) -> tuple[Floats, Floats]:
        return apex_height(setting) - np.abs(x) * np.tan(alpha), -np.sign(x) * alpha

    def through(down: Floats) -> Floats:
        return _exit(setting, down[:, None], p.layout.coupling == "bonded")[:, 0]

    return tuple(
        relight
        for column, side in enumerate((EMITTER, DETECTOR, EMITTER))
        for relight in returns_of(
            column,
            centre=side * np.abs(setting.spread(p.layout.emitter_position)),
            half_width=half,
            surface=face,
            detector=setting.spread(p.layout.detector_position),
            area=np.pi * setting.spread(p.layout.detector_radius) ** 2,
            through=through,
            rays=rays,
        )
    )
