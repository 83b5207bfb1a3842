"""The gap pair as a geometry."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import ClassVar

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import Cover, Film, Patch
from outcouple.geometry import (
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
from outcouple.light import Light, Vector, turn_between
from outcouple.notes import Note
from outcouple.optics import interface
from outcouple_plugins.beams import beam_directions
from outcouple_plugins.gap_pair.parameters import Parameters

__all__ = ["GapPair"]

Floats = NDArray[np.float64]


class GapPair(Geometry):
    """Transmission across the gap between two prisms, read by one detector."""

    name: ClassVar[str] = "gap-pair"
    summary: ClassVar[str] = "two prisms whose narrow gap passes light: displacement or force"
    Parameters = Parameters
    wetted: ClassVar[Mapping[str, str]] = {"gap": "the gap between the two prisms"}
    words: ClassVar[tuple[str, str]] = ("open", "closed")
    present_reads: ClassVar = "high"
    measurand: ClassVar[tuple[str, ...]] = ("gap", "distance")
    jobs: ClassVar[tuple[str, ...]] = ("displacement", "force")
    metrics: ClassVar[tuple[Metric, ...]] = (
        Metric(
            "gap_at_half",
            "gap of half transmission",
            "length",
            "nm",
            "none",
            "width at which half of the light crosses",
        ),
        Metric(
            "force_resolution",
            "force resolution",
            "force",
            "mN",
            "lower",
            "stiffness times the resolution of the gap",
        ),
        Metric(
            "thermal_error",
            "thermal error",
            "length",
            "nm",
            "lower",
            "change of the gap over the allowed drift of temperature, read as displacement",
        ),
        Metric(
            "tilt_spread",
            "spread by tilt",
            "length",
            "nm",
            "lower",
            "half of the difference of the gap across the beam",
        ),
        Metric(
            "error_over_resolution",
            "largest error over resolution",
            "number",
            "",
            "lower",
            "how often the worst slow error exceeds what the noise can resolve",
        ),
    )

    def light(self, setting: Setting) -> Light:
        """A beam about one axis that meets the gap once and is read behind it."""
        p = setting.p
        n_guide = setting.index(p.pair.material)
        bonded = p.pair.coupling == "bonded"
        ray, axis_cos, weight = beam_directions(setting, n_guide, bonded)
        incidence = setting.spread(p.pair.incidence)[:, None]
        zero = np.zeros_like(incidence)
        normal = Vector(np.sin(incidence), zero, np.cos(incidence))
        cos = np.clip(ray.dot(normal), 0.0, 1.0)
        up = Vector(np.zeros((1, 1)), np.ones((1, 1)), np.zeros((1, 1)))
        turn = turn_between(up.across(ray), normal.cross(ray).unit(), ray)
        face = interface(1.0, n_guide[:, None], np.arccos(axis_cos))
        through = np.ones_like(weight) if bonded else 1 - (face.Rs + face.Rp) / 2
        q = {"none": 0.0, "s": 1.0, "p": -1.0}[p.emitter.polarization]
        rays = weight.shape[1]
        return Light(
            guide=p.pair.material,
            faces=("gap",),
            launch=weight * through,
            reach=through[:, None, :],
            angle=np.arccos(cos)[:, :, None],
            hits=np.ones((1, 1, rays, 1)),
            turn=turn[:, :, None],
            length=np.zeros((1, 1, rays)),
            polarization=np.full((1, rays), q),
            read="through",
            entry={"reflected at the first face": np.sum(weight * (1 - through), axis=1)},
        )

    def covers(self, setting: Setting, touching: Mapping[str, Cover]) -> Mapping[str, Cover]:
        """The gap itself: a film of the medium over the second prism; its width spreads by roughness and wedge."""
        gap = setting.p.gap
        wedge = gap.tilt * gap.beam
        spread = setting.spread(np.sqrt(gap.roughness**2 + wedge**2 / 12))
        film = Film(gap.medium, setting.spread(gap.distance), "normal" if np.any(spread > 0) else "none", spread)
        return {"gap": Cover((Patch(1.0, setting.p.pair.second_material, (film,)),))}

    def measure(self, names: Sequence[str], results: Results) -> Mapping[str, MetricValue | Missing]:
        """The pair's own metrics among ``names``."""
        return {name: _MEASURES[name](results) for name in names if name in _MEASURES}

    def response(self, setting: Setting) -> ResponseAxis:
        """Signal against the gap."""
        return ResponseAxis(
            "gap", "length", "nm", 0.0, float(setting.p.emitter.wavelength[0]), "parameter", self.measurand
        )

    def notes(self, setting: Setting) -> tuple[Note, ...]:
        """Cautions on fringes below the critical angle and on the gap's blur."""
        gap, p = setting.p.gap, setting.p
        n_guide, n_gap = setting.index(p.pair.material), setting.index(gap.medium)
        below = n_guide * np.sin(setting.spread(p.pair.incidence)) <= n_gap
        return (
            Note(
                "gap-not-monotonic",
                "The beam's axis lies below the critical angle: transmission swings with the gap and one reading has "
                "several gaps.",
                trigger="incidence below the critical angle of the gap",
                where=below,
            ),
        )

    def views(self, setting: Setting) -> tuple[View, ...]:
        """Cross-section; the gap is drawn a thousand times wider than it is."""
        return (_view(setting),)

    def starter(self, job: str) -> str:
        """Three gaps and a limit on the resolution."""
        return _STARTER


