"""JSON Schema of sections, so that editors complete and check a design file while it is written."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, Any

from outcouple.fields.leaves import Leaf
from outcouple.quantities import kind_of

if TYPE_CHECKING:
    from pydantic import BaseModel

__all__ = ["json_schema", "leaf_schema"]

NUMBER = r"[+−-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?"
_SPELLINGS = (
    (r"^u(?=\w)", "[uµμ]"),
    (r"deg", "(deg|°)"),
    (r"ohm", "(ohm|Ω)"),
    (r"rtHz", "(rtHz|√Hz)"),
    (r"(?<=m)2", "[2²]"),
    (r"(?<=m)3", "[3³]"),
)
DRAFT = "https://json-schema.org/draft/2020-12/schema"


def json_schema(model: type[BaseModel]) -> dict[str, Any]:
    """JSON Schema (draft 2020-12) of a section as it stands in a file: quantities are texts with units."""
    schema = model.model_json_schema(mode="validation")
    for part in (schema, *schema.get("$defs", {}).values()):
        for inner in part.get("properties", {}).values():
            if "$ref" in inner:  # pydantic writes a section's default with SI numbers, which a file may not hold
                inner.pop("default", None)
    return {"$schema": DRAFT, **schema}


def leaf_schema(leaf: Leaf) -> dict[str, Any]:
    """JSON Schema of one leaf."""
    schema: dict[str, Any] = {"description": _description(leaf), **_type(leaf)}
    if leaf.default_text:
        schema["default"] = _default(leaf)
    return schema


def _type(leaf: Leaf) -> dict[str, Any]:
    if leaf.what == "quantity":
        return _quantity(leaf)
    if leaf.what == "count":
        limits = {"minimum": leaf.low, "maximum": leaf.high}
        return {"type": "integer"} | {key: int(value) for key, value in limits.items() if value is not None}
    if leaf.what == "choice":
        return {"type": "string", "enum": list(leaf.choices)}
    return {"type": "boolean"} if leaf.what == "flag" else {"type": "string", "minLength": 1}


def _quantity(leaf: Leaf) -> dict[str, Any]:
    kind = kind_of(leaf.kind)
    units = "|".join(_unit(unit) for unit in kind.units if unit)
    tail = f"\\s*({units}){'?' if kind.plain else ''}" if units else ""
    text = {"type": "string", "pattern": f"^\\s*{NUMBER}{tail}\\s*$", "examples": _examples(leaf)}
    if not kind.plain:
        return text
    return {"anyOf": [{"type": "number"}, text]}


def _unit(unit: str) -> str:
    """A unit in every spelling that is read."""
    pattern = re.escape(unit)
    for plain, spellings in _SPELLINGS:
        pattern = re.sub(plain, spellings, pattern)
    return pattern


def _examples(leaf: Leaf) -> list[str]:
    limits = [limit.text for limit in (leaf.lowest, leaf.highest) if limit is not None and not limit.open]
    return [text for text in dict.fromkeys([leaf.default_text, *limits]) if text]


def _default(leaf: Leaf) -> Any:
    if leaf.what in ("count", "flag") or (leaf.what == "quantity" and not leaf.unit):
        return leaf.default
    return leaf.default_text


def _description(leaf: Leaf) -> str:
    source = f". Reference: {leaf.reference}" if leaf.reference else ""
    return f"{leaf.describe}{f' ({leaf.bounds})' if leaf.bounds else ''}{source}"
