"""The Vary page: one or two inputs run, a metric follows, a click takes a point over."""

from __future__ import annotations

from typing import Any

import dash_ag_grid as dag
import dash_mantine_components as dmc
import numpy as np
from dash import Dash, Input, Output, State, ctx, dcc, html, no_update

from outcouple.design import Design
from outcouple.errors import UserMistake
from outcouple.metrics import metrics_of
from outcouple.report.figures.sweep import picture_axes
from outcouple.studies import Sweep
from outcouple_dashboard import changes, parts
from outcouple_dashboard.desk import Desk
from outcouple_dashboard.documents import with_text
from outcouple_dashboard.editing import say
from outcouple_dashboard.entries import join
from outcouple_dashboard.pages.design import look_of
from outcouple_dashboard.pictures import WORST, clicked_at, sweep_picture, swept_text
from outcouple_dashboard.ranges import MAP_POINTS, POINTS, Varying, find_varying, sentence, span_of, varying
from outcouple_dashboard.tags import aria, local

__all__ = ["layout", "register"]

EVERY = 300
"""Milliseconds between looks at a running sweep."""
UNPICKED = "Click a point, or choose a row, to try it."
WORDS = {"pass": "all met", "fail": "missed", "open": "open", "none stated": "–", "": "not run"}


def layout() -> Any:
    """All parts, empty."""
    return html.Div(
        [
            html.Section(
                [
                    html.H2("What varies", id="vary-title"),
                    _axis_line("x", "input"),
                    html.Details([html.Summary("A second input, for a map"), _axis_line("y", "second input")]),
                    html.Div(
                        [
                            dmc.Select(
                                id="vary-metric",
                                label="what to show",
                                data=[],
                                searchable=True,
                                size="xs",
                                w=320,
                                allowDeselect=False,
                            ),
                            html.Div(
                                [
                                    dmc.Progress(
                                        id="vary-share", value=0, w=160, **aria(label="Progress of the sweep")
                                    ),
                                    html.Span("", id="vary-step"),
                                    html.Button("Stop", id="vary-stop", className="quiet", type="button"),
                                ],
                                id="vary-bar",
                                className="progress",
                                role="status",
                                hidden=True,
                            ),
                            html.P("", id="vary-said", className="said", role="status"),
                        ],
                        className="pair",
                    ),
                ],
                className="card wide",
                **aria(labelledby="vary-title"),
            ),
            html.Section(
                [
                    html.H2("", id="vary-heading"),
                    parts.graph("vary-picture", height=440, label="What the sweep found"),
                    html.P("", id="vary-told", className="faint"),
                ],
                className="card wide",
                id="vary-result",
                hidden=True,
            ),
            html.Section(
                [
                    html.H2("Points", id="vary-points-title"),
                    dag.AgGrid(
                        id="vary-points",
                        columnDefs=[],
                        rowData=[],
                        defaultColDef={"flex": 1, "minWidth": 110},
                        dashGridOptions={
                            "rowSelection": {"mode": "singleRow", "enableClickSelection": True, "checkboxes": False},
                            "domLayout": "autoHeight",
                            "pagination": True,
                            "paginationPageSize": 20,
                            "paginationPageSizeSelector": False,
                        },
                        className="ag-theme-quartz",
                        style={"height": None},
                    ),
                ],
                className="card wide",
                id="vary-table",
                hidden=True,
            ),
            html.Div(
                [
                    html.Span(UNPICKED, id="vary-picked-text", **aria(live="polite")),
                    html.Button("Take it over", id="vary-take", className="quiet", type="button", disabled=True),
                ],
                className="picked card wide",
                id="vary-bottom",
                hidden=True,
            ),
            dcc.Store(id="vary-opened"),
            dcc.Store(id="vary-job"),
            dcc.Store(id="vary-seen"),
            dcc.Store(id="vary-picked"),
            dcc.Interval(id="vary-clock", interval=EVERY, disabled=True),
        ],
        className="cards",
    )


