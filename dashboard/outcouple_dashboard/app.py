"""The application: one page frame, one document per browser tab, three pages that draw it."""

from __future__ import annotations

import logging
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import dash_mantine_components as dmc
from dash import Dash, Input, Output, State, dcc, html, set_props

from outcouple.hooks import Host, build_host
from outcouple_dashboard import editing, guard, shelf
from outcouple_dashboard.desk import Desk
from outcouple_dashboard.files import Folder
from outcouple_dashboard.jobs import Jobs
from outcouple_dashboard.pages import compare, design, vary
from outcouple_dashboard.tags import aria, local

__all__ = ["create_app", "register"]

log = logging.getLogger(__name__)

PAGES = (("Design", "/"), ("Vary", "/vary"), ("Compare", "/compare"))
INDEX = """<!DOCTYPE html>
<html lang="en">
<head>{%metas%}<title>{%title%}</title>{%favicon%}{%css%}</head>
<body>{%app_entry%}{%config%}{%scripts%}{%renderer%}</body>
</html>"""
THEME = {
    "primaryColor": "teal",
    "fontFamily": "system-ui, sans-serif",
    "defaultRadius": "sm",
    "primaryShade": {"light": 8, "dark": 5},
}


class Page(Dash):
    """The application with what its callbacks share."""

    desk: Desk


def create_app(
    folder: str | Path, *, host: Host | None = None, hosts: Sequence[str] = (), token: str = "", workers: int = 2
) -> Page:
    """The page on a folder of design files; ``app.server`` is what a web server runs.

    hosts  names it may be called by beside those of this machine's loopback
    token  what a browser must bring, where others can reach it; empty where nobody can
    """
    app = Page(
        __name__,
        title="outcouple",
        update_title="",
        index_string=INDEX,
        assets_folder=str(Path(__file__).parent / "assets"),
        suppress_callback_exceptions=True,
        on_error=_on_error,
        enable_mcp=False,
        serve_locally=True,
    )
    desk = app.desk = Desk(Folder(Path(folder)), host or build_host(), Jobs(workers))
    app.layout = layout(desk)
    register(app, desk)
    guard.protect(app, hosts=hosts, token=token)
    return app


def _on_error(error: Exception) -> None:
    """Nothing a user does may stop the page: say what happened, keep the rest."""
    log.error("a callback failed", exc_info=error)
    set_props("message", {"children": f"Something went wrong here ({type(error).__name__}). Your design is untouched."})
    set_props("message-box", {"hidden": False})


def layout(desk: Desk) -> Any:
    """The frame: header, the form on the left, pages on the right."""
    return dmc.MantineProvider(
        [
            dcc.Location(id="url", refresh=False),
            dcc.Store(id="doc"),
            dcc.Store(id="doc-vary"),
            dcc.Store(id="doc-compare"),
            dcc.Store(id="folds", data=[]),
            dcc.Store(id="vary-setup"),
            dcc.Store(id="vary-asked"),
            dcc.Store(id="form-key"),
            dcc.Store(id="link"),
            dcc.Store(id="tab"),
            dcc.Store(id="pins", data=[]),
            dcc.Store(id="theme", storage_type="local"),
            html.Div(id="sink", hidden=True),
            html.A("Skip to the results", href="#results", className="skip"),
            _header(),
            html.Div(
                [
                    html.P("", id="message"),
                    html.Button("Close", id="message-close", className="quiet", type="button"),
                ],
                id="message-box",
                className="message",
                role="alert",
                hidden=True,
            ),
            shelf.drawer(desk),
            html.Main(
                [
                    shelf.welcome(desk),
                    html.Div(
                        [
                            html.Aside(
                                html.Div(id="form", className="form"),
                                className="side",
                                **aria(label="Inputs of the design"),
                            ),
                            html.Div(
                                [
                                    html.H1("outcouple", id="headline-title"),
                                    html.Div(design.layout(), id="page-design"),
                                    html.Div(vary.layout(), id="page-vary", hidden=True),
                                    html.Div(compare.layout(), id="page-compare", hidden=True),
                                ],
                                id="results",
                                className="results",
                                tabIndex=-1,
                            ),
                        ],
                        id="work",
                        className="work",
                        hidden=True,
                    ),
                ]
            ),
        ],
        id="provider",
        theme=THEME,
        forceColorScheme="light",
    )


def _header() -> Any:
    links = [
        dcc.Link(name, href=href, id=f"nav-{name.lower()}", className="nav", refresh=False) for name, href in PAGES
    ]

    def button(text: str, name: str, **more: Any) -> Any:
        return html.Button(text, id=name, className="quiet", type="button", **more)

    return html.Header(
        [
            html.Span("outcouple", className="brand"),
            html.Nav(links, **aria(label="Pages")),
            html.Span([html.Span("no design", id="file-name"), html.Span("", id="file-standing")], className="file"),
            button("Undo", "undo", title="Ctrl+Z", disabled=True),
            button("Redo", "redo", title="Ctrl+Shift+Z", disabled=True),
            button("Designs…", "shelf-open"),
            button("Save", "save", title="Ctrl+S"),
            button("Copy link", "copy-link", title="a link that carries the whole design as it stands"),
            button("Dark", "theme-switch", **aria(pressed="false")),
        ],
        className="bar",
    )


def register(app: Dash, desk: Desk) -> None:
    """Every callback; nothing is registered at import, so that several applications can live side by side."""
    editing.register(app, desk)
    shelf.register(app, desk)
    design.register(app, desk)
    vary.register(app, desk)
    compare.register(app, desk)
    _register_frame(app)


def _register_frame(app: Dash) -> None:
    """What happens in the browser alone: which page shows, the theme, undo, the address."""

    def here(function: str, *wires: Any, **more: Any) -> None:
        local(app, function, *wires, **more)

    here("newTab", Output("tab", "data"), Input("url", "id"))
    here(
        "showPage",
        Output("page-design", "hidden"),
        Output("page-vary", "hidden"),
        Output("page-compare", "hidden"),
        Input("url", "pathname"),
    )
    here("firstTheme", Output("theme", "data"), Input("theme-switch", "n_clicks"), Input("theme", "modified_timestamp"))
    here(
        "applyTheme",
        Output("provider", "forceColorScheme"),
        Output("theme-switch", "children"),
        Output("theme-switch", "aria-pressed"),
        Input("theme", "data"),
    )
    here(
        "timeTravel",
        Output("doc", "data", allow_duplicate=True),
        Input("undo", "n_clicks"),
        Input("redo", "n_clicks"),
        prevent_initial_call=True,
    )
    here(
        "address",
        Output("sink", "children"),
        Input("link", "data"),
        Input("url", "pathname"),
        Input("vary-setup", "data"),
    )
    here("copyLink", Output("copy-link", "children"), Input("copy-link", "n_clicks"), prevent_initial_call=True)
    here(
        "closeMessage",
        Output("message-box", "hidden", allow_duplicate=True),
        Input("message-close", "n_clicks"),
        prevent_initial_call=True,
    )
    here(
        "spread",
        Output("form-key", "data"),
        Output("undo", "disabled"),
        Output("redo", "disabled"),
        Output("work", "hidden"),
        Output("welcome", "hidden"),
        Output("file-name", "children"),
        Output("file-standing", "children"),
        Output("save", "disabled"),
        Output("doc-vary", "data"),
        Output("doc-compare", "data"),
        Input("doc", "data"),
        Input("url", "pathname"),
        State("form-key", "data"),
    )
