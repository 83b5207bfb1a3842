"""Pictures of a sweep: curves over one axis, maps over two, with the region in which all requirements are met."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import product
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Metric
from outcouple.quantities import format_quantity, symbol
from outcouple.report.cells import metric_unit, shown_number
from outcouple.report.figures.look import LIGHT, Look, axis, base_layout, log_ticks, ramp, wrapped
from outcouple.studies import Axis, Limit, Sweep, spans

__all__ = ["SERIES", "margin_figure", "metric_figure", "picture_axes", "slices", "verdict_figure"]

Floats = NDArray[np.float64]
Place = tuple[int | None, ...]
SERIES = 7
"""Curves of one picture."""
PLAIN = {"exponentformat": "power"}
BOUND = 3.0
"""Margins are drawn up to this many limits above and below; beyond, a picture would hide where they are just met."""


def picture_axes(found: Sweep) -> tuple[int, int | None]:
    """Axis drawn across, and the one drawn upwards where there are two numeric ones; others are slices."""
    numeric = [at for at, one in enumerate(found.axes) if one.numeric and len(one.values) > 2]
    across = numeric[0] if numeric else int(np.argmax([len(one.values) for one in found.axes]))
    return across, next((at for at in numeric if at != across), None)


def slices(found: Sweep) -> list[Place]:
    """Where maps are drawn on the other axes: at every word of those that hold words, in the middle of the others."""
    across, upward = picture_axes(found)
    if upward is None:
        return [tuple(None for _ in found.axes)]
    choices: list[list[int | None]] = []
    for at, one in enumerate(found.axes):
        count = len(one.values)
        drawn = at in (across, upward)
        choices.append([None] if drawn else [count // 2] if one.numeric else list(range(count)))
    return list(product(*choices))


def metric_figure(found: Sweep, name: str, *, at: Place | None = None, look: Look = LIGHT) -> dict[str, Any]:
    """One metric over the axes with the limit a requirement sets; a map ``at`` one of :func:`slices`."""
    metric = found.metrics[name].metric
    across, upward = picture_axes(found)
    limits = [limit for limit in found.limits if limit.requirement.metric == name]
    if upward is None:
        return _curves(found, metric, across, limits, look)
    unit = metric_unit(metric)
    place = at or slices(found)[0]
    values = _scaled(_slice(found.metrics[name].values, place, across, upward), metric)
    bounds = [shown_number(limit.requirement.limit, metric.kind, unit) for limit in limits]
    return _map(found, values, unit, place, bounds, look)


def margin_figure(found: Sweep, *, look: Look = LIGHT) -> dict[str, Any]:
    """Every requirement's margin in units of its limit: above zero it is met. Over one axis only."""
    across, _ = picture_axes(found)
    layout = base_layout(look, height=360)
    layout.update(
        xaxis=_across_axis(found.axes[across], look),
        yaxis=axis(look, "margin (share of the limit)", tickformat="+.0%", zeroline=False, range=_around_zero(found)),
        showlegend=True,
        legend={"orientation": "h", "y": 1.02, "yanchor": "bottom", "x": 0},
        shapes=[_level(0.0, look)],
    )
    data = []
    for at, limit in enumerate(found.limits):
        line = np.clip(limit.scaled.ravel(), -BOUND, BOUND)
        data.append(_line(found.axes[across], line, limit.label, look.states[at % 7], at))
    layout["shapes"] += _bands(found, across, look)
    return {"data": data, "layout": layout}


def verdict_figure(found: Sweep, *, at: Place | None = None, look: Look = LIGHT) -> dict[str, Any]:
    """The worst margin over two axes ``at`` one of :func:`slices`; the line is where all requirements are just met."""
    across, upward = picture_axes(found)
    if upward is None:
        return margin_figure(found, look=look)
    place = at or slices(found)[0]
    values = _slice(found.worst, place, across, upward)
    if np.any(values > -BOUND):
        values = np.clip(values, -BOUND, BOUND)
    return _map(found, values * 100.0, "% of the limit", place, [0.0], look)


