"""The leak puck as a geometry."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from typing import Any, ClassVar

import numpy as np
from numpy.typing import NDArray

from outcouple.contact import wetting
from outcouple.contact.cover import Cover, Patch, immersed
from outcouple.contact.diffuse import wall_return
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
from outcouple.light import Light, Relight, Vector, turn_between
from outcouple.notes import Note
from outcouple.optics import interface
from outcouple_plugins.beams import beam_directions
from outcouple_plugins.leak_puck.parameters import Parameters
from outcouple_plugins.tip_measures import first_liquid

__all__ = ["LeakPuck"]

Floats = NDArray[np.float64]


def _metric(name: str, label: str, kind: str, unit: str, better: Any, meaning: str) -> Metric:
    return Metric(name, label, kind, unit, better, meaning)


class LeakPuck(Geometry):
    """One total reflection at a base that a puddle wets from below."""

    name: ClassVar[str] = "leak-puck"
    summary: ClassVar[str] = "prism over a capillary gap on the floor: finds leaks"
    Parameters = Parameters
    wetted: ClassVar[Mapping[str, str]] = {"base": "the base over the gap"}
    words: ClassVar[tuple[str, str]] = ("dry", "leak")
    present_reads: ClassVar = "low"
    jobs: ClassVar[tuple[str, ...]] = ("leak",)
    metrics: ClassVar[tuple[Metric, ...]] = (
        _metric(
            "base_margin",
            "angle margin of the base",
            "angle",
            "deg",
            "higher",
            "incidence of the axis beyond the critical angle of the dry base; inside the puck",
        ),
        _metric(
            "min_film_depth",
            "least film depth",
            "length",
            "mm",
            "lower",
            "depth of standing liquid at which the gap begins to fill: the height of the feet",
        ),
        _metric(
            "puddle_depth",
            "puddle depth",
            "length",
            "mm",
            "none",
            "depth at which a wide puddle of the liquid stands on the level floor, 2 l_c sin(contact angle / 2)",
        ),
        _metric(
            "puddle_over_foot",
            "puddle over foot",
            "number",
            "",
            "higher",
            "puddle depth over the height of the feet; below 1 a spreading puddle passes under the puck unseen",
        ),
        _metric(
            "min_leak_volume",
            "least leaked volume",
            "volume",
            "mL",
            "lower",
            "volume that stands on the floor's area when the puddle reaches the puck deep enough",
        ),
        _metric(
            "capillary_rise",
            "capillary rise",
            "length",
            "mm",
            "none",
            "height the gap could hold the liquid upright: once entered, a lower gap fills",
        ),
        _metric(
            "gap_fill_time",
            "time to fill the gap",
            "time",
            "s",
            "lower",
            "from the foot's edge to the middle of the base, level, full supply (Washburn 1921)",
        ),
        _metric(
            "detection_time",
            "time to find a leak",
            "time",
            "s",
            "lower",
            "least leaked volume at the leak rate, filling the gap, and the read-out's response",
        ),
        _metric(
            "floor_return",
            "return of the floor",
            "ratio",
            "%",
            "lower",
            "share of a dry reading that the floor sends back through the liquid",
        ),
    )

    def light(self, setting: Setting) -> Light:
        """A beam that meets the base once and leaves by the other side."""
        puck, emitter = setting.p.puck, setting.p.emitter
        n = setting.index(puck.material)
        bonded = puck.coupling == "bonded"
        ray, axis, weight = beam_directions(setting, n, bonded)
        incidence = setting.spread(puck.incidence)
        normal = Vector(np.sin(incidence)[:, None], np.zeros((1, 1)), np.cos(incidence)[:, None])
        cosine = np.clip(ray.dot(normal), 0.0, 1.0)
        up = Vector(np.zeros((1, 1)), np.ones((1, 1)), np.zeros((1, 1)))
        turn = turn_between(up.across(ray), normal.cross(ray).unit(), ray)
        face = interface(1.0, n[:, None], np.arccos(axis))
        through = np.ones_like(weight) if bonded else 1 - (face.Rs + face.Rp) / 2
        taken = axis >= np.cos(setting.spread(puck.detector_half_angle))[:, None]
        launch, reach = weight * through, through * taken
        capture = np.sum(launch * reach, axis=1)
        window = np.sin(setting.spread(puck.detector_half_angle)) / (1.0 if bonded else n)
        rays = weight.shape[1]
        q = {"none": 0.0, "s": 1.0, "p": -1.0}[emitter.polarization]
        way = setting.spread(puck.base) / np.sin(incidence)
        return Light(
            guide=puck.material,
            faces=("base",),
            launch=launch,
            reach=reach[:, None, :],
            angle=np.arccos(cosine)[:, :, None],
            hits=np.ones((1, 1, rays, 1)),
            turn=turn[:, :, None],
            length=np.broadcast_to(way[:, None, None], (len(way), 1, rays)),
            polarization=np.full((1, rays), q),
            # A Lambertian spot on the base seen under the window's cone: sin^2 of its half-angle, cosine of the slant.
            relight=(
                Relight(
                    column=0,
                    feed=np.ones((1, 1, rays)),
                    share=(window**2 * np.cos(incidence) * np.mean(through, axis=1))[:, None],
                    sine=np.sin(incidence)[:, None],
                    length=way[:, None, None] / 2,
                ),
            ),
            stray=(setting.spread(puck.crosstalk) * capture)[:, None],
            ambient=(np.pi * (setting.spread(puck.base) / 4) ** 2 * np.pi * window**2)[:, None],
            entry={"reflected where it enters": np.sum(weight * (1 - through), axis=1)},
            acceptance=np.arcsin(np.clip(window, 0, 1)),
        )

    def covers(self, setting: Setting, touching: Mapping[str, Cover]) -> Mapping[str, Cover]:
        """A liquid that wets the floor fills the gap where it stands as high as the feet; behind it lies the floor."""
        puck, floor = setting.p.puck, setting.p.floor
        deep = setting.spread(setting.p.puddle.depth) >= setting.spread(puck.foot)
        fills = np.where(deep & (setting.spread(setting.p.puddle.contact_angle) < np.pi / 2), 1.0, 0.0)
        back = wall_return(
            distance=setting.spread(puck.foot),
            diameter=setting.spread(puck.base),
            reflectance=setting.spread(floor.reflectance),
        )
        given = touching.get("base", immersed("air"))
        wet = tuple(
            replace(patch, share=np.asarray(patch.share) * fills, albedo=np.maximum(patch.albedo, back))
            for patch in given.patches
        )
        return {"base": Cover((*wet, Patch(1 - fills, "air")), finer=given.finer)}

    def measure(self, names: Sequence[str], results: Results) -> Mapping[str, MetricValue | Missing]:
        """The puck's own metrics among ``names``."""
        return {name: _MEASURES[name](results) for name in names if name in _MEASURES}

    def response(self, setting: Setting) -> ResponseAxis:
        """Reading against the index of a clear liquid."""
        return ResponseAxis("index of the liquid", "number", "", 1.0, 1.9)

    def failures(self, setting: Setting) -> tuple[FailureRow, ...]:
        """Ways in which no liquid gets to the base, or something else does."""
        return (
            FailureRow("puck lifted off the floor", "no liquid reaches the base", False, ("lift switch",)),
            FailureRow("floor repels the liquid", "the gap does not fill by itself", False, ()),
            FailureRow("dust or swarf in the gap, soaked", "a wick that wets the base without a leak", True, ()),
            FailureRow("dust or swarf blocks the gap", "keeps liquid from the base", False, ()),
            FailureRow("pale floor behind the liquid", "light comes back through the liquid", False, ()),
            FailureRow("mop water, condensation under a cold pipe", "the gap fills without a leak", True, ()),
            FailureRow("residue dries on the base", "takes light for good", True, ("fault band",), slow=True),
        )

    def notes(self, setting: Setting) -> tuple[Note, ...]:
        """What the model takes for granted."""
        puddle, foot = setting.p.puddle, setting.spread(setting.p.puck.foot)
        stands = _stands(setting)
        repels = setting.spread(puddle.contact_angle) >= np.pi / 2
        return (
            Note(
                "puddle-under-foot",
                "A puddle spreads thinner on this floor than the feet are high: it passes under the puck unseen until "
                "walls hold it back.",
                severity="danger",
                where=stands < foot,
                decides="a trial with the liquid on the real floor",
            ),
            Note("gap-repels", "The liquid does not wet the floor: the gap does not fill by itself.", where=repels),
            Note(
                "gap-fills-whole",
                "Once liquid stands as high as the feet, the gap counts as filled all over; trapped air is left out.",
                severity="info",
            ),
        )

    def views(self, setting: Setting) -> tuple[View, ...]:
        """The puck on its feet, to scale."""
        return (_view(setting),)

    def starter(self, job: str) -> str:
        """Dry floor and a puddle."""
        return _STARTER


