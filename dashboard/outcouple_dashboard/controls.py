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

__all__ = ["contact_choices", "form", "material_choices", "ref"]

TITLES = {
    "emitter": "Emitter",
    "readout": "Read-out",
    "decision": "Decision",
    "environment": "Surroundings",
}
Choices = list[dict[str, Any]]


def ref(kind: str, path: Sequence[str] | str) -> dict[str, str]:
    """Id of a part of the form."""
    return {"kind": kind, "path": path if isinstance(path, str) else join(tuple(path))}


def form(design: Design, saved: Mapping[str, Any]) -> list[Any]:
    """All of it. ``saved`` is the file's own content; what differs from it can be put back."""
    parts: list[Any] = [_geometry(design)]
    parts += [_section(group, design, saved) for group in section_groups(design)]
    parts.append(_states(design, saved))
    parts.append(_requirements(design, saved))
    return parts


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
                inputWrapperOrder=["label", "input", "description", "error"],
            ),
        ],
        className="group group-head",
    )


def _section(group: Group, design: Design, saved: Mapping[str, Any]) -> Any:
    title = TITLES.get(group.name, words(group.name).capitalize())
    heading = f"section-{group.name}"
    controls = {entry.path: control(entry, design.catalogue, saved) for entry in group.entries}
    shown = [controls[entry.path] for entry in group.entries if entry.leaf.deciding]
    rest = [entry for entry in group.entries if not entry.leaf.deciding]
    parts: list[Any] = [html.H3(title, id=heading, title=group.about), *shown]
    if rest:
        own = sum(entry.given for entry in rest)
        told = f"{len(rest)} more" + (f", {own} set in the file" if own else "")
        parts.append(_folded(told, [controls[entry.path] for entry in rest]))
    return html.Section(parts, className="group", **aria(labelledby=heading))


def _folded(summary: str, parts: list[Any]) -> Any:
    return html.Details([html.Summary(summary), html.Div(parts, className="folded")])


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
        "inputWrapperOrder": ["label", "input", "description", "error"],
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


def _states(design: Design, saved: Mapping[str, Any]) -> Any:
    rows = [
        row for row in (_state(design, at, saved) for at in range(len(design.raw.get("states", [])))) if row is not None
    ]
    add = html.Button("Add a state", id="state-add", className="quiet", type="button")
    return html.Section(
        [html.H3("States", id="section-states"), *rows, add], className="group", **aria(labelledby="section-states")
    )


def _state(design: Design, at: int, saved: Mapping[str, Any]) -> Any:
    row = design.raw["states"][at]
    path = ("states", str(at))
    shown, _ = contact_of(design, row)
    expect = str(row.get("expect", ""))
    worded = dict(zip(("absent", "present"), design.geometry.words, strict=True)).get(expect, expect)
    fault = ", a fault" if row.get("role") == "fault" else ""
    name = str(row["name"])
    numeric = expect not in ("absent", "present")
    fields: list[Any] = [
        dmc.TextInput(id=ref("value", (*path, "name")), label="name", value=name, debounce=True, size="xs"),
        dmc.TextInput(id=ref("value", (*path, "expect")), label="stands for", value=expect, debounce=True, size="xs")
        if numeric
        else dmc.Select(
            id=ref("value", (*path, "expect")),
            label="should read",
            size="xs",
            value=expect,
            allowDeselect=False,
            data=[
                {"value": "absent", "label": design.geometry.words[0]},
                {"value": "present", "label": design.geometry.words[1]},
            ],
        ),
    ]
    if "faces" in row:
        fields.append(html.P("Each face has its own contact; change it in the file's text.", className="faint"))
    elif not numeric:
        fields.append(
            dmc.Autocomplete(
                id=ref("value", (*path, "touching")),
                label="what touches",
                description="a contact, or a material it is immersed in",
                inputWrapperOrder=["label", "input", "description", "error"],
                value=shown,
                data=contact_choices(design),
                debounce=True,
                limit=200,
                maxDropdownHeight=280,
                size="xs",
            )
        )
    fields += [control(entry, design.catalogue, saved) for entry in state_entries(design, at)]
    fields.append(
        html.Button(
            "Remove this state",
            id=ref("remove", path),
            className="quiet",
            type="button",
            **aria(label=f"Remove the state {name}"),
        )
    )
    return _folded(f"{name} · {worded}{fault}", fields)


def _requirements(design: Design, saved: Mapping[str, Any]) -> Any:
    known = metrics_of(design.geometry)
    rows = []
    for entry, row in zip(requirement_entries(design), design.raw.get("requirements", []), strict=True):
        metric = known[row["metric"]]
        sense = words(entry.path[-1])
        of = f" [{row['state']}]" if row.get("state") else ""
        rows.append(
            html.Div(
                [
                    dmc.TextInput(
                        id=ref("value", entry.path),
                        label=f"{metric.label}{of}, {sense}",
                        description=metric.meaning,
                        inputWrapperOrder=["label", "input", "description", "error"],
                        value=entry.text,
                        debounce=True,
                        size="xs",
                    ),
                    html.Button(
                        "Remove",
                        id=ref("remove", entry.path[:2]),
                        className="quiet",
                        type="button",
                        **aria(label=f"Remove the requirement on {metric.label}"),
                    ),
                ],
                className="control",
            )
        )
    add = html.Div(
        [
            dmc.Select(
                id="requirement-metric",
                label="another metric",
                data=[{"value": name, "label": metric.label} for name, metric in known.items()],
                searchable=True,
                size="xs",
            ),
            dmc.TextInput(
                id="requirement-limit",
                label="limit",
                placeholder="at least 20",
                size="xs",
                description="at least or at most",
            ),
            html.Button("Add", id="requirement-add", className="quiet", type="button"),
        ],
        className="pair",
    )
    told = f"Requirements ({len(rows)})" if rows else "Requirements: none stated"
    return html.Section(
        [
            html.H3("Requirements", id="section-requirements"),
            _folded(told, [*rows, add]),
        ],
        className="group",
        **aria(labelledby="section-requirements"),
    )
