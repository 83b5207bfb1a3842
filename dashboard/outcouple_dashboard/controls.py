"""The form of a design: every input with unit, bounds, meaning and reference, drawn from its entry."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import dash_mantine_components as dmc
from dash import html

from outcouple.design import Design
from outcouple.materials import Catalogue
from outcouple.metrics import metrics_of
from outcouple_dashboard.edits import get_value
from outcouple_dashboard.entries import (
    STEPS,
    Entry,
    Group,
    contact_of,
    join,
    requirement_entries,
    section_groups,
    slider_position,
    state_entries,
    words,
)
from outcouple_dashboard.tags import aria

__all__ = ["contact_choices", "folded", "folds", "form", "material_choices", "ref"]

TITLES = {
    "emitter": "Emitter",
    "readout": "Read-out",
    "decision": "Decision",
    "environment": "Surroundings",
}
ORDER = ["label", "input", "description", "error"]
"""Parts of a field from top to bottom."""
Choices = list[dict[str, Any]]


def ref(kind: str, path: Sequence[str] | str) -> dict[str, str]:
    """Id of a part of the form."""
    return {"kind": kind, "path": path if isinstance(path, str) else join(tuple(path))}


Saved = Mapping[str, Any]
Parts = list[Any]


def form(design: Design, saved: Saved, *, opened: Sequence[str] = ()) -> Parts:
    """The form: what decides stands open, the rest is filled in when its fold is opened.

    saved   the file's own content; what differs from it can be put back
    opened  folds that are open already
    """
    return [
        _geometry(design),
        *(_section(group, design, saved, opened) for group in section_groups(design)),
        _states(design, saved, opened),
        _requirements(design, saved, opened),
    ]


def folds(design: Design) -> list[str]:
    """Every fold of a design's form."""
    sections = [f"section/{group.name}" for group in section_groups(design) if _rest(group)]
    return [*sections, *(f"states/{at}" for at in range(len(design.raw.get("states", [])))), "requirements"]


def folded(design: Design, saved: Saved, key: str) -> Parts:
    """What is in a fold; empty where the design has none like it."""
    what, _, name = key.partition("/")
    if what == "requirements":
        return _requirement_rows(design)
    if what == "states":
        return _state_fields(design, int(name), saved) if int(name) < len(design.raw.get("states", [])) else []
    group = next((one for one in section_groups(design) if one.name == name), None)
    return [control(entry, design.catalogue, saved) for entry in _rest(group)] if group is not None else []


def _rest(group: Group) -> list[Entry]:
    """Inputs of a section that do not stand open."""
    return [entry for entry in group.entries if not entry.leaf.deciding]


def _fold(summary: str, key: str, design: Design, saved: Saved, opened: Sequence[str]) -> Any:
    is_open = key in opened
    return html.Div(
        [
            html.Button(
                summary,
                id=ref("fold", key),
                className="fold",
                type="button",
                **aria(expanded="true" if is_open else "false"),
            ),
            html.Div(
                folded(design, saved, key) if is_open else [],
                id=ref("folded", key),
                className="folded",
                hidden=not is_open,
            ),
        ]
    )


def _geometry(design: Design) -> Any:
    data = [{"value": entry.name, "label": entry.name.replace("-", " ")} for entry in design.host.geometries.values()]
    return html.Div(
        [
            dmc.TextInput(id=ref("value", "title"), label="Title", value=design.title, debounce=True, size="xs"),
            dmc.Select(
                id="geometry-pick",
                label="Sensor",
                description=design.geometry.summary,
                data=data,
                value=design.geometry.name,
                searchable=True,
                allowDeselect=False,
                size="xs",
                nothingFoundMessage="no such sensor",
                inputWrapperOrder=ORDER,
            ),
        ],
        className="group group-head",
    )


def _section(group: Group, design: Design, saved: Saved, opened: Sequence[str]) -> Any:
    title = TITLES.get(group.name, words(group.name).capitalize())
    heading = f"section-{group.name}"
    shown = [control(entry, design.catalogue, saved) for entry in group.entries if entry.leaf.deciding]
    parts: Parts = [html.H3(title, id=heading, title=group.about), *shown]
    rest = _rest(group)
    if rest:
        own = sum(entry.given for entry in rest)
        told = f"{len(rest)} more" + (f", {own} set in the file" if own else "")
        parts.append(_fold(told, f"section/{group.name}", design, saved, opened))
    return html.Section(parts, className="group", **aria(labelledby=heading))


