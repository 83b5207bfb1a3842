"""The soft skin as a geometry."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import ClassVar

import numpy as np

from outcouple.contact.cover import Cover
from outcouple.contact.mechanics import plane_strain_modulus
from outcouple.geometry import (
    Curve,
    FailureRow,
    Metric,
    MetricValue,
    Missing,
    Outline,
    ResponseAxis,
    Results,
    Setting,
    View,
)
from outcouple.light import Light
from outcouple.notes import Note
from outcouple_plugins.edge_camera.geometry import EdgeCamera
from outcouple_plugins.edge_camera.lens import pixel_side
from outcouple_plugins.edge_camera.light import SPOT, camera_light, hop_of
from outcouple_plugins.plate.flux import rows_of
from outcouple_plugins.soft_overlay.measures import METRICS, measured
from outcouple_plugins.soft_overlay.parameters import Parameters
from outcouple_plugins.soft_overlay.texture import contact_share, rms_slope, skin_cover

__all__ = ["FRONT", "SoftOverlay"]

FRONT = "front"
FINE_PITCH = 30e-6
"""Pitch below which a texture turns light by more than a degree or so: it is no longer a mere mean of patches."""
SOFT_SLOPE = 1.0
SATURATED = 1.5
"""Pressure over contact modulus and slope at which a random texture touches to 99.7 %."""


class SoftOverlay(EdgeCamera):
    """Plate under a skin of elastomer; pressure closes the gap of its texture and a camera sees the contact."""

    name: ClassVar[str] = "soft-overlay"
    summary: ClassVar[str] = "soft skin over an edge-lit plate, read by a camera: pressure makes it glow"
    Parameters = Parameters
    words: ClassVar[tuple[str, str]] = ("unpressed", "pressed")
    spot_face: ClassVar[str] = "spot"
    measurand: ClassVar[tuple[str, ...]] = ("overlay", "pressure")
    metrics: ClassVar[tuple[Metric, ...]] = (*EdgeCamera.metrics, *METRICS)

    def light(self, setting: Setting) -> Light:
        """One channel: the pixel in the middle, the skin over its whole footprint; or the one on an object."""
        light = camera_light(setting)
        rows = rows_of(setting)
        bundles = light.rays // (2 * rows.fan.elevation.shape[1])
        hits = light.hits.copy()
        hits[:, 0, :, SPOT] = pixel_side(setting)[:, None] / hop_of(rows, bundles)
        return replace(light, hits=hits)

    def covers(self, setting: Setting, touching: Mapping[str, Cover]) -> Mapping[str, Cover]:
        """The skin at its pressure on the place looked at, at rest everywhere else."""
        found = dict(super().covers(setting, touching))
        overlay = setting.p.overlay
        found["spot"] = skin_cover(overlay, setting.spread(contact_share(overlay, overlay.pressure)))
        found[FRONT] = skin_cover(overlay, np.zeros(setting.samples))
        return found

    def measure(self, names: Sequence[str], results: Results) -> Mapping[str, MetricValue | Missing]:
        """Those of the camera and of the skin among ``names``."""
        return {**super().measure(names, results), **measured(names, results)}

    def curve(self, results: Results) -> Curve | None:
        """None: the reading against pressure is the curve."""
        return None

    def response(self, setting: Setting) -> ResponseAxis:
        """Reading against pressure, up to where nearly all of the skin touches."""
        overlay = setting.p.overlay
        modulus = plane_strain_modulus(modulus=overlay.modulus, poisson=overlay.poisson)
        full = SATURATED * float(setting.spread(modulus * rms_slope(overlay.height, overlay.pitch))[0])
        return ResponseAxis("pressure on the skin", "pressure", "kPa", 0.0, full, "parameter", self.measurand)

    def views(self, setting: Setting) -> tuple[View, ...]:
        """Plan, and the cross-section with the skin on the plate."""
        plan, section = super().views(setting)
        plate, skin = setting.p.plate, setting.p.overlay
        half = float(np.max(section.outlines[0].points[:, 0]))
        low = float(setting.spread(plate.thickness)[0]) / 2
        high = low + float(setting.spread(skin.thickness)[0])
        points = np.array([[-half, low], [half, low], [half, high], [-half, high]])
        kept = tuple(one for one in section.outlines if one.role != "object")
        skin_line = Outline("overlay", "skin (its gap is too thin to draw)", points)
        return (plan, View(section.name, (*kept, skin_line), section.rays))

    def notes(self, setting: Setting) -> tuple[Note, ...]:
        """Cautions that follow from the skin's parameters, and the camera's."""
        overlay = setting.p.overlay
        return (
            *super().notes(setting),
            Note(
                "texture-scatters",
                "So fine a texture turns the light it returns by a degree and more: patches are no longer plain means.",
                severity="info",
                trigger="overlay.pitch below 30 um",
                where=setting.spread(overlay.pitch) < FINE_PITCH,
            ),
            Note(
                "texture-steep",
                "The texture's slopes are steep: the laws of contact are for gentle ones.",
                trigger="root-mean-square slope above 1",
                where=setting.spread(rms_slope(overlay.height, overlay.pitch)) > SOFT_SLOPE,
            ),
            Note(
                "skin-from-memory",
                "Adhesion and recovery of skins spread widely with batch, dust and age; hysteresis and release are "
                "first guesses.",
                severity="info",
                decides="a pressing trial with the skin itself",
            ),
        )

    def failures(self, setting: Setting) -> tuple[FailureRow, ...]:
        """What goes wrong with skins, and with cameras."""
        return (
            FailureRow("skin sticks to the plate", "spots stay bright after release", False, ("trend",)),
            FailureRow("dust under the skin", "holds it off, or presses it on around a grain", None, ("trend",)),
            FailureRow("oil bleeds out of the skin", "wets the gap for good", False, ("trend",), slow=True),
            FailureRow("texture worn flat", "the skin leaks unpressed and sticks", False, ("trend",), slow=True),
            FailureRow("skin takes a set", "presses less for the same force", True, ("trend",), slow=True),
            *super().failures(setting),
        )

    def starter(self, job: str) -> str:
        """Pressures and limits."""
        return _STARTER


_STARTER = """\
[[states]]
name = "rest"
expect = "0 kPa"

[[states]]
name = "light"
expect = "20 kPa"

[[states]]
name = "firm"
expect = "200 kPa"

[[requirements]]
metric = "monotonic_span"
at_least = "190 kPa"

[[requirements]]
metric = "unpressed_leak"
at_most = "1 %"

[[requirements]]
metric = "contact_hysteresis"
at_most = "10 %"
"""
