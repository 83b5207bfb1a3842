"""Light × contacts: how much of every ray survives its hits, and what each channel gets.

Polarisation is carried as a coherency matrix (J_ss, J_pp, J_sp) per ray, so that planes of incidence may turn
between hits; where none turns, powers of R_s and R_p suffice and any number of hits is legal.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.response import Answer
from outcouple.light import Light, Strips

__all__ = ["Survival", "mean_power", "received", "survive"]

Floats = NDArray[np.float64]
Complexes = NDArray[np.complex128]

LOSSLESS = 1 - 1e-13
"""Reflectance from which a face counts as totally reflecting."""


@dataclass(frozen=True)
class Survival:
    """Intensity of every ray, its launch share set to 1, through the hit columns.

    after    after all columns, (S, L, C|1, K)
    drawn    per column: intensity lost at it, (S, L, C|1, K)
    entered  per column: part of ``drawn`` that entered the backing
    back     per column: part of ``entered`` that comes back diffusely
    turned   per column: part of ``drawn`` turned out of the specular way
    """

    after: Floats
    drawn: tuple[Floats, ...]
    entered: tuple[Floats, ...]
    back: tuple[Floats, ...]
    turned: tuple[Floats, ...]


def mean_power(reflectance: Floats, hits: Floats) -> Floats:
    """Survival averaged over the entry phase for a mean of ``hits`` hits.

    Formula: (1 - f) R^k + f R^(k+1), k the whole hits, f the rest.

    Shapes broadcast. Exact for a contact of given length and a fixed distance between hits; R^hits is not.

    >>> float(mean_power(np.array(0.0), np.array(0.25)))
    0.75
    """
    whole = np.floor(hits)
    part = hits - whole
    with np.errstate(divide="ignore"):
        log = np.log(np.maximum(reflectance, 0.0))
    base = np.exp(np.where(whole > 0, whole * np.maximum(log, -745.0), 0.0))
    base = np.where((whole > 0) & (reflectance <= 0), 0.0, base)
    return np.asarray(base * (1 - part + part * reflectance))


def survive(
    light: Light, answers: Sequence[Answer | None], strips: Strips | None = None, *, detail: bool = True
) -> Survival:
    """Carry every ray through the hit columns.

    answers  one per hit column, arrays (S, L, K); None for a column that reflects all
    strips   contact of the object on the spot's face
    detail   False: only what is left after all columns, where no plane of incidence turns
    """
    if light.turns:
        return _coherent(light, answers)
    hit = [
        None if reply is None or not _is_hit(light, column, strips) or _reflects_all(reply) else reply
        for column, reply in enumerate(answers)
    ]
    if np.all(np.abs(light.polarization) == 1):
        rays_s = light.polarization[:, None, :] > 0
        hit = [None if reply is None else reply.of(rays_s) for reply in hit]
    if not detail:
        return Survival(_left(light, hit, strips), (), (), (), ())
    return _powers(light, hit, strips)


def _left(light: Light, answers: Sequence[Answer | None], strips: Strips | None) -> Floats:
    """Intensity of every ray after all columns, (S, L, C|1, K)."""
    q = light.polarization[:, None, None, :]
    s, p = (1 + q) / 2, (1 - q) / 2
    for column, reply in enumerate(answers):
        if reply is None:
            continue
        kept = _kept(light, reply.Rs, column, strips)
        s = s * kept
        p = p * (kept if reply.Rp is reply.Rs else _kept(light, reply.Rp, column, strips))
    return np.asarray(s + p)


def _powers(light: Light, answers: Sequence[Answer | None], strips: Strips | None) -> Survival:
    q = light.polarization[:, None, None, :]
    s, p = (1 + q) / 2, (1 - q) / 2
    drawn: list[Floats] = []
    entered: list[Floats] = []
    back: list[Floats] = []
    turned: list[Floats] = []
    for column, reply in enumerate(answers):
        if reply is None:
            for store in (drawn, entered, back, turned):
                store.append(np.zeros((1, 1, 1, 1)))
            continue
        lost_s = s * (1 - _kept(light, reply.Rs, column, strips))
        lost_p = p * (1 - _kept(light, reply.Rp, column, strips))
        drawn.append(lost_s + lost_p)
        for store, part_s, part_p in (
            (entered, reply.Ts, reply.Tp),
            (back, reply.Bs, reply.Bp),
            (turned, reply.Ws, reply.Wp),
        ):
            store.append(lost_s * _share(part_s, reply.Rs) + lost_p * _share(part_p, reply.Rp))
        s, p = s - lost_s, p - lost_p
    return Survival(s + p, tuple(drawn), tuple(entered), tuple(back), tuple(turned))


def _on_spot(light: Light, column: int, strips: Strips | None) -> bool:
    return strips is not None and light.spot is not None and light.spot.column == column


def _reflects_all(reply: Answer) -> bool:
    """True where nothing is lost but what rounding loses: most columns of most states."""
    return bool(np.all(reply.Rs >= LOSSLESS) and np.all(reply.Rp >= LOSSLESS))


def _is_hit(light: Light, column: int, strips: Strips | None) -> bool:
    if strips is not None and _on_spot(light, column, strips):
        return bool(np.any(strips.lengths))
    return bool(np.any(light.hits[..., column]))


def _kept(light: Light, reflectance: Floats, column: int, strips: Strips | None) -> Floats:
    """Survival of one column's hits, (S, L, C|1, K)."""
    if strips is None or light.spot is None or not _on_spot(light, column, strips):
        return mean_power(reflectance[:, :, None, :], light.hits[:, None, :, :, column])
    return 1.0 - _taken(strips, light.spot.hop, reflectance)


