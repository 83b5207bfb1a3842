"""Pieces of pages, each drawn from an outcome; pure functions that compute nothing."""

from __future__ import annotations

import json
import re
from collections.abc import Mapping, Sequence
from typing import Any

from dash import dcc, html

from outcouple.notes import Note
from outcouple.outcome import Judged, Outcome
from outcouple.quantities import format_quantity
from outcouple.report.figures import CONFIG
from outcouple_dashboard.tags import aria

__all__ = [
    "JUDGED",
    "SEVERITY",
    "SHAPES",
    "WORDS",
    "card",
    "cautions",
    "cell",
    "failures",
    "graph",
    "mark",
    "metrics_table",
    "mistakes",
    "plain",
    "requirements",
    "states_table",
    "table",
    "verdict",
]

GRAPH: Any = {**CONFIG, "displayModeBar": False}
"""Options of every picture: zoom by dragging, a double click goes back; no buttons over the drawing."""
WORDS = {"pass": "Pass", "fail": "Fail", "open": "Open", "none stated": "No verdict"}
SHAPES = {"pass": "●", "fail": "▲", "open": "◇", "none stated": "○"}
JUDGED = {"pass": "met", "fail": "missed", "open": "open"}
DIRECTIONS = {
    "dangerous": ("▲", "dangerous"),
    "spurious": ("◆", "spurious"),
    "none": ("○", "no effect"),
    "open": ("◇", "open"),
}
SEVERITY = {"danger": ("▲", "Danger"), "caution": ("◆", "Caution"), "info": ("○", "Note")}


def card(title: str, body: Any, *, name: str, wide: bool = False, note: str = "") -> Any:
    """A titled part of a page."""
    inner = [html.H2(title, id=f"{name}-title"), html.Div(body, id=name)]
    if note:
        inner.insert(1, html.P(note, className="faint"))
    return html.Section(inner, className="card wide" if wide else "card", **aria(labelledby=f"{name}-title"))


def graph(name: str, figure: Mapping[str, Any] | None = None, *, label: str = "", height: int = 0) -> Any:
    """A picture in its own height; nothing of it is ever sent anywhere."""
    shown = figure or {"data": [], "layout": {"xaxis": {"visible": False}, "yaxis": {"visible": False}}}
    tall = height or shown["layout"].get("height", 320)
    return html.Div(
        dcc.Graph(id=name, figure=shown, config=GRAPH, responsive=True, style={"height": f"{tall}px"}),
        role="img",
        **aria(label=label or name),
    )


def table(head: Sequence[str], rows: Sequence[Sequence[Any]], *, numbers: Sequence[int] = (), caption: str = "") -> Any:
    """A plain table that scrolls by itself where it is too wide; drawn in the browser, one component however long.

    A cell is a text, or what :func:`cell` gives.
    """
    given = {"head": list(head), "rows": [list(row) for row in rows], "numbers": list(numbers), "caption": caption}
    attributes: dict[str, Any] = {**aria(label=caption or "table"), "data-table": json.dumps(given, ensure_ascii=False)}
    return html.Div(className="scroll", tabIndex=0, role="region", **attributes)


def cell(text: str = "", *, mark: tuple[str, str, str] | None = None, title: str = "") -> dict[str, Any]:
    """A table's cell: a mark (shape, word, tone), a text behind it, more on pointing."""
    return {"text": text, "mark": mark, "title": title}


def mark(shape: str, word: str, tone: str) -> Any:
    """A word with its shape; colour only repeats them."""
    return html.Span([html.Span(shape, className="shape", **aria(hidden="true")), word], className=f"mark {tone}")


def plain(text: str) -> str:
    """A text of the report without what only a command line can be asked for."""
    text = re.sub(r" \(--[a-z-]+[^)]*\)", "", text)
    return text.replace("needs a map, which was not asked for", "needs a map")


def verdict(outcome: Outcome) -> list[Any]:
    """The word, the consequence, the state that decides and what limits it."""
    sentence = plain(outcome.headline.partition(": ")[2] or outcome.headline)
    dangers = sum(note.severity == "danger" for note in outcome.notes)
    others = sum(note.severity == "caution" for note in outcome.notes)
    counted = [f"{dangers} danger{'s' * (dangers != 1)}"] if dangers else []
    counted += [f"{others} caution{'s' * (others != 1)}"] if others else []
    told: list[Any] = []
    if outcome.defaults:
        count = len(outcome.defaults)
        names = ", ".join(outcome.defaults)
        told.append(
            html.Span(
                f"{count} decisive input{'s are' if count != 1 else ' is an'} unverified default{'s' * (count != 1)}",
                title=names,
                className="told",
            )
        )
    if counted:
        told.append(html.A(" and ".join(counted), href="#cautions-title", className="told"))
    return [
        html.Div(
            [
                html.P(
                    [
                        html.Span(SHAPES[outcome.verdict], className="shape", **aria(hidden="true")),
                        WORDS[outcome.verdict],
                    ],
                    className="word",
                    id="verdict-word",
                ),
                html.P(sentence[:1].upper() + sentence[1:], className="consequence", id="consequence"),
            ],
            className=f"verdict {outcome.verdict.replace(' ', '-')}",
        ),
        html.Dl(
            [
                html.Div([html.Dt("Deciding state"), html.Dd(outcome.worst_state or "none", id="worst-state")]),
                html.Div([html.Dt("What limits it"), html.Dd(_limits(outcome), id="limiting")]),
            ],
            className="facts",
        ),
        html.P(told, className="standing") if told else None,
    ]


