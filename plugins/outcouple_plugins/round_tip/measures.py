"""What a round tip's own metrics are measured from."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import replace
from functools import partial
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import immersed
from outcouple.geometry import Metric, MetricValue, Missing, Results
from outcouple_plugins.round_tip.light import tip_light
from outcouple_plugins.tip_measures import clear_media, droplet_effect, film_effect, first_liquid, worst_margin

__all__ = ["METRICS", "measures_of"]

Floats = NDArray[np.float64]

LEAST = 0.05
"""Share of the captured light that may hit nearer to the critical angle than the margin says."""
SHIFT = 1e-4

METRICS: tuple[Metric, ...] = (
    Metric(
        "dry_angle_margin",
        "dry angle margin",
        "angle",
        "deg",
        "higher",
        "least incidence of captured rays (5 % of the light excepted) beyond the critical angle of what lies on the "
        "tip when nothing is there; inside the tip",
        "state",
    ),
    Metric(
        "wet_floor",
        "wet floor",
        "ratio",
        "%",
        "lower",
        "share of a dry tip's light that reflection keeps when the first present state's liquid covers it all, "
        "crosstalk left out",
    ),
    Metric(
        "offset_sensitivity",
        "offset sensitivity",
        "ratio",
        "%",
        "lower",
        "largest relative change of the dry reading when the emitter moves by 0.1 mm along x",
    ),
    Metric(
        "annulus_inner",
        "inner edge of the useful annulus",
        "length",
        "mm",
        "none",
        "radius from the axis beyond which light along the axis is totally reflected by a dry dome",
    ),
    Metric(
        "annulus_outer",
        "outer edge of the useful annulus",
        "length",
        "mm",
        "none",
        "radius from which light along the axis stays reflected when the dome is wet",
    ),
    Metric(
        "switching_point",
        "switching point",
        "length",
        "mm",
        "none",
        "height of a flat liquid surface above the lowest point of a tip pointing down at which the reading passes the "
        "level",
    ),
    Metric(
        "switching_span",
        "switching span",
        "length",
        "mm",
        "lower",
        "rise of the liquid over which the reading goes from 90 to 10 % of its swing, meniscus left out",
    ),
)


def _captured(results: Results) -> Floats:
    light = results.light
    return np.asarray(np.broadcast_to(light.launch, light.reach[:, 0].shape) * light.reach[:, 0])


def _margin(results: Results) -> MetricValue | Missing:
    states = [state for state in results.expecting("absent") if state.role == "normal"]
    if not states:
        return Missing("no state without a fault expects absent")
    captured, light = _captured(results), results.light
    if not np.all(np.sum(captured, axis=1) > 0):
        return Missing("no light comes back to the detector")
    found = {}
    least = np.min(np.where(light.hits[:, 0] > 0, light.angle, np.pi / 2), axis=-1)
    order = np.argsort(least, axis=1)
    share = np.cumsum(np.take_along_axis(captured, order, axis=1), axis=1) / np.sum(captured, axis=1, keepdims=True)
    at = np.argmax(share >= LEAST, axis=1)
    reached = np.take_along_axis(np.take_along_axis(least, order, axis=1), at[:, None], axis=1)[:, 0]
    for state in states:
        setting = state.setting
        outside = np.max([setting.index(name) for name in clear_media(state)] or [np.ones(setting.samples)], axis=0)
        critical = np.arcsin(np.clip(outside / setting.index(setting.p.tip.material), 0, 1))
        found[state.name] = reached - critical
    return worst_margin(results, found)


def _trials(results: Results, faces: tuple[str, ...]) -> tuple[Floats, Floats] | None:
    """Shares of a dry and a wholly wet tip without crosstalk, (S,); None where no liquid is named."""
    liquid = first_liquid(results)
    if liquid is None:
        return None
    dry, wet = (results.trial(dict.fromkeys(faces, immersed(name)), {})[:, 0] for name in ("air", liquid))
    stray = results.light.stray[:, 0]
    return dry - stray, wet - stray


def _floor(results: Results, faces: tuple[str, ...]) -> MetricValue | Missing:
    found = _trials(results, faces)
    if found is None:
        return Missing("no present state has a clear liquid on the tip")
    dry, wet = found
    return MetricValue(np.where(dry > 0, wet / np.where(dry > 0, dry, 1.0), np.nan))


class _Instead:
    """A design's attributes with one replaced."""

    def __init__(self, base: Any, name: str, value: Any) -> None:
        self._base, self._name, self._value = base, name, value

    def __getattr__(self, name: str) -> Any:
        return self._value if name == self._name else getattr(self._base, name)


