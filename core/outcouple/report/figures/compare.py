"""Variants as small multiples on shared axes: margins per variant, values per requirement, readings per state."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from outcouple.quantities import symbol
from outcouple.report.cells import metric_unit, shown_number
from outcouple.report.figures.look import LIGHT, Look, axis, base_layout, log_ticks, wrapped
from outcouple.studies.compared import Cell, Comparison, Row

__all__ = ["margins_figure", "readings_figure", "values_figure"]

BOUND = 1.5
"""Margins are drawn to one and a half limits to either side; what lies beyond stands at the edge."""
GAP = 0.035
"""Between panels, as a share of the width."""
PANEL = 62
"""Height of a panel's axis and title, in pixels."""


def margins_figure(found: Comparison, *, look: Look = LIGHT) -> dict[str, Any]:
    """A panel per variant, a bar per requirement, one axis: left of zero is missed."""
    names = [wrapped(row.label, 26) for row in found.rows][::-1]
    layout = base_layout(look, height=150 + 34 * len(names))
    layout["annotations"] = []
    layout["margin"] = {**layout["margin"], "t": 84}
    layout["bargap"] = 0.45
    data: list[dict[str, Any]] = []
    for at, one in enumerate(found.variants):
        cells = [row.cells[at] for row in found.rows][::-1]
        x_name, y_name = _axes(at)
        layout[f"xaxis{x_name}"] = axis(
            look, "margin (share of the limit)" if at == 0 else "", domain=_domain(at, len(found.variants)),
            range=[-BOUND * 1.25, BOUND * 1.25], tickvals=[-1, 0, 1], ticktext=["-100 %", "0", "+100 %"],
            zerolinecolor=look.ink, zerolinewidth=1.5, anchor=f"y{y_name}",
        )  # fmt: skip
        layout[f"yaxis{y_name}"] = axis(
            look, "", categoryorder="array", categoryarray=names, showgrid=False, ticks="", anchor=f"x{x_name}",
            showticklabels=at == 0, range=[-0.6, len(names) - 0.4],
        )  # fmt: skip
        data += _bars(cells, names, look, x_name, y_name)
        layout["annotations"].append(_heading(at, len(found.variants), one.label, one.verdict, look))
    return {"data": data, "layout": layout}


def _bars(cells: Sequence[Cell], names: Sequence[str], look: Look, x_name: str, y_name: str) -> list[dict[str, Any]]:
    values = [cell.margin if cell.margin is not None and cell.asked else None for cell in cells]
    bars: dict[str, Any] = {
        "type": "bar",
        "orientation": "h",
        "xaxis": f"x{x_name}",
        "yaxis": f"y{y_name}",
        "x": [None if value is None else float(np.clip(value, -BOUND, BOUND)) for value in values],
        "y": list(names),
        "marker": {"color": [look.good if (value or 0.0) >= 0 else look.bad for value in values]},
        "hoverinfo": "skip",
    }
    labels = [_label(cell) for cell in cells]
    texts: dict[str, Any] = {
        "type": "scatter",
        "mode": "text",
        "xaxis": f"x{x_name}",
        "yaxis": f"y{y_name}",
        "x": [0.0 if value is None else (0.05 if value < 0 else -0.05) for value in values],
        "y": list(names),
        "text": labels,
        "textposition": ["middle right" if value is None or value < 0 else "middle left" for value in values],
        "textfont": {"color": look.ink, "size": 12},
        "hoverinfo": "skip",
        "cliponaxis": False,
    }
    return [bars, texts]


def _label(cell: Cell) -> str:
    if not cell.asked:
        return "not asked"
    if cell.margin is None:
        return "open" if cell.status != "not applicable" else "not applicable"
    if not np.isfinite(cell.margin):
        return "unlimited"
    return f"{cell.margin * 100:+.3g} %" if abs(cell.margin) < 10 else f"{cell.margin:+.3g} times"