def _stands(setting: Setting) -> Floats:
    puddle = setting.p.puddle
    return setting.spread(
        wetting.puddle_depth(
            surface_tension=puddle.surface_tension, density=puddle.density, contact_angle=puddle.contact_angle
        )
    )


def _margin(results: Results) -> MetricValue:
    setting = results.setting
    critical = np.arcsin(np.clip(setting.index("air") / setting.index(setting.p.puck.material), 0, 1))
    return MetricValue(setting.spread(setting.p.puck.incidence) - critical)


def _over_foot(results: Results) -> MetricValue:
    return MetricValue(_stands(results.setting) / results.setting.spread(results.setting.p.puck.foot))


def _volume(results: Results) -> MetricValue:
    setting = results.setting
    depth = np.maximum(_stands(setting), setting.spread(setting.p.puck.foot))
    return MetricValue(depth * setting.spread(setting.p.floor.area))


def _rise(results: Results) -> MetricValue:
    puddle, puck = results.setting.p.puddle, results.setting.p.puck
    rise = wetting.gap_rise(
        surface_tension=puddle.surface_tension,
        density=puddle.density,
        gap=puck.foot,
        contact_angle=puddle.contact_angle,
    )
    return MetricValue(results.setting.spread(rise))


def _fill(results: Results) -> MetricValue:
    puddle, puck = results.setting.p.puddle, results.setting.p.puck
    time = wetting.gap_fill_time(
        surface_tension=puddle.surface_tension,
        viscosity=puddle.viscosity,
        gap=puck.foot,
        length=puck.base / 2,
        contact_angle=puddle.contact_angle,
    )
    return MetricValue(results.setting.spread(time))