def _curves(found: Sweep, metric: Metric, across: int, limits: Sequence[Limit], look: Look) -> dict[str, Any]:
    unit = metric_unit(metric)
    lines = _named_lines(found, found.metrics[metric.name].values, across)
    if len(lines) == 1 and len(found.metrics[metric.name].states) > 1:
        lines = [(state, values.ravel()) for state, values in found.metrics[metric.name].states.items()]
    layout = base_layout(look, height=340)
    layout.update(
        xaxis=_across_axis(found.axes[across], look),
        yaxis=axis(look, f"{metric.label} ({symbol(unit)})" if unit else metric.label, **PLAIN),
        showlegend=len(lines) > 1,
        legend={"orientation": "h", "y": 1.02, "yanchor": "bottom", "x": 0},
    )
    data = [
        _line(found.axes[across], _scaled(values, metric), name, look.states[at % len(look.states)], at)
        for at, (name, values) in enumerate(lines[:SERIES])
    ]
    bounds = [shown_number(limit.requirement.limit, metric.kind, unit) for limit in limits]
    layout["shapes"] = [_level(bound, look) for bound in bounds]
    layout["annotations"] = [_note(bound, limit, metric, look) for bound, limit in zip(bounds, limits, strict=True)]
    drawn = np.concatenate([_scaled(values, metric) for _, values in lines[:SERIES]])
    every = np.append(drawn, bounds)
    if _wide(every):
        layout["yaxis"].update(type="log", **log_ticks(every[np.isfinite(every)].tolist()))
        layout["annotations"] = [{**one, "y": float(np.log10(one["y"]))} for one in layout["annotations"]]
    layout["shapes"] += _bands(found, across, look)
    return {"data": data, "layout": layout}


def _named_lines(found: Sweep, values: Floats, across: int) -> list[tuple[str, Floats]]:
    """A line for every point of the other axes, named by it."""
    moved = np.moveaxis(values, across, -1)
    rest = [one for at, one in enumerate(found.axes) if at != across]
    lines = []
    for place in np.ndindex(moved.shape[:-1]):
        name = ", ".join(one.texts()[at] for one, at in zip(rest, place, strict=True))
        lines.append((name, np.asarray(moved[place])))
    return lines


def _slice(values: Floats, place: Place, across: int, upward: int) -> Floats:
    """The drawn part of an array: rows upwards, columns across, at one place of the other axes."""
    part = values[tuple(slice(None) if one is None else one for one in place)]
    return part.T if upward > across else part


def _scaled(values: Floats, metric: Metric) -> Floats:
    unit = metric_unit(metric)
    shown = np.array([shown_number(value, metric.kind, unit) for value in values.ravel()])
    return np.where(np.isfinite(shown), shown, np.nan).reshape(values.shape)


def _wide(values: Floats) -> bool:
    """True where positive values span more than two decades."""
    good = values[np.isfinite(values)]
    return bool(good.size and np.min(good) > 0 and np.max(good) > 100 * np.min(good))


def _places(one: Axis) -> list[Any]:
    if not one.numeric:
        return [wrapped(text, 22) for text in one.texts()]
    return [shown_number(value, one.kind, one.unit) for value in one.values]


def _across_axis(one: Axis, look: Look) -> dict[str, Any]:
    title = f"{one.name} ({symbol(one.unit)})" if one.unit else one.name
    kind = "log" if one.scale == "log" else ("-" if one.numeric else "category")
    ticks = log_ticks(_places(one)) if kind == "log" else {}
    return axis(look, title, type=kind, **PLAIN, **ticks)


