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
from outcouple_dashboard.documents import link_of
from outcouple_dashboard.tags import aria, local

__all__ = ["layout", "register"]

PICTURES = {
    "readings": "Readings and the level",
    "ledger": "Where the light goes",
    "noise": "What the noise is made of",
    "response": "Response",
}
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
            parts.card("Cautions", None, name="cautions", wide=True),
            parts.card("Requirements", None, name="requirements", wide=True),
            *(
                parts.card(title, parts.graph(f"{name}-graph", label=title), name=name)
                for name, title in PICTURES.items()
            ),
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


def _picture_card(name: str, title: str) -> Any:
    return parts.card(title, parts.graph(f"{name}-graph", label=title), name=name)


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


def first_screen(desk: Desk, doc: Any, states: list[str], theme: str | None) -> tuple[Any, Any, list[str], str]:
    """(verdict, drawing, states to choose from, title)."""
    try:
        outcome = desk.quick(doc["text"])
    except UserMistake as mistake:
        return parts.mistakes(plain_mistake(mistake)), _nothing(theme), [], doc["file"] or "A design with mistakes"
    names = [state.name for state in outcome.states]
    return parts.verdict(outcome), section_picture(outcome, states, theme), names, outcome.title


def _nothing(theme: str | None, told: str = "") -> dict[str, Any]:
    """An empty picture with a few words in it."""
    look = look_of(theme)
    hidden = {"visible": False}
    words = {"text": told, "x": 0.5, "y": 0.5, "xref": "paper", "yref": "paper", "showarrow": False}
    words["font"] = {"color": look.faint, "size": 13}
    layout = {"paper_bgcolor": look.paper, "plot_bgcolor": look.paper, "height": 80, "annotations": [words]}
    return {"data": [], "layout": {**layout, "xaxis": hidden, "yaxis": hidden}}


def pictures(outcome: Outcome, theme: str | None, busy: bool) -> list[dict[str, Any]]:
    """The pictures of ``PICTURES``, in their order."""
    look = look_of(theme)
    noise = figures.noise_figure(outcome, look=look) if outcome.noise else _nothing(theme, "no noise")
    told = "being computed…" if busy else "this sensor has no response curve"
    response = _nothing(theme, told) if outcome.curve is None else figures.response_figure(outcome, look=look)
    return [figures.signals_figure(outcome, look=look), figures.ledger_figure(outcome, look=look), noise, response]


def tall(figure: dict[str, Any]) -> dict[str, str]:
    """Style of a picture's place."""
    return {"height": f"{figure['layout']['height']}px"}


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


def maps(outcome: Outcome, theme: str | None) -> list[Any]:
    """Maps over the surface, once they are there."""
    return [
        parts.card(
            surface.label.capitalize(),
            parts.graph(f"map-{at}", figures.surface_figure(surface, look=look_of(theme)), label=surface.label),
            name=f"map-card-{at}",
            wide=True,
        )
        for at, surface in enumerate(outcome.surfaces)
    ]


def register(app: Dash, desk: Desk) -> None:
    """Hang all parts on the document."""
    _register_first(app, desk)
    _register_rest(app, desk)
    _register_follow(app, desk)


def _register_first(app: Dash, desk: Desk) -> None:
    def on_first(doc: Any, states: list[str] | None, theme: str | None, _followed: Any, pins: Any) -> Any:
        if not doc:
            return (no_update,) * 6
        body, figure, names, title = first_screen(desk, doc, states or [], theme)
        kept = [name for name in states or [] if name in names]
        chosen = no_update if kept == (states or []) else kept
        return body, figure, names, chosen, title, link_of(doc, pins or [])

    app.callback(
        Output("verdict", "children"),
        Output("section", "figure"),
        Output("shown-states", "data"),
        Output("shown-states", "value"),
        Output("headline-title", "children"),
        Output("link", "data"),
        Input("doc", "data"),
        Input("shown-states", "value"),
        Input("theme", "data"),
        Input("followed", "data"),
        Input("pins", "data"),
        prevent_initial_call=True,
    )(on_first)


def _register_rest(app: Dash, desk: Desk) -> None:
    def on_rest(doc: Any, theme: str | None, _seen: Any, states: list[str] | None, job: str | None, tab: str) -> Any:
        if not doc:
            return (no_update,) * 16
        try:
            outcome = desk.quick(doc["text"])
        except UserMistake:
            nothing = _nothing(theme)
            return (*(None,) * 8, *(nothing,) * 4, *(tall(nothing),) * 4)
        running = desk.jobs.find(job, tab)
        busy = running is not None and not running.over
        drawn = pictures(outcome, theme, busy)
        return (
            advice(outcome, busy),
            parts.cautions(outcome.notes),
            parts.requirements(outcome),
            maps(outcome, theme),
            parts.failures(outcome),
            parts.states_table(outcome),
            parts.metrics_table(outcome),
            [*other_drawings(outcome, states or [], theme), *plugin_views(outcome, desk)],
            *drawn,
            *(tall(figure) for figure in drawn),
        )

    names = ("advice", "cautions", "requirements", "maps", "failures", "states-table", "metrics-table", "views")
    app.callback(
        *(Output(name, "children") for name in names),
        *(Output(f"{name}-graph", "figure") for name in PICTURES),
        *(Output(f"{name}-graph", "style") for name in PICTURES),
        Input("doc", "data"),
        Input("theme", "data"),
        Input("followed", "data"),
        State("shown-states", "value"),
        State("follow-job", "data"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_rest)


def _register_follow(app: Dash, desk: Desk) -> None:
    """Background work that comes after each change, newest only."""

    def on_change(doc: Any, tab: str) -> Any:
        try:
            if not doc or not desk.design(doc["text"]):
                return no_update
        except UserMistake:
            return None
        if desk.complete.peek(doc["text"]):
            return None
        return desk.jobs.start(tab, "follow", text=doc["text"]).number

    app.callback(Output("follow-job", "data"), Input("doc", "data"), State("tab", "data"), prevent_initial_call=True)(
        on_change
    )

    def on_tick(_ticks: int, _stop: Any, number: str | None, followed: Any, tab: str) -> Any:
        if ctx.triggered_id == "follow-stop":
            desk.jobs.cancel(number, tab)
        job = desk.jobs.current(number, tab)
        if job is None:
            return no_update, "", True
        if job.parts:
            desk.whole.put(job.arguments["text"], job.parts[-1])
        if job.state == "done":
            desk.complete.put(job.arguments["text"], True)
        stopped = job.cancelled.is_set()
        told = "Stopped; what is open stays open." if stopped else " ".join(job.why)
        if not job.over and not stopped:
            told = f"Computing: {job.step or 'waiting for a free worker'}…"
        seen = [number, len(job.parts), job.over or stopped]
        return no_update if seen == followed else seen, told, not told

    app.callback(
        Output("followed", "data"),
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
        "clock",
        Output("follow-clock", "disabled"),
        Output("follow-stop", "hidden"),
        Input("follow-job", "data"),
        Input("followed", "data"),
    )
