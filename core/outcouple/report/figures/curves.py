"""Curves and maps: the main response, surfaces over the face, transmission across a gap."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Surface
from outcouple.outcome import Outcome
from outcouple.quantities import KINDS, kind_of, symbol
from outcouple.report.figures.look import LIGHT, Look, axis, base_layout, best_unit, ramp

__all__ = ["response_figure", "surface_figure"]


def response_figure(outcome: Outcome, *, look: Look = LIGHT) -> dict[str, Any]:
    """The main response curve with the states marked and the level."""
    curve = outcome.curve
    if curve is None:
        return {"data": [], "layout": base_layout(look)}
    return surface_figure(curve, look=look, level=outcome.level if outcome.level_kind in ("A", "e-") else None)


def surface_figure(surface: Surface, *, look: Look = LIGHT, level: float | None = None) -> dict[str, Any]:
    """A surface over one axis as a curve, over two as a map."""
    return _curve(surface, look, level) if surface.values.ndim == 1 else _map(surface, look)


def _titled(label: str, unit: str) -> str:
    return f"{label} ({symbol(unit)})" if unit else label


def _ordinate(surface: Surface) -> str:
    """What a curve shows: its label up to "against"."""
    return surface.label.partition(" against ")[0]


def _axis_values(surface: Surface, at: int) -> tuple[str, list[float]]:
    label, unit, values = surface.axes[at]
    kind = _kind_of_unit(unit)
    shown, numbers = best_unit(values.tolist(), kind, unit) if kind else (unit, values.tolist())
    return _titled(label, shown), numbers


def _kind_of_unit(unit: str) -> str:
    return next((name for name in KINDS if unit and unit in kind_of(name).units), "")


def _curve(surface: Surface, look: Look, level: float | None) -> dict[str, Any]:
    title, x = _axis_values(surface, 0)
    known = surface.unit in ("A", "e-")
    unit, y = best_unit(surface.values.tolist(), surface.kind, "" if known else surface.unit)
    layout = base_layout(look)
    layout.update(xaxis=axis(look, title), yaxis=axis(look, _titled(_ordinate(surface), unit), rangemode="tozero"))
    data: list[dict[str, Any]] = [
        {
            "type": "scatter",
            "mode": "lines",
            "x": x,
            "y": y,
            "line": {"color": look.ramp[4], "width": 2.5},
            "hovertemplate": "%{x:.4g}: %{y:.4g}<extra></extra>",
        }
    ]
    if surface.marks:
        scale = _scale(surface, 0)
        names, marks_x, marks_y = zip(*_apart(surface), strict=True)
        data.append(
            {
                "type": "scatter",
                "mode": "markers+text",
                "x": [value * scale for value in marks_x],
                "y": best_unit(marks_y, surface.kind, unit)[1],
                "text": list(names),
                "textposition": "top center",
                "cliponaxis": False,
                "marker": {"size": 10, "color": look.states[1]},
                "hovertemplate": "%{text}: %{y:.4g}<extra></extra>",
            }
        )
    if level is not None:
        (shown,) = best_unit([level], surface.kind, unit)[1]
        layout["shapes"] = [
            {
                "type": "line",
                "x0": 0,
                "x1": 1,
                "xref": "paper",
                "y0": shown,
                "y1": shown,
                "line": {"color": look.ink, "width": 1.2, "dash": "dash"},
            }
        ]
        layout["annotations"] = [
            {
                "x": 1,
                "xref": "paper",
                "xanchor": "right",
                "y": shown,
                "yanchor": "bottom",
                "text": "level",
                "showarrow": False,
                "font": {"size": 12},
            }
        ]
    return {"data": data, "layout": layout}


def _apart(surface: Surface) -> list[tuple[str, float, float]]:
    """The marks, those that would print over each other joined under one label."""
    width = float(np.ptp(surface.axes[0][2])) or 1.0
    height = float(np.ptp(surface.values)) or 1.0
    found: list[tuple[str, float, float]] = []
    for name, x, y in sorted(surface.marks, key=lambda mark: mark[1]):
        if found and abs(x - found[-1][1]) < 0.06 * width and abs(y - found[-1][2]) < 0.06 * height:
            found[-1] = (f"{found[-1][0]}, {name}", found[-1][1], found[-1][2])
        else:
            found.append((name, x, y))
    return found


def _scale(surface: Surface, at: int) -> float:
    """Display value of one SI unit on an axis without offset."""
    unit = surface.axes[at][1]
    kind = _kind_of_unit(unit)
    return best_unit([1.0], kind, unit)[1][0] if kind else 1.0


def _map(surface: Surface, look: Look) -> dict[str, Any]:
    """A map over the face: one hue, the limit as an outline, the worst place marked."""
    down, across = 0, 1
    x_title, x = _axis_values(surface, across)
    y_title, y = _axis_values(surface, down)
    unit, flat = best_unit(surface.values.ravel().tolist(), surface.kind, surface.unit)
    values = np.array(flat).reshape(surface.values.shape)
    layout = base_layout(look, height=420)
    layout.update(
        xaxis=axis(look, x_title, showgrid=False, zeroline=False, constrain="domain"),
        yaxis=axis(look, y_title, showgrid=False, zeroline=False, scaleanchor="x", constrain="domain")
        if _same_kind(surface)
        else axis(look, y_title, showgrid=False, zeroline=False),
    )
    data: list[dict[str, Any]] = [
        {
            "type": "heatmap",
            "x": x,
            "y": y,
            "z": _rows(values),
            "colorscale": ramp(look),
            "colorbar": {"title": {"text": unit}, "thickness": 14, "outlinewidth": 0},
            "hovertemplate": "%{x:.4g}, %{y:.4g}: %{z:.4g}<extra></extra>",
        }
    ]
    if surface.limit is not None:
        (limit,) = best_unit([surface.limit], surface.kind, surface.unit)[1]
        data.append(
            {
                "type": "contour",
                "x": x,
                "y": y,
                "z": _rows(values),
                "contours": {"start": limit, "end": limit, "size": 1, "coloring": "none"},
                "line": {"color": look.states[1], "width": 2},
                "showscale": False,
                "hoverinfo": "skip",
            }
        )
    for name, mark_x, mark_y in surface.marks:
        data.append(
            {
                "type": "scatter",
                "mode": "markers+text",
                "x": [mark_x * _scale(surface, across)],
                "y": [mark_y * _scale(surface, down)],
                "text": [name],
                "textposition": "top center",
                "textfont": {"color": look.ink},
                "marker": {"symbol": "x-thin", "size": 12, "line": {"width": 2.5, "color": look.bad}},
                "hoverinfo": "text",
            }
        )
    return {"data": data, "layout": layout}


def _rows(values: NDArray[np.float64]) -> list[list[float | None]]:
    """Plain rows, empty where there is no number."""
    return [[value if math.isfinite(value) else None for value in row] for row in values.tolist()]


def _same_kind(surface: Surface) -> bool:
    return (
        _kind_of_unit(surface.axes[0][1]) == _kind_of_unit(surface.axes[1][1]) == "length"
        and surface.name != "tunnelling"
    )
