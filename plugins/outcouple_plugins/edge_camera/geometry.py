"""The camera-read plate as a geometry."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import ClassVar

import numpy as np

from outcouple.contact.cover import Cover, Patch, immersed
from outcouple.geometry import (
    Curve,
    FailureRow,
    Geometry,
    Metric,
    MetricValue,
    Missing,
    Results,
    Setting,
    Surface,
    View,
)
from outcouple.light import Light
from outcouple.notes import Note
from outcouple_plugins.edge_camera.drawing import plan, section
from outcouple_plugins.edge_camera.light import camera_light
from outcouple_plugins.edge_camera.measures import measured
from outcouple_plugins.edge_camera.metrics import METRICS
from outcouple_plugins.edge_camera.parameters import Parameters
from outcouple_plugins.edge_camera.remarks import failure_rows, remarks_on, setting_notes
from outcouple_plugins.edge_camera.starter import TOUCH

__all__ = ["EdgeCamera"]

OWN = {"back": "back", "rim": "rim_material"}
"""Faces that carry what the plate's section names."""


class EdgeCamera(Geometry):
    """Plate lit at its edges; what touches it glows, and a camera behind it looks on."""

    name: ClassVar[str] = "edge-camera"
    summary: ClassVar[str] = "plate lit at its edges, read by a camera behind it: touches glow"
    Parameters = Parameters
    wetted: ClassVar[Mapping[str, str]] = {
        "front": "the touched face, all over",
        "spot": "where an object lies on the touched face",
        "back": "the face behind; air on it means what plate.back names",
        "rim": "the strip of the front face under a gasket; air on it means what plate.rim_material names",
        "haze": "what the polish of both faces scatters; plate.haze says how much",
    }
    spot_face: ClassVar[str] = "spot"
    words: ClassVar[tuple[str, str]] = ("untouched", "touched")
    present_reads: ClassVar = "high"
    readout: ClassVar = "camera"
    jobs: ClassVar[tuple[str, ...]] = ("touch",)
    metrics: ClassVar[tuple[Metric, ...]] = METRICS

    @classmethod
    def faces_for(cls, *, has_object: bool) -> tuple[str, ...]:
        """What touches lies on the spot of an object or all over the front, never behind or under the gasket."""
        return ("spot",) if has_object else ("front",)

    def light(self, setting: Setting) -> Light:
        """One channel: the pixel that looks at the object."""
        return camera_light(setting)

    def covers(self, setting: Setting, touching: Mapping[str, Cover]) -> Mapping[str, Cover]:
        """What the state says; back and rim carry what the plate has there, both faces their haze."""
        found = dict(touching)
        plate = setting.p.plate
        for face, key in OWN.items():
            if touching.get(face, immersed("air")).media() == ("air",):
                found[face] = immersed(getattr(plate, key))
        haze = setting.spread(plate.haze)
        if np.any(haze > 0):
            # Scattered evenly to both sides: half of it is a Lambertian towards the camera.
            found["haze"] = Cover((Patch(haze, plate.material, albedo=0.5), Patch(1 - haze, "vacuum")))
        return found

    def measure(self, names: Sequence[str], results: Results) -> Mapping[str, MetricValue | Missing]:
        """The plate's own metrics among ``names``; those of maps only when asked for."""
        found = measured(names, results)
        maps = [metric.name for metric in METRICS if metric.cost == "map" and metric.name in names]
        if maps:
            from outcouple_plugins.edge_camera.maps import measured_on_maps

            found.update(measured_on_maps(maps, results))
        return found

    def surfaces(self, names: Sequence[str], results: Results) -> tuple[Surface, ...]:
        """Irradiance of the face, signal over noise and position error over the plate."""
        from outcouple_plugins.edge_camera.maps import surfaces_of

        return surfaces_of(results)

    def curve(self, results: Results) -> Curve | None:
        """Reading against the place along the plate: how even the light is."""
        from outcouple_plugins.edge_camera.maps import middle_line

        return middle_line(results)

    def views(self, setting: Setting) -> tuple[View, ...]:
        """Plan with the ways to the object, and the cross-section under it."""
        return (plan(setting), section(setting))

    def remarks(self, results: Results) -> tuple[Note, ...]:
        """What drowns a touch, and what could be done."""
        return remarks_on(results)

    def failures(self, setting: Setting) -> tuple[FailureRow, ...]:
        """What goes wrong with plates and cameras."""
        return failure_rows(setting)

    def notes(self, setting: Setting) -> tuple[Note, ...]:
        """Cautions that follow from the parameters."""
        return setting_notes(setting)

    def starter(self, job: str) -> str:
        """States and requirements for a touch surface."""
        return TOUCH
