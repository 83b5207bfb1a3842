"""Every state of a design over samples: the light laid out, the faces answered, the optical shares at the read-out."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import Cover
from outcouple.contact.media import Media
from outcouple.contact.response import Answer, answer, answer_notes
from outcouple.design import Design, State
from outcouple.evaluate.transport import Survival, received, survive
from outcouple.fields import Overlay
from outcouple.geometry import Setting
from outcouple.light import Light
from outcouple.notes import Note, merge_notes
from outcouple.optics import spectrum_nodes

__all__ = ["LaidState", "Way", "lay_state", "spectrum_of"]

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Way:
    """One build-up of all faces, with the share of area it stands for (coarse patches make several)."""

    share: Floats
    covers: Mapping[str, Cover]
    survival: Survival
    diffuser: Mapping[int, Floats]
    received: Floats


@dataclass(frozen=True)
class LaidState:
    """One state, followed from emitter to read-out.

    share  of the emitter's power at the read-out per wavelength node, (S, L, C)
    """

    state: State
    setting: Setting
    media: Media
    light: Light
    weights: Floats
    share: Floats
    ways: tuple[Way, ...]
    notes: tuple[Note, ...] = field(default=())


def spectrum_of(p: Overlay, nodes: int) -> tuple[Floats, Floats]:
    """Wavelengths (S, L) and weights (L,) of the emitter's line at its own wavelength and width."""
    wavelengths, weights = spectrum_nodes(p.emitter.wavelength, p.emitter.linewidth, nodes)
    return np.asarray(wavelengths), np.asarray(weights)


def lay_state(
    design: Design,
    state: State,
    p: Overlay,
    *,
    samples: int,
    nodes: int,
    breaks_of: Sequence[str],
    lights: dict[object, Light],
    extra: Mapping[str, Floats] | None = None,
) -> LaidState:
    """Follow one state.

    p          the design's parameters as this state sees them
    breaks_of  materials whose critical angles the quadrature should respect
    lights     lights already laid out, by what they depend on; filled here
    extra      trial media: index (S,) by name
    """
    wavelengths, weights = spectrum_of(p, nodes)
    temperature = np.broadcast_to(p.environment.temperature, (samples,))
    media = Media(
        design.catalogue,
        wavelengths=np.broadcast_to(wavelengths, (samples, nodes)),
        temperature=temperature,
        linewidth=np.broadcast_to(p.emitter.linewidth, (samples,)),
        extra=extra,
    )
    setting = Setting(
        p=p, samples=samples, index=media.centre, breaks=tuple(media.centre(name) for name in breaks_of)
    )
    light = lights.get(state.changes_key)
    if light is None:
        light = lights[state.changes_key] = design.geometry.light(setting)
    covers = design.geometry.covers(setting, state.covers(p, design.geometry))
    strips = None
    if light.spot is not None and state.object is not None:
        place = state.place(p, samples)
        strips = light.spot.lengths(place["diameter"], place["x"], place["y"])
    ways = tuple(
        _way(share, build, light, media, setting, strips) for share, build in _builds(covers, samples)
    )
    total = sum((way.share[:, None, None] * way.received for way in ways), np.zeros((1, 1, 1)))
    notes = [note for cover in covers.values() for note in answer_notes(cover)]
    return LaidState(
        state, setting, media, light, weights, np.asarray(total), ways, merge_notes([*notes, *media.notes])
    )


def _builds(covers: Mapping[str, Cover], samples: int) -> Iterator[tuple[Floats, Mapping[str, Cover]]]:
    """The combinations of coarse patches: a cover laid on several faces shows the same patch on all of them."""
    coarse: list[Cover] = []
    for cover in covers.values():
        if not cover.finer and len(cover.patches) > 1 and not any(cover is known for known in coarse):
            coarse.append(cover)
    if not coarse:
        yield np.ones(samples), covers
        return
    first = coarse[0]
    for at, patch in enumerate(first.patches):
        alone = first.alone(at)
        rest = {face: alone if cover is first else cover for face, cover in covers.items()}
        for share, build in _builds(rest, samples):
            yield share * np.asarray(patch.share, dtype=float), build


def _way(
    share: Floats,
    covers: Mapping[str, Cover],
    light: Light,
    media: Media,
    setting: Setting,
    strips: Floats | None,
) -> Way:
    acceptance = np.asarray(light.acceptance, dtype=float)
    known: dict[tuple[int, bytes], Answer] = {}
    answers: list[Answer | None] = []
    diffuser: dict[int, Floats] = {}
    for column, face in enumerate(light.faces):
        cover = covers.get(face)
        if cover is None:
            answers.append(None)
            continue
        angle = light.angle[:, :, column]
        key = (id(cover), angle.tobytes())
        if key not in known:
            known[key] = answer(cover, light.guide, angle, media, acceptance=acceptance)
        answers.append(known[key])
        scatterers = [patch.scatterer for patch in cover.patches if np.any(np.asarray(patch.albedo) > 0)]
        if scatterers:
            diffuser[column] = media.centre(scatterers[0])
    survival = survive(light, answers, strips)
    n_guide = media.index(light.guide)
    absorption = 4 * np.pi * n_guide.imag / media.wavelengths
    got = received(
        light, survival, absorption=absorption, diffuser=diffuser, guide=media.centre(light.guide)
    )
    return Way(np.broadcast_to(share, (setting.samples,)), covers, survival, diffuser, got)
