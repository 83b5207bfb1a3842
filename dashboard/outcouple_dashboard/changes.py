"""What a user's action does to a design's text; pure, so that every action can be tested without a page."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import tomlkit

from outcouple.design import Design
from outcouple.design.starter import starter_text
from outcouple.errors import UserMistake
from outcouple.fields import parse_leaf
from outcouple_dashboard.edits import file_value, get_value, set_value
from outcouple_dashboard.entries import entry_at, split

__all__ = [
    "add_requirement",
    "add_state",
    "back_to_file",
    "other_geometry",
    "plain_mistake",
    "put",
    "remove_row",
    "starters",
]

SHARED = ("environment", "emitter", "decision", "materials")
"""Sections that stay when the sensor changes."""


def plain_mistake(mistake: UserMistake) -> tuple[str, ...]:
    """The lines of a mistake without the place in a file that the user does not see."""
    found = []
    for line in mistake.lines:
        head, _, rest = line.partition(" ")
        found.append(rest if head.startswith("design:") and rest else line)
    return tuple(found)


def put(design: Design, text: str, path_text: str, given: str) -> str:
    """The text with an input set as a person typed it; an empty field takes the input out of the file.

    Raises UserMistake with what to write instead.
    """
    path = split(path_text)
    if path[0] == "title" or path[-1] in ("name", "expect"):
        return set_value(text, path, given.strip() or "untitled")
    if path[0] == "states" and path[-1] == "touching" and len(path) == 3:
        return set_value(text, path, _contact(design, given))
    entry = entry_at(design, path)
    if entry is None:
        raise UserMistake(f"{path_text}: no such input")
    value = file_value(entry.leaf, given)
    if given.strip() == "" and entry.leaf.what != "choice":
        if path[0] == "requirements":
            raise UserMistake("a limit is wanted; or remove the requirement")
        return set_value(text, path, None)
    parse_leaf(entry.leaf, value)
    return set_value(text, path, value)


def _contact(design: Design, given: str) -> str:
    given = given.strip()
    if given not in design.host.touching and not design.catalogue.knows(given):
        wrong = design.catalogue.unknown(given)
        raise UserMistake(f"neither a contact nor a material: {wrong[0]}")
    return given


def back_to_file(text: str, saved: str, path_text: str) -> str:
    """The text with one input as the file has it."""
    path = split(path_text)
    return set_value(text, path, get_value(tomlkit.parse(saved).unwrap(), path))


def remove_row(text: str, path_text: str) -> str:
    """The text without one state or requirement."""
    name, number = split(path_text)
    document = tomlkit.parse(text)
    rows: Any = document[name]
    if name == "states" and len(rows) < 2:
        raise UserMistake("the last state stays: a design needs one")
    del rows[int(number)]
    if not rows:
        del document[name]
    return tomlkit.dumps(document)


def add_state(design: Design, text: str) -> str:
    """The text with one more state, a copy of the last one that is no fault, to be changed."""
    document = tomlkit.parse(text)
    taken = {state.family for state in design.states}
    number = next(n for n in range(1, 1000) if f"state {n}" not in taken)
    rows = design.raw.get("states") or [{"expect": "absent", "touching": "dry"}]
    last = next((row for row in reversed(rows) if row.get("role") != "fault"), rows[-1])
    row = tomlkit.table()
    row["name"] = f"state {number}"
    for key, value in last.items():
        if key not in ("name", "role", "describe"):
            row[key] = _inline(value)
    return _append(document, "states", row)


def _inline(value: Any) -> Any:
    """A value whose tables stay on one line."""
    if isinstance(value, Mapping):
        table = tomlkit.inline_table()
        table.update({key: _inline(inner) for key, inner in value.items()})
        return table
    return value


def add_requirement(text: str, metric: str | None, limit: str | None) -> str:
    """The text with one more requirement; ``limit`` as "at least 20" or "at most 5 mm"."""
    if not metric:
        raise UserMistake("choose a metric first")
    sense, _, value = (limit or "").strip().replace("at_", "at ").partition(" ")
    word, _, value = value.strip().partition(" ")
    if sense != "at" or word not in ("least", "most") or not value:
        raise UserMistake('write the limit as "at least 20" or "at most 5 mm"')
    row = tomlkit.table()
    row["metric"] = metric
    try:
        row[f"at_{word}"] = float(value) if "." in value or "e" in value else int(value)
    except ValueError:
        row[f"at_{word}"] = value.strip()
    return _append(tomlkit.parse(text), "requirements", row)


def _append(document: Any, name: str, row: Any) -> str:
    if name not in document:
        document[name] = tomlkit.aot()
    document[name].append(row)
    return tomlkit.dumps(document)


def starters(design_host: Any) -> dict[str, tuple[str, str]]:
    """Job -> (geometry, job) for every job that some geometry serves, and every geometry by its own name."""
    found: dict[str, tuple[str, str]] = {}
    for name in design_host.geometries:
        for job in design_host.geometry(name).jobs:
            found.setdefault(job, (name, job))
    for name in design_host.geometries:
        jobs = design_host.geometry(name).jobs
        found.setdefault(name, (name, jobs[0] if jobs else name))
    return found


def other_geometry(design: Design, text: str, name: str) -> str:
    """The text as a design of another sensor: its starter, with title, surroundings, emitter and decision kept."""
    geometry = design.host.geometry(name)
    fresh = tomlkit.parse(starter_text(geometry, geometry.jobs[0] if geometry.jobs else name))
    old = tomlkit.parse(text)
    fresh["title"] = design.title
    same = ("readout",) if geometry.readout == design.geometry.readout else ()
    for section in (*SHARED, *same):
        if section in old:
            fresh[section] = old[section]
    return tomlkit.dumps(fresh)
