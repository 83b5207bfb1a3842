"""The droplet plate as a geometry."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import ClassVar

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import (
    FailureRow,
    Geometry,
    Metric,
    MetricValue,
    Missing,
    Outline,
    RayPath,
    ResponseAxis,
    Results,
    Setting,
    View,
)
from outcouple.light import Light, Vector
from outcouple.notes import Note
from outcouple.optics import interface
from outcouple_plugins.beams import beam_directions
from outcouple_plugins.droplet_plate.measures import MEASURES, METRICS
from outcouple_plugins.droplet_plate.parameters import Parameters

__all__ = ["DropletPlate"]

Floats = NDArray[np.float64]


class DropletPlate(Geometry):
    """Several bounces at a face that drops touch."""

    name: ClassVar[str] = "droplet-plate"
    summary: ClassVar[str] = "plate whose light bounces under drops: rain, dew, condensation"
    Parameters = Parameters
    wetted: ClassVar[Mapping[str, str]] = {"outer": "the outer face"}
    words: ClassVar[tuple[str, str]] = ("clear", "drops")
    present_reads: ClassVar = "low"
    jobs: ClassVar[tuple[str, ...]] = ("rain", "condensation")
    metrics: ClassVar[tuple[Metric, ...]] = METRICS

    def light(self, setting: Setting) -> Light:
        """A beam that meets the outer face at one incidence, again and again; the inner face reflects all."""
        plate = setting.p.plate
        n = setting.index(plate.material)
        bonded = plate.coupling == "bonded"
        ray, axis, weight = beam_directions(setting, n, bonded)
        incidence = setting.spread(plate.incidence)
        normal = Vector(np.sin(incidence)[:, None], np.zeros((1, 1)), np.cos(incidence)[:, None])
        angle = np.arccos(np.clip(ray.dot(normal), 0.0, 1.0))
        face = interface(1.0, n[:, None], np.arccos(axis))
        through = np.ones_like(weight) if bonded else 1 - (face.Rs + face.Rp) / 2
        half = setting.spread(plate.detector_half_angle)
        reach = through * (axis >= np.cos(half)[:, None])
        rays, launch = weight.shape[1], weight * through
        capture = np.sum(launch * reach, axis=1)
        window = np.sin(half) / (1.0 if bonded else n)
        way = plate.bounces * 2 * setting.spread(plate.thickness)[:, None] / np.cos(np.minimum(angle, 1.5))
        q = {"none": 0.0, "s": 1.0, "p": -1.0}[setting.p.emitter.polarization]
        return Light(
            guide=plate.material,
            faces=("outer",),
            launch=launch,
            reach=reach[:, None, :],
            angle=angle[:, :, None],
            hits=np.full((1, 1, rays, 1), float(plate.bounces)),
            turn=np.zeros((1, rays, 1)),
            length=way[:, None, :],
            polarization=np.full((1, rays), q),
            stray=(setting.spread(plate.crosstalk) * capture)[:, None],
            ambient=(setting.spread(plate.patch) * np.cos(incidence) * np.pi * window**2)[:, None],
            entry={"reflected where it enters": np.sum(weight * (1 - through), axis=1)},
            acceptance=np.arcsin(np.clip(window, 0, 1)),
        )

    def measure(self, names: Sequence[str], results: Results) -> Mapping[str, MetricValue | Missing]:
        """The plate's own metrics among ``names``."""
        return {name: MEASURES[name](results) for name in names if name in MEASURES}

    def response(self, setting: Setting) -> ResponseAxis:
        """Reading against the index of a clear liquid all over."""
        return ResponseAxis("index of a liquid all over", "number", "", 1.0, 1.9)

    def failures(self, setting: Setting) -> tuple[FailureRow, ...]:
        """What looks like rain, and what hides it."""
        return (
            FailureRow("even sheet of water", "reflects as a dry face does: unseen at rest", None, ()),
            FailureRow("dirt, salt, road film", "takes light slowly and for long", True, ("trend",), slow=True),
            FailureRow("dew", "takes as much light as rain, but comes on in minutes", True, ("trend",), slow=True),
            FailureRow("coating worn or new", "other drops: a wide receiver sees up to three times the loss", None, ()),
            FailureRow("bubbles in the bond", "light is lost for good", True, ("trend",), slow=True),
            FailureRow("low sun into the receiver", "light and noise are added", False, ("dark test",)),
            FailureRow("ice or frost", "takes light and scatters it back", True, ()),
        )

    def notes(self, setting: Setting) -> tuple[Note, ...]:
        """What a steady reading does not see, and how drops are counted."""
        plate = setting.p.plate
        critical = np.arcsin(np.clip(setting.index("air") / setting.index(plate.material), 0, 1))
        lobe = setting.spread(setting.p.emitter.half_angle)
        inside = lobe if plate.coupling == "bonded" else np.arcsin(np.sin(lobe) / setting.index(plate.material))
        return (
            Note(
                "sheet-invisible",
                "An even sheet of water is invisible at rest (d.c.) but for what it absorbs: its outer face reflects "
                "what the plate's did. It is seen by its ripple, in the alternating part of the reading, which is not "
                "modelled here.",
                decides="a trial under running water",
            ),
            Note(
                "lobe-leaks",
                "Part of the beam meets the dry face below its critical angle and is lost at every bounce.",
                where=setting.spread(plate.incidence) - inside < critical,
            ),
            Note(
                "drops-counted",
                "Drops fall at random: a patch with few of them reads unevenly, however quiet the electronics. The "
                "margin in sigma and the error rates count the electronics alone; the rain margin counts both.",
                severity="info",
            ),
        )

    def views(self, setting: Setting) -> tuple[View, ...]:
        """The plate with the beam's zig-zag, to scale."""
        return (_view(setting),)

    def starter(self, job: str) -> str:
        """Clear, rain, dew and a sheet."""
        return _STARTER


def _view(setting: Setting) -> View:
    plate = setting.p.plate
    thick, incidence = float(setting.spread(plate.thickness)[0]), float(setting.spread(plate.incidence)[0])
    step = thick * np.tan(incidence)
    count = plate.bounces
    width = 2 * step * count
    margin = 0.5 * thick
    guide = np.array([[-margin, 0.0], [width + margin, 0.0], [width + margin, thick], [-margin, thick]])
    points = [(0.0, 0.0)]
    columns, angles = [-1], [0.0]
    for at in range(count):
        points += [((2 * at + 1) * step, thick), ((2 * at + 2) * step, 0.0)]
        columns += [0, -1]
        angles += [incidence, incidence]
    size = 0.25 * thick
    rays = (RayPath(np.array(points), tuple(columns), tuple(angles)),)
    outlines = (
        Outline("guide", "plate", guide),
        Outline("emitter", "emitter", _part(0.0, size)),
        Outline("detector", "detector", _part(width, size)),
    )
    return View("cross-section", outlines, rays)


def _part(x: float, size: float) -> Floats:
    return np.array([[x - size, -size], [x + size, -size], [x + size, 0.0], [x - size, 0.0]])


_STARTER = """\
[[states]]
name = "clear"
expect = "absent"
touching = "dry"

[[states]]
name = "rain"
expect = "present"
touching = { what = "droplets", coverage = "10 %", contact_angle = "40 deg" }

[[states]]
name = "even sheet"
expect = "present"
touching = { what = "film", thickness = "0.3 mm", spread = "none" }
role = "fault"

[[requirements]]
metric = "tilt_to_leak"
at_least = "2 deg"

[[requirements]]
metric = "margin_sigma"
at_least = 8

[[requirements]]
metric = "rain_margin"
at_least = 3
"""