def values_figure(found: Comparison, *, look: Look = LIGHT) -> dict[str, Any]:
    """A panel per requirement, a dot per variant, the limit as a line; the worst at the corners as an open dot."""
    columns = min(3, len(found.rows))
    lines = -(-len(found.rows) // columns)
    labels = [_narrow(one.label, 24) for one in found.variants][::-1]
    each = PANEL + (46 if any("<br>" in label for label in labels) else 30) * len(labels)
    layout = base_layout(look, height=lines * each + 32)
    layout["margin"] = {**layout["margin"], "t": 16, "b": 16}
    layout["annotations"], layout["shapes"] = [], []
    data: list[dict[str, Any]] = []
    for at, row in enumerate(found.rows):
        line, column = divmod(at, columns)
        x_name, y_name = _axes(at)
        top = 1.0 - line / lines
        band = [top - (1 - PANEL / each) / lines, top]
        unit = metric_unit(row.metric)
        dots = _dots(row, labels, unit, look, x_name, y_name)
        limit = shown_number(row.cells[0].limit, row.metric.kind, unit)
        scale = _scale([limit, *(x for trace in dots for x in trace["x"])])
        title = f"{row.label} ({symbol(unit)})" if unit else row.label
        layout[f"xaxis{x_name}"] = axis(
            look, title, domain=_domain(column, columns), anchor=f"y{y_name}", nticks=5, zeroline=False,
            exponentformat="power", **scale,
        )  # fmt: skip
        layout[f"yaxis{y_name}"] = axis(
            look, "", domain=band, anchor=f"x{x_name}", categoryorder="array", categoryarray=labels,
            showticklabels=column == 0, range=[-0.6, len(labels) - 0.4], ticks="",
        )  # fmt: skip
        data += dots
        layout["shapes"] += _limits(found, row, unit, x_name, y_name, look)
    return {"data": data, "layout": layout}


def _dots(row: Row, labels: Sequence[str], unit: str, look: Look, x_name: str, y_name: str) -> list[dict[str, Any]]:
    def shown(value: float | None) -> float | None:
        if value is None or not np.isfinite(value):
            return None
        return shown_number(value, row.metric.kind, unit)

    cells = list(row.cells)[::-1]
    nominal = [shown(cell.value) for cell in cells]
    corner = [shown(cell.corner.value) if cell.corner is not None else None for cell in cells]
    colours = [
        look.faint if not cell.asked or cell.margin is None else look.good if cell.margin >= 0 else look.bad
        for cell in cells
    ]
    common = {"type": "scatter", "mode": "markers", "xaxis": f"x{x_name}", "yaxis": f"y{y_name}", "y": list(labels)}
    traces = [
        {**common, "x": nominal, "marker": {"size": 12, "color": colours}, "hovertemplate": "%{x:.4g}<extra></extra>"}
    ]
    if any(value is not None for value in corner):
        traces.append(
            {
                **common,
                "x": corner,
                "marker": {"size": 12, "symbol": "circle-open", "color": colours, "line": {"width": 2.5}},
                "hovertemplate": "worst at the corners: %{x:.4g}<extra></extra>",
            }
        )
    return traces


def _limits(found: Comparison, row: Row, unit: str, x_name: str, y_name: str, look: Look) -> list[dict[str, Any]]:
    """A short line per variant at its own limit."""
    count = len(found.variants)
    return [
        {
            "type": "line",
            "xref": f"x{x_name}",
            "yref": f"y{y_name}",
            "x0": shown_number(cell.limit, row.metric.kind, unit),
            "x1": shown_number(cell.limit, row.metric.kind, unit),
            "y0": count - 1 - at - 0.5,
            "y1": count - 1 - at + 0.5,
            "line": {"color": look.ink, "width": 1.5, "dash": "dash"},
        }
        for at, cell in enumerate(row.cells)
        if cell.asked
    ]


def readings_figure(found: Comparison, *, look: Look = LIGHT) -> dict[str, Any]:
    """The reading in every state, all variants on one axis: how far apart the states are."""
    states = list(dict.fromkeys(state for one in found.variants for state in one.signals))[::-1]
    layout = base_layout(look, height=110 + 30 * len(states))
    tops = [max(one.signals.values(), default=1.0) or 1.0 for one in found.variants]
    shares = [value / top for one, top in zip(found.variants, tops, strict=True) for value in one.signals.values()]
    layout.update(
        xaxis=axis(look, "reading, share of the largest", **_scale(shares)),
        yaxis=axis(look, "", categoryorder="array", categoryarray=states, ticks=""),
        showlegend=True,
        legend={"orientation": "h", "y": 1.02, "yanchor": "bottom", "x": 0},
    )
    symbols = ("circle", "diamond", "square", "triangle-up", "x", "cross", "star")
    data = []
    for at, one in enumerate(found.variants):
        data.append(
            {
                "type": "scatter",
                "mode": "markers",
                "name": one.label,
                "x": [value / tops[at] for value in one.signals.values()],
                "y": list(one.signals),
                "marker": {"size": 13, "symbol": symbols[at % 7], "color": look.states[at % 7]},
                "hovertemplate": "%{y}: %{x:.4g}<extra></extra>",
            }
        )
    return {"data": data, "layout": layout}


def _narrow(label: str, width: int) -> str:
    """A label in lines that break at underscores and hyphens too."""
    return wrapped(label.replace("_", "_\u200b ").replace("-", "-\u200b "), width).replace("\u200b ", "")


def _scale(values: Sequence[float | None]) -> dict[str, Any]:
    """Type and ticks of an axis: logarithmic where positive values span more than a decade and a half."""
    good = [value for value in values if value is not None and np.isfinite(value)]
    if good and min(good) > 0 and max(good) > 30 * min(good):
        return {"type": "log", **log_ticks(good)}
    return {"type": "-"}


def _axes(at: int) -> tuple[str, str]:
    name = "" if at == 0 else str(at + 1)
    return name, name


def _domain(at: int, count: int) -> list[float]:
    width = (1.0 - GAP * (count - 1)) / count
    return [at * (width + GAP), at * (width + GAP) + width]


def _heading(at: int, count: int, label: str, verdict: str, look: Look) -> dict[str, Any]:
    colour = {"pass": look.good, "fail": look.bad}.get(verdict, look.faint)
    return {
        "xref": "paper",
        "yref": "paper",
        "x": sum(_domain(at, count)) / 2,
        "y": 1.0,
        "yanchor": "bottom",
        "text": f"<b>{verdict.upper()}</b><br>{_narrow(label, max(12, 72 // count))}",
        "showarrow": False,
        "font": {"size": 13, "color": colour},
    }
