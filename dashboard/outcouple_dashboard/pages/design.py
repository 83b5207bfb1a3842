"""The Design page: verdict, drawing and everything behind it, following every change of the document."""

from __future__ import annotations

from typing import Any

import dash_mantine_components as dmc
from dash import Dash, Input, Output, State, ctx, dcc, html, no_update

from outcouple.errors import UserMistake
from outcouple.outcome import Outcome
from outcouple.report import figures
from outcouple_dashboard import parts
from outcouple_dashboard.changes import plain_mistake
from outcouple_dashboard.desk import Desk
from outcouple_dashboard.tags import aria, local

__all__ = ["layout", "register"]

SECTION_HEIGHT = 330
FOLLOW_EVERY = 400
"""Milliseconds between looks at background work."""


def layout() -> Any:
    """All parts, empty."""
    return html.Div(
        [
            html.Section(
                [
                    html.H2("Verdict", className="hidden-text"),
                    html.Div(id="verdict", **aria(live="polite")),
                    html.Div(
                        [
                            html.Div(id="advice", className="advice"),
                            html.Div(
                                [
                                    html.Span(id="follow-step"),
                                    html.Button("Stop", id="follow-stop", className="quiet", type="button"),
                                ],
                                id="follow-bar",
                                className="busy",
                                role="status",
                                hidden=True,
                            ),
                        ],
                        className="next",
                    ),
                ],
                className="card wide top",
            ),
            html.Section(
                [
                    html.Div(
                        [
                            html.H2("Cross-section", id="section-title"),
                            dmc.MultiSelect(
                                id="shown-states",
                                data=[],
                                value=[],
                                maxValues=2,
                                size="xs",
                                searchable=True,
                                clearable=True,
                                placeholder="states to draw, two at most",
                                className="inline-pick",
                                **aria(label="States whose rays are drawn"),
                            ),
                        ],
                        className="card-head",
                    ),
                    parts.graph(
                        "section",
                        height=SECTION_HEIGHT,
                        label="Cross-section to scale with rays coloured by the power they still carry",
                    ),
                    html.P(
                        "To scale. Dark, thick rays carry all of their power; thin, dotted ones less than 0.1 % of it.",
                        className="faint",
                    ),
                ],
                className="card wide",
                **aria(labelledby="section-title"),
            ),
            html.Div(id="cautions-place", className="wide"),
            parts.card("Requirements", None, name="requirements", wide=True),
            parts.card("Readings and the level", None, name="readings"),
            parts.card("Where the light goes", None, name="ledger"),
            parts.card("What the noise is made of", None, name="noise"),
            parts.card("Response", html.P("Being computed…", className="faint"), name="response"),
            html.Div(id="maps", className="wide"),
            parts.card("If something fails", None, name="failures", wide=True),
            parts.card("All readings", None, name="states-table", wide=True),
            parts.card("All metrics", None, name="metrics-table", wide=True),
            html.Div(id="views", className="wide"),
            dcc.Store(id="follow-job"),
            dcc.Store(id="followed"),
            dcc.Interval(id="follow-clock", interval=FOLLOW_EVERY, disabled=True),
        ],
        className="cards",
        id="design-cards",
    )


def look_of(theme: str | None) -> figures.Look:
    """Colours of pictures for a theme."""
    return figures.DARK if theme == "dark" else figures.LIGHT


def first_view(outcome: Outcome) -> str:
    """Name of the drawing on the first screen: the cross-section where there is one."""
    names = [view.name for view in outcome.views]
    return next((name for name in names if "section" in name), names[0] if names else "")


def section_picture(outcome: Outcome, states: list[str], theme: str | None) -> dict[str, Any]:
    """The drawing on the first screen."""
    return figures.section_figure(outcome, states, view=first_view(outcome), look=look_of(theme), height=SECTION_HEIGHT)