def _line(across: Axis, values: Floats, name: str, colour: str, at: int) -> dict[str, Any]:
    few = len(values) <= 30
    return {
        "type": "scatter",
        "mode": "lines+markers" if few and across.numeric else ("lines" if across.numeric else "markers"),
        "x": _places(across),
        "y": [None if np.isnan(value) else float(value) for value in values],
        "name": wrapped(name, 40),
        "line": {"color": colour, "width": 2.5, "dash": ("solid", "dash", "dot", "dashdot")[at // 2 % 4]},
        "marker": {"color": colour, "size": 6 if across.numeric else 11},
        "hovertemplate": "%{x}: %{y:.4g}<extra>" + name.replace("<", "&lt;") + "</extra>",
    }


def _around_zero(found: Sweep) -> list[float]:
    """A range that shows both sides of the limit."""
    values = np.concatenate([limit.scaled.ravel() for limit in found.limits])
    shown = np.clip(values[np.isfinite(values)], -BOUND, BOUND)
    low, high = min([-0.2, *shown]), max([0.2, *shown])
    return [1.08 * low, 1.08 * high]


def _level(value: float, look: Look) -> dict[str, Any]:
    return {
        "type": "line",
        "xref": "paper",
        "x0": 0,
        "x1": 1,
        "y0": value,
        "y1": value,
        "line": {"color": look.bad, "width": 1.5, "dash": "dash"},
    }


def _note(value: float, limit: Limit, metric: Metric, look: Look) -> dict[str, Any]:
    one = limit.requirement
    sense = "at least" if one.at_least is not None else "at most"
    shown = format_quantity(one.limit, metric.kind, metric.unit or None)
    return {
        "xref": "paper",
        "x": 1,
        "xanchor": "right",
        "y": value,
        "yanchor": "bottom",
        "text": f"{sense} {shown}",
        "showarrow": False,
        "font": {"size": 12, "color": look.bad},
    }


def _bands(found: Sweep, across: int, look: Look) -> list[dict[str, Any]]:
    """Shade the stretches on which all requirements are met; only where one line is drawn."""
    one = found.axes[across]
    if not one.numeric or len(found.axes) > 1:
        return []
    return [
        {
            "type": "rect",
            "yref": "paper",
            "y0": 0,
            "y1": 1,
            "x0": shown_number(span.low, one.kind, one.unit),
            "x1": shown_number(span.high, one.kind, one.unit),
            "fillcolor": look.good,
            "opacity": 0.12,
            "line": {"width": 0},
            "layer": "below",
        }
        for span in spans(found, across)
    ]


def _map(found: Sweep, values: Floats, unit: str, place: Place, bounds: Sequence[float], look: Look) -> dict[str, Any]:
    """A map in one hue; a line at each bound, crosses where not all requirements are met."""
    across, upward = picture_axes(found)
    assert upward is not None
    x, y = _places(found.axes[across]), _places(found.axes[upward])
    z = [[None if np.isnan(value) else float(value) for value in row] for row in values]
    layout = base_layout(look, height=440)
    layout.update(
        xaxis={**_across_axis(found.axes[across], look), "showgrid": False, "zeroline": False},
        yaxis={**_across_axis(found.axes[upward], look), "showgrid": False, "zeroline": False},
    )
    data: list[dict[str, Any]] = [
        {
            "type": "heatmap",
            "x": x,
            "y": y,
            "z": z,
            "colorscale": ramp(look),
            "colorbar": {"title": {"text": symbol(unit)}, "thickness": 14, "outlinewidth": 0},
            "hovertemplate": "%{x:.4g}, %{y:.4g}: %{z:.4g}<extra></extra>",
        }
    ]
    for bound in bounds:
        data.append(
            {
                "type": "contour",
                "x": x,
                "y": y,
                "z": z,
                "contours": {"start": bound, "end": bound, "size": 1, "coloring": "none"},
                "line": {"color": look.states[1], "width": 2.5},
                "showscale": False,
                "hoverinfo": "skip",
            }
        )
    missed = np.argwhere(_slice((found.verdicts != "pass").astype(float), place, across, upward) > 0)
    if found.limits and 0 < len(missed) <= 4000:
        data.append(
            {
                "type": "scatter",
                "mode": "markers",
                "x": [x[int(column)] for _, column in missed],
                "y": [y[int(row)] for row, _ in missed],
                "marker": {"symbol": "x-thin", "size": 5, "line": {"width": 1, "color": look.bad}},
                "hoverinfo": "skip",
                "opacity": 0.6,
            }
        )
    return {"data": data, "layout": layout}