def _offset(results: Results) -> MetricValue:
    setting = results.setting
    layout = setting.p.layout
    before = np.sum(_captured(results), axis=1)
    changes = []
    for shift in (-SHIFT, SHIFT):
        moved = _Instead(layout, "emitter_position", layout.emitter_position + shift)
        light = tip_light(replace(setting, p=_Instead(setting.p, "layout", moved)))
        after = np.sum(light.launch * light.reach[:, 0], axis=1)
        changes.append(np.abs(after / np.where(before > 0, before, np.nan) - 1))
    return MetricValue(np.maximum(*changes))


def _annulus(results: Results, outer: bool) -> MetricValue | Missing:
    setting = results.setting
    if setting.p.tip.shape != "dome":
        return Missing("only a dome has one")
    liquid = first_liquid(results)
    if outer and liquid is None:
        return Missing("no present state has a clear liquid on the tip")
    outside = setting.index(str(liquid)) if outer else setting.index("air")
    radius = setting.spread(setting.p.tip.diameter / 2)
    return MetricValue(radius * np.minimum(outside / setting.index(setting.p.tip.material), 1.0))


def _risen(results: Results) -> tuple[Floats, Floats] | Missing:
    """Heights up to which the tip may be covered with a captured ray still dry, sorted, and the light's share below."""
    light, captured = results.light, _captured(results)
    if light.height is None or not np.all(np.sum(captured, axis=1) > 0):
        return Missing("no light comes back to the detector")
    lowest = np.min(np.where(light.hits[:, 0] > 0, light.height, np.inf), axis=-1)
    lowest = np.where(np.isfinite(lowest), lowest, 0.0)
    order = np.argsort(lowest, axis=1)
    share = np.cumsum(np.take_along_axis(captured, order, axis=1), axis=1) / np.sum(captured, axis=1, keepdims=True)
    return np.take_along_axis(lowest, order, axis=1), share


def _height_at(results: Results, lost: Floats) -> Floats | Missing:
    """Height of the liquid at which a share (S,) of the captured light has met it."""
    found = _risen(results)
    if isinstance(found, Missing):
        return found
    height, share = found
    at = np.argmax(share >= lost[:, None], axis=1)
    return np.take_along_axis(height, at[:, None], axis=1)[:, 0]


def _switching_point(results: Results) -> MetricValue | Missing:
    if results.decision is None:
        return Missing("needs states that expect absent and present")
    dry = next(state for state in results.states if state.expect == "absent").signal[:, 0]
    wet = next(state for state in results.states if state.expect == "present").signal[:, 0]
    lost = (dry + results.decision.level[:, 0]) / np.where(dry != wet, dry - wet, np.nan)
    height = _height_at(results, np.clip(np.broadcast_to(lost, (results.setting.samples,)), 0.0, 1.0))
    return height if isinstance(height, Missing) else MetricValue(height)


def _switching_span(results: Results) -> MetricValue | Missing:
    ones = np.ones(results.setting.samples)
    low, high = _height_at(results, 0.1 * ones), _height_at(results, 0.9 * ones)
    return low if isinstance(low, Missing) else high if isinstance(high, Missing) else MetricValue(high - low)


def measures_of(faces: tuple[str, ...]) -> Mapping[str, Callable[[Results], MetricValue | Missing]]:
    """Measure of every metric for a tip with these faces."""
    return {
        "dry_angle_margin": _margin,
        "wet_floor": partial(_floor, faces=faces),
        "offset_sensitivity": _offset,
        "annulus_inner": partial(_annulus, outer=False),
        "annulus_outer": partial(_annulus, outer=True),
        "switching_point": _switching_point,
        "switching_span": _switching_span,
        "film_effect": partial(film_effect, faces=faces),
        "droplet_effect": partial(droplet_effect, faces=faces),
    }
