"""The perimeter-read plate as a geometry."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import ClassVar

import numpy as np

from outcouple.contact.cover import Cover, immersed
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
from outcouple_plugins.edge_perimeter.drawing import plan, section
from outcouple_plugins.edge_perimeter.light import perimeter_light
from outcouple_plugins.edge_perimeter.measures import crossing_loss, measured, objects
from outcouple_plugins.edge_perimeter.metrics import METRICS
from outcouple_plugins.edge_perimeter.parameters import Parameters
from outcouple_plugins.edge_perimeter.remarks import failure_rows, remarks_on, setting_notes
from outcouple_plugins.edge_perimeter.starter import TOUCH

__all__ = ["EdgePerimeter"]

OWN = {"back": "back", "rim": "rim_material"}
"""Faces whose contact the plate itself names."""
POINTS = 121


class EdgePerimeter(Geometry):
    """Emitters and detectors around a plate: an object shadows the chords that pass under it."""

    name: ClassVar[str] = "edge-perimeter"
    summary: ClassVar[str] = "plate read around its perimeter: objects shadow chords of guided light"
    Parameters = Parameters
    wetted: ClassVar[Mapping[str, str]] = {
        "front": "the touched face, all over",
        "spot": "where an object lies on the touched face",
        "back": "the face behind; air on it means what plate.back names",
        "rim": "the strip of the front face under a gasket; air on it means what plate.rim_material names",
    }
    spot_face: ClassVar[str] = "spot"
    words: ClassVar[tuple[str, str]] = ("untouched", "touched")
    present_reads: ClassVar = "low"
    reading: ClassVar = "change"
    jobs: ClassVar[tuple[str, ...]] = ("touch",)
    metrics: ClassVar[tuple[Metric, ...]] = METRICS

    @classmethod
    def faces_for(cls, *, has_object: bool) -> tuple[str, ...]:
        """What touches lies on the spot of an object or all over the front, never behind or under the gasket."""
        return ("spot",) if has_object else ("front",)

    def light(self, setting: Setting) -> Light:
        """Chords as channels."""
        return perimeter_light(setting)

    def covers(self, setting: Setting, touching: Mapping[str, Cover]) -> Mapping[str, Cover]:
        """What the state says; back and rim carry what the plate has there unless a state puts more on them."""
        found = dict(touching)
        for face, key in OWN.items():
            if touching.get(face, immersed("air")).media() == ("air",):
                found[face] = immersed(getattr(setting.p.plate, key))
        return found

    def measure(self, names: Sequence[str], results: Results) -> Mapping[str, MetricValue | Missing]:
        """The plate's own metrics among ``names``; those of maps only when asked for."""
        found = measured(names, results)
        maps = [metric.name for metric in METRICS if metric.cost == "map" and metric.name in names]
        if maps:
            from outcouple_plugins.edge_perimeter.maps import measured_on_maps

            found.update(measured_on_maps(maps, results))
        return found

    def surfaces(self, names: Sequence[str], results: Results) -> tuple[Surface, ...]:
        """Chords per object and position error over the field."""
        from outcouple_plugins.edge_perimeter.maps import surfaces_of

        return surfaces_of(results)

    def views(self, setting: Setting) -> tuple[View, ...]:
        """Plan with chords, and the cross-section along the middle."""
        return (plan(setting), section(setting))

    def curve(self, results: Results) -> Curve | None:
        """Loss of the straightest chord under the middle of an object, against the object's diameter."""
        states = objects(results)
        if not states:
            return None
        first, marks = states[0], []
        for state in states:
            assert state.place is not None
            diameter = state.place["diameter"][:1]
            loss = crossing_loss(results, state, diameter[:, None])
            marks.append((state.name, float(diameter[0]), float(loss[0, 0])))
        widest = 2.5 * max(mark[1] for mark in marks)
        grid = np.linspace(0.0, widest, POINTS)
        return Curve(
            name="response",
            label=f"loss of a chord under {first.name!r} against its diameter",
            axes=(("diameter of the object", "mm", grid),),
            values=crossing_loss(results, first, grid[None, :])[0],
            kind="ratio",
            unit="%",
            marks=tuple(marks),
        )

    def remarks(self, results: Results) -> tuple[Note, ...]:
        """What amplitude alone cannot tell apart, and what else could."""
        return remarks_on(results)

    def failures(self, setting: Setting) -> tuple[FailureRow, ...]:
        """What goes wrong with plates and chords."""
        return failure_rows(setting)

    def notes(self, setting: Setting) -> tuple[Note, ...]:
        """Cautions that follow from the parameters."""
        return setting_notes(setting)

    def starter(self, job: str) -> str:
        """States and requirements for a touch surface."""
        return TOUCH
