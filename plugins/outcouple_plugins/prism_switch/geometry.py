"""The prism switch as a geometry."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import ClassVar

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import Cover, Drops, Film, Patch
from outcouple.geometry import (
    Geometry,
    Metric,
    MetricValue,
    Missing,
    ResponseAxis,
    Results,
    Setting,
    StateResult,
    View,
)
from outcouple.light import Light
from outcouple.notes import Note
from outcouple_plugins.prism_switch.drawing import cross_section
from outcouple_plugins.prism_switch.light import apex_height, prism_light
from outcouple_plugins.prism_switch.parameters import Parameters

__all__ = ["PrismSwitch"]

Floats = NDArray[np.float64]

FILM = 10e-6
DROP_ANGLE = np.radians(60.0)
DROP_COVER = 0.3


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
    jobs: ClassVar[tuple[str, ...]] = ("overfill", "dry-run", "leak", "presence")
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
        Metric(
            "lowest_index",
            "lowest liquid index",
            "number",
            "",
            "lower",
            "index of a clear liquid above which the reading falls below the level",
        ),
        Metric(
            "highest_index",
            "highest liquid index",
            "number",
            "",
            "higher",
            "index of a clear liquid up to which the reading stays below the level",
        ),
        Metric(
            "film_effect",
            "effect of a flat film",
            "ratio",
            "%",
            "none",
            "change of the dry reading by a 10 um film of the first present state's liquid on both faces",
        ),
        Metric(
            "droplet_effect",
            "effect of drops",
            "ratio",
            "%",
            "none",
            "change of the dry reading by drops of that liquid, contact angle 60 deg, on 30 % of both faces",
        ),
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
            found.update(zip(("lowest_index", "highest_index"), _window(results), strict=True))
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
        demand = {"overfill": "high level", "dry-run": "low level", "leak": "leak"}.get(job, "")
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


def _clear_media(state: StateResult) -> list[str]:
    """Media that lie on a face of a state without drops."""
    media = []
    for cover in state.covers.values():
        for patch in cover.patches:
            if isinstance(patch.backing, str):
                media.append(patch.backing)
    return list(dict.fromkeys(media))


def _dry_angle_margin(results: Results) -> MetricValue | Missing:
    states = results.expecting("absent")
    if not states:
        return Missing("no state expects absent")
    found = {}
    for state in states:
        setting = state.setting
        n = setting.index(setting.p.prism.material)
        least = np.minimum(*_axis_incidence(setting))
        outside = np.max([setting.index(name) for name in _clear_media(state)] or [np.ones(setting.samples)], axis=0)
        critical = np.arcsin(np.clip(outside / n, 0, 1))
        found[state.name] = np.broadcast_to(least - critical, (results.setting.samples,))
    names = list(found)
    stack = np.stack([found[name] for name in names])
    pick = np.argmin(stack, axis=0)
    return MetricValue(stack[pick, np.arange(stack.shape[1])], names[int(pick[0])], found)


GRID = np.linspace(1.0, 2.2, 81)


def _window(results: Results) -> tuple[MetricValue | Missing, MetricValue | Missing]:
    """First and last index at which a clear liquid reads below the level, to about 0.002."""
    if results.decision is None or results.setting.samples != 1:
        open_window = Missing("needs a decision between dry and wet, one design at a time")
        return open_window, open_window
    level = float(-results.decision.level[0, 0])
    covers = dict.fromkeys(("emitter", "detector"), Cover((Patch(1.0, "(trial)"),)))
    share = results.trial(covers, {"(trial)": GRID})[:, 0]
    dry = results.states[0]
    reading = share * float(dry.signal[0, 0] / dry.share[0, 0])
    below = np.flatnonzero(reading < level)
    if below.size == 0:
        nothing = Missing("no clear liquid reads below the level")
        return nothing, nothing
    first, last = int(below[0]), int(below[-1])
    return (
        MetricValue(_crossing(reading, level, first - 1, first)),
        MetricValue(_crossing(reading, level, last, last + 1)),
    )


def _crossing(reading: Floats, level: float, left: int, right: int) -> Floats:
    """Index between two grid points at which the reading passes the level; the grid's end where it does not."""
    if left < 0 or right >= GRID.size:
        return GRID[[min(max(left, 0), GRID.size - 1)]]
    part = (reading[left] - level) / (reading[left] - reading[right])
    return np.array([GRID[left] + part * (GRID[right] - GRID[left])])


def _liquid(results: Results) -> str | None:
    for state in results.expecting("present"):
        for name in _clear_media(state):
            return name
    return None


def _effect(results: Results, patches: tuple[Patch, ...], dry: tuple[Patch, ...]) -> MetricValue:
    before, after = (
        results.trial(dict.fromkeys(("emitter", "detector"), Cover(part)), {})[:, 0] for part in (dry, patches)
    )
    return MetricValue(np.broadcast_to(after / before - 1, (results.setting.samples,)))


def _film_effect(results: Results) -> MetricValue | Missing:
    liquid = _liquid(results)
    if liquid is None:
        return Missing("no present state has a clear liquid on a face")
    return _effect(results, (Patch(1.0, "air", (Film(liquid, FILM),)),), (Patch(1.0, "air"),))


def _droplet_effect(results: Results) -> MetricValue | Missing:
    liquid = _liquid(results)
    if liquid is None:
        return Missing("no present state has a clear liquid on a face")
    drops = (Patch(DROP_COVER, Drops(liquid, DROP_ANGLE)), Patch(1 - DROP_COVER, "air"))
    return _effect(results, drops, (Patch(1.0, "air"),))


def _one_hit_share(results: Results) -> MetricValue:
    light = results.light
    captured = light.launch[:, None, :] * light.reach
    one = np.sum(light.hits, axis=-1) == 1
    share = np.sum(captured * one, axis=-1)[:, 0] / np.maximum(np.sum(captured, axis=-1)[:, 0], 1e-300)
    return MetricValue(np.broadcast_to(share, (results.setting.samples,)))


_MEASURES = {
    "dry_angle_margin": _dry_angle_margin,
    "film_effect": _film_effect,
    "droplet_effect": _droplet_effect,
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
