"""Small multiples: one panel per variant on shared axes. Plain plotly dicts from finished outcomes."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

from outcouple.outcome import Judged
from outcouple.quantities import symbol
from outcouple.report.figures.look import Look, axis, base_layout, best_unit, wrapped
from outcouple_dashboard.variants import Variant

__all__ = ["margins_picture", "responses_picture", "shares_picture"]

ACROSS = 4
"""Panels in a row."""
GAP = 0.05
WIDEST = 1.5
"""Margins beyond this part of their limit are drawn at it."""


def _grid(count: int) -> list[tuple[list[float], list[float], bool, bool]]:
    """(x domain, y domain, leftmost, lowest) of every panel."""
    columns = min(count, ACROSS)
    rows = math.ceil(count / columns)
    found = []
    for at in range(count):
        column, row = at % columns, at // columns
        x = [
            column / columns + (GAP / 2 if column else 0),
            (column + 1) / columns - (GAP / 2 if column < columns - 1 else 0),
        ]
        tall = 1 / rows
        y = [1 - (row + 1) * tall + (0.1 if row < rows - 1 else 0), 1 - row * tall - 0.06]
        found.append((x, y, column == 0, at + columns >= count))
    return found


def _frame(variants: Sequence[Variant], look: Look, each: int) -> tuple[dict[str, Any], list[Any]]:
    """(layout with a title per panel, places)."""
    places = _grid(len(variants))
    rows = math.ceil(len(variants) / ACROSS)
    layout = base_layout(look, height=70 + each * rows)
    layout["annotations"] = [
        {
            "text": f"<b>{wrapped(one.name, 26)}</b>",
            "x": x[0],
            "y": y[1],
            "xref": "paper",
            "yref": "paper",
            "xanchor": "left",
            "yanchor": "bottom",
            "showarrow": False,
            "align": "left",
            "font": {"size": 13, "color": look.ink},
        }
        for one, (x, y, _, _) in zip(variants, places, strict=True)
    ]
    layout["margin"] = {**layout["margin"], "t": 40}
    return layout, places


def _axes(
    layout: dict[str, Any], at: int, place: Any, look: Look, x: dict[str, Any], y: dict[str, Any]
) -> dict[str, str]:
    """Axes of one panel, tied to those of the first; gives the trace's part."""
    x_domain, y_domain, left, low = place
    suffix = "" if at == 0 else str(at + 1)
    tied = {} if at == 0 else {"matches": "x"}
    level = {} if at == 0 else {"matches": "y"}
    title = x.pop("title", "")
    y_title = y.pop("title", "")
    layout[f"xaxis{suffix}"] = axis(look, title if low else "", domain=x_domain, anchor=f"y{suffix}", **tied, **x)
    layout[f"yaxis{suffix}"] = axis(
        look, y_title if left else "", domain=y_domain, anchor=f"x{suffix}", showticklabels=left, **level, **y
    )
    return {"xaxis": f"x{suffix}", "yaxis": f"y{suffix}"}


def margins_picture(variants: Sequence[Variant], look: Look) -> dict[str, Any]:
    """Margin of every requirement in units of its limit, a panel per variant."""
    most = max((len(one.outcome.requirements) for one in variants), default=0)
    layout, places = _frame(variants, look, 90 + 34 * max(most, 1))
    data = []
    for at, one in enumerate(variants):
        rows = one.outcome.requirements
        shown = [max(-WIDEST, min(WIDEST, -row.shortfall)) if row.shortfall is not None else 0.0 for row in rows]
        tones = {"fail": look.bad, "pass": look.good, "open": look.faint}
        axes = _axes(
            layout,
            at,
            places[at],
            look,
            {
                "title": "margin, of the limit",
                "range": [-1.9 * WIDEST, 1.9 * WIDEST],
                "tickvals": [-1, 0, 1],
                "tickformat": "+.0%",
            },
            {"autorange": "reversed", "showgrid": False},
        )
        data.append(
            {
                "type": "bar",
                "orientation": "h",
                "y": [wrapped(row.label + (f" [{row.state}]" if row.state else ""), 22) for row in rows],
                "x": shown,
                "text": [_margin(row) for row in rows],
                "textposition": "outside",
                "cliponaxis": False,
                "marker": {"color": [tones[row.verdict] for row in rows]},
                "hovertemplate": "%{y}: %{text}<extra></extra>",
                **axes,
            }
        )
    return {"data": data, "layout": layout}


def _margin(one: Judged) -> str:
    if one.shortfall is None:
        return "open"
    if abs(one.shortfall) >= 10:
        return "> +1000%" if one.shortfall < 0 else "< -1000%"
    return f"{-one.shortfall:+.0%}"


def shares_picture(variants: Sequence[Variant], look: Look) -> dict[str, Any]:
    """Share of the emitter's light at the read-out, every state (circle absent, diamond present), per variant."""
    most = max(len(one.outcome.states) for one in variants)
    layout, places = _frame(variants, look, 90 + 26 * most)
    shares = [math.log10(state.share) for one in variants for state in one.outcome.states if state.share > 0] or [0.0]
    decades = [math.floor(min(shares)), max(math.ceil(max(shares)), math.floor(min(shares)) + 1)]
    data = []
    for at, one in enumerate(variants):
        states = [state for state in one.outcome.states if state.share > 0]
        axes = _axes(
            layout,
            at,
            places[at],
            look,
            {
                "title": "share of the emitter's light",
                "type": "log",
                "range": [decades[0] - 0.1, decades[1] + 0.1],
                "dtick": max(1, (decades[1] - decades[0]) // 4),
                "exponentformat": "power",
            },
            {"autorange": "reversed"},
        )
        data.append(
            {
                "type": "scatter",
                "mode": "markers",
                "y": [wrapped(state.name, 22) for state in states],
                "x": [state.share for state in states],
                "marker": {
                    "size": 11,
                    "symbol": ["circle" if state.expect == "absent" else "diamond" for state in states],
                    "color": [look.states[0] if state.expect == "absent" else look.good for state in states],
                },
                "hovertemplate": "%{y}: %{x:.3g}<extra></extra>",
                **axes,
            }
        )
    return {"data": data, "layout": layout}


def responses_picture(variants: Sequence[Variant], look: Look) -> dict[str, Any] | None:
    """Response curves on shared axes; None where they run over different things or are not there yet."""
    curves = [one.outcome.curve for one in variants]
    if any(curve is None for curve in curves):
        return None
    found = [curve for curve in curves if curve is not None]
    if len({(curve.axes[0][:2], curve.unit) for curve in found}) > 1:
        return None
    layout, places = _frame(variants, look, 230)
    top = max(float(curve.values.max()) for curve in found)
    unit, _ = best_unit([top], found[0].kind)
    label, x_unit, _ = found[0].axes[0]
    data = []
    for at, curve in enumerate(found):
        title = f"{label} ({symbol(x_unit)})" if x_unit else label
        axes = _axes(
            layout,
            at,
            places[at],
            look,
            {"title": title},
            {"title": f"reading ({symbol(unit)})", "rangemode": "tozero"},
        )
        data.append(
            {
                "type": "scatter",
                "mode": "lines",
                "x": curve.axes[0][2].tolist(),
                "y": best_unit(curve.values.tolist(), curve.kind, unit)[1],
                "line": {"color": look.ramp[4], "width": 2.2},
                "hovertemplate": "%{x:.4g}: %{y:.4g}<extra></extra>",
                **axes,
            }
        )
    return {"data": data, "layout": layout}
