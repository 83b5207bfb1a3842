"""Rays traced through a sessile drop: what a spherical cap does to light from inside a guide."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.fresnel import fresnel_amplitudes

__all__ = ["DropTrace", "trace_drop"]

Floats = NDArray[np.float64]
Complexes = NDArray[np.complex128]
Bools = NDArray[np.bool_]

_GOLDEN = (np.sqrt(5.0) - 1.0) / 2.0
_EVENTS = 400
_FAINT = 1e-5


@dataclass(frozen=True)
class DropTrace:
    """Fate of unit power that meets a drop's footprint; last axis of every array: s, p.

    base       reflected at the guide/drop plane, exactly specular, shape (2,)
    first      lost at the first meeting with the drop's surface, shape (2,)
    lost       lost at all meetings, with what is still inside when the trace stops, shape (2,)
    deviation  angle to the specular direction inside the guide [rad] of each ray that came back, shape (M,)
    power      power of each of them, shape (M, 2)
    unsettled  the part of ``lost`` that was still inside, shape (2,)
    """

    base: Floats
    first: Floats
    lost: Floats
    deviation: Floats
    power: Floats
    unsettled: Floats

    def within(self, acceptance: float) -> Floats:
        """Share that returns within an angle [rad] of the specular direction, the base's included, (2,)."""
        return np.asarray(self.base + self.power[self.deviation <= acceptance].sum(axis=0))


@dataclass
class _Rays:
    """Rays inside the drop; the sphere's radius is 1 and the face is the plane z = 0."""

    point: Floats  # (N, 3)
    direction: Floats  # (N, 3)
    across: Floats  # (N, 3), unit vector the first field component points along
    field: Complexes  # (N, 2 components, 2 incident polarisations)

    def pick(self, which: Bools) -> _Rays:
        return _Rays(self.point[which], self.direction[which], self.across[which], self.field[which])

    def power(self) -> Floats:
        return np.asarray((np.abs(self.field) ** 2).sum(axis=1))

    def flip(self, normal: Floats) -> None:
        """Mirror the directions in a surface with this normal."""
        self.direction = self.direction - 2 * _dot(self.direction, normal)[:, None] * normal

    def turn_to(self, normal: Floats) -> None:
        """Express the field along (s, p) of a surface with this normal; at normal incidence any s will do."""
        across = np.cross(self.direction, normal)
        length = np.linalg.norm(across, axis=1)
        degenerate = length < 1e-9
        across = np.where(degenerate[:, None], self.across, across / np.where(degenerate, 1, length)[:, None])
        along = np.cross(self.direction, self.across)
        cos, sin = _dot(across, self.across), _dot(across, along)
        first, second = self.field[:, 0], self.field[:, 1]
        self.field = np.stack(
            (cos[:, None] * first + sin[:, None] * second, cos[:, None] * second - sin[:, None] * first),
            axis=1,
        )
        self.across = across


def trace_drop(*, n_guide: float, n_drop: float, angle: float, contact_angle: float, rays: int = 4000) -> DropTrace:
    """Trace evenly spread rays from a guide through one drop until their light is out again.

    Formula: Snell's and Fresnel's laws at the base (guide/drop) and at the cap (drop/air), the field carried
    along its own (s, p) axes and turned between meetings; no interference between ways, no absorption, air
    outside. What leaves through an overhanging side counts as lost.
    Range: contact_angle in (0, pi), n_drop > 1, n_guide sin(angle) < n_drop (else the base reflects all).

    n_guide, n_drop  absolute indices, the air's taken as 1
    angle            incidence inside the guide from the face normal [rad]
    contact_angle    of the drop [rad]
    rays             how many points of the footprint

    >>> import math
    >>> cap = trace_drop(n_guide=1.484, n_drop=1.327, angle=math.pi / 4, contact_angle=math.radians(40))
    >>> round(float(cap.first.mean()), 2)
    0.53
    """
    tangential = n_guide * np.sin(angle)
    base = np.abs(fresnel_amplitudes(n_from=n_guide, n_to=n_drop, cosine=np.cos(angle))) ** 2
    if tangential >= n_drop:
        nothing = np.zeros(2)
        return DropTrace(base, nothing, nothing, np.zeros(0), np.zeros((0, 2)), nothing)
    specular = np.array([np.sin(angle), 0.0, -np.cos(angle)])
    inside = _launch(tangential / n_drop, contact_angle, rays, np.sqrt((1 - base) / rays))
    centre = np.array([0.0, 0.0, -np.cos(contact_angle)])
    first, lost = np.zeros(2), np.zeros(2)
    deviations, powers = [], []
    at_base = np.ones(rays, dtype=bool)
    for event in range(_EVENTS):
        inside, at_base = _advance(inside, at_base, centre)
        came, back = _meet_base(inside, at_base, n_drop, n_guide, specular)
        deviations.append(came)
        powers.append(back)
        gone = _meet_cap(inside, ~at_base, n_drop, centre)
        lost = lost + gone
        first = lost if event == 0 else first
        bright = inside.power().sum(axis=1) * rays > _FAINT
        inside, at_base = inside.pick(bright), at_base[bright]
        if not bright.any():
            break
    unsettled = np.asarray(1 - base - lost - np.sum([power.sum(axis=0) for power in powers], axis=0))
    return DropTrace(base, first, lost + unsettled, np.concatenate(deviations), np.concatenate(powers), unsettled)


