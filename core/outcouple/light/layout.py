"""The light of one sensor as arrays.

Axes, always in this order, size 1 where constant: S samples, C channels, K rays, H hit columns.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from typing import Literal

import numpy as np
from numpy.typing import NDArray

__all__ = ["Floats", "Light", "LightError", "Read", "Relight", "Spot", "Strips"]

Floats = NDArray[np.float64]
Read = Literal["kept", "through", "drawn"]


class LightError(Exception):
    """A geometry laid out light that breaks the contract; the text names the rule and the array."""


@dataclass(frozen=True)
class Relight:
    """Light drawn out at one hit column and sent back diffusely from there.

    column  index of the hit column at which the light was drawn out
    feed    share of ray k's drawn light that counts for channel c, shape (S, C|1, K)
    share   share of a full Lambertian, sent back into the guide at that place, that reaches channel c, (S, C)
    sine    sine of the angle from the face normal, inside the guide, under which channel c sees the place, (S, C);
            a diffuser of lower index than the guide sends nothing beyond n_diffuser / n_guide and more inside it
    length  metres of guide up to there and on to the channel, (S, C|1, K)
    """

    column: int
    feed: Floats
    share: Floats
    sine: Floats
    length: Floats = field(default_factory=lambda: np.zeros((1, 1, 1)))


@dataclass(frozen=True)
class Strips:
    """Contact of an object on the ways of every channel, in strips across the beam.

    lengths  metres of contact in each strip, zero where it passes beside the object, (S, C, W, B): W bundles of
             rays that go different ways (the rays stand bundle by bundle, K / W each), B strips
    weight   share of the bundle's light in each strip, broadcast against ``lengths``; what is missing to 1 passes
             beside the object. None: B equal strips
    """

    lengths: Floats
    weight: Floats | None = None

    def part(self, channels: slice) -> Strips:
        """The contact on the ways of some of the channels."""
        weight = self.weight
        if weight is not None and weight.shape[1] > 1:
            weight = weight[:, channels]
        return Strips(self.lengths[:, channels], weight)


@dataclass(frozen=True)
class Spot:
    """An object that lies somewhere on one face.

    column   index of the hit column that the object covers; its ``hits`` are ignored while an object lies there
    hop      metres between two hits of ray k on that face, measured along the way, shape (S, K)
    strips   (diameter (S,), x (S,), y (S,)) -> contact on the ways of every channel
    placed   (diameter, x, y) -> the light for an object lying there, for read-outs that look at the place itself (a
             camera); None where the light does not depend on it
    """

    column: int
    hop: Floats
    strips: Callable[[Floats, Floats, Floats], Strips]
    placed: Callable[[Floats, Floats, Floats], Light] | None = None


@dataclass(frozen=True)
class Light:
    """All ways from emitter to read-out of one sensor.

    guide         name of the material the rays travel in
    faces         name of the face of each hit column, length H; a face may own several columns
    launch        share of the emitter's power that travels inside the guide on ray k, (S, K): ALL of it, also what no
                  channel will see
    reach         share of ray k's survivors that lands in channel c, (S, C, K)
    angle         angle of incidence from the face normal [rad], (S, K, H)
    hits          number of hits, (S, C|1, K, H); 0 where a ray skips the column; a broken number is the mean over the
                  entry phase
    turn          rotation of the plane of incidence before the hit [rad], (S, K, H): from the s-vector of the frame
                  before to the s-vector of this hit, right-handed about the ray
    length        metres of guide, (S, C|1, K)
    polarization  (s - p)/(s + p) of ray k at launch, in the frame before the first turn, (S, K)
    read          "kept": what stays in the guide; "through": what crosses the last column; "drawn": only what is re-lit
    relight       diffuse returns
    spot          where an object may lie
    stray         share of the emitter's power that reaches channel c without touching a wetted face, (S, C)
    ambient       etendue with which channel c sees the outside [m2 sr], (S, C)
    entry         named shares of the emitter's power lost before launch, each (S,); they and launch sum to 1
    acceptance    half-angle about the specular way, inside the guide, that still reaches the read-out [rad], (S,)
    parted        True: the channels' ways part before the faces (chords), so a channel's ledger follows its own share
    slot          time one reading has where emitters take turns, settling included [s], (S,); or None
    height        height of the hit above the lowest point of the wetted part [m], (S, K, H), for partly covered tips;
                  or None
    """

    guide: str
    faces: tuple[str, ...]
    launch: Floats
    reach: Floats
    angle: Floats
    hits: Floats
    turn: Floats
    length: Floats
    polarization: Floats
    read: Read = "kept"
    relight: tuple[Relight, ...] = ()
    spot: Spot | None = None
    stray: Floats = field(default_factory=lambda: np.zeros((1, 1)))
    ambient: Floats = field(default_factory=lambda: np.zeros((1, 1)))
    entry: Mapping[str, Floats] = field(default_factory=dict)
    acceptance: Floats = field(default_factory=lambda: np.full(1, np.pi / 2))
    parted: bool = False
    height: Floats | None = None
    slot: Floats | None = None

    @property
    def channels(self) -> int:
        """C, the number of channels."""
        return int(self.reach.shape[1])

    @property
    def rays(self) -> int:
        """K, the number of rays."""
        return int(self.launch.shape[-1])

    @property
    def turns(self) -> bool:
        """True where any plane of incidence turns between hits that a ray really makes."""
        return bool(np.any((self.turn != 0) & np.any(self.hits > 0, axis=1)))

    def capture(self) -> Floats:
        """Share of the emitter's power that lands in channel c while every face reflects all, (S, C)."""
        return np.asarray(np.sum(self.launch[:, None, :] * self.reach, axis=-1))

    @property
    def divisible(self) -> bool:
        """True where channels can be followed one by one: their ways part and nothing is sent back to all of them."""
        return self.parted and not self.relight

    def part(self, channels: slice) -> Light:
        """The same light for some of the channels."""

        def cut(array: Floats) -> Floats:
            return array[:, channels] if array.shape[1] > 1 else array

        return replace(
            self,
            reach=self.reach[:, channels],
            hits=cut(self.hits),
            length=cut(self.length),
            stray=cut(self.stray),
            ambient=cut(self.ambient),
        )

    def check(self) -> None:
        """Raise LightError where a rule of the contract is broken."""
        rays, columns = self.rays, len(self.faces)
        wanted = {
            "launch": (self.launch, 2, {1: rays}),
            "reach": (self.reach, 3, {2: rays}),
            "angle": (self.angle, 3, {1: rays, 2: columns}),
            "hits": (self.hits, 4, {2: rays, 3: columns}),
            "turn": (self.turn, 3, {1: rays, 2: columns}),
            "length": (self.length, 3, {2: rays}),
            "polarization": (self.polarization, 2, {1: rays}),
        }
        for name, (array, ndim, sizes) in wanted.items():
            if array.ndim != ndim or any(array.shape[axis] not in (1, size) for axis, size in sizes.items()):
                raise LightError(f"{name} has shape {array.shape}; rays {rays}, columns {columns}")
            if not np.all(np.isfinite(array)):
                raise LightError(f"{name} holds a value that is not finite")
        total = np.sum(np.broadcast_to(self.launch, (self.launch.shape[0], rays)), axis=-1)
        if np.any(self.launch < 0) or np.any(total > 1 + 1e-9):
            raise LightError(f"launch must be at least 0 and sum to 1 at most; the sum is {float(np.max(total))}")
        if np.any(self.reach < -1e-12) or np.any(self.reach > 1 + 1e-9):
            raise LightError("reach must lie between 0 and 1")
        if np.any((self.angle < 0) | (self.angle > np.pi / 2)):
            raise LightError("angle must lie between 0 and 90 degrees")
        if self.turns and np.any(~np.isin(self.hits, (0.0, 1.0))):
            raise LightError("powers (hits other than 0 and 1) are legal only where no plane of incidence turns")
