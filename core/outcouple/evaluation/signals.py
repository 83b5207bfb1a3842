"""Every state of a design over samples: the light laid out, the faces answered, the optical shares at the read-out."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import Cover
from outcouple.contact.media import Media
from outcouple.contact.response import Answer, answer, answer_notes
from outcouple.design import Design, State
from outcouple.evaluation.overlay import View
from outcouple.evaluation.transport import Survival, received, survive
from outcouple.geometry import Setting
from outcouple.light import Light, Strips
from outcouple.notes import Note, merge_notes
from outcouple.optics import spectrum_nodes
from outcouple.readout.emitted import peak

__all__ = ["LaidState", "Way", "guide_absorption", "lay_state", "setting_of", "trial_share"]

Floats = NDArray[np.float64]

PART = 500_000
"""Array elements of one part of a light of many channels."""


@dataclass(frozen=True)
class Way:
    """One build-up of all faces, with the share of area it stands for (coarse patches make several).

    answers   of every hit column
    received  share of the emitter's power per wavelength node, (S, L, C)
    """

    share: Floats
    covers: Mapping[str, Cover]
    light: Light
    answers: tuple[Answer | None, ...]
    strips: Strips | None
    diffuser: Mapping[int, Floats]
    received: Floats

    @cached_property
    def survival(self) -> Survival:
        """Every ray on its way; of a light of many chords ask parts of it only."""
        return survive(self.light, self.answers, self.strips)

    @property
    def kept(self) -> Survival:
        """What is left of every ray, and of a light that cannot be divided all that became of it."""
        if not self.light.divisible or self.light.read != "kept":
            return self.survival
        return survive(self.light, self.answers, self.strips, detail=False)

    def part(self, channels: slice) -> Way:
        """The same for some of the channels."""
        strips = None if self.strips is None else self.strips.part(channels)
        received = self.received[:, :, channels]
        return replace(self, light=self.light.part(channels), strips=strips, received=received)

    def parts(self, nodes: int) -> Iterator[Way]:
        """The way in parts that the caches hold, where the light can be divided; else as a whole.

        nodes  of the emitter's line
        """
        light = self.light
        size = max(1, PART // max(1, nodes * light.rays * light.reach.shape[0]))
        if not light.divisible or light.channels <= size:
            yield self
            return
        for start in range(0, light.channels, size):
            yield self.part(slice(start, start + size))


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

    def alone(self, channel: int) -> LaidState:
        """The state with one channel only; for lights that can be divided."""
        one = slice(channel, channel + 1)
        ways = tuple(way.part(one) for way in self.ways)
        return replace(self, light=self.light.part(one), share=self.share[:, :, one], ways=ways)

    @property
    def p(self) -> View:
        """The design's parameters as this state sees them."""
        view: View = self.setting.p
        return view

    @property
    def wavelengths(self) -> Floats:
        """Of the emitter's line, (S, L)."""
        return self.media.wavelengths

    @property
    def etendue(self) -> Floats:
        """With which each channel sees the outside, (S, C)."""
        return self.light.ambient

    @property
    def slot(self) -> Floats | None:
        """Time each channel has for one reading [s], (S,); None where channels do not take turns."""
        return self.light.slot


def spectrum_of(p: View, nodes: int) -> tuple[Floats, Floats]:
    """Wavelengths (S, L) and weights (L,) of the emitter's line at its own peak, warm or cold, and its width."""
    wavelengths, weights = spectrum_nodes(peak(p), p.emitter.linewidth, nodes)
    return np.asarray(wavelengths), np.asarray(weights)