def _gap_at_half(results: Results) -> MetricValue | Missing:
    curve = results.curve
    if curve is None:
        return Missing("no state carries a number as expect")
    relative = curve.share / np.max(curve.share, axis=1, keepdims=True)
    below = relative < 0.5
    first = np.argmax(below, axis=1)
    rows = np.arange(relative.shape[0])
    previous = np.maximum(first - 1, 0)
    high, low = relative[rows, previous], relative[rows, first]
    part = np.where(high > low, (high - 0.5) / np.where(high > low, high - low, 1.0), 0.0)
    gap = curve.values[previous] + part * (curve.values[first] - curve.values[previous])
    return MetricValue(np.where(np.any(below, axis=1), gap, np.nan))


def _resolution(results: Results) -> Floats | None:
    found = results.metric("resolution")
    return found.values if isinstance(found, MetricValue) else None


def _force_resolution(results: Results) -> MetricValue | Missing:
    resolution = _resolution(results)
    if resolution is None:
        return Missing("no state carries a number as expect")
    return MetricValue(resolution * results.setting.spread(results.setting.p.gap.stiffness))


def _thermal(results: Results) -> MetricValue:
    gap = results.setting.p.gap
    return MetricValue(results.setting.spread(gap.thermal_drift * gap.temperature_change))


def _tilt(results: Results) -> MetricValue:
    gap = results.setting.p.gap
    return MetricValue(results.setting.spread(gap.tilt * gap.beam / 2))


def _error_ratio(results: Results) -> MetricValue | Missing:
    resolution = _resolution(results)
    if resolution is None:
        return Missing("no state carries a number as expect")
    thermal, tilt = _thermal(results), _tilt(results)
    worst = np.maximum(thermal.values, tilt.values)
    at = "temperature" if np.all(thermal.values >= tilt.values) else "tilt"
    return MetricValue(worst / resolution, at=at)


_MEASURES = {
    "gap_at_half": _gap_at_half,
    "force_resolution": _force_resolution,
    "thermal_error": _thermal,
    "tilt_spread": _tilt,
    "error_over_resolution": _error_ratio,
}


def _view(setting: Setting) -> View:
    half, gap = 6e-3, float(setting.spread(setting.p.gap.distance)[0]) * 1e3
    incidence = float(setting.spread(setting.p.pair.incidence)[0])
    below = np.array([[-half, 0.0], [half, 0.0], [0.0, -half / np.tan(incidence)]])
    above = np.array([[-half, gap], [half, gap], [0.0, gap + half / np.tan(incidence)]])
    step = np.array([np.sin(incidence), np.cos(incidence)]) * half
    rays = []
    for at in (-0.3, 0.0, 0.3):
        foot = np.array([at * half, 0.0])
        back = foot + step * [1, -1]
        over = np.array([at * half, gap])
        rays.append(RayPath(np.array([foot - step, foot, back]), (-1, 0, -1), (0.0, incidence, 0.0)))
        rays.append(
            RayPath(np.array([foot - step, foot, over, over + step]), (-1, -2, -1, -1), (0.0, incidence, 0.0, 0.0))
        )
    return View(
        "cross-section",
        (
            Outline("guide", "first prism", below),
            Outline("guide", "second prism (gap drawn 1000 times wider)", above),
        ),
        tuple(rays),
    )


_STARTER = """\
[[states]]
name = "closed"
expect = "100 nm"

[[states]]
name = "middle"
expect = "200 nm"

[[states]]
name = "open"
expect = "400 nm"

[[requirements]]
metric = "resolution"
at_most = "1 nm"
"""
