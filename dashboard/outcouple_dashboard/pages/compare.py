"""The Compare page: variants pinned under names, side by side."""

from __future__ import annotations

from typing import Any

import dash_mantine_components as dmc
from dash import ALL, Dash, Input, Output, State, dcc, html, no_update

from outcouple.errors import UserMistake
from outcouple.outcome import Judged
from outcouple.report.page import Picture, page_of
from outcouple_dashboard import multiples, parts
from outcouple_dashboard.desk import Desk
from outcouple_dashboard.documents import MOST_PINS, document, pin_of
from outcouple_dashboard.editing import say
from outcouple_dashboard.pages.design import look_of
from outcouple_dashboard.tags import aria, pressed
from outcouple_dashboard.variants import Variant, as_csv, differences, judged_rows, told, told_worst

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
                            html.Span("", id="compare-step", className="faint", role="status"),
                        ],
                        className="pair",
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


def variants_of(desk: Desk, doc: Any, pins: list[Any]) -> list[Variant]:
    """The design as it stands, then every pinned one that can be evaluated."""
    rows = [(NOW, doc["text"]), *((str(pin["name"]), str(pin["text"])) for pin in pins)]
    found = []
    for name, text in rows:
        try:
            found.append(Variant(name, desk.design(text), desk.quick(text)))
        except UserMistake:
            continue
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


def body(desk: Desk, doc: Any, pins: list[Any], theme: str | None) -> list[Any]:
    """Everything below the list of variants."""
    variants = variants_of(desk, doc, pins)
    if len(variants) < 2:
        told_none = "Pin at least one variant, then change the design: both appear here with what differs."
        return [html.P(told_none, className="card wide faint")]
    look = look_of(theme)
    found = [
        parts.card(
            "Which one, and why", html.P(told_worst(variants), id="compare-told"), name="compare-worst", wide=True
        ),
        parts.card("Against the requirements", _judged_table(variants), name="compare-judged", wide=True),
        parts.card("What differs", _difference_table(variants), name="compare-differences", wide=True),
        parts.card(
            "Margins",
            parts.graph("compare-margins", multiples.margins_picture(variants, look), label="Margins of every variant"),
            name="compare-margins-card",
            wide=True,
        ),
        parts.card(
            "Light at the read-out",
            parts.graph("compare-shares", multiples.shares_picture(variants, look), label="Light by state and variant"),
            name="compare-shares-card",
            wide=True,
            note="Circle: should read the first word of the sensor (dry, no touch …); diamond: the second.",
        ),
    ]
    responses = multiples.responses_picture(variants, look)
    if responses is not None:
        picture = parts.graph("compare-responses", responses, label="Response curves of every variant")
        found.append(parts.card("Response", picture, name="compare-responses-card", wide=True))
    return found


def _cell(one: Judged | None) -> Any:
    if one is None:
        return html.Span("not asked", className="faint")
    return html.Span([parts.mark(parts.SHAPES[one.verdict], told(one, limit=False), one.verdict)], title=one.at)


def _judged_table(variants: list[Variant]) -> Any:
    verdicts = [
        parts.mark(
            parts.SHAPES[one.outcome.verdict], parts.WORDS[one.outcome.verdict], one.outcome.verdict.replace(" ", "-")
        )
        for one in variants
    ]
    rows: list[tuple[Any, ...]] = [("Verdict", "", *verdicts)]
    for label, row in judged_rows(variants):
        limits = list(dict.fromkeys(f"{one.sense} {one.limit_text}" for one in row if one is not None))
        rows.append((label, " / ".join(limits), *(_cell(one) for one in row)))
    head = ("requirement", "limit", *(one.name for one in variants))
    return parts.table(head, rows, caption="Requirements by variant")


def _difference_table(variants: list[Variant]) -> Any:
    rows = differences(variants)
    if not rows:
        return html.P("Nothing: these designs are the same.", className="faint")
    return parts.table(("input", *(one.name for one in variants)), rows, caption="Differing inputs")


