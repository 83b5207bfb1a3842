"""The prism switch as a geometry."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from functools import partial
from typing import ClassVar

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import (
    Geometry,
    Metric,
    MetricValue,
    Missing,
    ResponseAxis,
    Results,
    Setting,
    View,
)
from outcouple.light import Light
from outcouple.notes import Note
from outcouple_plugins.prism_switch.drawing import cross_section
from outcouple_plugins.prism_switch.light import apex_height, prism_light
from outcouple_plugins.prism_switch.parameters import Parameters
from outcouple_plugins.tip_measures import (
    TIP_METRICS,
    clear_media,
    droplet_effect,
    film_effect,
    index_window,
    worst_margin,
)

__all__ = ["PrismSwitch"]

Floats = NDArray[np.float64]


class PrismSwitch(Geometry):
    """Two faces at an angle above a base that carries emitter and detector."""

    name: ClassVar[str] = "prism-switch"
    summary: ClassVar[str] = "two-face prism that loses its light into a liquid"
    Parameters = Parameters
    wetted: ClassVar[Mapping[str, str]] = {
        "emitter": "the face above the emitter",
        "detector": "the face above the detector",
    }
    words: ClassVar[tuple[str, str]] = ("dry", "wet")
    present_reads: ClassVar = "low"
    jobs: ClassVar[tuple[str, ...]] = ("overfill", "dry-run", "presence")
    metrics: ClassVar[tuple[Metric, ...]] = (
        Metric(
            "dry_angle_margin",
            "dry angle margin",
            "angle",
            "deg",
            "higher",
            "incidence of the axis on the faces beyond the critical angle of what lies on them when nothing is there; "
            "inside the prism",
            "state",
        ),
        *TIP_METRICS,
        Metric(
            "one_hit_share",
            "one-hit share",
            "ratio",
            "%",
            "lower",
            "part of the captured light that met one face only; it is most of the wet reading of wide lobes",
        ),
    )

    def light(self, setting: Setting) -> Light:
        """All one-hit and two-hit ways."""
        return prism_light(setting)

    def measure(self, names: Sequence[str], results: Results) -> Mapping[str, MetricValue | Missing]:
        """The prism's own metrics among ``names``."""
        found = {name: _MEASURES[name](results) for name in names if name in _MEASURES}
        if "lowest_index" in names or "highest_index" in names:
            found.update(zip(("lowest_index", "highest_index"), index_window(results, tuple(self.wetted)), strict=True))
        return {name: found[name] for name in names if name in found}

    def views(self, setting: Setting) -> tuple[View, ...]:
        """Cross-section with rays of the lobe."""
        return (cross_section(setting),)

    def response(self, setting: Setting) -> ResponseAxis:
        """Reading against the index of a clear liquid."""
        return ResponseAxis("index of the liquid", "number", "", 1.0, 1.9)

    def notes(self, setting: Setting) -> tuple[Note, ...]:
        """Cautions on what the model leaves out."""
        p = setting.p
        height = apex_height(setting)
        off_base = np.maximum(
            np.abs(setting.spread(p.layout.emitter_position)) + setting.spread(p.layout.emitter_radius),
            np.abs(setting.spread(p.layout.detector_position)) + setting.spread(p.layout.detector_radius),
        ) > setting.spread(p.prism.base / 2)
        overlap = np.abs(setting.spread(p.layout.emitter_position - p.layout.detector_position)) < setting.spread(
            p.layout.emitter_radius + p.layout.detector_radius
        )
        return (
            Note(
                "discs-off-base",
                "Emitter or detector reach beyond the base; what lies outside is lost.",
                trigger="position + radius > base / 2",
                where=off_base,
            ),
            Note(
                "discs-overlap",
                "Emitter and detector overlap on the base; a real part cannot be built so.",
                where=overlap,
            ),
            Note(
                "more-than-two-hits",
                "Ways with three and more hits and light that meets the side walls count as lost.",
                severity="info",
                trigger=f"apex {float(height[0]) * 1e3:.3g} mm above the base",
            ),
        )

    def starter(self, job: str) -> str:
        """States and requirements for the job."""
        demand = {"overfill": "high level", "dry-run": "low level"}.get(job, "")
        head = f'[decision]\ndemand = "{demand}"\n\n' if demand else ""
        return head + _STARTER


def _axis_incidence(setting: Setting) -> tuple[Floats, Floats]:
    """Incidence of the emitter's axis on the two faces inside the prism [rad]."""
    p = setting.p
    n = setting.index(p.prism.material)
    tilt = setting.spread(p.layout.emitter_tilt)
    inside = tilt if p.layout.coupling == "bonded" else np.arcsin(np.clip(np.sin(tilt) / n, -1, 1))
    first = setting.spread(p.prism.face_angle) + inside
    second = np.pi - 2 * setting.spread(p.prism.face_angle) - first
    return first, np.abs(second)


def _dry_angle_margin(results: Results) -> MetricValue | Missing:
    states = [state for state in results.expecting("absent") if state.role == "normal"]
    if not states:
        return Missing("no state without a fault expects absent")
    found = {}
    for state in states:
        setting = state.setting
        n = setting.index(setting.p.prism.material)
        least = np.minimum(*_axis_incidence(setting))
        outside = np.max([setting.index(name) for name in clear_media(state)] or [np.ones(setting.samples)], axis=0)
        critical = np.arcsin(np.clip(outside / n, 0, 1))
        found[state.name] = np.broadcast_to(least - critical, (results.setting.samples,))
    return worst_margin(results, found)


def _one_hit_share(results: Results) -> MetricValue:
    light = results.light
    captured = light.launch[:, None, :] * light.reach
    one = np.sum(light.hits, axis=-1) == 1
    share = np.sum(captured * one, axis=-1)[:, 0] / np.maximum(np.sum(captured, axis=-1)[:, 0], 1e-300)
    return MetricValue(np.broadcast_to(share, (results.setting.samples,)))


_MEASURES: Mapping[str, Callable[[Results], MetricValue | Missing]] = {
    "dry_angle_margin": _dry_angle_margin,
    "film_effect": partial(film_effect, faces=("emitter", "detector")),
    "droplet_effect": partial(droplet_effect, faces=("emitter", "detector")),
    "one_hit_share": _one_hit_share,
}

_STARTER = """\
[[states]]
name = "dry"
expect = "absent"
touching = "dry"

[[states]]
name = "film"
expect = "absent"
touching = { what = "film", liquid = "water", thickness = "10 um" }

[[states]]
name = "water"
expect = "present"
touching = "water"

[[requirements]]
metric = "dry_angle_margin"
at_least = "2 deg"

[[requirements]]
metric = "worst_ratio"
at_least = 5

[[requirements]]
metric = "margin_sigma"
at_least = 8
"""
