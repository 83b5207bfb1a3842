"""The Compare page: variants pinned under names, side by side."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import dash_mantine_components as dmc
from dash import ALL, Dash, Input, Output, State, ctx, dcc, html, no_update

from outcouple.errors import UserMistake
from outcouple.notes import Note
from outcouple.outcome import Outcome
from outcouple.report.cells import csv_text
from outcouple.report.compare_files import comparison_rows
from outcouple.report.compare_page import comparison_page, comparison_pictures
from outcouple.report.compare_text import (
    compare_lead,
    corner_line,
    corner_table,
    requirement_table,
    variant_lines,
    wide_difference_table,
)
from outcouple.studies.compare import Comparison
from outcouple_dashboard import changes, parts
from outcouple_dashboard.desk import Desk
from outcouple_dashboard.documents import MOST_PINS, document, pin_of
from outcouple_dashboard.editing import say
from outcouple_dashboard.multiples import responses_picture
from outcouple_dashboard.pages.design import look_of
from outcouple_dashboard.tags import aria, local, pressed

__all__ = ["layout", "register", "variants_of"]

EVERY = 500
"""Milliseconds between looks at background work."""
NOW = "as it stands"


def layout() -> Any:
    """All parts, empty."""
    return html.Div(
        [
            html.Section(
                [
                    html.H2("Variants", id="variants-title"),
                    html.P(
                        f"Pin the design as it stands, change it, pin again: up to {MOST_PINS} stand side by side. "
                        "Each is judged against its own requirements.",
                        className="faint",
                    ),
                    html.Div(id="pin-list"),
                    html.Div(
                        [
                            dmc.TextInput(id="pin-name", label="name of this variant", size="xs", w=280),
                            html.Button("Pin this design", id="pin-add", className="quiet", type="button"),
                            html.Button("Download CSV", id="compare-csv", className="quiet", type="button"),
                            html.Button("Download page", id="compare-html", className="quiet", type="button"),
                        ],
                        className="pair",
                    ),
                    html.Div(
                        [
                            dmc.Switch(
                                id="compare-same",
                                label="Judge all under the surroundings, decision and requirements of the first",
                                size="xs",
                                checked=False,
                            ),
                            dmc.Switch(
                                id="compare-maps", label="Also what needs a map (slower)", size="xs", checked=False
                            ),
                            html.Span("", id="compare-step", className="faint", role="status"),
                            html.Button("Stop", id="compare-stop", className="quiet", type="button", hidden=True),
                        ],
                        className="pair options",
                    ),
                    dcc.Download(id="compare-file"),
                ],
                className="card wide",
                **aria(labelledby="variants-title"),
            ),
            html.Div(id="compare-body", className="wide cards"),
            dcc.Store(id="compare-job"),
            dcc.Store(id="compared"),
            dcc.Interval(id="compare-clock", interval=EVERY, disabled=True),
        ],
        className="cards",
    )


def variants_of(desk: Desk, doc: Any, pins: list[Any]) -> list[tuple[str, str]]:
    """(name, text) of the design as it stands, then of every pinned one; what cannot be evaluated is left out."""
    rows = [(NOW, str(doc["text"])), *((str(pin["name"]), str(pin["text"])) for pin in pins)]
    found = []
    for name, text in rows:
        try:
            desk.design(text)
        except UserMistake:
            continue
        found.append((name, text))
    return found


def pin_rows(desk: Desk, pins: list[Any]) -> Any:
    """The pinned variants with what can be done to each."""
    if not pins:
        return html.P("Nothing is pinned yet.", className="faint")
    rows = []
    for pin in pins:
        name = str(pin["name"])
        try:
            verdict = desk.quick(str(pin["text"])).verdict
            shown = parts.mark(parts.SHAPES[verdict], parts.WORDS[verdict], verdict.replace(" ", "-"))
        except UserMistake:
            shown = parts.mark("✕", "Not readable", "fail")
        rows.append(
            html.Li(
                [
                    shown,
                    html.Span(name, className="pin-name"),
                    html.Button(
                        "Work on it",
                        id={"kind": "pin-open", "name": pin["id"]},
                        className="quiet",
                        type="button",
                        **aria(label=f"Work on {name}"),
                    ),
                    html.Button(
                        "Remove",
                        id={"kind": "pin-drop", "name": pin["id"]},
                        className="quiet",
                        type="button",
                        **aria(label=f"Remove {name}"),
                    ),
                ]
            )
        )
    return html.Ul(rows, className="pins")


def body(found: Comparison | None, outcomes: list[tuple[str, Outcome]], theme: str | None, waiting: bool) -> list[Any]:
    """Everything below the list of variants."""
    if found is None:
        told = "Being compared…" if waiting else "Pin a variant, then change the design: both appear here side by side."
        return [html.P(told, className="card wide faint")]
    look = look_of(theme)
    nominal = _marked(requirement_table(found), "Requirements")
    cards = [
        parts.card("Which one, and why", _lead(found, waiting), name="compare-worst", wide=True),
        parts.card("Cautions", _cautions(outcomes), name="compare-cautions", wide=True),
        parts.card("Requirements, nominal", nominal, name="compare-nominal", wide=True),
        parts.card("Requirements, worst at the corners", _corners(found), name="compare-corners", wide=True),
        parts.card("What differs", _differences(found), name="compare-differences", wide=True),
    ]
    for picture in comparison_pictures(found, look=look):
        graph = parts.graph(f"compare-{picture.name}", picture.figure, label=picture.heading)
        cards.append(
            parts.card(picture.heading, graph, name=f"compare-card-{picture.name}", wide=True, note=picture.text)
        )
    curves = [(name, outcome.curve) for name, outcome in outcomes if outcome.curve is not None]
    responses = responses_picture(curves, look)
    if responses is not None:
        graph = parts.graph("compare-responses", responses, label="Response curves of every variant")
        cards.append(parts.card("Response", graph, name="compare-card-responses", wide=True))
    return cards


def _cautions(outcomes: list[tuple[str, Outcome]]) -> Any:
    """Every caution once, with the variants it holds for."""
    rows: dict[tuple[str, str], tuple[Note, list[str]]] = {}
    for name, outcome in outcomes:
        for note in outcome.notes:
            rows.setdefault((note.code, note.text), (note, []))[1].append(name)
    if not rows:
        return html.P("Being gathered…", className="faint")
    shared = [
        note if len(names) == len(outcomes) else replace(note, text=f"{note.text} [{', '.join(names)}]")
        for note, names in rows.values()
    ]
    return parts.cautions(shared)


def _lead(found: Comparison, waiting: bool) -> Any:
    rows = [
        html.Li(
            [
                html.Div(
                    [
                        parts.mark(parts.SHAPES[one.verdict], parts.WORDS[one.verdict], one.verdict.replace(" ", "-")),
                        html.B(one.label),
                    ]
                ),
                html.Ul([html.Li(f"{parts.plain(line[:1].upper() + line[1:])}.") for line in variant_lines(found, at)]),
            ]
        )
        for at, one in enumerate(found.variants)
    ]
    still = [html.P("Looking for what would rescue those that fail…", className="faint")] if waiting else []
    return [html.P(compare_lead(found), id="compare-told"), *still, html.Ul(rows, className="reasons")]


MARKED = {"ok": "pass", "MISSED": "fail", "open": "open"}


def _marked(rows: list[list[str]], caption: str) -> Any:
    """A table of the report with its words drawn as marks."""
    return parts.table(rows[0], [[_mark(text) for text in row] for row in rows[1:]], caption=caption)


def _mark(text: str) -> Any:
    word, _, rest = text.partition(" ")
    verdict = MARKED.get(word.rstrip(":"))
    if verdict is None:
        return parts.plain(text)
    return parts.cell(parts.plain(rest), mark=(parts.SHAPES[verdict], parts.JUDGED[verdict], verdict))


def _corners(found: Comparison) -> Any:
    rows = corner_table(found)
    if not rows:
        return html.P("No variant declares tolerances, so nothing is known of its corners.", className="faint")
    return [html.P(corner_line(found), className="faint"), _marked(rows, "Worst at the corners")]


def _differences(found: Comparison) -> Any:
    shown: list[Any] = []
    for condition, heading in ((False, "Inputs"), (True, "Conditions, states, requirements")):
        rows = wide_difference_table(found, condition=condition)
        if rows:
            shown += [html.H3(heading), parts.table(rows[0], rows[1:], caption=heading)]
    return shown or html.P("Nothing: these designs are the same.", className="faint")


def register(app: Dash, desk: Desk) -> None:
    """Pins, the comparison, exports."""
    _register_pins(app, desk)
    _register_body(app, desk)

    def on_export(_csv: Any, _page: Any, number: str | None, tab: str) -> Any:
        trigger, _ = pressed()
        found, _ = found_by(desk, number, tab)
        if trigger is None:
            return no_update
        if found is None:
            say("There is nothing to download yet: pin a variant first.")
            return no_update
        if trigger == "compare-csv":
            return {"content": csv_text(comparison_rows(found)), "filename": "variants.csv", "type": "text/csv"}
        return {"content": comparison_page(found), "filename": "variants.html", "type": "text/html"}

    app.callback(
        Output("compare-file", "data"),
        Input("compare-csv", "n_clicks"),
        Input("compare-html", "n_clicks"),
        State("compare-job", "data"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_export)


def found_by(desk: Desk, number: str | None, tab: str) -> tuple[Comparison | None, list[tuple[str, Outcome]]]:
    """The comparison a job has come to so far, and the outcomes of its variants."""
    job = desk.jobs.find(number, tab)
    parts_so_far = job.parts if job is not None else []
    found = [part for part in parts_so_far if isinstance(part, Comparison)]
    outcomes = [part for part in parts_so_far if isinstance(part, tuple)]
    return (found[-1] if found else None), outcomes


def pinned(desk: Desk, pins: list[Any], doc: Any, name: str) -> list[Any]:
    """The pins with the design as it stands among them. Raises UserMistake where that cannot be."""
    if len(pins) >= MOST_PINS:
        raise UserMistake(f"{MOST_PINS} variants are pinned; remove one first")
    title = desk.design(doc["text"]).title
    name = name.strip()[:60] or f"{title} {len(pins) + 1}"
    if any(pin["name"] == name for pin in pins) or name == NOW:
        raise UserMistake(f"there is a variant called {name!r} already; give this one another name")
    return [*pins, pin_of(name, doc["text"], doc["file"])]


def _register_pins(app: Dash, desk: Desk) -> None:
    def on_pin(_add: Any, _drop: Any, pins: Any, doc: Any, name: str | None) -> Any:
        trigger, _ = pressed()
        if not doc or trigger is None:
            return no_update, no_update
        if isinstance(trigger, dict):
            return [pin for pin in pins if pin["id"] != trigger["name"]], no_update
        try:
            return pinned(desk, pins or [], doc, name or ""), ""
        except UserMistake as mistake:
            say(str(mistake))
            return no_update, no_update

    app.callback(
        Output("pins", "data", allow_duplicate=True),
        Output("pin-name", "value"),
        Input("pin-add", "n_clicks"),
        Input({"kind": "pin-drop", "name": ALL}, "n_clicks"),
        State("pins", "data"),
        State("doc", "data"),
        State("pin-name", "value"),
        prevent_initial_call=True,
    )(on_pin)

    def on_open(_clicks: Any, pins: Any, doc: Any) -> Any:
        trigger, _ = pressed()
        if trigger is None:
            return no_update
        pin = next((one for one in pins if one["id"] == trigger["name"]), None)
        if pin is None:
            return no_update
        if doc and pin["file"] == doc["file"]:
            return {**doc, "text": pin["text"], "origin": "pin", "serial": doc["serial"] + 1}
        return document(pin["text"])

    app.callback(
        Output("doc", "data", allow_duplicate=True),
        Input({"kind": "pin-open", "name": ALL}, "n_clicks"),
        State("pins", "data"),
        State("doc", "data"),
        prevent_initial_call=True,
    )(on_open)


def _register_body(app: Dash, desk: Desk) -> None:
    app.callback(Output("pin-list", "children"), Input("pins", "data"))(lambda pins: pin_rows(desk, pins or []))

    def on_change(doc: Any, pins: Any, same: Any, mapped: Any, tab: str) -> Any:
        if not doc:
            return no_update, no_update
        rows = variants_of(desk, doc, pins or [])
        if len(rows) < 2:
            return None, ["", 0, True]
        names, texts = zip(*rows, strict=True)
        how = {"same": bool(same), "maps": bool(mapped)}
        return desk.jobs.start(tab, "compare", names=list(names), texts=list(texts), **how).number, no_update

    app.callback(
        Output("compare-job", "data"),
        Output("compared", "data", allow_duplicate=True),
        Input("doc-compare", "data"),
        Input("pins", "data"),
        Input("compare-same", "checked"),
        Input("compare-maps", "checked"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_change)

    def on_tick(_ticks: Any, _stop: Any, number: str | None, seen: Any, tab: str) -> Any:
        if ctx.triggered_id == "compare-stop":
            desk.jobs.cancel(number, tab)
        job = desk.jobs.current(number, tab)
        if job is None:
            return no_update, ""
        over = job.over or job.cancelled.is_set()
        new = [number, len(job.parts), over]
        told = " ".join(changes.plain_mistake(UserMistake(*job.why))) if over else f"Computing: {job.step or '…'}"
        return no_update if new == seen else new, told

    app.callback(
        Output("compared", "data"),
        Output("compare-step", "children"),
        Input("compare-clock", "n_intervals"),
        Input("compare-stop", "n_clicks"),
        State("compare-job", "data"),
        State("compared", "data"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_tick)

    local(
        app,
        "clock",
        Output("compare-clock", "disabled"),
        Output("compare-stop", "hidden"),
        Input("compare-job", "data"),
        Input("compared", "data"),
    )

    def on_compared(compared: Any, theme: str | None, tab: str) -> Any:
        number, _, over = compared or ["", 0, True]
        found, outcomes = found_by(desk, number, tab)
        return body(found, outcomes, theme, not over)

    app.callback(
        Output("compare-body", "children"), Input("compared", "data"), Input("theme", "data"), State("tab", "data")
    )(on_compared)
