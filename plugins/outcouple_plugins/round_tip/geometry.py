"""The round tip as a geometry."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import ClassVar

import numpy as np

from outcouple.contact.cover import Cover, immersed
from outcouple.geometry import Geometry, Metric, MetricValue, Missing, ResponseAxis, Results, Setting, View
from outcouple.light import Light
from outcouple.notes import Note
from outcouple_plugins.round_tip.drawing import cross_section
from outcouple_plugins.round_tip.light import tip_light
from outcouple_plugins.round_tip.measures import METRICS, measures_of
from outcouple_plugins.round_tip.parameters import Parameters
from outcouple_plugins.tip_measures import TIP_METRICS, index_window

__all__ = ["RoundTip"]


class RoundTip(Geometry):
    """A cone, dome or truncated cone above a base that carries emitter and detector."""

    name: ClassVar[str] = "round-tip"
    summary: ClassVar[str] = "cone, dome or truncated cone that loses its light into a liquid"
    Parameters = Parameters
    wetted: ClassVar[Mapping[str, str]] = {
        "side": "the cone or dome",
        "end": "the flat end of a truncated cone",
    }
    words: ClassVar[tuple[str, str]] = ("dry", "wet")
    present_reads: ClassVar = "low"
    jobs: ClassVar[tuple[str, ...]] = ("overfill", "dry-run", "presence")
    metrics: ClassVar[tuple[Metric, ...]] = (*METRICS, *TIP_METRICS)

    def light(self, setting: Setting) -> Light:
        """A traced set of rays."""
        return tip_light(setting)

    def covers(self, setting: Setting, touching: Mapping[str, Cover]) -> Mapping[str, Cover]:
        """What the state says; a tip without a flat end has the side alone."""
        if setting.p.tip.shape == "truncated":
            return touching
        return {"side": touching.get("side", immersed("air"))}

    def measure(self, names: Sequence[str], results: Results) -> Mapping[str, MetricValue | Missing]:
        """The tip's own metrics among ``names``."""
        faces = tuple(dict.fromkeys(results.light.faces))
        measures = measures_of(faces)
        found = {name: measures[name](results) for name in names if name in measures}
        if "lowest_index" in names or "highest_index" in names:
            window = dict(zip(("lowest_index", "highest_index"), index_window(results, faces), strict=True))
            found.update({name: value for name, value in window.items() if name in names})
        return found

    def views(self, setting: Setting) -> tuple[View, ...]:
        """Cross-section with meridional rays."""
        return (cross_section(setting),)

    def response(self, setting: Setting) -> ResponseAxis:
        """Reading against the index of a clear liquid."""
        return ResponseAxis("index of the liquid", "number", "", 1.0, 1.9)

    def notes(self, setting: Setting) -> tuple[Note, ...]:
        """Cautions on what the model leaves out."""
        p = setting.p
        n = setting.index(p.tip.material)
        half = setting.spread(p.tip.diameter / 2)
        far = np.maximum(
            np.abs(setting.spread(p.layout.emitter_position)) + setting.spread(p.layout.emitter_radius),
            np.abs(setting.spread(p.layout.detector_position)) + setting.spread(p.layout.detector_radius),
        )
        blunt = setting.spread(p.tip.end_diameter) >= setting.spread(p.tip.diameter)
        reach = half if p.tip.opening is None else np.minimum(half, setting.spread(p.tip.opening / 2))
        return (
            Note(
                "discs-off-base",
                "Emitter or detector reach beyond the base; what lies outside is lost.",
                where=far > half,
            ),
            Note(
                "dome-rim",
                "Light near the rim of a dome stays totally reflected when wet, a floor no electronics removes: keep "
                "emitter and detector inside the useful annulus, or mask the rim.",
                where=(p.tip.shape == "dome") & (np.minimum(far, reach) > half * 1.33 / n),
            ),
            Note(
                "end-too-wide",
                "The flat end leaves no side.",
                where=(p.tip.shape == "truncated") & blunt,
            ),
            Note(
                "traced-rays",
                "1536 traced rays carry the light: readings hold to about 1 % dry, small wet returns to a few per cent "
                "of themselves. A rounded apex and ways with more than four hits are left out.",
                severity="info",
            ),
            Note(
                "meniscus",
                "The liquid climbs or hangs at the tip: the switching point shifts by up to about 3 mm for water.",
                severity="info",
                decides="a trial with the liquid, rising and falling",
            ),
        )

    def starter(self, job: str) -> str:
        """States and requirements for the job."""
        demand = {"overfill": "high level", "dry-run": "low level"}.get(job, "")
        return (f'[decision]\ndemand = "{demand}"\n\n' if demand else "") + _STARTER


_STARTER = """\
[[states]]
name = "dry"
expect = "absent"
touching = "dry"

[[states]]
name = "water"
expect = "present"
touching = "water"

[[requirements]]
metric = "worst_ratio"
at_least = 5

[[requirements]]
metric = "margin_sigma"
at_least = 8
"""
