"""Drawings to scale: cross-sections and plans with rays coloured by the power they still carry."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from outcouple.geometry import Outline, View
from outcouple.outcome import Outcome
from outcouple.report.figures.look import LIGHT, Look, axis, base_layout, best_unit

__all__ = ["section_figure"]

BINS = 8
"""Steps of power that rays are drawn in."""
FAINT = 1e-3
"""Power below which a ray is drawn as gone."""


def section_figure(
    outcome: Outcome, states: Sequence[str] = (), *, view: str = "", look: Look = LIGHT, height: int = 380
) -> dict[str, Any]:
    """One view of the design with its rays, a panel per state (two at most)."""
    chosen = _states(outcome, states)
    drawn = next((one for one in outcome.views if one.name == view), outcome.views[0] if outcome.views else None)
    layout = base_layout(look, height=height)
    if drawn is None:
        return {"data": [], "layout": {**layout, "annotations": [_text("this geometry has no drawing", look)]}}
    unit, _ = best_unit([float(np.max(np.abs(line.points))) for line in drawn.outlines], "length")
    data: list[dict[str, Any]] = []
    annotations = []
    for at, name in enumerate(chosen):
        suffix = "" if at == 0 else str(at + 1)
        data += _panel(outcome, drawn, name, unit, suffix, look)
        low, high = (
            at / len(chosen) + (0.03 if at else 0),
            (at + 1) / len(chosen) - (0.03 if at < len(chosen) - 1 else 0),
        )
        layout[f"xaxis{suffix}"] = axis(look, unit, domain=[low, high], zeroline=False, showgrid=False)
        layout[f"yaxis{suffix}"] = axis(
            look, "" if at else unit, anchor=f"x{suffix}", scaleanchor=f"x{suffix}", zeroline=False, showgrid=False
        )
        annotations.append(_panel_title(name, (low + high) / 2, look))
    layout["annotations"] = annotations
    layout["margin"] = {**layout["margin"], "t": 36}
    return {"data": data, "layout": layout}


def _states(outcome: Outcome, states: Sequence[str]) -> list[str]:
    names = [state.name for state in outcome.states]
    chosen = [name for name in states if name in names]
    if not chosen:
        chosen = [names[0]] + ([outcome.worst_state] if outcome.worst_state not in ("", names[0]) else names[1:2])
    return chosen[:2]


def _panel(outcome: Outcome, view: View, state: str, unit: str, suffix: str, look: Look) -> list[dict[str, Any]]:
    place = {"xaxis": f"x{suffix}", "yaxis": f"y{suffix}"}
    outlines = [{**_outline(line, unit, look), **place} for line in view.outlines]
    powers = next(one for one in outcome.states if one.name == state).rays.get(view.name, ())
    rays = [{**trace, **place} for trace in _rays(view, powers, unit, look)]
    return [*outlines, *rays]


def _outline(line: Outline, unit: str, look: Look) -> dict[str, Any]:
    points = line.points if not line.closed else np.vstack([line.points, line.points[:1]])
    fill = {
        "guide": look.guide,
        "overlay": look.ramp[1],
        "medium": look.grid,
        "object": look.states[1],
        "emitter": look.states[4],
        "detector": look.states[0],
    }.get(line.role)
    return {
        "type": "scatter",
        "mode": "lines",
        "x": _in(points[:, 0], unit),
        "y": _in(points[:, 1], unit),
        "name": line.label,
        "text": line.label,
        "hoverinfo": "text",
        "hoveron": "fills" if fill and line.closed else "points",
        "line": {"color": look.faint, "width": 1, "dash": "dot" if line.role == "axis" else "solid"},
        **({"fill": "toself", "fillcolor": fill} if fill and line.closed else {}),
    }


def _rays(view: View, powers: Sequence[Sequence[float]], unit: str, look: Look) -> list[dict[str, Any]]:
    """Segments gathered by steps of power, so that a view needs a handful of traces."""
    lines: dict[int, tuple[list[float | None], list[float | None]]] = {}
    for ray, power in zip(view.rays, powers, strict=False):
        for at, left in enumerate(power):
            step = -1 if left < FAINT else min(int(left * BINS), BINS - 1)
            x, y = lines.setdefault(step, ([], []))
            for point in (ray.points[at], ray.points[at + 1]):
                x.append(_in([point[0]], unit)[0])
                y.append(_in([point[1]], unit)[0])
            x.append(None)
            y.append(None)
    return [_ray_trace(step, *lines[step], look) for step in sorted(lines)]


def _ray_trace(step: int, x: list[float | None], y: list[float | None], look: Look) -> dict[str, Any]:
    share = max(step, 0) / (BINS - 1)
    colour = look.ramp[min(1 + round(share * (len(look.ramp) - 2)), len(look.ramp) - 1)]
    told = "less than 0.1 %" if step < 0 else f"{step / BINS:.0%} to {(step + 1) / BINS:.0%}"
    return {
        "type": "scatter",
        "mode": "lines",
        "x": x,
        "y": y,
        "line": {"color": colour, "width": 1 if step < 0 else 1 + 1.6 * share, "dash": "dot" if step < 0 else "solid"},
        "text": f"{told} of the power left",
        "hoverinfo": "text",
    }


def _in(values: Any, unit: str) -> list[float]:
    return best_unit(list(values), "length", unit)[1]


def _panel_title(text: str, x: float, look: Look) -> dict[str, Any]:
    return {
        "text": f"<b>{text}</b>",
        "x": x,
        "y": 1.0,
        "xref": "paper",
        "yref": "paper",
        "yanchor": "bottom",
        "showarrow": False,
        "font": {"color": look.ink, "size": 13},
    }


def _text(text: str, look: Look) -> dict[str, Any]:
    return {
        "text": text,
        "x": 0.5,
        "y": 0.5,
        "xref": "paper",
        "yref": "paper",
        "showarrow": False,
        "font": {"color": look.faint},
    }
