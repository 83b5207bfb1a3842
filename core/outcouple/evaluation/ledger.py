"""The energy ledger of one state: launched light minus every named loss equals what reaches the channel."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.evaluation.signals import LaidState, Way
from outcouple.evaluation.transport import along, relit

__all__ = ["Ledger", "ledger_of"]

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Ledger:
    """Shares of the emitter's power for one sample and one channel.

    losses    in the order of the way: label -> share lost there
    returned  label -> share that comes back to the channel diffusely or beside the faces (a gain)
    received  what the channel gets
    """

    losses: Mapping[str, float]
    returned: Mapping[str, float]
    received: float

    @property
    def gap(self) -> float:
        """1 - losses + returned - received; zero to rounding, whatever the state."""
        return 1.0 - sum(self.losses.values()) + sum(self.returned.values()) - self.received


def ledger_of(laid: LaidState, channel: int = 0, sample: int = 0) -> Ledger:
    """Account for all light of a state, every share computed from what its own step took away."""
    if laid.light.divisible:
        laid, channel = laid.alone(_clip(channel, laid.light.channels)), 0
    light = laid.light
    losses: dict[str, float] = {}
    returned: dict[str, float] = {}
    for label, share in light.entry.items():
        losses[label] = float(_at(share, sample))
    losses["stays at the emitter"] = 1.0 - float(np.sum(_at(light.launch, sample))) - sum(losses.values())
    if light.parted:
        reach = _reach(laid, channel, sample)
        losses["takes other ways or passes the detector"] = float(np.sum(_at(light.launch, sample) * (1 - reach)))
    for way in laid.ways:
        part = float(_at(way.share, sample))
        for label, lost in _way_losses(laid, way, channel, sample):
            losses[label] = losses.get(label, 0.0) + part * lost
        for label, back in _way_returns(laid, way, channel, sample):
            returned[label] = returned.get(label, 0.0) + part * back
    stray = float(_at(_at(light.stray, sample), channel))
    if stray:
        returned["reaches the detector beside the faces"] = stray
    received = float(np.sum(laid.weights * _channel(laid.share[_clip(sample, laid.share.shape[0])], channel)))
    return Ledger({k: v for k, v in losses.items() if v != 0.0}, {k: v for k, v in returned.items() if v}, received)


def _clip(at: int, size: int) -> int:
    return at if size > 1 else 0


def _at(array: Floats, at: int) -> Floats:
    return np.asarray(array[_clip(at, array.shape[0])])


def _channel(array: Floats, channel: int) -> Floats:
    """(L, C) -> (L,)."""
    return array[:, _clip(channel, array.shape[1])]


def _rays(array: Floats, sample: int, channel: int) -> Floats:
    """(S, L, C|1, K) -> (L, K)."""
    one = _at(array, sample)
    return one[:, _clip(channel, one.shape[1]), :]


def _reach(laid: LaidState, channel: int, sample: int) -> Floats:
    reach = _at(laid.light.reach, sample)
    return np.asarray(reach[_clip(channel, reach.shape[0])])


def _total(laid: LaidState, per_ray: Floats, channel: int, sample: int) -> float:
    """Sum of an (L, K) array over launched rays and the emitter's line; a channel's own where ways part."""
    launch = _at(laid.light.launch, sample)
    if laid.light.parted:
        launch = launch * _reach(laid, channel, sample)
    spectral = np.sum(np.broadcast_to(per_ray, (len(laid.weights), launch.size)) * launch, axis=-1)
    return float(np.sum(laid.weights * spectral))


def _way_losses(laid: LaidState, way: Way, channel: int, sample: int) -> Iterator[tuple[str, float]]:
    light, survival = laid.light, way.survival
    faces: dict[str, dict[str, float]] = {}
    through = len(light.faces) - 1 if light.read == "through" else -1
    for column, face in enumerate(light.faces):
        drawn, entered, turned = (
            _total(laid, _rays(store[column], sample, channel), channel, sample)
            for store in (survival.drawn, survival.entered, survival.turned)
        )
        if column == through:
            yield (
                "reflected before the last face",
                _total(laid, _rays(survival.after, sample, channel), channel, sample),
            )
            entered_rays = _rays(survival.entered[column], sample, channel)
            yield from _past(laid, entered_rays, channel, sample)
            entered = 0.0
        found = faces.setdefault(face, {})
        for label, share in (
            (f"enters what touches the {face} face", entered),
            (f"turned away by drops on the {face} face", turned),
            (
                f"absorbed in films on the {face} face",
                drawn
                - entered
                - turned
                - (
                    _total(laid, _rays(survival.entered[column], sample, channel), channel, sample)
                    if column == through
                    else 0.0
                ),
            ),
        ):
            found[label] = found.get(label, 0.0) + share
    for found in faces.values():
        yield from ((label, share) for label, share in found.items() if abs(share) > 1e-15)
    if light.read != "through":
        yield from _past(laid, _rays(survival.after, sample, channel), channel, sample)


def _past(laid: LaidState, rays: Floats, channel: int, sample: int) -> Iterator[tuple[str, float]]:
    """What is left after the faces: absorbed on the way, or past the detector."""
    light = laid.light
    absorption = 4 * np.pi * laid.media.index(light.guide).imag / laid.media.wavelengths
    transmission = _rays(along(light.length, absorption), sample, channel)
    yield "absorbed in the guide", _total(laid, rays * (1 - transmission), channel, sample)
    if light.read == "drawn":
        yield "stays in the guide", _total(laid, rays * transmission, channel, sample)
    elif not light.parted:
        reach = _reach(laid, channel, sample)
        yield "passes the detector", _total(laid, rays * transmission * (1 - reach), channel, sample)


def _way_returns(laid: LaidState, way: Way, channel: int, sample: int) -> Iterator[tuple[str, float]]:
    light = laid.light
    absorption = 4 * np.pi * laid.media.index(light.guide).imag / laid.media.wavelengths
    for column, face in enumerate(light.faces):
        back = relit(
            light,
            way.survival,
            column,
            absorption=absorption,
            diffuser=way.diffuser,
            guide=laid.media.centre(light.guide),
        )
        share = float(np.sum(laid.weights * _channel(_at(back, sample), channel)))
        if share:
            yield f"comes back diffusely from the {face} face", share