def _axis_line(which: str, label: str) -> Any:
    def end(name: str, told: str) -> Any:
        return dmc.TextInput(id=f"vary-{which}-{name}", label=told, value="", debounce=True, size="xs", w=150)

    return html.Div(
        [
            dmc.Select(
                id=f"vary-{which}",
                label=label,
                data=[],
                searchable=True,
                clearable=which == "y",
                size="xs",
                w=320,
                clearButtonProps=aria(label="no second input"),
                allowDeselect=False,
                placeholder="none" if which == "y" else "choose an input",
            ),
            end("from", "from, or a list"),
            end("to", "to"),
        ],
        className="pair",
    )


def _choices(design: Design) -> list[dict[str, Any]]:
    groups: dict[str, list[dict[str, str]]] = {}
    for one in varying(design):
        groups.setdefault(one.group, []).append({"value": one.name, "label": f"{one.label} · {one.group}"})
    return [{"group": group, "items": items} for group, items in groups.items()]


def _metrics(design: Design) -> list[dict[str, str]]:
    known = metrics_of(design.geometry)
    asked = list(dict.fromkeys(one.metric for one in design.requirements))
    rest = [name for name in known if name not in asked]
    first = [{"value": WORST, "label": "least margin over all requirements"}] if asked else []
    slow = {name: " (takes a map at every point)" if known[name].cost == "map" else "" for name in known}
    return [*first, *({"value": name, "label": known[name].label + slow[name]} for name in (*asked, *rest))]


def setup(desk: Desk, text: str, x: str | None, y: str | None, metric: str | None) -> tuple[Any, ...]:
    """(inputs to choose, the same, x, y, metrics, metric): what still fits stays chosen."""
    design = desk.design(text)
    names = [one.name for one in varying(design)]
    metrics = _metrics(design)
    shown = [row["value"] for row in metrics]
    choices = _choices(design)
    first = next((one.name for one in varying(design) if one.entry.leaf.deciding and one.numeric), names[0])
    return (
        choices,
        choices,
        x if x in names else first,
        y if y in names else None,
        metrics,
        metric if metric in shown else shown[0],
    )


def axes_of(design: Design, given: list[tuple[str | None, str, str]]) -> list[str]:
    """Sentences of the axes that are set."""
    rows = [(find_varying(design, name), start, stop) for name, start, stop in given if name]
    points = POINTS if len(rows) == 1 else MAP_POINTS
    return [sentence(one, start, stop, points) for one, start, stop in rows if one is not None]


def present_of(design: Design, found: Sweep) -> list[Any]:
    """Where the design stands on every axis."""
    rows = [find_varying(design, one.name) for one in found.axes]
    return [None if one is None else one.entry.value if one.numeric else one.entry.text for one in rows]


def points_of(found: Sweep, metric: str) -> tuple[list[dict[str, Any]], list[dict[str, Any]]]:
    """(columns, rows) of the table of points."""
    verdicts, texts = found.verdicts, [one.texts() for one in found.axes]
    columns = [{"field": f"axis{at}", "headerName": one.name} for at, one in enumerate(found.axes)]
    shown = list(dict.fromkeys([metric, WORST]))
    columns += [
        {"field": f"value{n}", "headerName": swept_text(found, name, (0,) * len(found.axes))[0]}
        for n, name in enumerate(shown)
    ]
    columns.append({"field": "verdict", "headerName": "requirements"})
    rows = []
    for at in np.ndindex(found.shape):
        row: dict[str, Any] = {f"axis{n}": texts[n][place] for n, place in enumerate(at)}
        row |= {f"value{n}": swept_text(found, name, at)[1] for n, name in enumerate(shown)}
        row["verdict"] = WORDS[str(verdicts[at])]
        row["at"] = [int(place) for place in at]
        rows.append(row)
    return columns, rows


def told_of(found: Sweep) -> str:
    """What the marks mean, and where the requirements are met."""
    now = "The diamond, or the line called now, is the design as it stands."
    if not found.limits:
        return f"{now} No requirements are stated."
    good, count = int(np.sum(found.verdicts == "pass")), found.done.size
    marks = "Shaded" if picture_axes(found)[1] is None else "Without crosses"
    why = "; ".join(f"{limit.label} is open: {parts.plain(limit.why)}" for limit in found.limits if limit.why)
    told = f"{now} {marks}: all requirements are met, which {good} of {count} points do."
    return f"{told} {why}" if why else told


