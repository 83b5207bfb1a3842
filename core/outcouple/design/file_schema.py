"""JSON Schema of a whole design file, so that an editor completes and checks it while it is written."""

from __future__ import annotations

from typing import Any

from outcouple.design.load import design_model
from outcouple.design.parts import REQUIREMENT_KEYS, STATE_KEYS, TOLERANCE_KEYS
from outcouple.design.states import ObjectPlace
from outcouple.fields import Leaf, json_schema, leaves
from outcouple.fields.schema import leaf_schema
from outcouple.geometry import Geometry
from outcouple.hooks import Host, build_host
from outcouple.metrics import metrics_of

__all__ = ["file_schema"]

Schema = dict[str, Any]

TEXT: Schema = {"type": "string"}
VALUE: Schema = {"type": ["string", "number"]}
"""A quantity whose kind depends on the key beside it: checked when the file is loaded."""


def file_schema(geometry: Geometry, *, host: Host | None = None) -> Schema:
    """JSON Schema (draft 2020-12) of a design file of one geometry.

    It knows sections, states, contacts, requirements and tolerances by name; what depends on the rest of the file
    (does a state exist, is a value within a metric's kind) is told when the file is loaded.
    """
    host = host or build_host()
    schema = json_schema(design_model(type(geometry)))
    defs = schema.pop("$defs", {})
    contact = _contact(host, defs)
    return {
        "$schema": schema["$schema"],
        "title": f"Design file of a {geometry.name}",
        "description": geometry.summary,
        "type": "object",
        "properties": {
            "title": {**TEXT, "description": "name of the design"},
            "geometry": {"const": geometry.name, "description": geometry.summary},
            "notes": {**TEXT, "description": "anything worth keeping"},
            **schema.get("properties", {}),
            "states": {"type": "array", "items": _state(geometry, contact, defs)},
            "requirements": {"type": "array", "items": _requirement(geometry)},
            "tolerance": {
                "type": "object",
                "description": "how far inputs may deviate",
                "properties": _tolerances(geometry),
            },
            "materials": {
                "type": "object",
                "additionalProperties": {"type": "object"},
                "description": "your own materials",
            },
        },
        "required": ["geometry"],
        "additionalProperties": False,
        "$defs": defs,
    }


def _contact(host: Host, defs: Schema) -> Schema:
    """What touches: the name of a contact or a material, or a table."""
    tables = []
    for name, preset in host.touching.items():
        own = json_schema(preset)
        defs.update(own.pop("$defs", {}))
        own.pop("$schema", None)
        properties = {"what": {"const": name, "description": preset.summary}, **own.get("properties", {})}
        required = [] if name == "patches" else ["what"]
        tables.append(
            {**own, "title": name, "properties": properties, "required": [*required, *own.get("required", [])]}
        )
    named = {"type": "string", "description": "a contact or a material", "examples": list(host.touching)}
    defs["Contact"] = {"anyOf": [named, *tables]}
    return {"$ref": "#/$defs/Contact"}


def _state(geometry: Geometry, contact: Schema, defs: Schema) -> Schema:
    place = json_schema(ObjectPlace)
    place.pop("$schema", None)
    defs["ObjectPlace"] = place
    expect: Schema = {"enum": ["absent", "present"]}
    if geometry.measurand:
        leaf = next(one for one in leaves(design_model(type(geometry))) if one.path == geometry.measurand)
        expect = {"anyOf": [expect, leaf_schema(leaf)]}
    known: Schema = {
        "name": {"type": "string", "minLength": 1, "description": "unique in the file"},
        "expect": {**expect, "description": "what the sensor should say in this state"},
        "touching": {**contact, "description": "what touches the wetted faces"},
        "faces": {
            "type": "object",
            "properties": dict.fromkeys(geometry.wetted, contact),
            "additionalProperties": False,
            "description": "what touches single faces",
        },
        "object": {"$ref": "#/$defs/ObjectPlace", "description": "an object of limited size"},
        "set": {"type": "object", "description": "inputs that differ in this state", "properties": _changes(geometry)},
        "role": {"enum": ["normal", "fault"]},
        "describe": TEXT,
    }
    keys = [key for key in STATE_KEYS if key != "object" or geometry.spot_face]
    return _table({key: known[key] for key in keys}, ["name", "expect"])


def _numbers(geometry: Geometry) -> list[Leaf]:
    return [leaf for leaf in leaves(design_model(type(geometry))) if not leaf.structural]


def _changes(geometry: Geometry) -> Schema:
    return {leaf.name: leaf_schema(leaf) for leaf in _numbers(geometry)}


def _requirement(geometry: Geometry) -> Schema:
    known = metrics_of(geometry)
    words = {name: metric.meaning for name, metric in known.items()}
    choices = [{"const": name, "description": meaning} for name, meaning in words.items()]
    parts: Schema = {
        "metric": {"oneOf": choices},
        "at_least": VALUE,
        "at_most": VALUE,
        "state": {**TEXT, "description": "one state alone"},
        "over": {"enum": ["nominal", "corners", "yield"]},
        "area": VALUE,
        "share": VALUE,
        "describe": TEXT,
    }
    table = _table({key: parts[key] for key in REQUIREMENT_KEYS}, ["metric"])
    return {**table, "oneOf": [{"required": ["at_least"]}, {"required": ["at_most"]}]}


def _tolerances(geometry: Geometry) -> Schema:
    """Dotted paths; a table, or the deviation alone."""
    parts = dict.fromkeys(TOLERANCE_KEYS, VALUE)
    found: Schema = {}
    for leaf in _numbers(geometry):
        row = {"anyOf": [VALUE, _table(dict(parts), [])], "description": leaf.describe}
        found[leaf.name] = row
        here = found
        for key in leaf.path[:-1]:
            here = here.setdefault(key, {"type": "object", "properties": {}})["properties"]
        here[leaf.path[-1]] = row
    return found


def _table(properties: Schema, required: list[str]) -> Schema:
    return {"type": "object", "properties": properties, "required": required, "additionalProperties": False}
