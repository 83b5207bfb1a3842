"""The strongest inputs as bars: what one percent of each does to the margin that decides."""

from __future__ import annotations

from typing import Any

import numpy as np

from outcouple.report.figures.look import LIGHT, Look, axis, base_layout
from outcouple.studies.levers import Levers

__all__ = ["levers_figure"]

BARS = 14
"""Inputs that are drawn."""


def levers_figure(found: Levers, *, look: Look = LIGHT) -> dict[str, Any]:
    """Bars to the right help, bars to the left hurt; strongest on top."""
    shown = [one for one in found.levers if np.isfinite(one.effect) and abs(one.effect) > 0][:BARS][::-1]
    layout = base_layout(look, height=90 + 26 * max(len(shown), 1))
    layout.update(
        xaxis=axis(
            look, "margin per +1 % of the input (share of the limit)", tickformat="+.2%", zerolinecolor=look.ink
        ),
        yaxis=axis(look, "", showgrid=False, ticks=""),
        bargap=0.35,
    )
    data = [
        {
            "type": "bar",
            "orientation": "h",
            "x": [one.effect for one in shown],
            "y": [one.input.name for one in shown],
            "marker": {"color": [look.good if one.effect > 0 else look.bad for one in shown]},
            "text": [f"{one.effect:+.2%}" for one in shown],
            "textposition": "outside",
            "cliponaxis": False,
            "hovertemplate": "%{y}: %{x:+.3%}<extra></extra>",
        }
    ]
    return {"data": data, "layout": layout}
