"""The metrics a soft skin adds."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Metric, MetricValue, Missing, Results
from outcouple_plugins.edge_camera.lens import pixel_side
from outcouple_plugins.edge_camera.light import SPOT
from outcouple_plugins.edge_camera.measures import by_state, rows_shared
from outcouple_plugins.soft_overlay.texture import contact_share, pull_off_pressure

__all__ = ["METRICS", "measured", "spread_width"]

Floats = NDArray[np.float64]
Found = MetricValue | Missing

METRICS: tuple[Metric, ...] = (
    Metric("contact_share", "share in contact", "ratio", "%", "none", "part of the skin that touches", "state"),
    Metric(
        "unpressed_leak", "leak unpressed", "ratio", "%", "lower",
        "share of the guided light that the resting skin's texture takes at one hit, mean over the light",
    ),
    Metric(
        "contact_hysteresis", "hysteresis of the contact", "ratio", "%", "lower",
        "largest difference of the share in contact between release and pressing, over its span up to the highest "
        "pressure of the states",
    ),
    Metric(
        "activation_pressure", "activation pressure", "pressure", "kPa", "lower",
        "pressure at which the share in contact counts as pressed",
    ),
    Metric(
        "contact_slope_left", "slope left", "ratio", "%", "higher",
        "rise of the share in contact with pressure at the highest pressure of the states, over its steepest rise; "
        "near zero the skin is saturated",
    ),
    Metric(
        "spatial_resolution", "spatial resolution", "length", "mm", "lower",
        "width over which the skin and two pixels smear a point of force",
    ),
    Metric(
        "residual_contact", "contact left after release", "ratio", "%", "lower",
        "share of the contact left the stated time after release, by the skin's slow recovery",
    ),
    Metric(
        "recovery_time", "recovery time", "time", "s", "lower", "time after release until 5 % of the contact is left",
    ),
)  # fmt: skip

STEPS = 200
SMEAR = 2 * float(np.sqrt(2**0.4 - 1))
"""Full width at half maximum over depth of the pressure under a point force."""


def spread_width(thickness: Floats, pixel: Floats) -> Floats:
    """Width over which a point of force is seen [m]: sqrt((1.13 h)^2 + (2 pixels)^2).

    Pressure at depth h under a point force on a half-space goes as (1 + r^2/h^2)^(-5/2), half of it at r = 0.565 h.
    Range: a skin thinner than a few times what presses it; a rigid plate below narrows it somewhat.
    Reference: J. Boussinesq's solution, K. L. Johnson, Contact Mechanics (1985), eq. 3.19 (number from memory).
    """
    return np.asarray(np.hypot(SMEAR * thickness, 2 * pixel))


def _top(results: Results) -> Floats:
    """Highest pressure of the states [Pa], (S,)."""
    spread = results.setting.spread
    found = [spread(state.setting.p.overlay.pressure) for state in results.states]
    return np.asarray(np.max(np.stack(found), axis=0)) if found else spread(results.setting.p.overlay.pressure)


def _shares(results: Results, extra: Floats | float = 0.0) -> Floats:
    """Share in contact from rest to the highest pressure, (STEPS + 1, S)."""
    pressures = np.linspace(0, 1, STEPS + 1)[:, None] * _top(results)
    shares = contact_share(results.setting.p.overlay, pressures + extra)
    return np.broadcast_to(shares, (STEPS + 1, results.setting.samples))


def _share(results: Results) -> Found:
    spread = results.setting.spread
    found = {}
    for state in results.states:
        overlay = state.setting.p.overlay
        found[state.name] = spread(contact_share(overlay, overlay.pressure))
    return by_state(found, results.setting.samples)


def _leak(results: Results) -> Found:
    from outcouple_plugins.soft_overlay.geometry import FRONT

    state = next((state for state in results.states if state.reply is not None), None)
    if state is None or state.reply is None:
        return Missing("no state to measure it in")
    rows, light = rows_shared(results), state.light
    power = np.concatenate([rows.fan.s, rows.fan.p], axis=1)
    rays = power.shape[1]
    s_ray = light.polarization[:, :rays] > 0
    lost: Floats = np.zeros((1, 1))
    for share, Rs, Rp in state.reply(FRONT, light.angle[:, :rays, SPOT]):
        lost = lost + np.asarray(share).reshape(-1, 1) * (1 - np.where(s_ray, Rs, Rp))
    return MetricValue(results.setting.spread(np.sum(power * lost, axis=1) / np.sum(power, axis=1)))


def _hysteresis(results: Results) -> Found:
    if not np.all(_top(results) > 0):
        return Missing("no state presses the skin")
    pressing = _shares(results)
    releasing = _shares(results, pull_off_pressure(results.setting.p.overlay))
    top = pressing[-1]
    # Release starts from the contact that was reached, not from more.
    apart = np.max(np.minimum(releasing, top) - pressing, axis=0)
    return MetricValue(apart / top)


def _activation(results: Results) -> Found:
    overlay, spread = results.setting.p.overlay, results.setting.spread
    low, high = np.zeros(results.setting.samples), np.full(results.setting.samples, 1e9)
    wanted = spread(overlay.active)
    for _ in range(80):
        middle = (low + high) / 2
        above = contact_share(overlay, middle) >= wanted
        low, high = np.where(above, low, middle), np.where(above, middle, high)
    return MetricValue(high)


def _slope_left(results: Results) -> Found:
    if not np.all(_top(results) > 0):
        return Missing("no state presses the skin")
    rise = np.diff(_shares(results), axis=0)
    return MetricValue(rise[-1] / np.max(rise, axis=0))


def _resolution(results: Results) -> Found:
    return MetricValue(spread_width(results.setting.spread(results.setting.p.overlay.thickness), _pixel(results)))


def _pixel(results: Results) -> Floats:
    return pixel_side(results.setting)


def _residual(results: Results) -> Found:
    overlay = results.setting.p.overlay
    return MetricValue(results.setting.spread(np.exp(-overlay.released / overlay.relaxation)))


def _recovery(results: Results) -> Found:
    return MetricValue(results.setting.spread(np.log(20) * results.setting.p.overlay.relaxation))


MEASURES: Mapping[str, Callable[[Results], Found]] = {
    "contact_share": _share,
    "unpressed_leak": _leak,
    "contact_hysteresis": _hysteresis,
    "activation_pressure": _activation,
    "contact_slope_left": _slope_left,
    "spatial_resolution": _resolution,
    "residual_contact": _residual,
    "recovery_time": _recovery,
}


def measured(names: Sequence[str], results: Results) -> dict[str, Found]:
    """Those of ``names`` that stand here."""
    return {name: MEASURES[name](results) for name in names if name in MEASURES}
