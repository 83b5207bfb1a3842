"""Does a geometry keep the contract? Every check is a plain function; the report says how many ran."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace
from typing import Any

import numpy as np

from outcouple.design import Design, design_from_mapping, parse_design
from outcouple.design.starter import starter_text
from outcouple.errors import UserMistake
from outcouple.evaluation import evaluate, evaluate_batch
from outcouple.evaluation.ledger import ledger_of
from outcouple.evaluation.table import Table, tabulate
from outcouple.fields import Leaf, leaves
from outcouple.geometry import Geometry, MetricValue
from outcouple.hooks import Host, build_host
from outcouple.metrics import metrics_of
from outcouple.quantities import is_kind

__all__ = ["Report", "check_geometry"]

CLOSED = 1e-12
"""How far from zero a ledger may end."""
ALIKE = 1e-9
"""Largest relative difference between a sample of a batch and the same design alone."""


@dataclass
class Report:
    """What ran and what failed.

    skipped  check -> why it has nothing to say about this geometry
    """

    geometry: str
    passed: list[str] = field(default_factory=list)
    failed: dict[str, str] = field(default_factory=dict)
    skipped: dict[str, str] = field(default_factory=dict)

    @property
    def ran(self) -> int:
        """Number of checks that ran."""
        return len(self.passed) + len(self.failed)

    def check(self, name: str, good: bool, why: str = "") -> None:
        """Note one check."""
        if good:
            self.passed.append(name)
        else:
            self.failed[name] = why or "does not hold"

    def __str__(self) -> str:
        lines = [f"{self.geometry}: {self.ran} checks ran, {len(self.failed)} failed, {len(self.skipped)} skipped"]
        lines += [f"  FAILED {name}: {why}" for name, why in self.failed.items()]
        lines += [f"  skipped {name}: {why}" for name, why in self.skipped.items()]
        return "\n".join(lines)


def check_geometry(geometry: Geometry, host: Host | None = None) -> Report:
    """Run every check on a geometry; raises nothing, the report tells."""
    host = host or build_host()
    host = replace(host, geometries={**host.geometries, geometry.name: _entry(geometry)})
    report = Report(geometry.name)
    _check_description(geometry, report)
    designs = dict(_designs(geometry, host, report))
    for name, design in designs.items():
        table = tabulate(design)
        _check_light(name, table, report)
        _check_ledger(name, table, report)
        _check_metrics(name, design, report)
        _check_batch(name, design, report)
    _check_bounds(geometry, host, report)
    _check_presets(geometry, host, report)
    return report


def _entry(geometry: Geometry) -> Any:
    from outcouple.hooks import GeometryEntry

    return GeometryEntry(geometry.name, geometry.summary, "conformance", lambda: geometry)


def _designs(geometry: Geometry, host: Host, report: Report) -> Iterator[tuple[str, Design]]:
    """The geometry's starters, one per job; they must be whole designs."""
    for job in geometry.jobs or ("draft",):
        try:
            design = parse_design(starter_text(geometry, job), file="starter.toml", host=host)
        except UserMistake as mistake:
            report.check(f"starter for {job} loads", False, str(mistake))
            continue
        report.check(f"starter for {job} loads", True)
        yield job, design


def _check_description(geometry: Geometry, report: Report) -> None:
    report.check("has a name and a summary", bool(geometry.name and geometry.summary))
    report.check("names its wetted faces", bool(geometry.wetted))
    names = [metric.name for metric in geometry.metrics]
    report.check("metric names differ", len(set(names)) == len(names))
    for metric in metrics_of(geometry).values():
        report.check(f"metric {metric.name} has a known kind", is_kind(metric.kind), metric.kind)
        report.check(f"metric {metric.name} says what it means", bool(metric.meaning and metric.label))
    for leaf in leaves(geometry.Parameters):
        report.check(f"input {leaf.name} is described", bool(leaf.describe))
        if not leaf.structural:
            report.check(f"input {leaf.name} is bounded", leaf.low is not None and leaf.high is not None)
    if geometry.measurand:
        known = {leaf.path for leaf in leaves(geometry.Parameters) if not leaf.structural}
        report.check("its measurand is one of its numbers", geometry.measurand in known)


def _check_light(name: str, table: Table, report: Report) -> None:
    for key, light in table.lights.items():
        where = f"light of {name}" + (f" with {key}" if key else "")
        try:
            light.check()
        except Exception as error:
            report.check(f"{where} keeps the contract", False, str(error))
            continue
        report.check(f"{where} keeps the contract", True)
        report.check(
            f"{where} has only wetted faces", set(light.faces) <= set(table.design.geometry.wetted), str(light.faces)
        )


