"""Opening, saving and starting designs: the welcome page, the drawer, and what their buttons do."""

from __future__ import annotations

from typing import Any

import dash_mantine_components as dmc
from dash import ALL, Dash, Input, Output, State, dcc, html, no_update, set_props

from outcouple.design.starter import starter_text
from outcouple.errors import UserMistake
from outcouple_dashboard import changes
from outcouple_dashboard.desk import Desk
from outcouple_dashboard.documents import LONGEST_TEXT, document, with_text
from outcouple_dashboard.editing import say
from outcouple_dashboard.files import Changed
from outcouple_dashboard.tags import aria, local, pressed

__all__ = ["drawer", "register", "welcome"]


def _starts(desk: Desk) -> list[dict[str, str]]:
    return [
        {"value": key, "label": f"{key} ({name.replace('-', ' ')})" if key != name else name.replace("-", " ")}
        for key, (name, _) in changes.starters(desk.host).items()
    ]


def _open_buttons(desk: Desk) -> Any:
    names = desk.folder.names()
    if not names:
        return html.P("This folder holds no design files yet.", className="faint")
    return html.Ul(
        [
            html.Li(html.Button(name, id={"kind": "open", "name": name}, className="open", type="button"))
            for name in names
        ],
        className="files",
    )


def welcome(desk: Desk) -> Any:
    """What shows while no design is open."""
    return html.Div(
        [
            html.H1("Open a design"),
            html.P(
                "A design is one file: the sensor, what touches it, how it is read, what it must meet. "
                "Change anything and the verdict follows at once."
            ),
            html.Div(
                [
                    html.Section(
                        [html.H2("In this folder"), html.Div(_open_buttons(desk), id="welcome-files")], className="card"
                    ),
                    html.Section(
                        [
                            html.H2("Start a new one"),
                            dmc.Select(
                                id="welcome-start",
                                label="What is it for?",
                                description="a job, or a sensor by name",
                                data=_starts(desk),
                                searchable=True,
                                nothingFoundMessage="nothing like that",
                            ),
                            html.Button("Start", id="welcome-go", className="main", type="button"),
                        ],
                        className="card",
                    ),
                ],
                className="cards",
            ),
        ],
        id="welcome",
        className="welcome",
    )


def drawer(desk: Desk) -> Any:
    """Open, start, save under a name, download, upload, and the file's text."""
    return dmc.Drawer(
        [
            html.Section([html.H3("Open"), html.Div(id="shelf-files")]),
            html.Section(
                [
                    html.H3("Save under a name"),
                    html.Div(
                        [
                            dmc.TextInput(id="save-name", label="name", placeholder="tank-2.toml", size="xs"),
                            html.Button("Save as", id="save-as", className="quiet", type="button"),
                            html.Button("Download", id="download", className="quiet", type="button"),
                        ],
                        className="pair",
                    ),
                    html.P("", id="shelf-said", className="said", role="status"),
                    dcc.Download(id="downloaded"),
                ]
            ),
            html.Section(
                [
                    html.H3("Start a new one"),
                    html.Div(
                        [
                            dmc.Select(
                                id="shelf-start", label="job or sensor", data=_starts(desk), searchable=True, size="xs"
                            ),
                            html.Button("Start", id="shelf-go", className="quiet", type="button"),
                        ],
                        className="pair",
                    ),
                ]
            ),
            html.Section(
                [
                    html.H3("From this computer"),
                    dcc.Upload(
                        html.Button("Choose a .toml file, or drop it here", className="quiet", type="button"),
                        id="upload",
                        className="upload",
                        accept=".toml",
                    ),
                    dcc.Store(id="uploaded"),
                ]
            ),
            html.Section(
                [
                    html.H3("The file's text"),
                    html.P("Everything is in here, also what has no control. Comments stay.", className="faint"),
                    dmc.Textarea(
                        id="raw-text",
                        autosize=True,
                        minRows=8,
                        maxRows=24,
                        spellCheck=False,
                        className="raw",
                        **aria(label="Text of the design file"),
                    ),
                    html.Button("Use this text", id="raw-use", className="quiet", type="button"),
                ]
            ),
        ],
        id="shelf",
        title="Designs",
        position="right",
        size=460,
        opened=False,
        keepMounted=True,
        closeButtonProps={"aria-label": "Close"},
    )


def register(app: Dash, desk: Desk) -> None:
    """Files in and out."""
    _register_opening(app, desk)
    _register_saving(app, desk)
    _register_text(app, desk)


def _opened(desk: Desk, trigger: Any, job: str | None, uploaded: Any) -> Any:
    """The document that a button asks for."""
    if isinstance(trigger, dict):
        read = desk.folder.read(trigger["name"])
        return document(read.text, file=read.name, digest=read.digest)
    if trigger == "uploaded":
        if uploaded.get("error"):
            raise UserMistake(uploaded["error"])
        text = str(uploaded["text"])
        if len(text) > LONGEST_TEXT:
            raise UserMistake(f"That file is too long for a design ({LONGEST_TEXT // 1000} kB at most).")
        return document(text)
    if not job:
        raise UserMistake("Choose what it is for first.")
    name, purpose = changes.starters(desk.host)[job]
    return document(starter_text(desk.host.geometry(name), purpose))


