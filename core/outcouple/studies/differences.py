"""In what designs differ: conditions they are judged under, and inputs that make them variants."""

from __future__ import annotations

import json
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from outcouple.design import Design, design_from_mapping, design_model
from outcouple.fields import leaves
from outcouple.fields.problems import dotted
from outcouple.metrics import metrics_of
from outcouple.quantities import format_quantity

__all__ = ["Difference", "differences", "under_conditions_of"]

CONDITIONS = ("environment", "decision")
"""Sections that state what a design is judged under."""


@dataclass(frozen=True)
class Difference:
    """One input that is not the same everywhere.

    texts      as each design writes it; None where it has no such input
    condition  True where it belongs to what designs are judged under rather than to the designs
    """

    name: str
    texts: tuple[str | None, ...]
    condition: bool


def differences(designs: Sequence[Design]) -> list[Difference]:
    """Every input in which the designs differ, conditions first, in the order of the file."""
    rows: dict[str, list[str | None]] = {}
    conditions: set[str] = set()
    for at, design in enumerate(designs):
        for name, text, condition in _inputs(design):
            rows.setdefault(name, [None] * len(designs))[at] = text
            if condition:
                conditions.add(name)
    found = [Difference(name, tuple(texts), name in conditions) for name, texts in rows.items() if len(set(texts)) > 1]
    return sorted(found, key=lambda one: not one.condition)


def _inputs(design: Design) -> Iterator[tuple[str, str, bool]]:
    """(name, text, belongs to the conditions) of everything that can differ."""
    yield "geometry", design.geometry.name, False
    for leaf in leaves(design_model(type(design.geometry))):
        yield leaf.name, design.text(leaf.path), leaf.path[0] in CONDITIONS
    for state in {one.family: one for one in design.states}.values():
        row = _row(design, state.family)
        yield f"states.{state.family}.expect", str(row.get("expect", state.expect)), True
        for key in ("touching", "faces", "object", "set"):
            if key in row:
                yield f"states.{state.family}.{key}", _written(row[key]), True
    for one in design.requirements:
        sense = "at_least" if one.at_least is not None else "at_most"
        name = ".".join(part for part in ("requirements", one.metric, one.state, sense) if part)
        metric = metrics_of(design.geometry)[one.metric]
        limit = format_quantity(one.limit, metric.kind, metric.unit or None, digits=10)
        yield name, limit + (f" over {one.over}" if one.over != "nominal" else ""), True
    for tolerance in design.tolerances:
        leaf = next(leaf for leaf in leaves(design_model(type(design.geometry))) if leaf.path == tolerance.path)
        group = f" with {tolerance.group}" if tolerance.group else ""
        yield f"tolerance.{leaf.name}", f"{leaf.text(tolerance.low)} to {leaf.text(tolerance.high)}{group}", True
    for material, values in design.raw.get("materials", {}).items():
        yield f"materials.{material}", _written(values), False


def _row(design: Design, family: str) -> Mapping[str, Any]:
    return next((row for row in design.raw.get("states", []) if row.get("name") == family), {})


def _written(value: Any) -> str:
    """A value as a design file holds it; a name alone without its quotes."""
    return value if isinstance(value, str) else _inline(value)


def _inline(value: Any) -> str:
    """Inline TOML."""
    if isinstance(value, Mapping):
        return "{ " + ", ".join(f"{dotted([key])} = {_inline(one)}" for key, one in value.items()) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(_inline(one) for one in value) + "]"
    return json.dumps(value, ensure_ascii=False)


def under_conditions_of(first: Design, other: Design) -> Design:
    """The other design in the first one's environment, with its decision and its requirements.

    Raises UserMistake where they do not fit, say a requirement on a metric the other sensor does not have.
    """
    data = dict(other.raw)
    for key in (*CONDITIONS, "requirements"):
        if key in first.raw:
            data[key] = first.raw[key]
        else:
            data.pop(key, None)
    return design_from_mapping(data, file=other.file, host=other.host)
