"""The strongest inputs as bars: what one percent of each does to the margin that decides."""

from __future__ import annotations

from typing import Any

import numpy as np

from outcouple.report.figures.look import LIGHT, Look, axis, base_layout
from outcouple.studies.levers import Levers

__all__ = ["levers_figure"]

SEEN = 5e-5
"""Smallest effect that is drawn."""
TITLE = "margin per +1 % of the input (share of the limit)"
BARS = 14
"""Inputs that are drawn."""


def levers_figure(found: Levers, *, look: Look = LIGHT) -> dict[str, Any]:
    """Bars to the right help, bars to the left hurt; strongest on top."""
    shown = [one for one in found.levers if np.isfinite(one.effect) and abs(one.effect) > SEEN][:BARS][::-1]
    layout = base_layout(look, height=90 + 26 * max(len(shown), 1))
    reach = max((abs(one.effect) for one in shown), default=1.0)
    ends = [min([0.0, *(one.effect for one in shown)]), max([0.0, *(one.effect for one in shown)])]
    span = [ends[0] - 0.14 * reach, ends[1] + 0.14 * reach]
    layout.update(
        xaxis=axis(look, TITLE, tickformat="+.3~%", zerolinecolor=look.ink, range=span),
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
