"""How a covered face answers light from inside the guide."""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import NDArray

from outcouple import optics
from outcouple.contact.cover import Cover, Drops, Film, Patch
from outcouple.contact.droplet import drop_answer
from outcouple.contact.media import Media
from outcouple.notes import Note

__all__ = ["Answer", "answer", "answer_notes"]

Floats = NDArray[np.float64]
Complexes = NDArray[np.complex128]


@dataclass(frozen=True)
class Answer:
    """Reply of a face at the angles of K rays, each array (S, L, K).

    Rs, Rp    reflectance
    X         <rs conj(rp)>
    Ts, Tp    share that enters the backing
    Bs, Bp    part of Ts, Tp that comes back diffusely
    Ws, Wp    share that comes back turned out of the specular way (drops)

    What is missing to 1 in R + T + W is absorbed in films. All are linear in the areas, so patches, thickness
    distributions and spectra add.
    """

    Rs: Floats
    Rp: Floats
    X: Complexes
    Ts: Floats
    Tp: Floats
    Bs: Floats
    Bp: Floats
    Ws: Floats
    Wp: Floats

    def plus(self, other: Answer) -> Answer:
        """Sum of two replies already weighted by their shares."""
        return Answer(*(getattr(self, f.name) + getattr(other, f.name) for f in fields(self)))

    def of(self, rays_s: NDArray[np.bool_]) -> Answer:
        """Reply where every ray is wholly s (True) or wholly p: both entries hold the one that counts, (S|1, 1, K)."""
        pairs = ((self.Rs, self.Rp), (self.Ts, self.Tp), (self.Bs, self.Bp), (self.Ws, self.Wp))
        R, T, B, W = (np.where(rays_s, s, p) for s, p in pairs)
        return Answer(R, R, self.X, T, T, B, B, W, W)

    def times(self, share: Floats | float) -> Answer:
        """Reply weighted by a share of area; an array share has shape (S,) or broadcasts against (S, L, K)."""
        weight = np.asarray(share, dtype=float)
        if weight.ndim == 1:
            weight = weight[:, None, None]
        return Answer(*(getattr(self, f.name) * weight for f in fields(self)))


def answer(cover: Cover, guide: str, angle: Floats, media: Media, *, acceptance: Floats) -> Answer:
    """Reply of a cover whose patches are finer than the beam.

    guide       material the light comes from
    angle       incidence from the face normal [rad], (S, K)
    acceptance  half-angle about the specular direction, inside the guide, that still reaches the read-out [rad], (S,);
                decides how much of what drops send back still counts
    """
    total: Answer | None = None
    for patch in cover.patches:
        part = _patch_answer(patch, guide, angle, media, acceptance).times(patch.share)
        total = part if total is None else total.plus(part)
    if total is None:
        raise ValueError("a cover holds at least one patch")
    return total


def _patch_answer(patch: Patch, guide: str, angle: Floats, media: Media, acceptance: Floats) -> Answer:
    if isinstance(patch.backing, Drops):
        return _drops_answer(patch.backing, guide, angle, media, acceptance)
    Rs, Rp, X, Ts, Tp = _powers(guide, patch.films, patch.backing, angle, media)
    albedo = np.asarray(patch.albedo, dtype=float)
    albedo = albedo[:, None, None] if albedo.ndim == 1 else albedo
    none = np.zeros((1, 1, 1))
    return Answer(Rs, Rp, X, Ts, Tp, albedo * Ts, albedo * Tp, none, none)


def _powers(
    guide: str, films: tuple[Film, ...], backing: str, angle: Floats, media: Media
) -> tuple[Floats, Floats, Complexes, Floats, Floats]:
    n_guide = media.index(guide).real[:, :, None]
    n_backing = media.index(backing)[:, :, None]
    theta = angle[:, None, :]
    if not films:
        return optics.reflectance((n_guide, n_backing), (), theta, 1.0)
    indices = (n_guide, *(media.index(film.material)[:, :, None] for film in films), n_backing)
    wavelength = media.wavelengths[:, :, None]
    linewidth = media.linewidth[:, None, None]
    thicknesses = tuple(_column(film.thickness) for film in films)
    spread = [at for at, film in enumerate(films) if film.spread != "none"]
    if not spread:
        return optics.mixed_response(indices, thicknesses, theta, wavelength, linewidth=linewidth)
    at = spread[0]
    return optics.thickness_average(
        indices,
        thicknesses,
        theta,
        wavelength,
        layer=at,
        spread=films[at].spread,
        deviation=_column(films[at].deviation),
    )


def _column(value: float | Floats) -> Floats:
    array = np.asarray(value, dtype=float)
    return array[:, None, None] if array.ndim == 1 else array


def _drops_answer(drops: Drops, guide: str, angle: Floats, media: Media, acceptance: Floats) -> Answer:
    """Drops keep the specular share they still send within the acceptance; s and p share one table."""
    kept, turned = drop_answer(
        n_guide=media.centre(guide),
        n_drop=media.centre(drops.material),
        angle=angle,
        contact_angle=np.broadcast_to(np.asarray(drops.contact_angle, dtype=float), media.temperature.shape),
        acceptance=acceptance,
    )
    kept, turned = kept[:, None, :], turned[:, None, :]
    lost = 1 - kept - turned
    none = np.zeros((1, 1, 1))
    # A cap's two slopes turn the field by phases that differ from ray to ray: the cross term keeps no phase.
    return Answer(kept, kept, np.zeros_like(kept, dtype=complex), lost, lost, none, none, turned, turned)


def answer_notes(cover: Cover, media: Media) -> tuple[Note, ...]:
    """Cautions about the way a cover is answered."""
    found = []
    for patch in cover.patches:
        found += [_coherence_note(film, media) for film in patch.films if film.spread == "none"]
        if isinstance(patch.backing, Drops):
            found.append(
                Note(
                    "drops-as-caps",
                    "Drops answer as spherical caps of one contact angle that cover their patch; what they send back "
                    "is turned and counts only within the acceptance of the read-out. Shares hold to about 0.04, "
                    "to 0.1 where guide and drop hardly differ in index.",
                    severity="info",
                )
            )
        if sum(film.spread != "none" for film in patch.films) > 1:
            found.append(
                Note(
                    "one-spread", "Only the first film with a thickness spread is averaged; the others keep their mean."
                )
            )
    return tuple(found)


def _coherence_note(film: Film, media: Media) -> Note:
    """Which way an even film was taken; where its waves decay it is coherent whatever its thickness."""
    trip = 2 * float(np.max(media.centre(film.material) * film.thickness))
    centre = media.wavelengths[:, media.wavelengths.shape[1] // 2]
    reach = float(np.min(optics.coherence_length(centre, media.linewidth)))
    name = f"The even film of {film.material}, {float(np.max(film.thickness)) * 1e6:.3g} um,"
    if trip > reach:
        text = f"{name} is thicker than the line is coherent: where light crosses it, intensities add, without fringes."
    else:
        text = f"{name} is thin enough to show fringes: fields add, averaged over the emitter's line."
    return Note("film-coherence", f"{text} Coherence length {reach * 1e6:.3g} um.", severity="info")