def _launch(sine: float, contact_angle: float, rays: int, amplitude: Floats) -> _Rays:
    """Rays over half the footprint (the other half is its mirror image), evenly by a golden-ratio lattice."""
    count = np.arange(rays)
    radius = np.sin(contact_angle) * np.sqrt((count + 0.5) / rays)
    azimuth = np.pi * np.mod(count * _GOLDEN, 1.0)
    point = np.stack((radius * np.cos(azimuth), radius * np.sin(azimuth), np.zeros(rays)), axis=1)
    direction = np.broadcast_to([sine, 0.0, np.sqrt(1 - sine**2)], (rays, 3))
    across = np.broadcast_to([0.0, 1.0, 0.0], (rays, 3))
    field = np.broadcast_to(np.diag(amplitude).astype(complex), (rays, 2, 2))
    return _Rays(point, direction.copy(), across.copy(), field.copy())


def _advance(rays: _Rays, at_base: Bools, centre: Floats) -> tuple[_Rays, Bools]:
    """Move every ray to its next meeting; the second answer says for which that is the base."""
    from_centre = rays.point - centre
    along = _dot(rays.direction, from_centre)
    # On the cap itself the near root is zero, on the base the ray starts inside the sphere.
    short = np.where(at_base, 1 - _dot(from_centre, from_centre), 0)
    far = -along + np.sqrt(np.maximum(along**2 + short, 0))
    down = rays.direction[:, 2] < 0
    to_base = np.where(down, -rays.point[:, 2] / np.where(down, rays.direction[:, 2], -1), np.inf)
    meets_base = down & ~at_base & (to_base <= far)
    step = np.where(meets_base, to_base, far)
    rays.point = rays.point + step[:, None] * rays.direction
    rays.point[meets_base, 2] = 0.0
    return rays, meets_base


def _meet_base(rays: _Rays, which: Bools, n_drop: float, n_guide: float, specular: Floats) -> tuple[Floats, Floats]:
    """Let light out into the guide: deviations and powers; the rest turns back up."""
    if not which.any():
        return np.zeros(0), np.zeros((0, 2))
    some = rays.pick(which)
    normal = np.broadcast_to([0.0, 0.0, -1.0], some.direction.shape)
    some.turn_to(normal)
    before = some.power()
    cosine = _dot(some.direction, normal)
    some.field = some.field * fresnel_amplitudes(n_from=n_drop, n_to=n_guide, cosine=cosine)[:, :, None]
    out = before - some.power()
    sideways = some.direction[:, :2] * (n_drop / n_guide)
    upright = np.sqrt(np.maximum(1 - (sideways**2).sum(axis=1), 0))
    towards = np.concatenate((sideways, -upright[:, None]), axis=1)
    chord = np.linalg.norm(towards - specular, axis=1)
    some.flip(normal)
    _put(rays, which, some)
    return 2 * np.arcsin(np.minimum(chord / 2, 1)), np.maximum(out, 0)


def _meet_cap(rays: _Rays, which: Bools, n_drop: float, centre: Floats) -> Floats:
    """Let light out into the air: the power lost; the rest is reflected."""
    if not which.any():
        return np.zeros(2)
    some = rays.pick(which)
    normal = some.point - centre
    normal = normal / np.linalg.norm(normal, axis=1)[:, None]
    some.turn_to(normal)
    before = some.power().sum(axis=0)
    cosine = _dot(some.direction, normal)
    some.field = some.field * fresnel_amplitudes(n_from=n_drop, n_to=1.0, cosine=cosine)[:, :, None]
    gone = before - some.power().sum(axis=0)
    some.flip(normal)
    _put(rays, which, some)
    return np.asarray(gone)


def _put(rays: _Rays, which: Bools, some: _Rays) -> None:
    rays.direction[which], rays.across[which], rays.field[which] = some.direction, some.across, some.field


def _dot(one: Floats, other: Floats) -> Floats:
    return np.asarray((one * other).sum(axis=-1))