def setting_of(
    design: Design,
    p: View,
    *,
    samples: int,
    nodes: int,
    breaks_of: Sequence[str],
    extra: Mapping[str, Floats] | None = None,
) -> tuple[Setting, Media, Floats]:
    """What a geometry is given, the media behind it, and the weights (L,) of the emitter's line."""
    wavelengths, weights = spectrum_of(p, nodes)
    media = Media(
        design.catalogue,
        wavelengths=np.broadcast_to(wavelengths, (samples, nodes)),
        temperature=np.broadcast_to(p.environment.temperature, (samples,)),
        linewidth=np.broadcast_to(p.emitter.linewidth, (samples,)),
        extra=extra,
    )
    breaks = tuple(media.centre(name) for name in breaks_of)
    setting = Setting(p=p, samples=samples, index=media.centre, breaks=breaks, absorption=media.absorption)
    return setting, media, weights


def lay_state(
    design: Design,
    state: State,
    p: View,
    *,
    samples: int,
    nodes: int,
    breaks_of: Sequence[str],
    lights: dict[object, Light],
) -> LaidState:
    """Follow one state.

    p          the design's parameters as this state sees them
    breaks_of  materials whose critical angles the quadrature should respect
    lights     lights already laid out, by what they depend on; filled here
    """
    setting, media, weights = setting_of(design, p, samples=samples, nodes=nodes, breaks_of=breaks_of)
    light = lights.get(state.changes_key)
    if light is None:
        light = lights[state.changes_key] = design.geometry.light(setting)
    covers = design.geometry.covers(setting, state.covers(p))
    strips = None
    if light.spot is not None and state.object is not None:
        place = state.place(p, samples)
        if light.spot.placed is not None:
            light = light.spot.placed(place["diameter"], place["x"], place["y"])
        strips = None if light.spot is None else light.spot.strips(place["diameter"], place["x"], place["y"])
    ways = tuple(_way(share, build, light, media, strips) for share, build in _builds(covers, samples))
    notes = [note for cover in covers.values() for note in answer_notes(cover, media)]
    return LaidState(state, setting, media, light, weights, _sum(ways), ways, merge_notes([*notes, *media.notes]))


def trial_share(design: Design, base: LaidState, covers: Mapping[str, Cover], extra: Mapping[str, Floats]) -> Floats:
    """Optical share per wavelength node, (S, L, C), of the light of ``base`` answered by covers no state has.

    extra  index (S,) by the name of a trial medium; S may exceed that of ``base`` where the latter is 1
    """
    samples = max([base.setting.samples, *(len(index) for index in extra.values())])
    nodes = base.media.wavelengths.shape[1]
    _, media, _ = setting_of(design, base.setting.p, samples=samples, nodes=nodes, breaks_of=(), extra=extra)
    return _sum(tuple(_way(share, build, base.light, media, None) for share, build in _builds(covers, samples)))


def _sum(ways: Sequence[Way]) -> Floats:
    return np.asarray(sum((way.share[:, None, None] * way.received for way in ways), np.zeros((1, 1, 1))))


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
    strips: Strips | None,
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
    nodes = media.wavelengths.shape[1]
    empty = np.zeros((1, 1, light.channels))
    way = Way(np.asarray(share), covers, light, tuple(answers), strips, diffuser, empty)
    got = [
        received(
            part.light,
            part.kept,
            absorption=guide_absorption(light, media),
            diffuser=diffuser,
            guide=media.centre(light.guide),
        )
        for part in way.parts(nodes)
    ]
    if len(got) == 1:
        return replace(way, received=got[0])
    samples = max(part.shape[0] for part in got)
    whole = [np.broadcast_to(part, (samples, nodes, part.shape[2])) for part in got]
    return replace(way, received=np.concatenate(whole, axis=2))


def guide_absorption(light: Light, media: Media) -> Floats:
    """Of the guide's material [1/m], (S, L); (S, 1) where it does not change along the line."""
    absorption = 4 * np.pi * media.index(light.guide).imag / media.wavelengths
    flat = np.allclose(absorption, absorption[:, :1], rtol=1e-12, atol=0.0)
    return np.asarray(absorption[:, :1] if flat else absorption)