def first_screen(desk: Desk, text: str, states: list[str], theme: str | None) -> tuple[Any, Any, Any]:
    """(verdict, drawing, states to choose from)."""
    try:
        outcome = desk.quick(text)
    except UserMistake as mistake:
        return parts.mistakes(plain_mistake(mistake)), _nothing(theme), []
    names = [state.name for state in outcome.states]
    return parts.verdict(outcome), section_picture(outcome, states, theme), names


def _nothing(theme: str | None) -> dict[str, Any]:
    look = look_of(theme)
    layout = {"paper_bgcolor": look.paper, "plot_bgcolor": look.paper, "height": 80}
    hidden = {"visible": False}
    return {"data": [], "layout": {**layout, "xaxis": hidden, "yaxis": hidden}}


def advice(outcome: Outcome, busy: bool) -> Any:
    """One change that would help, with a button that makes it."""
    if outcome.advice:
        one = outcome.advice[0]
        return [
            html.Span("One change that would help: ", className="lead"),
            html.Span(one.text, id="advice-text"),
            html.Button("Try it", id="advice-take", className="quiet", type="button", value=f"{one.path}={one.after}"),
        ]
    told = "Looking for a change that would help…" if busy else "No single small change would move the worst margin."
    return html.Span(told, className="faint", id="advice-text")


def other_drawings(outcome: Outcome, states: list[str], theme: str | None) -> list[Any]:
    """Drawings beyond the first, and the views that plugins add."""
    return [
        parts.card(
            view.name.capitalize(),
            parts.graph(
                f"view-{at}",
                figures.section_figure(outcome, states, view=view.name, look=look_of(theme)),
                label=view.name,
            ),
            name=f"view-card-{at}",
            wide=True,
        )
        for at, view in enumerate(outcome.views)
        if view.name != first_view(outcome)
    ]


def plugin_views(outcome: Outcome, desk: Desk) -> list[Any]:
    """What plugins draw; one that fails says so in its place."""
    found = []
    for at, view in enumerate(desk.host.views):
        title = str(getattr(view, "title", getattr(view, "name", "view")))
        try:
            body = parts.graph(f"plugin-view-{at}", view.figure(outcome), label=title)
        except Exception as error:  # a stranger's view may raise anything
            body = html.P(f"This view of a plugin failed: {type(error).__name__}: {error}", className="faint")
        found.append(parts.card(title, body, name=f"plugin-view-card-{at}", wide=True))
    return found


def untitled(figure: dict[str, Any]) -> dict[str, Any]:
    """A picture without its own title, for a card that has one."""
    return {**figure, "layout": {**figure["layout"], "title": {"text": ""}}}


def maps(outcome: Outcome, theme: str | None) -> list[Any]:
    """Maps over the surface, once they are there."""
    return [
        parts.card(
            surface.label.capitalize(),
            parts.graph(
                f"map-{at}", untitled(figures.surface_figure(surface, look=look_of(theme))), label=surface.label
            ),
            name=f"map-card-{at}",
            wide=True,
        )
        for at, surface in enumerate(outcome.surfaces)
    ]


