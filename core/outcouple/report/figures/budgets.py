"""Pictures of shares: where the light goes, what the noise is made of, readings against the level."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

from outcouple.outcome import Outcome, StateOutcome
from outcouple.quantities import format_quantity, symbol
from outcouple.report.figures.look import LIGHT, Look, axis, base_layout, best_unit, wrapped

__all__ = ["ledger_figure", "noise_figure", "signals_figure"]

RECEIVED = "reaches the read-out"
SMALL = 0.004
"""Losses below this share of the light are gathered into one."""


def ledger_figure(outcome: Outcome, states: Sequence[str] = (), *, look: Look = LIGHT) -> dict[str, Any]:
    """Every state's light as one bar: what is received and where the rest went."""
    shown = [state for state in outcome.states if (state.name in states if states else state.role == "normal")][:8]
    labels = _labels(shown)
    palette = _loss_colours(labels, look)
    data = []
    for label in labels:
        values = [_share(state, label) for state in shown]
        data.append(
            {
                "type": "bar",
                "orientation": "h",
                "y": [wrapped(state.name, 18) for state in shown],
                "x": [100 * value for value in values],
                "name": label,
                "marker": {"color": palette[label], "line": {"color": look.paper, "width": 1}},
                "hovertemplate": f"{label}: %{{x:.3g}} %<extra></extra>",
            }
        )
    layout = base_layout(look, height=90 + 44 * len(shown) + 22 * ((len(labels) + 1) // 2))
    layout.update(
        barmode="stack",
        bargap=0.35,
        showlegend=True,
        legend={
            "orientation": "h",
            "y": -54 / (44 * len(shown)),  # below the axis title, whatever the height
            "yanchor": "top",
            "x": 0,
            "traceorder": "normal",
            "font": {"size": 12},
        },
        xaxis=axis(look, "share of the light sent out (%)", range=[0, 100.5]),
        yaxis=axis(look, autorange="reversed", showgrid=False),
    )
    return {"data": data, "layout": layout}


def _labels(states: Sequence[StateOutcome]) -> list[str]:
    """Received first, then the losses in the order of the way; small ones as "other losses"."""
    found = [RECEIVED]
    for state in states:
        for label, share in state.lost.items():
            if share >= SMALL and label not in found:
                found.append(label)
    return [*found, "other losses"]


def _share(state: StateOutcome, label: str) -> float:
    if label == RECEIVED:
        return max(state.share, 0.0)
    if label == "other losses":
        return max(sum(share for share in state.lost.values() if 0 < share < SMALL), 0.0)
    share = state.lost.get(label, 0.0)
    return share if share >= SMALL else 0.0


def _loss_colours(labels: Sequence[str], look: Look) -> dict[str, str]:
    losses = (
        look.ramp[2],
        look.states[1],
        look.states[4],
        look.ramp[1],
        look.states[3],
        look.faint,
        look.ramp[4],
        look.grid,
    )
    colours = {RECEIVED: look.good}
    for at, label in enumerate(label for label in labels if label != RECEIVED):
        colours[label] = losses[at % len(losses)]
    return colours


def noise_figure(outcome: Outcome, *, look: Look = LIGHT) -> dict[str, Any]:
    """Shares of the noise power by cause in the deciding state."""
    causes = [(cause, share) for cause, share in outcome.noise.items() if share >= 0.001]
    layout = base_layout(look, height=110 + 30 * max(len(causes), 1))
    layout.update(
        xaxis=axis(
            look,
            f"share of the noise power in '{outcome.noise_state}' (%)",
            range=[0, 112],
            tickvals=[0, 25, 50, 75, 100],
        ),
        yaxis=axis(look, autorange="reversed", showgrid=False),
        bargap=0.35,
    )
    bars = {
        "type": "bar",
        "orientation": "h",
        "y": [cause for cause, _ in causes],
        "x": [100 * share for _, share in causes],
        "marker": {"color": look.ramp[3]},
        "text": [f"{share:.1%}" for _, share in causes],
        "textposition": "outside",
        "cliponaxis": False,
        "hoverinfo": "skip",
    }
    return {"data": [bars], "layout": layout}


def signals_figure(outcome: Outcome, *, look: Look = LIGHT) -> dict[str, Any]:
    """Every state's reading with three standard deviations, and the level between them."""
    states = [state for state in outcome.states if state.score is not None or outcome.level is None]
    change = outcome.level_kind == "relative change"
    kind = "ratio" if change else "current" if outcome.level_kind == "A" else "electrons"
    values = [state.score if state.score is not None else state.signal for state in states]
    unit, shown = best_unit(values, kind)
    _, spread = best_unit(
        [3 * float(state.spread if state.spread is not None else state.noise) for state in states], kind, unit
    )
    wide = max(shown) > 30 * max(min(shown), 1e-300) and min(shown) > 0
    sigma = outcome.metrics.get("margin_sigma")
    layout = base_layout(look, height=110 + 36 * len(states))
    title = "relative change" if change else "reading"
    layout.update(
        xaxis=axis(look, f"{title} ({symbol(unit)})", type="log" if wide else "linear"),
        yaxis=axis(look, autorange="reversed", showgrid=True),
        margin={**layout["margin"], "r": 90},
    )
    data = [_dots(states, shown, spread, outcome, sigma.states if sigma else {}, look)]
    if outcome.level is not None:
        _, (level,) = best_unit([outcome.level], kind, unit)
        layout["shapes"] = [
            {
                "type": "line",
                "x0": level,
                "x1": level,
                "y0": 0,
                "y1": 1,
                "yref": "paper",
                "line": {"color": look.ink, "width": 1.5, "dash": "dash"},
            }
        ]
        layout["annotations"] = [
            {
                "x": math.log10(level) if wide and level > 0 else level,
                "y": 1,
                "yref": "paper",
                "yanchor": "bottom",
                "text": f"level {format_quantity(outcome.level, kind)}",
                "showarrow": False,
                "font": {"size": 12},
            }
        ]
    return {"data": data, "layout": layout}


def _dots(
    states: Sequence[StateOutcome],
    shown: Sequence[float],
    spread: Sequence[float],
    outcome: Outcome,
    sigma: Any,
    look: Look,
) -> dict[str, Any]:
    symbols = ["circle" if state.expect == "absent" else "diamond" for state in states]
    wrong = [sigma.get(state.name, 0.0) < 0 for state in states]
    colours = [
        look.bad if bad else look.states[0] if state.expect == "absent" else look.good
        for state, bad in zip(states, wrong, strict=True)
    ]
    texts = [f"  {sigma[state.name]:+.3g} σ" if state.name in sigma else "" for state in states]
    return {
        "type": "scatter",
        "mode": "markers+text",
        "x": list(shown),
        "y": [wrapped(f"{state.name} ({state.word})" if state.word else state.name, 26) for state in states],
        "text": texts,
        "textposition": "middle right",
        "cliponaxis": False,
        "marker": {"size": 11, "symbol": symbols, "color": colours},
        "error_x": {"type": "data", "array": list(spread), "color": look.faint, "thickness": 1.5},
        "hovertemplate": "%{y}: %{x:.5g}<extra></extra>",
    }
