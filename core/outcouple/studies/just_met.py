"""The places along an axis where a requirement is just met, interpolated between the points of a sweep."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.studies.axes import Axis
from outcouple.studies.swept import Sweep

__all__ = ["Crossing", "Span", "crossings", "spans"]

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Crossing:
    """One requirement just met at one place.

    value    on the axis, SI; interpolated
    others   points on the other axes
    rises    True where the requirement is met beyond it
    """

    axis: Axis
    label: str
    value: float
    rises: bool
    others: tuple[int | None, ...]


@dataclass(frozen=True)
class Span:
    """A stretch of an axis on which all requirements are met.

    low, high    ends, SI; interpolated where the sweep shows where it ends
    opens        True where the sweep ends there too, so that it may reach further
    """

    low: float
    high: float
    opens: tuple[bool, bool]
    others: tuple[int | None, ...]


def crossings(found: Sweep, along: int) -> list[Crossing]:
    """Every place along one axis where a requirement turns from missed to met or back."""
    axis = found.axes[along]
    at, order = _positions(axis)
    return [
        Crossing(axis, limit.label, _back(axis, value), rises, others)
        for limit in found.limits
        for others, margin in _lines(limit.margin, along)
        for value, rises in zero_places(at, margin[order])
    ]


def spans(found: Sweep, along: int) -> list[Span]:
    """Every stretch of one axis on which all requirements are met."""
    axis = found.axes[along]
    at, order = _positions(axis)
    rows = []
    zeros: dict[tuple[int | None, ...], list[float]] = {}
    for limit in found.limits:
        for others, line in _lines(limit.margin, along):
            zeros.setdefault(others, []).extend(value for value, _ in zero_places(at, line[order]))
    for others, margin in _lines(found.worst, along):
        good = np.concatenate([[False], margin[order] >= 0, [False]])
        starts, ends = np.flatnonzero(good[1:] & ~good[:-1]), np.flatnonzero(good[:-1] & ~good[1:]) - 1
        for start, end in zip(starts.tolist(), ends.tolist(), strict=True):
            first, last = float(at[start]), float(at[end])
            before, after = float(at[max(start - 1, 0)]), float(at[min(end + 1, len(at) - 1)])
            low = max((z for z in zeros[others] if before <= z <= first), default=first)
            high = min((z for z in zeros[others] if last <= z <= after), default=last)
            opens = (bool(start == 0), bool(end == len(at) - 1))
            rows.append(Span(_back(axis, low), _back(axis, high), opens, others))
    return rows


def zero_places(at: Floats, margin: Floats) -> list[tuple[float, bool]]:
    """Places where a margin changes its sign, by a straight line between neighbours; nothing across a gap."""
    found = []
    for left in range(len(at) - 1):
        a, b = margin[left], margin[left + 1]
        if not (np.isfinite(a) and np.isfinite(b)) or (a >= 0) == (b >= 0):
            continue
        found.append((float(at[left] + (at[left + 1] - at[left]) * a / (a - b)), bool(b >= 0)))
    return found


def _positions(axis: Axis) -> tuple[Floats, NDArray[np.intp]]:
    """Where the points of an axis stand in ascending order (logarithms on a logarithmic one), and that order."""
    values = np.array(axis.values, dtype=float)
    at = np.log(values) if axis.scale == "log" else values
    order = np.argsort(at)
    return at[order], order


def _back(axis: Axis, position: float) -> float:
    return float(np.exp(position)) if axis.scale == "log" else float(position)


def _lines(values: Floats, along: int) -> list[tuple[tuple[int | None, ...], Floats]]:
    """Every line of an array along one axis, with its place on the others."""
    moved = np.moveaxis(values, along, -1)
    lines: list[tuple[tuple[int | None, ...], Floats]] = []
    for place in np.ndindex(moved.shape[:-1]):
        others: Sequence[int | None] = (*place[:along], None, *place[along:])
        lines.append((tuple(others), np.asarray(moved[place])))
    return lines