def _limits(outcome: Outcome) -> str:
    found = outcome.limiting.removeprefix("limited by ")
    return found[:1].upper() + found[1:] if found else "nothing in particular"


def _shown(value: float | None, kind: str, unit: str) -> str:
    return "–" if value is None else format_quantity(value, kind, unit=unit or None, digits=4)


def requirements(outcome: Outcome) -> Any:
    """Every requirement with its limit, value and margin."""
    if not outcome.requirements:
        return html.P("This design states no requirements, so it can neither pass nor fail. Add one on the left.")
    rows = [
        (
            cell(mark=(SHAPES[one.verdict], JUDGED[one.verdict], one.verdict)),
            one.label + (f" [{one.state}]" if one.state else ""),
            f"{one.sense} {_shown(one.limit, one.kind, one.unit)}",
            _shown(one.value, one.kind, one.unit) if one.value is not None else "open",
            _margin(one),
            one.at if one.value is not None else plain(one.why),
        )
        for one in outcome.requirements
    ]
    return table(("", "requirement", "limit", "value", "margin", "where"), rows, numbers=(3, 4), caption="Requirements")


def _margin(one: Judged) -> str:
    if one.shortfall is None:
        return "–"
    return f"{-one.shortfall:+.0%}" if one.limit else _shown(one.margin, one.kind, one.unit)


def states_table(outcome: Outcome) -> Any:
    """Readings in figures."""
    sigma = outcome.metrics.get("margin_sigma")
    span = outcome.metrics.get("margin_span")
    rows = []
    for state in outcome.states:
        kind = "current" if state.unit == "A" else "electrons"
        rows.append(
            (
                state.name,
                state.word + (" (fault)" if state.role == "fault" else ""),
                format_quantity(state.signal, kind),
                format_quantity(state.noise, kind),
                f"{state.share:.3%}" if state.share >= 1e-5 else f"{state.share:.2e}",
                f"{sigma.states[state.name]:+.3g} σ" if sigma and state.name in sigma.states else "",
                f"{span.states[state.name]:+.1%}" if span and state.name in span.states else "",
            )
        )
    return table(
        ("state", "should read", "reading", "noise", "of the emitter", "margin", "of the span"),
        rows,
        numbers=(2, 3, 4, 5, 6),
        caption="Readings by state",
    )


def failures(outcome: Outcome) -> Any:
    """Which failures are dangerous and which merely annoy; told by word and shape as well as colour."""
    if not outcome.failures:
        return html.P(
            "No failure directions are known for this sensor."
            if outcome.demand
            else "State what the sensor must not miss (decision, demand), and every failure gets its direction.",
            className="faint",
        )
    order = {"dangerous": 0, "open": 1, "spurious": 2, "none": 3}
    rows = []
    for row in sorted(outcome.failures, key=lambda one: order[one.direction]):
        shape, word = DIRECTIONS[row.direction]
        rows.append(
            (
                cell(mark=(shape, word + (", slowly" if row.slow else ""), row.direction)),
                row.cause,
                row.effect,
                row.reads,
                ", ".join(row.covered_by) or "nothing",
            )
        )
    demand = (
        f"Demand: {outcome.demand}."
        if outcome.demand
        else "No demand is stated, so no direction is dangerous yet: open."
    )
    return [
        html.P(demand, className="faint"),
        table(("direction", "cause", "effect", "reads", "revealed by"), rows, caption="Failure directions"),
    ]


def cautions(notes: Sequence[Note]) -> Any:
    """Every caution in full."""
    if not notes:
        return html.P("None.", className="faint")
    order = {"danger": 0, "caution": 1, "info": 2}
    return html.Ul(
        [_caution(note) for note in sorted(notes, key=lambda one: order.get(one.severity, 1))], className="cautions"
    )


def _caution(note: Note) -> Any:
    shape, word = SEVERITY.get(note.severity, SEVERITY["caution"])
    parts: list[Any] = [mark(shape, word, note.severity), html.Span(note.text)]
    if note.trigger:
        parts.append(html.Span(f" Set off by: {note.trigger}.", className="faint"))
    if note.decides:
        parts.append(html.Span(f" Decides: {note.decides}.", className="faint"))
    return html.Li(parts)


def metrics_table(outcome: Outcome) -> Any:
    """Every metric with its meaning, those that have a value first."""
    order = {"value": 0, "open": 1, "not applicable": 2}
    rows = [
        (
            metric.label,
            _shown(metric.value, metric.kind, metric.unit) if metric.value is not None else metric.status,
            metric.at if metric.value is not None else plain(metric.why),
            metric.meaning,
        )
        for metric in sorted(outcome.metrics.values(), key=lambda one: order[one.status])
    ]
    return table(("metric", "value", "where", "meaning"), rows, numbers=(1,), caption="Metrics")


def mistakes(lines: Sequence[str]) -> list[Any]:
    """What is wrong with a design that cannot be evaluated."""
    return [
        html.Div(
            [
                html.P([html.Span("✕", className="shape", **aria(hidden="true")), "Not readable"], className="word"),
                html.P(
                    "This design has mistakes and cannot be evaluated. Mend them in its text.", className="consequence"
                ),
            ],
            className="verdict fail",
            role="alert",
        ),
        html.Ul([html.Li(line) for line in lines], className="mistakes"),
    ]