def control(entry: Entry, catalogue: Catalogue, saved: Mapping[str, Any]) -> Any:
    """One input with what belongs to it."""
    line: list[Any] = [_field(entry, catalogue)]
    position = slider_position(entry)
    if position is not None:
        line.append(
            dmc.Slider(
                id=ref("slider", entry.path),
                min=0,
                max=STEPS,
                step=1,
                value=position,
                label=None,
                size="sm",
                thumbSize=14,
                updatemode="mouseup",
                thumbLabel=f"{entry.label}, slider",
                className="companion",
            )
        )
    changed = _differs(entry, saved)
    back = html.Button(
        "back to file",
        id=ref("back", entry.path),
        className="back",
        hidden=not changed,
        title="put the value of the file back",
        type="button",
        **aria(label=f"{entry.label}: back to the value of the file"),
    )
    name = "line" if position is not None else "line alone"
    return html.Div([html.Div(line, className=name), back], className="control")


def _differs(entry: Entry, saved: Mapping[str, Any]) -> bool:
    given = get_value(saved, entry.path)
    now = entry.text if entry.given else None
    return (None if given is None else _plain(given)) != now


def _plain(given: Any) -> str:
    return ("true" if given else "false") if isinstance(given, bool) else str(given)


def _about(entry: Entry) -> str:
    """Meaning, bounds and reference in one line or two."""
    leaf = entry.leaf
    parts = [leaf.describe]
    if leaf.bounds:
        parts.append(leaf.bounds)
    told = "; ".join(parts)
    if not entry.given and leaf.default_text:
        told += f". Default{f', from: {leaf.reference}' if leaf.reference else ''}"
    elif leaf.reference and leaf.default_text:
        told += f". Default {leaf.default_text}, from: {leaf.reference}"
    return told


def _field(entry: Entry, catalogue: Catalogue) -> Any:
    leaf = entry.leaf
    common: dict[str, Any] = {
        "id": ref("value", entry.path),
        "label": entry.label,
        "description": _about(entry),
        "size": "xs",
        "inputWrapperOrder": ORDER,
        "value": entry.text,
    }
    if leaf.what == "choice":
        data = [{"value": word, "label": word or "not stated"} for word in leaf.choices]
        return dmc.Select(**common, data=data, allowDeselect=False, searchable=len(data) > 6)
    if leaf.what == "flag":
        data = [{"value": "true", "label": "yes"}, {"value": "false", "label": "no"}]
        return dmc.Select(**common, data=data, allowDeselect=False)
    if leaf.what == "material":
        return dmc.Autocomplete(
            **common, data=material_choices(catalogue), debounce=True, limit=200, maxDropdownHeight=280
        )
    unit = leaf.unit if leaf.what == "quantity" else ""
    placeholder = "not set" if leaf.optional else ""
    return dmc.TextInput(
        **common,
        debounce=True,
        placeholder=f"{placeholder}{f', in {unit}' if unit and placeholder else unit}",
        autoComplete="off",
        spellCheck=False,
    )


def material_choices(catalogue: Catalogue) -> Choices:
    """All materials by kind, for a picker with search."""
    kinds: dict[str, list[str]] = {}
    for material in catalogue:
        kinds.setdefault(material.kind, []).append(material.name)
    return [{"group": kind, "items": sorted(names)} for kind, names in sorted(kinds.items())]


def contact_choices(design: Design) -> Choices:
    """What can touch: the presets, then every material as "immersed in it"."""
    presets = [what for what in design.host.touching if what != "immersed"]
    return [{"group": "contact", "items": presets}, *material_choices(design.catalogue)]


