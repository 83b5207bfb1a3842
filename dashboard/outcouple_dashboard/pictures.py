"""Pictures of sweeps as the report draws them, with the design as it stands marked."""

from __future__ import annotations

from typing import Any

import numpy as np

from outcouple.quantities import format_quantity
from outcouple.report.cells import shown_number
from outcouple.report.figures.look import Look, wrapped
from outcouple.report.figures.sweep import margin_figure, metric_figure, picture_axes, verdict_figure
from outcouple.studies import Axis, Sweep

__all__ = ["WORST", "clicked_at", "sweep_picture", "swept_text"]

WORST = "least margin"
"""What a picker calls the least margin over all requirements."""


def sweep_picture(found: Sweep, metric: str, present: list[Any], look: Look) -> dict[str, Any]:
    """A curve over one axis, a map over two. ``present`` is where the design stands, in SI or words, per axis."""
    across, upward = picture_axes(found)
    if metric in found.metrics:
        figure = metric_figure(found, metric, look=look)
    elif upward is None:
        figure = margin_figure(found, look=look)
    else:
        figure = verdict_figure(found, look=look)
    x = _place(found.axes[across], present[across])
    y = None if upward is None else _place(found.axes[upward], present[upward])
    layout = {**figure["layout"], "height": 440}
    layout["margin"] = {**layout["margin"], "t": 40}
    if upward is None and x is not None:
        layout["shapes"] = [*layout.get("shapes", []), _now_line(x, look)]
    if y is None or x is None:
        return {"data": figure["data"], "layout": layout}
    return {"data": [*figure["data"], _now_point(x, y, look)], "layout": layout}


def _place(one: Axis, value: Any) -> Any:
    if value is None:
        return None
    return shown_number(float(value), one.kind, one.unit) if one.numeric else wrapped(str(value), 22)


def _now_line(x: Any, look: Look) -> dict[str, Any]:
    return {
        "type": "line",
        "yref": "paper",
        "y0": 0,
        "y1": 1,
        "x0": x,
        "x1": x,
        "line": {"color": look.states[1], "width": 2},
        "label": {
            "text": "now",
            "textposition": "start",
            "textangle": 0,
            "xanchor": "left",
            "yanchor": "bottom",
            "padding": 6,
            "font": {"color": look.ink},
        },
    }


def _now_point(x: Any, y: Any, look: Look) -> dict[str, Any]:
    return {
        "type": "scatter",
        "mode": "markers",
        "x": [x],
        "y": [y],
        "showlegend": False,
        "marker": {"symbol": "diamond", "size": 14, "color": look.states[1], "line": {"color": look.paper, "width": 2}},
        "hovertemplate": "the design as it stands<extra></extra>",
    }


def clicked_at(found: Sweep, click: Any) -> list[int] | None:
    """Indices of the point of a sweep that was clicked in its picture, None where it was none."""
    point = ((click or {}).get("points") or [{}])[0]
    across, upward = picture_axes(found)
    index, curve = point.get("pointNumber"), point.get("curveNumber", 0)
    at = [0] * len(found.axes)
    if upward is not None:
        if not (isinstance(index, list) and len(index) == 2):
            return None
        at[upward], at[across] = int(index[0]), int(index[1])
    elif isinstance(index, int):
        at[across] = index
        others = [one for one in range(len(found.axes)) if one != across]
        if others:
            at[others[0]] = int(curve)
    else:
        return None
    return at if all(0 <= place < size for place, size in zip(at, found.shape, strict=True)) else None


def swept_text(found: Sweep, metric: str, at: tuple[int, ...]) -> tuple[str, str]:
    """(what it is, its value at one point) of what a sweep shows."""
    if metric not in found.metrics:
        worst = found.worst[at]
        return "least margin", "–" if np.isnan(worst) else f"{worst:+.0%}"
    swept = found.metrics[metric]
    value = format_quantity(float(swept.values[at]), swept.metric.kind, unit=swept.metric.unit or None)
    return swept.metric.label, value