def _check_ledger(name: str, table: Table, report: Report) -> None:
    for row in table.rows:
        channels = row.reading.mean.shape[1]
        picked = sorted({0, channels // 2, channels - 1})
        worst = max(abs(ledger_of(row.laid, channel).gap) for channel in picked)
        report.check(f"ledger of {name}: {row.laid.state.name} closes", worst < CLOSED, f"open by {worst:.2e}")
        share = row.result.share
        good = bool(np.all(np.isfinite(share)) and np.all(share >= 0) and np.all(share <= 1 + 1e-9))
        report.check(f"{name}: {row.laid.state.name} receives between nothing and everything", good)


def _check_metrics(name: str, design: Design, report: Report) -> None:
    outcome = evaluate(design, maps=True)
    known = metrics_of(design.geometry)
    for metric in known.values():
        got = outcome.metrics[metric.name]
        report.check(f"{name}: {metric.name} is measured or says why not", got.value is not None or bool(got.why))
    for view in outcome.views:
        good = all(len(ray.points) == len(ray.columns) == len(ray.angles) for ray in view.rays)
        report.check(f"{name}: view {view.name} has one column and angle per vertex", good)
    json_like = outcome.to_dict()
    report.check(f"{name}: the outcome is plain data", isinstance(json_like["metrics"], dict))


def _check_batch(name: str, design: Design, report: Report) -> None:
    """Three samples around the design agree with the same three designs alone."""
    for leaf in _some_inputs(design):
        value = _value(design, leaf)
        values = np.array([leaf.clip(value * factor) if value else 0.0 for factor in (0.97, 1.0, 1.02)])
        want = [metric.name for metric in metrics_of(design.geometry).values() if metric.cost == "scalar"]
        together = evaluate_batch(design, {leaf.path: values}, want)
        for at, one in enumerate(values):
            alone = evaluate_batch(design, {leaf.path: np.array([one])}, want)
            gap = _gap(together.metrics, alone.metrics, at)
            report.check(
                f"{name}: {leaf.name} sample {at} alone and in a batch agree", gap < ALIKE, f"differ by {gap:.2e}"
            )


def _some_inputs(design: Design) -> list[Leaf]:
    chosen = [leaf for leaf in leaves(type(design.geometry).Parameters) if leaf.deciding and not leaf.structural]
    return [leaf for leaf in chosen if _value(design, leaf) is not None][:3]


def _value(design: Design, leaf: Leaf) -> Any:
    value: Any = design.sections
    for key in leaf.path:
        value = getattr(value, key)
    return value


def _gap(one: Mapping[str, Any], other: Mapping[str, Any], at: int) -> float:
    worst = 0.0
    for name, found in one.items():
        match = other[name]
        if not (isinstance(found, MetricValue) and isinstance(match, MetricValue)):
            continue
        a, b = float(found.values[at]), float(match.values[0])
        if np.isfinite(a) and np.isfinite(b):
            worst = max(worst, abs(a - b) / max(abs(a), abs(b), 1e-12))
        elif not (np.isnan(a) and np.isnan(b)) and a != b:
            worst = np.inf
    return worst


def _check_bounds(geometry: Geometry, host: Host, report: Report) -> None:
    """A number out of bounds, a wrong unit and an unknown key are refused by name."""
    numbers = [leaf for leaf in leaves(geometry.Parameters) if not leaf.structural and leaf.high is not None]
    for leaf in numbers:
        for given, what in ((_beyond(leaf), "out of bounds"), ("7 parsec", "in an unknown unit")):
            refused = _refusal(geometry, host, leaf.path, given)
            report.check(f"{leaf.name} {what} is refused by name", leaf.name in refused, refused or "was taken")
    section = next(iter(geometry.Parameters.model_fields))
    refused = _refusal(geometry, host, (section, "no_such_key"), 1)
    report.check("an unknown key is refused by name", "no_such_key" in refused, refused or "was taken")


def _beyond(leaf: Leaf) -> str:
    assert leaf.high is not None
    return leaf.text(leaf.high + abs(leaf.high) + 1e-3) if leaf.kind != "temperature" else "9000 K"


def _refusal(geometry: Geometry, host: Host, path: tuple[str, ...], given: Any) -> str:
    data: dict[str, Any] = {"geometry": geometry.name, path[0]: {}}
    here = data
    for key in path[:-1]:
        here = here.setdefault(key, {})
    here[path[-1]] = given
    try:
        design_from_mapping(data, host=host)
    except UserMistake as mistake:
        return str(mistake)
    return ""


def _check_presets(geometry: Geometry, host: Host, report: Report) -> None:
    """Every contact works on the faces, on a spot where there is one, or says why not."""
    for what, preset in host.touching.items():
        if any(info.is_required() for info in preset.model_fields.values()) or what == "patches":
            report.skipped[f"contact {what}"] = "needs numbers of its own"
            continue
        state: dict[str, Any] = {"name": "trial", "expect": "present", "touching": {"what": what}}
        if geometry.spot_face and preset.kind != "whole":
            state["object"] = {"diameter": "9 mm"}
        try:
            design = design_from_mapping({"geometry": geometry.name, "states": [state]}, host=host)
            table = tabulate(design)
        except UserMistake as mistake:
            report.check(f"contact {what} says why it does not fit", bool(mistake.lines))
            continue
        except Exception as error:
            report.check(f"contact {what} works", False, f"{type(error).__name__}: {error}")
            continue
        finite = all(bool(np.all(np.isfinite(row.reading.mean))) for row in table.rows)
        closed = max(abs(ledger_of(row.laid).gap) for row in table.rows)
        report.check(f"contact {what} works", finite, "a reading is not finite")
        report.check(f"contact {what} keeps the ledger", closed < CLOSED, f"open by {closed:.2e}")