def page_text(variants: list[Variant]) -> str:
    """The comparison as one HTML page."""
    look = look_of("light")
    judged = [("requirement", *(one.name for one in variants))]
    judged += [(label, *(told(one) for one in row)) for label, row in judged_rows(variants)]
    differing = [("input", *(one.name for one in variants)), *differences(variants)]
    pictures = [
        Picture("margins", "Margins", multiples.margins_picture(variants, look)),
        Picture("light", "Light at the read-out", multiples.shares_picture(variants, look)),
    ]
    cautions = dict.fromkeys(
        note.text + (f" Decides: {note.decides}." if note.decides else "")
        for one in variants
        for note in one.outcome.notes
    )
    return page_of(
        "Variants side by side",
        pictures,
        lead=told_worst(variants),
        tables=[("Against the requirements", judged), ("What differs", differing)],
        cautions=list(cautions),
    )


def register(app: Dash, desk: Desk) -> None:
    """Pins, the comparison, exports."""
    _register_pins(app, desk)
    _register_body(app, desk)

    def on_export(_csv: Any, _page: Any, doc: Any, pins: Any) -> Any:
        trigger, _ = pressed()
        if not doc or trigger is None:
            return no_update
        variants = variants_of(desk, doc, pins or [])
        if not variants:
            return no_update
        if trigger == "compare-csv":
            return {"content": as_csv(variants), "filename": "variants.csv", "type": "text/csv"}
        return {"content": page_text(variants), "filename": "variants.html", "type": "text/html"}

    app.callback(
        Output("compare-file", "data"),
        Input("compare-csv", "n_clicks"),
        Input("compare-html", "n_clicks"),
        State("doc", "data"),
        State("pins", "data"),
        prevent_initial_call=True,
    )(on_export)


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
    def on_variants(doc: Any, pins: Any, pathname: str, theme: str | None, _compared: Any) -> Any:
        if not doc or pathname != "/compare":
            return no_update, no_update
        return pin_rows(desk, pins or []), body(desk, doc, pins or [], theme)

    app.callback(
        Output("pin-list", "children"),
        Output("compare-body", "children"),
        Input("doc", "data"),
        Input("pins", "data"),
        Input("url", "pathname"),
        Input("theme", "data"),
        Input("compared", "data"),
    )(on_variants)

    def on_change(doc: Any, pins: Any, pathname: str, tab: str) -> Any:
        if not doc or pathname != "/compare" or not pins:
            return no_update, no_update
        texts = [doc["text"], *(str(pin["text"]) for pin in pins)]
        texts = [text for text in dict.fromkeys(texts) if not desk.complete.peek(text)]
        if not texts:
            return no_update, True
        return desk.jobs.start(tab, "compare", texts=texts).number, False

    app.callback(
        Output("compare-job", "data"),
        Output("compare-clock", "disabled"),
        Input("doc", "data"),
        Input("pins", "data"),
        Input("url", "pathname"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_change)

    def on_tick(_ticks: Any, number: str | None, compared: Any, tab: str) -> Any:
        job = desk.jobs.find(number, tab)
        if job is None:
            return no_update, True, ""
        for text, outcome in job.parts:
            if not desk.complete.peek(text):
                desk.whole.put(text, outcome)
        seen = [number, len(job.parts), job.over]
        told_now = "" if job.over else f"Computing: {job.step or 'waiting for a free worker'}…"
        return no_update if seen == compared else seen, job.over, " ".join(job.why) or told_now

    app.callback(
        Output("compared", "data"),
        Output("compare-clock", "disabled", allow_duplicate=True),
        Output("compare-step", "children"),
        Input("compare-clock", "n_intervals"),
        State("compare-job", "data"),
        State("compared", "data"),
        State("tab", "data"),
        prevent_initial_call=True,
    )(on_tick)