def picked_at(found: Sweep, at: list[int], metric: str) -> dict[str, Any]:
    """A point as it is told and taken over."""
    texts = [one.texts()[place] for one, place in zip(found.axes, at, strict=True)]
    label, value = swept_text(found, metric, tuple(at))
    where = ", ".join(f"{one.name} = {text}" for one, text in zip(found.axes, texts, strict=True))
    return {
        "told": f"{where}: {label} {value}; requirements: {WORDS[str(found.verdicts[tuple(at)])]}",
        "values": {one.name: text for one, text in zip(found.axes, texts, strict=True)},
    }


def take_over(desk: Desk, text: str, values: dict[str, str]) -> str:
    """The text of the design with a point's values in it."""
    for name, value in values.items():
        design = desk.design(text)
        one: Varying | None = find_varying(design, name)
        if one is None:
            raise UserMistake(f"{name}: the design has no such input any more")
        text = changes.put(design, text, join(one.entry.path), value)
    desk.design(text)
    return text


def register(app: Dash, desk: Desk) -> None:
    """Pickers, the sweep as a job, its picture, and points taken over."""
    _register_pickers(app, desk)
    _register_job(app, desk)
    _register_result(app, desk)


def _register_pickers(app: Dash, desk: Desk) -> None:
    def on_doc(doc: Any, x: Any, y: Any, metric: Any, opened: Any, asked: Any) -> Any:
        if not doc:
            return (no_update,) * 7
        if opened is None and asked:  # the first look after a link was opened
            x, y, metric = asked["x"][0], asked["y"][0], asked["metric"][0]
        try:
            inputs, again, new_x, new_y, metrics, new_metric = setup(desk, doc["text"], x, y, metric)
        except UserMistake:
            return (no_update,) * 7
        if opened == doc["opened"]:  # what stays chosen keeps its ends, too
            new_x, new_y, new_metric = (
                no_update if new == old else new for new, old in ((new_x, x), (new_y, y), (new_metric, metric))
            )
        return inputs, again, new_x, new_y, metrics, new_metric, doc["opened"]

    app.callback(
        Output("vary-x", "data"),
        Output("vary-y", "data"),
        Output("vary-x", "value"),
        Output("vary-y", "value"),
        Output("vary-metric", "data"),
        Output("vary-metric", "value"),
        Output("vary-opened", "data"),
        Input("doc-vary", "data"),
        State("vary-x", "value"),
        State("vary-y", "value"),
        State("vary-metric", "value"),
        State("vary-opened", "data"),
        State("vary-asked", "data"),
    )(on_doc)

    def on_pick(name: str | None, doc: Any, asked: Any) -> Any:
        if not doc:
            return no_update, no_update
        ends = next(
            (row[1:] for row in ((asked or {}).get("x"), (asked or {}).get("y")) if row and row[0] == name), None
        )
        if name and ends:
            return ends
        one = find_varying(desk.design(doc["text"]), name)
        return span_of(one) if one is not None else ("", "")

    for which in ("x", "y"):
        app.callback(
            Output(f"vary-{which}-from", "value"),
            Output(f"vary-{which}-to", "value"),
            Input(f"vary-{which}", "value"),
            State("doc", "data"),
            State("vary-asked", "data"),
            prevent_initial_call=True,
        )(on_pick)
    fields = ("x", "x-from", "x-to", "y", "y-from", "y-to", "metric")
    inputs = (Input(f"vary-{name}", "value") for name in fields)
    local(app, "varySetup", Output("vary-setup", "data"), *inputs, prevent_initial_call=True)