def _register_opening(app: Dash, desk: Desk) -> None:
    local(
        app,
        "readUpload",
        Output("uploaded", "data"),
        Input("upload", "contents"),
        State("upload", "filename"),
        prevent_initial_call=True,
    )

    def on_open(_open: Any, _go: Any, _go2: Any, uploaded: Any, first: str | None, second: str | None) -> Any:
        trigger, _ = pressed()
        if trigger is None:
            return no_update, no_update
        try:
            doc = _opened(desk, trigger, first if trigger == "welcome-go" else second, uploaded)
        except UserMistake as mistake:
            say(str(mistake))
            return no_update, no_update
        say("")
        return doc, False

    app.callback(
        Output("doc", "data", allow_duplicate=True),
        Output("shelf", "opened"),
        Input({"kind": "open", "name": ALL}, "n_clicks"),
        Input("welcome-go", "n_clicks"),
        Input("shelf-go", "n_clicks"),
        Input("uploaded", "data"),
        State("welcome-start", "value"),
        State("shelf-start", "value"),
        prevent_initial_call=True,
    )(on_open)

    def on_shelf(clicks: Any, doc: Any) -> Any:
        if not clicks:
            return (no_update,) * 4
        name = desk.folder.free_name(doc["file"] or "design") if doc else ""
        set_props("shelf-said", {"children": ""})
        return True, _open_buttons(desk), doc["text"] if doc else "", name

    app.callback(
        Output("shelf", "opened", allow_duplicate=True),
        Output("shelf-files", "children"),
        Output("raw-text", "value"),
        Output("save-name", "value"),
        Input("shelf-open", "n_clicks"),
        State("doc", "data"),
        prevent_initial_call=True,
    )(on_shelf)


def _register_saving(app: Dash, desk: Desk) -> None:
    def on_save(_save: Any, _save_as: Any, name: str | None, doc: Any) -> Any:
        trigger, _ = pressed()
        if not doc or trigger is None:
            return no_update
        try:
            if trigger == "save-as" or not doc["file"]:
                wanted = name or ""
                if trigger == "save":
                    wanted = desk.folder.free_name(desk.design(doc["text"]).title)
                read = desk.folder.save_as(wanted, doc["text"])
            else:
                read = desk.folder.save(doc["file"], doc["text"], doc["digest"])
        except Changed as mistake:
            say(str(mistake))
            set_props("shelf-said", {"children": str(mistake)})
            set_props("save-name", {"value": desk.folder.free_name(doc["file"])})
            set_props("shelf-files", {"children": _open_buttons(desk)})
            set_props("raw-text", {"value": doc["text"]})
            set_props("shelf", {"opened": True})
            return no_update
        except UserMistake as mistake:
            say(str(mistake))
            set_props("shelf-said", {"children": str(mistake)})
            return no_update
        say("")
        set_props("shelf-said", {"children": f"Saved as {read.name}."})
        set_props("shelf-files", {"children": _open_buttons(desk)})
        return {**doc, "saved": doc["text"], "file": read.name, "digest": read.digest, "origin": "save"}

    app.callback(
        Output("doc", "data", allow_duplicate=True),
        Input("save", "n_clicks"),
        Input("save-as", "n_clicks"),
        State("save-name", "value"),
        State("doc", "data"),
        prevent_initial_call=True,
    )(on_save)

    def on_download(clicks: Any, doc: Any) -> Any:
        if not clicks or not doc:
            return no_update
        name = (doc["file"] or "design.toml").split("/")[-1]
        return {"content": doc["text"], "filename": name, "type": "application/toml"}

    app.callback(
        Output("downloaded", "data"), Input("download", "n_clicks"), State("doc", "data"), prevent_initial_call=True
    )(on_download)


def _register_text(app: Dash, desk: Desk) -> None:
    def on_text(clicks: Any, text: str | None, doc: Any) -> Any:
        if not clicks or text is None:
            return no_update, no_update
        if len(text) > LONGEST_TEXT:
            return no_update, "That text is too long for a design."
        try:
            desk.design(text)
        except UserMistake as mistake:
            return no_update, html.Ul([html.Li(line) for line in mistake.lines], className="mistakes")
        return (with_text(doc, text, origin="text") if doc else document(text)), None

    app.callback(
        Output("doc", "data", allow_duplicate=True),
        Output("raw-text", "error"),
        Input("raw-use", "n_clicks"),
        State("raw-text", "value"),
        State("doc", "data"),
        prevent_initial_call=True,
    )(on_text)
