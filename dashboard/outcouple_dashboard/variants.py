"""Variants side by side: what differs, how each stands against its requirements. Draws outcomes, computes nothing."""

from __future__ import annotations

import csv
import io
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from outcouple.design import Design
from outcouple.outcome import Judged, Outcome
from outcouple.quantities import format_quantity, in_unit, is_kind, kind_of
from outcouple_dashboard.entries import requirement_entries, section_groups

__all__ = ["Variant", "as_csv", "differences", "judged_rows", "told_worst", "worst_variant"]

MARKS = {"pass": "met", "fail": "missed", "open": "open"}


@dataclass(frozen=True)
class Variant:
    """One design in a comparison."""

    name: str
    design: Design
    outcome: Outcome


def _inputs(design: Design) -> dict[str, str]:
    """Every input of a design in words: sensor, sections, states, requirements."""
    found = {"sensor": design.geometry.name}
    for group in section_groups(design):
        found |= {entry.leaf.name: entry.text for entry in group.entries}
    for state in design.raw.get("states", []):
        for key, value in state.items():
            if key != "name":
                found[f"state {state['name']}: {key}"] = _flat(value)
    for entry, row in zip(requirement_entries(design), design.raw.get("requirements", []), strict=True):
        of = f" [{row['state']}]" if row.get("state") else ""
        found[f"requirement {row['metric']}{of}: {entry.path[-1].replace('_', ' ')}"] = entry.text
    return found


def _flat(value: Any) -> str:
    if isinstance(value, Mapping):
        return ", ".join(f"{key} {_flat(inner)}" for key, inner in value.items())
    if isinstance(value, list):
        return "; ".join(_flat(inner) for inner in value)
    return str(value)


def differences(variants: Sequence[Variant]) -> list[tuple[str, ...]]:
    """(input, its value in every variant) for every input that is not the same in all; "–" where one has none."""
    inputs = [_inputs(one.design) for one in variants]
    names = list(dict.fromkeys(name for found in inputs for name in found))
    rows = [(name, *(found.get(name, "–") or "not set" for found in inputs)) for name in names]
    return [row for row in rows if len(set(row[1:])) > 1]


def _key(one: Judged) -> tuple[str, str, str]:
    return one.metric, one.state, one.sense


def judged_rows(variants: Sequence[Variant]) -> list[tuple[str, list[Judged | None]]]:
    """Every requirement that some variant states, with its verdict in each; None where a variant does not state it."""
    found: dict[tuple[str, str, str], list[Judged | None]] = {}
    labels: dict[tuple[str, str, str], str] = {}
    for at, variant in enumerate(variants):
        for one in variant.outcome.requirements:
            row = found.setdefault(_key(one), [None] * len(variants))
            row[at] = one
            labels[_key(one)] = one.label + (f" [{one.state}]" if one.state else "")
    return [(labels[key], row) for key, row in found.items()]


def told(one: Judged | None, *, limit: bool = True) -> str:
    """A verdict in a cell: value, mark, limit."""
    if one is None:
        return "not asked"
    value = "open" if one.value is None else format_quantity(one.value, one.kind, unit=one.unit or None)
    wanted = f" ({one.sense} {one.limit_text})" if limit else ""
    return f"{value} {MARKS[one.verdict]}{wanted}" if one.value is not None else f"open{wanted}"


def worst_variant(variants: Sequence[Variant]) -> tuple[Variant, Judged] | None:
    """The variant that misses a requirement by most of its limit, and that requirement; None where none misses."""
    missed = [
        (one.shortfall, variant, one)
        for variant in variants
        for one in variant.outcome.requirements
        if one.verdict == "fail" and one.shortfall is not None
    ]
    if not missed:
        return None
    _, variant, one = max(missed, key=lambda row: row[0])
    return variant, one


def told_worst(variants: Sequence[Variant]) -> str:
    """Which misses by most and what rescues it, in a sentence or two."""
    found = worst_variant(variants)
    if found is None:
        waiting = [one.name for one in variants if one.outcome.verdict == "open"]
        silent = [one.name for one in variants if one.outcome.verdict == "none stated"]
        parts = ["No variant misses a requirement."]
        parts += [f"Something is open in {', '.join(waiting)}."] if waiting else []
        parts += [f"No requirements are stated in {', '.join(silent)}."] if silent else []
        return " ".join(parts)
    variant, one = found
    value = "unknown" if one.value is None else format_quantity(one.value, one.kind, unit=one.unit or None)
    where = f" ({one.at})" if one.at else ""
    told = f"{variant.name} misses by most: {one.label} {value}{where}, needs {one.sense} {one.limit_text}."
    if variant.outcome.advice:
        return f"{told} What would help it most: {variant.outcome.advice[0].text}."
    return told


def as_csv(variants: Sequence[Variant]) -> str:
    """Differences, then every metric with its unit in the head of its row."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow(["kind", "name", "unit", *(_safe(one.name) for one in variants)])
    writer.writerow(["verdict", "", "", *(one.outcome.verdict for one in variants)])
    for name, *values in differences(variants):
        writer.writerow(["input", name, "", *map(_safe, values)])
    for label, row in judged_rows(variants):
        writer.writerow(["requirement", label, "", *(told(one) for one in row)])
    names = list(dict.fromkeys(name for one in variants for name in one.outcome.metrics))
    for name in names:
        writer.writerow(_metric_row(name, variants))
    return out.getvalue()


def _metric_row(name: str, variants: Sequence[Variant]) -> list[str]:
    found = [one.outcome.metrics.get(name) for one in variants]
    first = next(metric for metric in found if metric is not None)
    unit = first.unit if is_kind(first.kind) and first.unit in kind_of(first.kind).units else ""
    cells: list[str] = []
    for metric in found:
        if metric is None or metric.value is None:
            cells.append("" if metric is None else metric.status)
        else:
            cells.append(f"{in_unit(metric.value, metric.kind, unit):.6g}" if unit else f"{metric.value:.6g}")
    return ["metric", name, unit, *cells]


def _safe(text: str) -> str:
    """A text that a spreadsheet does not take for a formula."""
    return f"'{text}" if text[:1] in ("=", "+", "@", "\t") or (text[:1] == "-" and not text[1:2].isdigit()) else text
