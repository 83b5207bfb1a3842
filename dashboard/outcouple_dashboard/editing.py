"""From controls to the document and back: the one callback that changes a design, and what a link does."""

from __future__ import annotations

import json
from typing import Any
from urllib.parse import parse_qs

import tomlkit
from dash import ALL, Dash, Input, Output, State, no_update, set_props

from outcouple.errors import UserMistake
from outcouple_dashboard import changes
from outcouple_dashboard.controls import folded, form, ref
from outcouple_dashboard.desk import Desk
from outcouple_dashboard.documents import from_link, with_text
from outcouple_dashboard.edits import get_value
from outcouple_dashboard.entries import Entry, contact_of, entry_at, slider_position, slider_text, split
from outcouple_dashboard.tags import changed_inputs, pressed

__all__ = ["register", "say", "shown_text", "vary_asked"]


def register(app: Dash, desk: Desk) -> None:
    """Form, edits, rows added and removed, links."""
    _register_link(app)
    _register_form(app, desk)
    _register_values(app, desk)
    _register_rows(app, desk)


def say(text: str) -> None:
    """A message on top of the page."""
    set_props("message", {"children": text})
    set_props("message-box", {"hidden": not text})


def _register_link(app: Dash) -> None:
    def on_open(search: str | None, doc: Any) -> Any:
        asked = parse_qs((search or "").lstrip("?"))
        link = asked.get("d", [""])[0]
        if doc or not link:
            return no_update, no_update, no_update
        try:
            return *from_link(link), vary_asked(asked.get("v", [""])[0])
        except UserMistake as mistake:
            say(str(mistake))
            return no_update, no_update, no_update

    app.callback(
        Output("doc", "data"),
        Output("pins", "data"),
        Output("vary-asked", "data"),
        Input("url", "search"),
        State("doc", "data"),
    )(on_open)


def vary_asked(text: str) -> dict[str, list[str]]:
    """What a link says of the Vary page: [input, from, to] of "x" and "y", [metric]; nothing where it is damaged."""
    try:
        values = json.loads(text)
    except (ValueError, RecursionError):
        return {}
    if not (isinstance(values, list) and len(values) == 7 and all(isinstance(one, str) for one in values)):
        return {}
    return {"x": values[:3], "y": values[3:6], "metric": values[6:]}


def _register_form(app: Dash, desk: Desk) -> None:
    """The form is built anew only where a change did not come from one of its own controls."""

    def on_form(key: Any, doc: Any, folds: Any) -> Any:
        if not doc:
            return no_update
        try:
            design = desk.design(doc["text"])
        except UserMistake:
            return []
        return form(design, _saved(doc), opened=folds or [])

    app.callback(
        Output("form", "children"),
        Input("form-key", "data"),
        State("doc", "data"),
        State("folds", "data"),
        prevent_initial_call=True,
    )(on_form)

    def on_fold(_clicks: Any, doc: Any, folds: Any) -> Any:
        name, _ = pressed()
        if not doc or name is None:
            return no_update
        key, opened = name["path"], list(folds or [])
        shut = key in opened
        inside = [] if shut else folded(desk.design(doc["text"]), _saved(doc), key)
        set_props(ref("folded", key), {"children": inside, "hidden": shut})
        set_props(name, {"aria-expanded": "false" if shut else "true"})
        return [one for one in opened if one != key] if shut else [*opened, key]

    app.callback(
        Output("folds", "data"),
        Input({"kind": "fold", "path": ALL}, "n_clicks"),
        State("doc", "data"),
        State("folds", "data"),
        prevent_initial_call=True,
    )(on_fold)


def _saved(doc: Any) -> Any:
    """The file's own content, empty where that cannot be read."""
    try:
        return tomlkit.parse(doc["saved"]).unwrap()
    except Exception:  # a file that is no TOML has nothing to go back to
        return {}


def shown_text(desk: Desk, text: str, path_text: str) -> str | None:
    """What the control at a path shows for a document; None where there is no such control."""
    path = split(path_text)
    design = desk.design(text)
    if path[-1] in ("title", "name", "expect") and path[0] in ("title", "states"):
        found = get_value(design.raw, path)
        return str(found) if found is not None else ("untitled" if path == ("title",) else None)
    if path[0] == "states" and len(path) == 3 and path[2] == "touching":
        row = get_value(design.raw, path[:2])
        return contact_of(design, row)[0] if row is not None else None
    entry = entry_at(design, path)
    return None if entry is None else entry.text