def _states(design: Design, saved: Saved, opened: Sequence[str]) -> Any:
    rows = []
    for at, row in enumerate(design.raw.get("states", [])):
        expect = str(row.get("expect", ""))
        worded = dict(zip(("absent", "present"), design.geometry.words, strict=True)).get(expect, expect)
        fault = ", a fault" if row.get("role") == "fault" else ""
        rows.append(_fold(f"{row['name']} · {worded}{fault}", f"states/{at}", design, saved, opened))
    add = html.Button("Add a state", id="state-add", className="quiet", type="button")
    return html.Section(
        [html.H3("States", id="section-states"), *rows, add], className="group", **aria(labelledby="section-states")
    )


def _state_fields(design: Design, at: int, saved: Saved) -> Parts:
    row = design.raw["states"][at]
    path = ("states", str(at))
    name, expect = str(row["name"]), str(row.get("expect", ""))
    numeric = expect not in ("absent", "present")
    fields: Parts = [
        dmc.TextInput(id=ref("value", (*path, "name")), label="name", value=name, debounce=True, size="xs")
    ]
    fields.append(_expectation(design, path, expect, numeric))
    if "faces" in row:
        fields.append(html.P("Each face has its own contact; change it in the file's text.", className="faint"))
    elif not numeric:
        fields.append(_contact(design, path, row))
    fields += [control(entry, design.catalogue, saved) for entry in state_entries(design, at)]
    fields.append(_remove("Remove this state", path, f"Remove the state {name}"))
    return fields


def _expectation(design: Design, path: tuple[str, ...], expect: str, numeric: bool) -> Any:
    id_ = ref("value", (*path, "expect"))
    if numeric:
        return dmc.TextInput(id=id_, label="stands for", value=expect, debounce=True, size="xs")
    data = [
        {"value": word, "label": shown}
        for word, shown in zip(("absent", "present"), design.geometry.words, strict=True)
    ]
    return dmc.Select(id=id_, label="should read", size="xs", value=expect, allowDeselect=False, data=data)


def _contact(design: Design, path: tuple[str, ...], row: Mapping[str, Any]) -> Any:
    return dmc.Autocomplete(
        id=ref("value", (*path, "touching")),
        label="what touches",
        description="a contact, or a material it is immersed in",
        inputWrapperOrder=ORDER,
        value=contact_of(design, row)[0],
        data=contact_choices(design),
        debounce=True,
        limit=200,
        maxDropdownHeight=280,
        size="xs",
    )


def _remove(text: str, path: tuple[str, ...], told: str) -> Any:
    return html.Button(text, id=ref("remove", path), className="quiet", type="button", **aria(label=told))


def _requirements(design: Design, saved: Saved, opened: Sequence[str]) -> Any:
    count = len(design.requirements)
    told = f"{count} stated" if count else "none stated"
    return html.Section(
        [
            html.H3("Requirements", id="section-requirements"),
            _fold(told, "requirements", design, saved, opened),
        ],
        className="group",
        **aria(labelledby="section-requirements"),
    )


def _requirement_rows(design: Design) -> Parts:
    known = metrics_of(design.geometry)
    rows: Parts = []
    for entry, row in zip(requirement_entries(design), design.raw.get("requirements", []), strict=True):
        metric = known[row["metric"]]
        of = f" [{row['state']}]" if row.get("state") else ""
        limit = dmc.TextInput(
            id=ref("value", entry.path),
            label=f"{metric.label}{of}, {words(entry.path[-1])}",
            description=metric.meaning,
            inputWrapperOrder=ORDER,
            value=entry.text,
            debounce=True,
            size="xs",
        )
        remove = _remove("Remove", entry.path[:2], f"Remove the requirement on {metric.label}")
        rows.append(html.Div([limit, remove], className="control"))
    return [*rows, _new_requirement(design)]


def _new_requirement(design: Design) -> Any:
    data = [{"value": name, "label": metric.label} for name, metric in metrics_of(design.geometry).items()]
    return html.Div(
        [
            dmc.Select(
                id=ref("new-requirement", "metric"), label="another metric", data=data, searchable=True, size="xs"
            ),
            dmc.TextInput(
                id=ref("new-requirement", "limit"),
                label="limit",
                placeholder="at least 20",
                size="xs",
                description="at least or at most",
            ),
            html.Button("Add", id=ref("add-requirement", ""), className="quiet", type="button"),
        ],
        className="pair",
    )
