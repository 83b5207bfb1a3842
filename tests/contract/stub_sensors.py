"""Four unlike sensors, as small as the contract allows: they exist to show that it carries all of them."""

from __future__ import annotations

from typing import ClassVar

import numpy as np

from outcouple.contact.cover import Cover, Film, Patch
from outcouple.fields import Section, name, quantity
from outcouple.geometry import Geometry
from outcouple.light import Light, Relight, Spot, Strips


class Plate(Section):
    """A plate."""

    material: str = name("PMMA", describe="material of the plate")
    thickness: float = quantity("5 mm", "length", ge="1 mm", le="20 mm", describe="thickness", deciding=True)
    width: float = quantity("300 mm", "length", ge="10 mm", le="2 m", describe="width")


class PlateParameters(Section):
    """Stub of a plate."""

    plate: Plate = Plate()


def spread_rays(samples: int, rays: int):
    elevation = np.linspace(2, 40, rays) * np.pi / 180
    return np.broadcast_to(np.pi / 2 - elevation, (samples, rays)), np.full((samples, rays), 0.8 / rays), elevation


class ChordStub(Geometry):
    """Emitters on one edge, detectors on the other; an object anywhere on the face."""

    name: ClassVar[str] = "chord-stub"
    summary: ClassVar[str] = "stub: E x D chords"
    Parameters = PlateParameters
    wetted: ClassVar = {"face": "whole face", "spot": "under an object"}
    spot_face: ClassVar[str] = "spot"
    words: ClassVar = ("no touch", "touch")
    reading: ClassVar = "change"
    emitters: ClassVar[int] = 12
    detectors: ClassVar[int] = 12

    def light(self, setting):
        p, rays = setting.p, 10
        angle, launch, elevation = spread_rays(setting.samples, rays)
        channels = self.emitters * self.detectors
        thickness = setting.spread(p.plate.thickness)[:, None]
        hop = 2 * thickness / np.tan(elevation)
        y = np.linspace(-0.1, 0.1, self.emitters)
        start, end = np.meshgrid(y, y, indexing="ij")
        start, end, width = start.ravel(), end.ravel(), setting.spread(p.plate.width)

        def lengths(diameter, x, y_at):
            share = (x / width + 0.5)[:, None]
            centre = start + share * (end - start)
            offset = np.linspace(-2e-3, 2e-3, 5)
            miss = centre[:, :, None] + offset - y_at[:, None, None]
            return Strips(2 * np.sqrt(np.maximum((diameter[:, None, None] / 2) ** 2 - miss**2, 0.0))[:, :, None, :])

        way = np.hypot(width[:, None], end - start)[:, :, None] / np.cos(elevation)
        hits = np.zeros((setting.samples, channels, rays, 2))
        hits[..., 0] = way * np.cos(elevation) / hop[:, None, :]
        return Light(
            guide=p.plate.material,
            faces=("face", "spot"),
            launch=launch,
            reach=np.full((1, channels, rays), 0.5 / channels),
            angle=np.repeat(angle[:, :, None], 2, axis=2),
            hits=hits,
            turn=np.zeros((1, rays, 2)),
            length=way,
            polarization=np.zeros((1, rays)),
            spot=Spot(1, hop, lengths),
            entry={"reflected at the edge": np.full(1, 0.2)},
        )


class CameraStub(Geometry):
    """Light drawn out under an object and sent back diffusely towards a camera."""

    name: ClassVar[str] = "camera-stub"
    summary: ClassVar[str] = "stub: drawn and re-lit"
    Parameters = PlateParameters
    wetted: ClassVar = {"spot": "under an object"}
    spot_face: ClassVar[str] = "spot"
    words: ClassVar = ("no touch", "touch")
    present_reads: ClassVar = "high"

    def light(self, setting):
        p, rays = setting.p, 10
        angle, launch, elevation = spread_rays(setting.samples, rays)
        hop = 2 * setting.spread(p.plate.thickness)[:, None] / np.tan(elevation)
        return Light(
            guide=p.plate.material,
            faces=("spot",),
            launch=launch,
            reach=np.zeros((1, 1, rays)),
            angle=angle[:, :, None],
            hits=np.zeros((1, 1, rays, 1)),
            turn=np.zeros((1, rays, 1)),
            length=np.full((1, 1, rays), 0.2),
            polarization=np.zeros((1, rays)),
            read="drawn",
            relight=(Relight(0, np.full((1, 1, rays), 0.05), np.full((1, 1), 1e-3), np.full((1, 1), 0.1)),),
            spot=Spot(0, hop, lambda diameter, x, y: Strips(diameter[:, None, None, None] * np.ones((1, 1, 1, 3)))),
            entry={"reflected at the edge": np.full(1, 0.2)},
        )


class Slot(Section):
    """A gap."""

    distance: float = quantity("200 nm", "length", ge="0 nm", le="10 um", unit="nm", describe="gap", deciding=True)


class SlotParameters(Section):
    """Stub of a gap."""

    slot: Slot = Slot()


class GapStub(Geometry):
    """One beam that crosses a gap; a number comes out."""

    name: ClassVar[str] = "gap-stub"
    summary: ClassVar[str] = "stub: transmission, numeric expect"
    Parameters = SlotParameters
    wetted: ClassVar = {"gap": "the gap"}
    words: ClassVar = ("open", "closed")
    present_reads: ClassVar = "high"
    measurand: ClassVar = ("slot", "distance")

    def light(self, setting):
        return Light(
            guide="crown glass",
            faces=("gap",),
            launch=np.ones((1, 1)),
            reach=np.ones((1, 1, 1)),
            angle=np.full((1, 1, 1), np.pi / 4),
            hits=np.ones((1, 1, 1, 1)),
            turn=np.zeros((1, 1, 1)),
            length=np.zeros((1, 1, 1)),
            polarization=np.ones((1, 1)),
            read="through",
        )

    def covers(self, setting, touching):
        film = Film("air", setting.spread(setting.p.slot.distance))
        return {"gap": Cover((Patch(1.0, "crown glass", (film,)),))}


class TurnStub(Geometry):
    """Two hits at 50 degrees with the plane of incidence turned between them."""

    name: ClassVar[str] = "turn-stub"
    summary: ClassVar[str] = "stub: two hits with a turn"
    Parameters = PlateParameters
    wetted: ClassVar = {"face": "both faces"}
    turn: ClassVar[float] = np.pi / 2

    def light(self, setting):
        turn = np.zeros((1, 1, 2))
        turn[..., 1] = self.turn
        return Light(
            guide=setting.p.plate.material,
            faces=("face", "face"),
            launch=np.ones((1, 1)),
            reach=np.ones((1, 1, 1)),
            angle=np.full((1, 1, 2), np.radians(50)),
            hits=np.ones((1, 1, 1, 2)),
            turn=turn,
            length=np.zeros((1, 1, 1)),
            polarization=np.zeros((1, 1)),
        )