def _register_values(app: Dash, desk: Desk) -> None:
    def on_value(_values: Any, _sliders: Any, _backs: Any, doc: Any) -> Any:
        if not doc:
            return no_update
        new = doc
        for name, given in changed_inputs():  # more than one where a form was drawn anew; those hold what they held
            if given is not None and isinstance(name, dict):
                new = change(desk, new, name["kind"], name["path"], given)
        return new if new is not doc else no_update

    app.callback(
        Output("doc", "data", allow_duplicate=True),
        Input({"kind": "value", "path": ALL}, "value"),
        Input({"kind": "slider", "path": ALL}, "value"),
        Input({"kind": "back", "path": ALL}, "n_clicks"),
        State("doc", "data"),
        prevent_initial_call=True,
    )(on_value)


def change(desk: Desk, doc: Any, kind: str, path_text: str, given: Any) -> Any:
    """The document after one control was moved: the same where nothing changed, or where what was given cannot be.

    What is wrong is said beside the control.
    """
    text = doc["text"]
    shown: str | None = ""
    try:
        shown = shown_text(desk, text, path_text)
        if shown is None:
            return doc
        if kind == "back":
            new = changes.back_to_file(text, doc["saved"], path_text)
        else:
            if kind == "slider":
                entry = entry_at(desk.design(text), split(path_text))
                if entry is None or round(float(given)) == slider_position(entry):
                    return doc
                given = slider_text(entry.leaf, float(given))
            if str(given).strip() == shown.strip():
                set_props(ref("value", path_text), {"error": None})
                return doc
            new = changes.put(desk.design(text), text, path_text, str(given))
        desk.design(new)
    except UserMistake as mistake:
        told = " ".join(changes.plain_mistake(mistake))
        set_props(ref("value", path_text), {"error": f"{told}. Everything shown keeps {shown or 'what it was'}."})
        return doc
    _follow_controls(desk, doc, path_text, new)
    structural = new.count("[[states]]") != text.count("[[states]]") or path_text.endswith(
        ("/touching", "/name", "/expect")
    )
    return with_text(doc, new, origin="structure" if structural else "control")


def _follow_controls(desk: Desk, doc: Any, path_text: str, new: str) -> None:
    """Field, slider and back-to-file of the input that changed."""
    shown = shown_text(desk, new, path_text)
    set_props(ref("value", path_text), {"value": shown, "error": None})
    path = split(path_text)
    entry: Entry | None = entry_at(desk.design(new), path)
    if entry is None:
        return
    position = slider_position(entry)
    if position is not None:
        set_props(ref("slider", path_text), {"value": position})
    same = get_value(_saved(doc), path) == get_value(tomlkit.parse(new).unwrap(), path)
    set_props(ref("back", path_text), {"hidden": same})


def _register_rows(app: Dash, desk: Desk) -> None:
    """States and requirements added and removed, and another sensor."""

    def on_rows(_removes: Any, _state: Any, _requirement: Any, sensor: Any, wanted: Any, doc: Any, folds: Any) -> Any:
        trigger, _ = pressed()
        if not doc or trigger is None:
            return no_update
        text = doc["text"]
        try:
            design = desk.design(text)
            if isinstance(trigger, dict) and trigger["kind"] == "remove":
                new = changes.remove_row(text, trigger["path"])
            elif isinstance(trigger, dict):
                new = changes.add_requirement(text, *wanted)
            elif trigger == "state-add":
                new = changes.add_state(design, text)
                at = len(design.raw.get("states", []))
                set_props("folds", {"data": [*(folds or []), f"states/{at}"]})
            elif sensor == design.geometry.name:
                return no_update
            else:
                new = changes.other_geometry(design, text, sensor)
            desk.design(new)
        except UserMistake as mistake:
            say(" ".join(changes.plain_mistake(mistake)))
            return no_update
        return with_text(doc, new, origin="structure")

    app.callback(
        Output("doc", "data", allow_duplicate=True),
        Input({"kind": "remove", "path": ALL}, "n_clicks"),
        Input("state-add", "n_clicks"),
        Input({"kind": "add-requirement", "path": ALL}, "n_clicks"),
        Input("geometry-pick", "value"),
        State({"kind": "new-requirement", "path": ALL}, "value"),
        State("doc", "data"),
        State("folds", "data"),
        prevent_initial_call=True,
    )(on_rows)

    def on_advice(clicks: Any, taken: str | None, doc: Any) -> Any:
        if not clicks or not doc or not taken:
            return no_update
        path, _, value = taken.partition("=")
        try:
            design = desk.design(doc["text"])
            new = changes.put(design, doc["text"], path.replace(".", "/"), value)
            desk.design(new)
        except UserMistake as mistake:
            say(str(mistake))
            return no_update
        return with_text(doc, new, origin="advice")

    app.callback(
        Output("doc", "data", allow_duplicate=True),
        Input("advice-take", "n_clicks"),
        State("advice-take", "value"),
        State("doc", "data"),
        prevent_initial_call=True,
    )(on_advice)