def register(app: Dash, desk: Desk) -> None:
    """Hang all parts on the document."""

    def on_first(doc: Any, states: list[str] | None, theme: str | None, _followed: Any) -> Any:
        if not doc:
            return no_update, no_update, no_update, no_update
        body, figure, names = first_screen(desk, doc["text"], states or [], theme)
        kept = [name for name in states or [] if name in names]
        return body, figure, names, no_update if kept == (states or []) else kept

    app.callback(
        Output("verdict", "children"),
        Output("section", "figure"),
        Output("shown-states", "data"),
        Output("shown-states", "value"),
        Input("doc", "data"),
        Input("shown-states", "value"),
        Input("theme", "data"),
        Input("followed", "data"),
        prevent_initial_call=True,
    )(on_first)

    def on_rest(
        doc: Any, theme: str | None, _followed: Any, states: list[str] | None, job: str | None, tab: str
    ) -> Any:
        if not doc:
            return (no_update,) * 12
        try:
            outcome = desk.quick(doc["text"])
        except UserMistake:
            return (None,) * 12
        look = look_of(theme)
        running = desk.jobs.find(job, tab)
        busy = running is not None and not running.over
        noise = parts.graph("noise-graph", figures.noise_figure(outcome, look=look), label="Shares of the noise power")
        response: Any = html.P("Being computed…" if busy else "This sensor has no response curve.", className="faint")
        if outcome.curve is not None:
            response = parts.graph(
                "response-graph", figures.response_figure(outcome, look=look), label=outcome.curve.label
            )
        return (
            advice(outcome, busy),
            parts.card("Cautions", parts.cautions(outcome.notes), name="cautions", wide=True),
            parts.requirements(outcome),
            parts.graph(
                "readings-graph",
                figures.signals_figure(outcome, look=look),
                label="Readings with their spread, and the level",
            ),
            parts.graph(
                "ledger-graph", figures.ledger_figure(outcome, look=look), label="Where the light goes, per state"
            ),
            noise if outcome.noise else html.P("No noise.", className="faint"),
            response,
            maps(outcome, theme),
            parts.failures(outcome),
            parts.states_table(outcome),
            parts.metrics_table(outcome),
            [*other_drawings(outcome, states or [], theme), *plugin_views(outcome, desk)],
        )

    app.callback(
        Output("advice", "children"),
        Output("cautions-place", "children"),
        Output("requirements", "children"),
        Output("readings", "children"),
        Output("ledger", "children"),
        Output("noise", "children"),
        Output("response", "children"),
        Output("maps", "children"),
        Output("failures", "children"),
        Output("states-table", "children"),
        Output("metrics-table", "children"),
        Output("views", "children"),
        Input("doc", "data"),
        Input("theme", "data"),
        Input("followed", "data"),
        State("shown-states", "value"),
        State("follow-job", "data"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_rest)
    _register_follow(app, desk)


def _register_follow(app: Dash, desk: Desk) -> None:
    """Background work that comes after each change, newest only."""

    def on_change(doc: Any, tab: str) -> Any:
        try:
            if not doc or not desk.design(doc["text"]):
                return no_update, True
        except UserMistake:
            return None, True
        if desk.complete.peek(doc["text"]):
            return None, True
        return desk.jobs.start(tab, "follow", text=doc["text"]).number, False

    app.callback(
        Output("follow-job", "data"),
        Output("follow-clock", "disabled"),
        Input("doc", "data"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_change)

    def on_tick(_ticks: int, _stop: Any, number: str | None, followed: Any, tab: str) -> Any:
        if ctx.triggered_id == "follow-stop":
            desk.jobs.cancel(number, tab)
        job = desk.jobs.find(number, tab)
        if job is None:
            return no_update, True, "", True
        if job.parts:
            desk.whole.put(job.arguments["text"], job.parts[-1])
        if job.state == "done":
            desk.complete.put(job.arguments["text"], True)
        over = job.over or job.cancelled.is_set()
        state = "cancelled" if job.cancelled.is_set() else job.state
        told = {"failed": " ".join(job.why), "cancelled": "Stopped; what is open stays open."}.get(state, "")
        if not over:
            told = f"Computing: {job.step or 'waiting for a free worker'}…"
        seen = [number, len(job.parts), over]
        return no_update if seen == followed else seen, over, told, not told

    app.callback(
        Output("followed", "data"),
        Output("follow-clock", "disabled", allow_duplicate=True),
        Output("follow-step", "children"),
        Output("follow-bar", "hidden"),
        Input("follow-clock", "n_intervals"),
        Input("follow-stop", "n_clicks"),
        State("follow-job", "data"),
        State("followed", "data"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_tick)

    local(
        app,
        "hideStop",
        Output("follow-stop", "hidden"),
        Input("follow-clock", "disabled"),
    )