def _detection(results: Results) -> MetricValue | Missing:
    response = results.metric("response_time")
    if not isinstance(response, MetricValue):
        return Missing("the read-out's response is not known")
    arrives = _volume(results).values / results.setting.spread(results.setting.p.floor.leak_rate)
    return MetricValue(arrives + _fill(results).values + response.values)


def _floor_return(results: Results) -> MetricValue | Missing:
    liquid = first_liquid(results)
    if liquid is None:
        return Missing("no present state has a clear liquid")
    setting = results.setting
    back = wall_return(
        distance=setting.spread(setting.p.puck.foot),
        diameter=setting.spread(setting.p.puck.base),
        reflectance=setting.spread(setting.p.floor.reflectance),
    )
    dry, plain, lit = (
        results.trial({"base": cover}, {})[:, 0]
        for cover in (immersed("air"), immersed(liquid), Cover((Patch(1.0, liquid, albedo=back),)))
    )
    return MetricValue(np.broadcast_to((lit - plain) / dry, (setting.samples,)))


_MEASURES: Mapping[str, Callable[[Results], MetricValue | Missing]] = {
    "base_margin": _margin,
    "min_film_depth": lambda results: MetricValue(results.setting.spread(results.setting.p.puck.foot)),
    "puddle_depth": lambda results: MetricValue(_stands(results.setting)),
    "puddle_over_foot": _over_foot,
    "min_leak_volume": _volume,
    "capillary_rise": _rise,
    "gap_fill_time": _fill,
    "detection_time": _detection,
    "floor_return": _floor_return,
}


def _view(setting: Setting) -> View:
    puck = setting.p.puck
    half, foot, incidence = (float(setting.spread(v)[0]) for v in (puck.base / 2, puck.foot, puck.incidence))
    height = half / np.tan(incidence)
    guide = np.array([[-half, foot], [half, foot], [0.0, foot + height]])
    leg = 0.06 * half
    floor = np.array([[-1.6 * half, 0.0], [1.6 * half, 0.0], [1.6 * half, -0.08 * half], [-1.6 * half, -0.08 * half]])
    feet = [np.array([[x, 0.0], [x + leg, 0.0], [x + leg, foot], [x, foot]]) for x in (-half, half - leg)]
    rays = []
    for at in (-0.25, 0.0, 0.25):
        foot_point = np.array([at * half, foot])
        # Square to the side faces, from one to the other.
        step = np.array([np.sin(incidence), np.cos(incidence)]) / (2 * np.sin(incidence))
        start = foot_point + (half + at * half) * step * [-1, 1]
        end = foot_point + (half - at * half) * step
        rays.append(RayPath(np.array([start, foot_point, end]), (-1, 0, -1), (0.0, incidence, 0.0)))
        below = foot_point - [0.0, min(foot, 0.3 * half)]
        rays.append(RayPath(np.array([start, foot_point, below]), (-1, -2, -1), (0.0, incidence, 0.0)))
    return View(
        "cross-section",
        (
            Outline("guide", "puck", guide),
            Outline("wall", "floor", floor),
            *(Outline("wall", "foot", points) for points in feet),
        ),
        tuple(rays),
    )


_STARTER = """\
[decision]
demand = "leak"

[[states]]
name = "dry floor"
expect = "absent"
touching = "dry"

[[states]]
name = "puddle"
expect = "present"
touching = "water"

[[requirements]]
metric = "base_margin"
at_least = "2 deg"

[[requirements]]
metric = "worst_ratio"
at_least = 5

[[requirements]]
metric = "puddle_over_foot"
at_least = 1.2
"""
