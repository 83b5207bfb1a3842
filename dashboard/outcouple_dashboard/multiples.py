"""Small multiples of response curves: one panel per variant on shared axes."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

from outcouple.geometry import Curve
from outcouple.quantities import symbol
from outcouple.report.figures import surface_figure
from outcouple.report.figures.look import Look, axis, base_layout, best_unit, wrapped

__all__ = ["responses_picture"]

ACROSS = 4
"""Panels in a row."""
GAP = 0.05
TALL = 230
"""Pixels of one row."""


def responses_picture(curves: Sequence[tuple[str, Curve]], look: Look) -> dict[str, Any] | None:
    """Response curves by name; None where there are none or they run over different things."""
    if not curves or len({(curve.axes[0][:2], curve.unit) for _, curve in curves}) > 1:
        return None
    layout = base_layout(look, height=70 + TALL * math.ceil(len(curves) / ACROSS))
    layout["margin"] = {**layout["margin"], "t": 40}
    layout["annotations"] = []
    first = curves[0][1]
    unit, _ = best_unit([max(float(curve.values.max()) for _, curve in curves)], first.kind)
    single = [surface_figure(curve, look=look) for _, curve in curves]
    titles = (single[0]["layout"]["xaxis"]["title"]["text"], f"reading ({symbol(unit)})")
    data = []
    for at, (name, curve) in enumerate(curves):
        suffix = "" if at == 0 else str(at + 1)
        _panel(layout, at, len(curves), name, titles, look)
        data.append(
            {
                "type": "scatter",
                "mode": "lines",
                "x": single[at]["data"][0]["x"],
                "y": best_unit(curve.values.tolist(), curve.kind, unit)[1],
                "line": {"color": look.ramp[4], "width": 2.2},
                "hovertemplate": "%{x:.4g}: %{y:.4g}<extra></extra>",
                "xaxis": f"x{suffix}",
                "yaxis": f"y{suffix}",
            }
        )
    return {"data": data, "layout": layout}


def _panel(layout: dict[str, Any], at: int, count: int, name: str, titles: tuple[str, str], look: Look) -> None:
    """Axes of one panel, tied to those of the first, and its title."""
    columns = min(count, ACROSS)
    rows = math.ceil(count / columns)
    column, row = at % columns, at // columns
    across = [column / columns + (GAP / 2 if column else 0), (column + 1) / columns]
    across[1] -= GAP / 2 if column < columns - 1 else 0
    up = [1 - (row + 1) / rows + (0.1 if row < rows - 1 else 0), 1 - row / rows - 0.06]
    suffix = "" if at == 0 else str(at + 1)
    lowest, left = at + columns >= count, column == 0
    tied = ({}, {}) if at == 0 else ({"matches": "x"}, {"matches": "y"})
    layout[f"xaxis{suffix}"] = axis(look, titles[0] if lowest else "", domain=across, anchor=f"y{suffix}", **tied[0])
    layout[f"yaxis{suffix}"] = axis(
        look,
        titles[1] if left else "",
        domain=up,
        anchor=f"x{suffix}",
        showticklabels=left,
        rangemode="tozero",
        **tied[1],
    )
    layout["annotations"].append(
        {
            "text": f"<b>{wrapped(name, 26)}</b>",
            "x": across[0],
            "y": up[1],
            "xref": "paper",
            "yref": "paper",
            "xanchor": "left",
            "yanchor": "bottom",
            "showarrow": False,
            "align": "left",
            "font": {"size": 13, "color": look.ink},
        }
    )