def _register_job(app: Dash, desk: Desk) -> None:
    def on_setup(doc: Any, x0: str, x1: str, y0: str, y1: str, metric: str | None, x: Any, y: Any, tab: str) -> Any:
        if not doc or not x or not x0 or not metric or (y and not y0):
            return no_update
        try:
            design = desk.design(doc["text"])
            axes = axes_of(design, [(x, x0, x1), (y, y0, y1)])
        except UserMistake:
            return no_update
        if not axes:
            return no_update
        return desk.jobs.start(tab, "vary", text=doc["text"], axes=axes, metric=metric).number

    app.callback(
        Output("vary-job", "data"),
        Input("doc-vary", "data"),
        Input("vary-x-from", "value"),
        Input("vary-x-to", "value"),
        Input("vary-y-from", "value"),
        Input("vary-y-to", "value"),
        Input("vary-metric", "value"),
        State("vary-x", "value"),
        State("vary-y", "value"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_setup)

    def on_tick(_ticks: Any, _stop: Any, number: str | None, seen: Any, tab: str) -> Any:
        if ctx.triggered_id == "vary-stop":
            desk.jobs.cancel(number, tab)
        job = desk.jobs.current(number, tab)
        if job is None:
            return (no_update,) * 5
        stopped = job.cancelled.is_set()
        new = [number, len(job.parts), job.over or stopped]
        told = "Stopped." if stopped else " ".join(changes.plain_mistake(UserMistake(*job.why)))
        step = "" if new[2] else job.step or "waiting for a free worker"
        return no_update if new == seen else new, 100 * job.share, step, not step, told

    app.callback(
        Output("vary-seen", "data"),
        Output("vary-share", "value"),
        Output("vary-step", "children"),
        Output("vary-bar", "hidden"),
        Output("vary-said", "children"),
        Input("vary-clock", "n_intervals"),
        Input("vary-stop", "n_clicks"),
        State("vary-job", "data"),
        State("vary-seen", "data"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_tick)

    local(
        app,
        "clock",
        Output("vary-clock", "disabled"),
        Output("vary-stop", "hidden"),
        Input("vary-job", "data"),
        Input("vary-seen", "data"),
    )


def swept(desk: Desk, seen: Any, tab: str) -> tuple[Sweep, str] | None:
    """(sweep, metric) of what a tab has seen last; None where there is none yet."""
    job = desk.jobs.find(seen[0] if seen else None, tab)
    return (job.parts[-1], job.arguments["metric"]) if job is not None and job.parts else None


def _register_result(app: Dash, desk: Desk) -> None:
    def on_seen(seen: Any, theme: str | None, doc: Any, tab: str) -> Any:
        last = swept(desk, seen, tab)
        if last is None or not doc:
            return (no_update,) * 8
        found, metric = last
        figure = sweep_picture(found, metric, present_of(desk.design(doc["text"]), found), look_of(theme))
        columns, rows = points_of(found, metric)
        names = " and ".join(one.name for one in found.axes)
        what = metrics_of(desk.design(doc["text"]).geometry)[metric].label if metric != WORST else "margins"
        heading = f"{what.capitalize()} against {names}"
        return figure, heading, told_of(found), columns, rows, False, False, False

    app.callback(
        Output("vary-picture", "figure"),
        Output("vary-heading", "children"),
        Output("vary-told", "children"),
        Output("vary-points", "columnDefs"),
        Output("vary-points", "rowData"),
        Output("vary-result", "hidden"),
        Output("vary-table", "hidden"),
        Output("vary-bottom", "hidden"),
        Input("vary-seen", "data"),
        Input("theme", "data"),
        State("doc", "data"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_seen)

    def on_point(click: Any, rows: Any, seen: Any, tab: str) -> Any:
        last = swept(desk, seen, tab)
        if ctx.triggered_id == "vary-seen":
            return None, UNPICKED, True
        if last is None:
            return no_update, no_update, no_update
        found, metric = last
        at = rows[0]["at"] if ctx.triggered_id == "vary-points" and rows else clicked_at(found, click)
        if at is None:
            return no_update, no_update, no_update
        point = picked_at(found, at, metric)
        return point["values"], point["told"], False

    app.callback(
        Output("vary-picked", "data"),
        Output("vary-picked-text", "children"),
        Output("vary-take", "disabled"),
        Input("vary-picture", "clickData"),
        Input("vary-points", "selectedRows"),
        Input("vary-seen", "data"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_point)

    def on_take(clicks: Any, values: Any, doc: Any) -> Any:
        if not clicks or not values or not doc:
            return no_update
        try:
            return with_text(doc, take_over(desk, doc["text"], values), origin="vary")
        except UserMistake as mistake:
            say(" ".join(changes.plain_mistake(mistake)))
            return no_update

    app.callback(
        Output("doc", "data", allow_duplicate=True),
        Input("vary-take", "n_clicks"),
        State("vary-picked", "data"),
        State("doc", "data"),
        prevent_initial_call=True,
    )(on_take)
    local(app, "redraw", Output("vary-result", "title"), Input("vary-result", "hidden"), prevent_initial_call=True)
