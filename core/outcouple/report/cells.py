"""Tables for spreadsheets: units in the header, numbers as numbers, no text that a spreadsheet would run."""

from __future__ import annotations

import csv
import hashlib
import io
import json
import math
from collections.abc import Mapping, Sequence
from typing import Any

from outcouple.geometry import Metric
from outcouple.quantities import in_unit, kind_of, si_unit

__all__ = ["csv_text", "digest", "finite", "headed", "metric_unit", "shown_number"]

STARTS = ("=", "+", "-", "@", "\t", "\r", "\n")
"""First characters by which a spreadsheet takes a text for a formula."""


def csv_text(rows: Sequence[Sequence[str | float | int | None]]) -> str:
    """Rows as CSV (RFC 4180). A text that begins like a formula gets an apostrophe before it; nan is left empty."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    for row in rows:
        writer.writerow([_cell(cell) for cell in row])
    return out.getvalue()


def _cell(cell: str | float | int | None) -> str:
    if cell is None:
        return ""
    if isinstance(cell, str):
        return f"'{cell}" if cell.startswith(STARTS) else cell
    if isinstance(cell, int):
        return str(cell)
    if math.isnan(cell):
        return ""
    return f"{cell:.12g}" if math.isfinite(cell) else ("inf" if cell > 0 else "'-inf")


def headed(name: str, unit: str) -> str:
    """A column's header with its unit."""
    return f"{name} ({unit})" if unit else name


def metric_unit(metric: Metric) -> str:
    """The unit a metric is shown in: its own, where its kind has it."""
    units = kind_of(metric.kind).units
    return metric.unit if metric.unit in units else si_unit(metric.kind)


def shown_number(value: float, kind: str, unit: str) -> float:
    """An SI value as a number in a unit of its kind."""
    return float(in_unit(float(value), kind, unit)) if unit else float(value)


def finite(value: float | None) -> float | None:
    """A number for JSON: None where it is not finite."""
    return float(value) if value is not None and math.isfinite(value) else None


def digest(data: Mapping[str, Any]) -> str:
    """A hash of plain data, the same for the same content."""
    text = json.dumps(data, sort_keys=True, ensure_ascii=False, default=str)
    return hashlib.sha256(text.encode()).hexdigest()
