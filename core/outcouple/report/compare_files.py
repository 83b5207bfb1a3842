"""A comparison as rows for a spreadsheet and as plain data."""

from __future__ import annotations

from typing import Any

from outcouple.quantities import si_unit
from outcouple.report.cells import finite, metric_unit, shown_number
from outcouple.studies.compared import Cell, Comparison, Row, Variant
from outcouple.studies.corners import Worst
from outcouple.studies.flips import Flip
from outcouple.studies.rescue import Rescue
from outcouple.version import VERSION

__all__ = ["comparison_data", "comparison_rows"]

SCHEMA = 1
HEADER = (
    "variant",
    "requirement",
    "state",
    "over",
    "asked",
    "unit",
    "sense",
    "limit",
    "nominal",
    "at",
    "nominal margin (share of the limit)",
    "worst at corners",
    "corner",
    "corner margin (share of the limit)",
    "verdict",
    "why",
)


def comparison_rows(found: Comparison) -> list[list[str | float | int | None]]:
    """A header and one row per variant and requirement, numbers in the unit of their row."""
    rows: list[list[str | float | int | None]] = [list(HEADER)]
    for at, one in enumerate(found.variants):
        rows += [_csv_row(one, row, row.cells[at]) for row in found.rows]
    return rows


def _csv_row(one: Variant, row: Row, cell: Cell) -> list[str | float | int | None]:
    unit = metric_unit(row.metric)

    def shown(value: float | None) -> float | None:
        return None if value is None else shown_number(value, row.metric.kind, unit)

    corner = cell.corner
    return [
        one.label,
        row.metric.name,
        row.state,
        row.over,
        "yes" if cell.asked else "no",
        unit,
        "at least" if row.at_least else "at most",
        shown(cell.limit),
        shown(cell.value),
        cell.at,
        cell.nominal_margin,
        shown(corner.value) if corner is not None else None,
        ", ".join(f"{name} {side}" for name, side in corner.where.items()) if corner is not None else "",
        cell.corner_margin,
        cell.verdict if cell.asked else "not asked",
        cell.why,
    ]


def comparison_data(found: Comparison) -> dict[str, Any]:
    """Plain data for JSON, values in SI."""
    return {
        "kind": "comparison",
        "schema": SCHEMA,
        "version": VERSION,
        "same_conditions": found.frozen,
        "variants": [_variant(found, one) for one in found.variants],
        "requirements": [_row(found, row) for row in found.rows],
        "differences": [
            {
                "path": one.name,
                "condition": one.condition,
                "texts": {v.label: text for v, text in zip(found.variants, one.texts, strict=True)},
            }
            for one in found.differences
        ],
    }


def _variant(found: Comparison, one: Variant) -> dict[str, Any]:
    return {
        "label": one.label,
        "design": one.title,
        "file": one.file,
        "geometry": one.geometry,
        "verdict": one.verdict,
        "misses_by_most": None if one.misses is None else found.rows[one.misses].metric.name,
        "closest": None if one.closest is None else found.rows[one.closest].metric.name,
        "margin_sigma": finite(one.sigma),
        "margin_sigma_at": one.sigma_at,
        "why": one.why,
        "dominated_by": list(one.dominated_by),
        "corners": {
            "method": one.corners.method,
            "evaluated": one.corners.evaluated,
            "groups": list(one.corners.groups),
        },
        "rescue": None if one.rescue is None else _rescue(one.rescue),
        "unverified_defaults": list(one.unverified),
        "cautions": [{"code": note.code, "text": note.text, "severity": note.severity} for note in one.notes],
    }


def _rescue(found: Rescue) -> dict[str, Any]:
    return {"searched": found.searched, "coarse": found.few, "found": [_flip(flip) for flip in found.found]}


def _flip(flip: Flip) -> dict[str, Any]:
    return {
        "path": flip.input.name,
        "from": flip.input.value,
        "to": flip.value,
        "unit": flip.input.leaf.si_unit,
        "relative": finite(flip.relative),
    }


def _row(found: Comparison, row: Row) -> dict[str, Any]:
    return {
        "metric": row.metric.name,
        "label": row.label,
        "state": row.state,
        "over": row.over,
        "sense": "at least" if row.at_least else "at most",
        "unit": si_unit(row.metric.kind),
        "variants": {one.label: _cell(cell) for one, cell in zip(found.variants, row.cells, strict=True)},
    }


def _cell(cell: Cell) -> dict[str, Any]:
    return {
        "asked": cell.asked,
        "limit": finite(cell.limit),
        "value": finite(cell.value),
        "at": cell.at,
        "status": cell.status,
        "why": cell.why,
        "margin": finite(cell.nominal_margin),
        "corner": None if cell.corner is None else _corner(cell.corner, cell),
        "verdict": cell.verdict if cell.asked else "not asked",
    }


def _corner(corner: Worst, cell: Cell) -> dict[str, Any]:
    return {
        "value": finite(corner.value),
        "where": dict(corner.where),
        "at": corner.at,
        "margin": finite(cell.corner_margin),
        "why": corner.why,
    }
