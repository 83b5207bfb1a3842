"""Metrics that tips of every shape share: the index window, what a film and what drops do."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import Cover, Drops, Film, Patch
from outcouple.geometry import Metric, MetricValue, Missing, Results, StateResult

__all__ = [
    "TIP_METRICS",
    "clear_media",
    "droplet_effect",
    "film_effect",
    "first_liquid",
    "index_window",
    "worst_margin",
]

Floats = NDArray[np.float64]

FILM = 10e-6
DROP_ANGLE = np.radians(60.0)
DROP_COVER = 0.3
GRID = np.linspace(1.0, 2.2, 49)

TIP_METRICS: tuple[Metric, ...] = (
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
        "change of the dry reading by a 10 um film of the first present state's liquid on all faces",
    ),
    Metric(
        "droplet_effect",
        "effect of drops",
        "ratio",
        "%",
        "none",
        "change of the dry reading by drops of that liquid, contact angle 60 deg, on 30 % of all faces",
    ),
)


def clear_media(state: StateResult) -> list[str]:
    """Media that lie on a face of a state without drops."""
    media = []
    for cover in state.covers.values():
        for patch in cover.patches:
            if isinstance(patch.backing, str):
                media.append(patch.backing)
    return list(dict.fromkeys(media))


def first_liquid(results: Results) -> str | None:
    """The first medium of the first state that expects something."""
    for state in results.expecting("present"):
        for name in clear_media(state):
            return name
    return None


def worst_margin(results: Results, found: dict[str, Floats]) -> MetricValue:
    """The least of margins per state, and its state."""
    names = list(found)
    stack = np.stack([np.broadcast_to(found[name], (results.setting.samples,)) for name in names])
    pick = np.argmin(stack, axis=0)
    return MetricValue(stack[pick, np.arange(stack.shape[1])], names[int(pick[0])], found)


def index_window(results: Results, faces: Sequence[str]) -> tuple[MetricValue | Missing, MetricValue | Missing]:
    """First and last index at which a clear liquid reads below the level, to about 0.005."""
    if results.decision is None or results.setting.samples != 1:
        open_window = Missing("needs a decision between dry and wet, one design at a time")
        return open_window, open_window
    level = float(-results.decision.level[0, 0])
    covers = dict.fromkeys(faces, Cover((Patch(1.0, "(trial)"),)))
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


def film_effect(results: Results, faces: Sequence[str]) -> MetricValue | Missing:
    """Change of the dry reading by a flat film on all faces."""
    liquid = first_liquid(results)
    if liquid is None:
        return Missing("no present state has a clear liquid on a face")
    return _effect(results, faces, (Patch(1.0, "air", (Film(liquid, FILM),)),))


def droplet_effect(results: Results, faces: Sequence[str]) -> MetricValue | Missing:
    """Change of the dry reading by drops on all faces."""
    liquid = first_liquid(results)
    if liquid is None:
        return Missing("no present state has a clear liquid on a face")
    drops = (Patch(DROP_COVER, Drops(liquid, DROP_ANGLE)), Patch(1 - DROP_COVER, "air"))
    return _effect(results, faces, drops)


def _effect(results: Results, faces: Sequence[str], patches: tuple[Patch, ...]) -> MetricValue:
    before, after = (
        results.trial(dict.fromkeys(faces, Cover(part)), {})[:, 0] for part in ((Patch(1.0, "air"),), patches)
    )
    return MetricValue(np.broadcast_to(after / before - 1, (results.setting.samples,)))
