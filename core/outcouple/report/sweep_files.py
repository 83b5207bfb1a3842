"""A sweep as rows for a spreadsheet and as a manifest that says what was run."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.geometry import Metric
from outcouple.notes import Note
from outcouple.quantities import si_unit
from outcouple.report.cells import digest, finite, headed, metric_unit, shown_number
from outcouple.studies import Axis, Sweep, SweptMetric, crossings, spans
from outcouple.version import VERSION

__all__ = ["SCHEMA", "sweep_manifest", "sweep_rows"]

SCHEMA = 1
"""Version of the manifest's form."""

Cell = str | float | int | None
Column = tuple[str, list[Cell]]


def sweep_rows(found: Sweep) -> list[list[Cell]]:
    """A header and one row per evaluated point: axes, metrics, readings, margins, verdict."""
    columns: list[Column] = []
    for metric in found.metrics.values():
        columns += _metric_columns(metric)
    for state, values in found.signals.items():
        columns.append(_column(f"reading [{state}]", found.reading, values))
    for limit in found.limits:
        columns.append((f"margin of {limit.label} (share of the limit)", _floats(limit.scaled)))
    columns.append(("dangers", list(found.dangers)))
    columns.append(("verdict", [str(one) for one in found.verdicts.ravel()]))
    rows: list[list[Cell]] = [[*(headed(axis.name, axis.unit) for axis in found.axes), *(name for name, _ in columns)]]
    for flat in np.flatnonzero(found.done.ravel()):
        at = np.unravel_index(flat, found.shape)
        point = [_axis_cell(axis, int(one)) for axis, one in zip(found.axes, at, strict=True)]
        rows.append([*point, *(values[flat] for _, values in columns)])
    return rows


def _metric_columns(one: SweptMetric) -> list[Column]:
    states = [(f"{one.metric.name} [{state}]", values) for state, values in one.states.items()]
    return [_column(name, one.metric, values) for name, values in [(one.metric.name, one.values), *states]]


def _column(name: str, metric: Metric, values: NDArray[np.float64]) -> Column:
    unit = metric_unit(metric)
    return headed(name, unit), [shown_number(value, metric.kind, unit) for value in values.ravel()]


def _floats(values: NDArray[np.float64]) -> list[Cell]:
    return [float(value) for value in values.ravel()]


def _axis_cell(axis: Axis, at: int) -> Cell:
    value = axis.values[at]
    if axis.numeric:
        return value if isinstance(value, int) else shown_number(value, axis.kind, axis.unit)
    return axis.place.text(value)


def sweep_manifest(found: Sweep, *, values: bool = True) -> dict[str, Any]:
    """What was run and what came out, as plain data: numbers in SI, nested as the axes; null where there is none.

    values  also the arrays; without them it accompanies a table that has them
    """
    axes = [_axis(axis) for axis in found.axes]
    answer = {
        "kind": "sweep",
        "schema": SCHEMA,
        "version": VERSION,
        "design": found.title,
        "file": found.file,
        "geometry": found.geometry,
        "inputs_sha256": digest({"design": found.raw, "axes": axes, "metrics": list(found.metrics)}),
        "finished": found.finished,
        "points": int(found.done.size),
        "points_done": int(np.sum(found.done)),
        "points_passing": int(np.sum(found.verdicts == "pass")),
        "axes": axes,
        "metrics": {name: _metric(one, values) for name, one in found.metrics.items()},
        "requirements": [_limit(found, at, values) for at in range(len(found.limits))],
        "just_met": _just_met(found),
        "all_met": _all_met(found),
        "cautions": [
            {"code": note.code, "text": note.text, "severity": note.severity, "points": _held(found, note)}
            for note in (*found.notes, *found.standing)
        ],
    }
    if values:
        answer["verdicts"] = found.verdicts.tolist()
        answer["readings"] = {
            "unit": si_unit(found.reading.kind),
            "states": {state: _nested(array) for state, array in found.signals.items()},
        }
    return answer


def _held(found: Sweep, note: Note) -> int:
    return int(np.sum(found.done)) if note.where is None else int(np.sum(note.where))


def _axis(axis: Axis) -> dict[str, Any]:
    unit = si_unit(axis.kind) if axis.kind else ""
    return {"path": axis.name, "unit": unit, "scale": axis.scale, "values": list(axis.values), "texts": axis.texts()}


def _metric(one: SweptMetric, values: bool) -> dict[str, Any]:
    found: dict[str, Any] = {"label": one.metric.label, "unit": si_unit(one.metric.kind), "why": list(one.why)}
    if values:
        found["values"] = _nested(one.values)
        found["states"] = {state: _nested(array) for state, array in one.states.items()}
    return found


def _limit(found: Sweep, at: int, values: bool) -> dict[str, Any]:
    limit = found.limits[at]
    one = limit.requirement
    row: dict[str, Any] = {
        "metric": one.metric,
        "state": one.state,
        "over": one.over,
        "sense": "at least" if one.at_least is not None else "at most",
        "limit": finite(one.limit),
        "met_at": int(np.sum(limit.met)),
        "why": limit.why,
    }
    if values:
        row["margin"] = _nested(limit.margin)
    return row


def _nested(values: NDArray[np.float64]) -> Any:
    """An array as nested lists, None where it is not finite."""
    return _lists(values.tolist())


def _lists(value: Any) -> Any:
    return [_lists(one) for one in value] if isinstance(value, list) else finite(value)


def _just_met(found: Sweep) -> list[dict[str, Any]]:
    return [
        {
            "requirement": one.label,
            "axis": one.axis.name,
            "value": one.value,
            "unit": si_unit(one.axis.kind),
            "met_beyond": one.rises,
            "others": _others(found.axes, one.others),
        }
        for along, axis in enumerate(found.axes)
        if axis.numeric
        for one in crossings(found, along)
    ]


def _all_met(found: Sweep) -> list[dict[str, Any]]:
    return [
        {
            "axis": axis.name,
            "from": one.low,
            "to": one.high,
            "unit": si_unit(axis.kind),
            "may_reach_further": list(one.opens),
            "others": _others(found.axes, one.others),
        }
        for along, axis in enumerate(found.axes)
        if axis.numeric
        for one in spans(found, along)
    ]


def _others(axes: Sequence[Axis], at: Sequence[int | None]) -> dict[str, str]:
    return {axis.name: axis.shown(axis.values[one]) for axis, one in zip(axes, at, strict=True) if one is not None}
