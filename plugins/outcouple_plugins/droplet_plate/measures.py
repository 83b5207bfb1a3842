"""What a droplet plate is judged by: losses, counted drops, what stays unseen."""

from __future__ import annotations

from collections.abc import Callable, Mapping

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import Cover, Drops, Film, Patch
from outcouple.geometry import Metric, MetricValue, Missing, Results, StateResult

__all__ = ["MEASURES", "METRICS"]

Floats = NDArray[np.float64]

LIQUID = "water"
SHEET = 0.3e-3
BARE, COATED = np.radians(40.0), np.radians(90.0)
TENTH = 0.1

METRICS: tuple[Metric, ...] = (
    Metric(
        "drop_loss",
        "loss by what lies on it",
        "ratio",
        "%",
        "none",
        "share of the dry light that a state takes",
        "state",
    ),
    Metric(
        "counting_noise",
        "counting noise of drops",
        "ratio",
        "%",
        "lower",
        "relative standard deviation of a state's loss because few drops lie on the sampled patch, 1 / sqrt(number)",
        "state",
    ),
    Metric(
        "rain_margin",
        "rain margin",
        "number",
        "",
        "higher",
        "loss of a present state over its own scatter, drops counted and noise of the read-out together",
        "state",
    ),
    Metric(
        "tilt_to_leak",
        "tilt to leak",
        "angle",
        "deg",
        "higher",
        "by how much the beam may tilt before a dry plate no longer reflects it totally; inside the plate",
    ),
    Metric(
        "smallest_coverage",
        "smallest coverage",
        "ratio",
        "%",
        "lower",
        "share under water drops of 40 deg contact angle at which the reading falls to the level",
    ),
    Metric(
        "sheet_effect",
        "effect of a sheet",
        "ratio",
        "%",
        "none",
        "change of the dry reading by an even sheet of water, 0.3 mm: what a steady reading does not see",
    ),
    Metric(
        "coating_sensitivity",
        "coating sensitivity",
        "number",
        "",
        "lower",
        "loss by drops at 90 deg contact angle (coated) over that at 40 deg (bare), a tenth of the face covered",
    ),
)


def _dry(results: Results) -> StateResult | None:
    states = results.expecting("absent")
    return states[0] if states else None


def _losses(results: Results) -> dict[str, Floats] | Missing:
    dry = _dry(results)
    if dry is None:
        return Missing("no state expects absent")
    base = np.min(dry.signal, axis=1)
    return {state.name: 1 - np.min(state.signal, axis=1) / base for state in results.states}


def _worst(found: dict[str, Floats], samples: int, *, highest: bool) -> MetricValue:
    names = list(found)
    stack = np.stack([np.broadcast_to(found[name], (samples,)) for name in names])
    pick = np.argmax(stack, axis=0) if highest else np.argmin(stack, axis=0)
    return MetricValue(stack[pick, np.arange(samples)], names[int(pick[0])], found)


def _drop_loss(results: Results) -> MetricValue | Missing:
    losses = _losses(results)
    return losses if isinstance(losses, Missing) else _worst(losses, results.setting.samples, highest=True)


def _counting(results: Results) -> dict[str, Floats]:
    """Relative scatter of the loss of every present state with drops, (S,)."""
    setting = results.setting
    footprint = np.pi / 4 * setting.spread(setting.p.drops.diameter) ** 2
    found = {}
    for state in results.expecting("present"):
        patches = [patch for cover in state.covers.values() for patch in cover.patches]
        share = sum((np.asarray(p.share, dtype=float) for p in patches if isinstance(p.backing, Drops)), np.zeros(1))
        number = share * setting.spread(setting.p.plate.patch) / footprint
        if np.any(share > 0):
            found[state.name] = 1 / np.sqrt(np.maximum(number, 1e-12))
    return found


def _counting_noise(results: Results) -> MetricValue | Missing:
    found = _counting(results)
    if not found:
        return Missing("no present state has drops")
    return _worst(found, results.setting.samples, highest=True)


def _rain_margin(results: Results) -> MetricValue | Missing:
    losses, counting, dry = _losses(results), _counting(results), _dry(results)
    if isinstance(losses, Missing) or dry is None:
        return Missing("no state expects absent")
    found = {}
    for state in results.expecting("present"):
        noise = np.max(state.noise, axis=1) / np.min(dry.signal, axis=1)
        scatter = losses[state.name] * counting.get(state.name, np.zeros(1))
        found[state.name] = losses[state.name] / np.hypot(scatter, noise)
    if not found:
        return Missing("no state expects present")
    return _worst(found, results.setting.samples, highest=False)


def _tilt(results: Results) -> MetricValue:
    setting = results.setting
    critical = np.arcsin(np.clip(setting.index("air") / setting.index(setting.p.plate.material), 0, 1))
    return MetricValue(setting.spread(setting.p.plate.incidence) - critical)


def _kept(results: Results, *patches: Patch) -> Floats:
    """Reading of a trial cover over that of a dry plate, crosstalk left out, (S,)."""
    stray = results.light.stray[:, 0]
    dry, found = (
        results.trial({"outer": Cover(part)}, {})[:, 0] - stray for part in ((Patch(1.0, "air"),), tuple(patches))
    )
    return np.asarray(found / dry)


def _with_drops(share: float, angle: float) -> tuple[Patch, ...]:
    return (Patch(share, Drops(LIQUID, angle)), Patch(1 - share, "air"))


def _smallest(results: Results) -> MetricValue | Missing:
    dry = _dry(results)
    if results.decision is None or dry is None:
        return Missing("needs states that expect absent and present")
    bounces = float(results.setting.p.plate.bounces)
    each = 1 - _kept(results, *_with_drops(1.0, BARE)) ** (1 / bounces)
    bright = np.min(dry.signal, axis=1)
    beside = bright * results.light.stray[:, 0] / np.min(dry.share, axis=1)
    left = np.clip((-results.decision.level[:, 0] - beside) / (bright - beside), 1e-12, 1.0)
    coverage = (1 - left ** (1 / bounces)) / each
    return MetricValue(np.broadcast_to(np.where(coverage <= 1, coverage, np.nan), (results.setting.samples,)))


def _sheet(results: Results) -> MetricValue:
    change = _kept(results, Patch(1.0, "air", (Film(LIQUID, SHEET),))) - 1
    return MetricValue(np.broadcast_to(change, (results.setting.samples,)))


def _coating(results: Results) -> MetricValue:
    bare, coated = (1 - _kept(results, *_with_drops(TENTH, angle)) for angle in (BARE, COATED))
    return MetricValue(np.broadcast_to(coated / bare, (results.setting.samples,)))


MEASURES: Mapping[str, Callable[[Results], MetricValue | Missing]] = {
    "drop_loss": _drop_loss,
    "counting_noise": _counting_noise,
    "rain_margin": _rain_margin,
    "tilt_to_leak": _tilt,
    "smallest_coverage": _smallest,
    "sheet_effect": _sheet,
    "coating_sensitivity": _coating,
}
