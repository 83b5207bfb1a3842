"""Pictures of sweeps and comparisons as plain plotly dicts; numbers come finished."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.quantities import is_kind, symbol
from outcouple.report.figures.look import Look, axis, base_layout, best_unit, ramp
from outcouple.studies.axes import Axis
from outcouple.studies.just_met import spans
from outcouple.studies.sweep import Sweep

__all__ = ["WORST", "sweep_picture", "swept_values"]

Floats = NDArray[np.float64]
WORST = "least margin"
"""What a picker calls the least margin over all requirements."""


def swept_values(found: Sweep, metric: str) -> tuple[str, str, str, Floats]:
    """(label, kind, unit, values in SI) of what a sweep shows."""
    if metric == WORST or metric not in found.metrics:
        return "least margin over all requirements", "ratio", "%", found.worst
    swept = found.metrics[metric]
    return swept.metric.label, swept.metric.kind, swept.metric.unit, swept.values


def sweep_picture(found: Sweep, metric: str, present: list[Any], look: Look) -> dict[str, Any]:
    """A curve over one axis, a map over two. ``present`` is where the design stands, in SI or words, per axis."""
    return _curve(found, metric, present, look) if len(found.axes) == 1 else _map(found, metric, present, look)


def _ticks(one: Axis) -> tuple[str, list[Any]]:
    """(unit, values as shown) of an axis."""
    if not one.numeric:
        return "", [str(value) for value in one.values]
    unit, shown = best_unit([float(value) for value in one.values], one.kind, one.unit)
    return unit, list(shown)


def _place(one: Axis, value: Any, unit: str) -> Any:
    if not one.numeric or value is None:
        return value
    return best_unit([float(value)], one.kind, unit)[1][0]


def _titled(label: str, unit: str) -> str:
    return f"{label} ({symbol(unit)})" if unit else label


def _axis(one: Axis, unit: str, look: Look) -> dict[str, Any]:
    name = one.name.replace("_", " ").replace(".", " · ")
    more = {"type": "log"} if one.scale == "log" else {} if one.numeric else {"type": "category"}
    return axis(look, _titled(name, unit), **more)


def _curve(found: Sweep, metric: str, present: list[Any], look: Look) -> dict[str, Any]:
    one = found.axes[0]
    unit, x = _ticks(one)
    label, kind, preferred, values = swept_values(found, metric)
    shown_unit, y = best_unit(values.tolist(), kind, preferred) if is_kind(kind) else ("", values.tolist())
    layout = base_layout(look, height=430)
    layout.update(xaxis=_axis(one, unit, look), yaxis=axis(look, _titled(label, shown_unit)))
    layout["margin"] = {**layout["margin"], "t": 34}
    line: dict[str, Any] = {
        "type": "scatter",
        "mode": "lines+markers" if one.numeric else "markers",
        "x": x,
        "y": y,
        "customdata": list(range(len(x))),
        "line": {"color": look.ramp[4], "width": 2.5},
        "marker": {"size": 7, "color": look.ramp[4]},
        "hovertemplate": "%{x}: %{y:.4g}<extra></extra>",
    }
    layout["shapes"] = _good_stretches(found, unit, look) + _limit_lines(found, metric, kind, shown_unit, look)
    layout["annotations"] = _limit_words(found, metric, kind, shown_unit, look)
    return {"data": [line, *_present_curve(one, present, unit, x, y, look)], "layout": layout}


def _present_curve(one: Axis, present: list[Any], unit: str, x: list[Any], y: list[Any], look: Look) -> list[Any]:
    """Where the design stands now, on the curve."""
    place = _place(one, present[0], unit)
    if place is None:
        return []
    if one.numeric:
        order = np.argsort(x)
        height = float(np.interp(place, np.array(x)[order], np.array(y, dtype=float)[order]))
    else:
        height = y[x.index(place)] if place in x else np.nan
    return [_present(place, height, look)]


def _present(x: Any, y: Any, look: Look) -> dict[str, Any]:
    return {
        "type": "scatter",
        "mode": "markers+text",
        "x": [x],
        "y": [y],
        "text": ["now"],
        "textposition": "top center",
        "textfont": {"size": 13, "color": look.ink},
        "cliponaxis": False,
        "marker": {
            "symbol": "diamond",
            "size": 13,
            "color": look.states[1],
            "line": {"color": look.paper, "width": 1.5},
        },
        "hovertemplate": "the design as it stands<extra></extra>",
    }


def _good_stretches(found: Sweep, unit: str, look: Look) -> list[dict[str, Any]]:
    """Bands where all requirements are met."""
    one = found.axes[0]
    if not one.numeric or not found.limits:
        return []
    return [
        {
            "type": "rect",
            "xref": "x",
            "yref": "paper",
            "x0": _place(one, stretch.low, unit),
            "x1": _place(one, stretch.high, unit),
            "y0": 0,
            "y1": 1,
            "fillcolor": look.good,
            "opacity": 0.13,
            "layer": "below",
            "line": {"width": 0},
            "label": {"text": "all met", "textposition": "top left", "font": {"size": 12, "color": look.good}},
        }
        for stretch in spans(found, 0)
    ]


def _limits(found: Sweep, metric: str, kind: str, unit: str) -> list[tuple[str, float]]:
    if metric == WORST:
        return [("just met", 0.0)]
    rows = [limit.requirement for limit in found.limits if limit.requirement.metric == metric]
    words = [f"{'at least' if one.at_least is not None else 'at most'} {one.text}" for one in rows]
    return [(word, best_unit([one.limit], kind, unit)[1][0]) for word, one in zip(words, rows, strict=True)]


def _limit_lines(found: Sweep, metric: str, kind: str, unit: str, look: Look) -> list[dict[str, Any]]:
    dashed = {"color": look.ink, "width": 1.2, "dash": "dash"}
    return [
        {"type": "line", "xref": "paper", "x0": 0, "x1": 1, "y0": value, "y1": value, "line": dashed}
        for _, value in _limits(found, metric, kind, unit)
    ]


def _limit_words(found: Sweep, metric: str, kind: str, unit: str, look: Look) -> list[dict[str, Any]]:
    return [
        {
            "xref": "paper",
            "x": 1,
            "xanchor": "right",
            "y": value,
            "yanchor": "bottom",
            "text": word,
            "showarrow": False,
            "font": {"size": 12, "color": look.ink},
        }
        for word, value in _limits(found, metric, kind, unit)
    ]


def _map(found: Sweep, metric: str, present: list[Any], look: Look) -> dict[str, Any]:
    across, up = found.axes
    x_unit, x = _ticks(across)
    y_unit, y = _ticks(up)
    label, kind, preferred, values = swept_values(found, metric)
    unit, flat = best_unit(values.ravel().tolist(), kind, preferred) if is_kind(kind) else ("", values.ravel().tolist())
    z = np.array(flat, dtype=float).reshape(values.shape).T
    layout = base_layout(look, height=480)
    layout.update(xaxis=_axis(across, x_unit, look), yaxis=_axis(up, y_unit, look))
    layout["margin"] = {**layout["margin"], "t": 34}
    heat = {
        "type": "heatmap",
        "x": x,
        "y": y,
        "z": [[float(value) if np.isfinite(value) else None for value in row] for row in z],
        "colorscale": ramp(look),
        "colorbar": {
            "title": {"text": _titled(label, unit), "side": "right", "font": {"size": 13}},
            "thickness": 14,
            "outlinewidth": 0,
        },
        "hovertemplate": "%{x:.4g}, %{y:.4g}: %{z:.4g}<extra></extra>",
    }
    data: list[dict[str, Any]] = [heat]
    if found.limits and across.numeric and up.numeric:
        data.append(_border(found, x, y, look))
    places = [
        _place(one, value, one_unit) for one, value, one_unit in zip(found.axes, present, (x_unit, y_unit), strict=True)
    ]
    if None not in places:
        data.append({**_present(places[0], places[1], look), "mode": "markers"})
    return {"data": data, "layout": layout}


def _border(found: Sweep, x: list[Any], y: list[Any], look: Look) -> dict[str, Any]:
    """The border of the region in which all requirements are met."""
    return {
        "type": "contour",
        "x": x,
        "y": y,
        "z": [[float(value) if np.isfinite(value) else None for value in row] for row in found.worst.T],
        "contours": {"start": 0, "end": 0, "size": 1, "coloring": "none"},
        "line": {"color": look.states[1], "width": 3},
        "showscale": False,
        "hoverinfo": "skip",
        "name": "all requirements just met",
    }