def _taken(strips: Strips, hop: Floats, reflectance: Floats) -> Floats:
    """Share of every ray that the object takes, (S, L, C, K); only channels that it touches are worked on."""
    samples, channels, bundles, across = strips.lengths.shape
    touched = np.any(strips.lengths > 0, axis=(0, 2, 3))
    lengths = strips.lengths[:, touched]
    weight = np.full((1, 1, 1, 1), 1 / across) if strips.weight is None else strips.weight
    if weight.shape[1] > 1:
        weight = weight[:, touched]
    rays = reflectance.shape[-1]
    split = (bundles, rays // bundles)
    # (S, L, C, W, B, K/W)
    bounce = np.broadcast_to(reflectance, (*reflectance.shape[:2], rays)).reshape(*reflectance.shape[:2], 1, *split)
    pitch = np.broadcast_to(hop, (hop.shape[0], rays)).reshape(hop.shape[0], 1, *split)
    lost: Floats = np.zeros((1, 1, 1, 1, 1))
    for strip in range(across):
        hits = lengths[..., strip][..., None] / pitch
        share = np.broadcast_to(weight, (*weight.shape[:3], across))[..., strip]
        lost = lost + share[:, None, ..., None] * (1 - mean_power(bounce, hits[:, None]))
    taken = np.zeros((max(samples, lost.shape[0]), lost.shape[1], channels, rays))
    taken[:, :, touched] = lost.reshape(*lost.shape[:3], rays)
    return taken


def _share(part: Floats, reflectance: Floats) -> Floats:
    """Part of what is lost at a hit, (S, L, 1, K); every further hit loses in the same proportions."""
    lost = 1 - reflectance
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(np.where(lost > 0, np.minimum(part / lost, 1.0), 0.0))[:, :, None, :]


def _coherent(light: Light, answers: Sequence[Answer | None]) -> Survival:
    q = light.polarization[:, None, :]
    ss, pp = (1 + q) / 2, (1 - q) / 2
    sp: Complexes = np.zeros((1, 1, 1), dtype=complex)
    drawn: list[Floats] = []
    entered: list[Floats] = []
    back: list[Floats] = []
    turned: list[Floats] = []
    for column, reply in enumerate(answers):
        hit = light.hits[:, :, :, column]
        ss, pp, sp = _rotated(ss, pp, sp, np.where(hit > 0, light.turn[:, None, :, column], 0.0))
        if reply is None or not np.any(hit):
            nothing = np.zeros((1, 1, 1, 1))
            for store in (drawn, entered, back, turned):
                store.append(nothing)
            continue
        Rs, Rp = np.where(hit > 0, reply.Rs, 1.0), np.where(hit > 0, reply.Rp, 1.0)
        drawn.append((ss * (1 - Rs) + pp * (1 - Rp))[:, :, None, :])
        for store, part_s, part_p in (
            (entered, reply.Ts, reply.Tp),
            (back, reply.Bs, reply.Bp),
            (turned, reply.Ws, reply.Wp),
        ):
            store.append((hit * (ss * part_s + pp * part_p))[:, :, None, :])
        ss, pp = ss * Rs, pp * Rp
        sp = sp * np.where(hit > 0, reply.X, 1.0)
    return Survival((ss + pp)[:, :, None, :], tuple(drawn), tuple(entered), tuple(back), tuple(turned))


def _rotated(ss: Floats, pp: Floats, sp: Complexes, turn: Floats) -> tuple[Floats, Floats, Complexes]:
    """Coherency matrix in a frame turned by ``turn`` about the ray: E_s' = c E_s + s E_p, E_p' = -s E_s + c E_p."""
    if not np.any(turn):
        return ss, pp, sp
    c, s = np.cos(turn), np.sin(turn)
    mixed = 2 * c * s * sp.real
    return (
        c * c * ss + s * s * pp + mixed,
        s * s * ss + c * c * pp - mixed,
        c * s * (pp - ss) + c * c * sp - s * s * np.conj(sp),
    )


def received(
    light: Light,
    survival: Survival,
    *,
    absorption: Floats,
    diffuser: Mapping[int, Floats],
    guide: Floats,
) -> Floats:
    """Share of the emitter's power that channel c gets at each wavelength, (S, L, C).

    absorption  of the guide [1/m], (S, L)
    diffuser    per hit column the index of what sends light back, (S,)
    guide       index of the guide, (S,)
    """
    launch = light.launch[:, None, None, :]
    reach = light.reach[:, None, :, :]
    transmission = along(light.length, absorption)
    if light.read == "kept":
        signal = np.sum(launch * survival.after * transmission * reach, axis=-1)
    elif light.read == "through":
        signal = np.sum(launch * survival.entered[-1] * transmission * reach, axis=-1)
    else:
        signal = np.zeros((1, 1, 1))
    for column in {relight.column for relight in light.relight}:
        signal = signal + relit(light, survival, column, absorption=absorption, diffuser=diffuser, guide=guide)
    return np.asarray(signal + light.stray[:, None, :])


def along(length: Floats, absorption: Floats) -> Floats:
    """Internal transmission exp(-a s) of a way, (S, L, C|1, K)."""
    return np.exp(-absorption[:, :, None, None] * length[:, None, :, :])


def relit(
    light: Light,
    survival: Survival,
    column: int,
    *,
    absorption: Floats,
    diffuser: Mapping[int, Floats],
    guide: Floats,
) -> Floats:
    """What the diffuse returns of one hit column bring to each channel, (S, L, C)."""
    total: Floats = np.zeros((1, 1, 1))
    for relight in light.relight:
        if relight.column != column:
            continue
        back = survival.back[column] * along(relight.length, absorption)
        fed = np.sum(light.launch[:, None, None, :] * back * relight.feed[:, None, :, :], axis=-1)
        ratio = np.minimum(diffuser.get(column, guide) / guide, 1.0)[:, None]
        # Lambertian in a lower index: no light beyond its critical angle, brighter by the square of the ratio inside.
        share = np.where(relight.sine < ratio, relight.share / ratio**2, 0.0)
        total = total + fed * np.minimum(share, 1.0)[:, None, :]
    return total
