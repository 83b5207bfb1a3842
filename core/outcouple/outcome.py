"""What an evaluation hands out: plain, finished numbers that tables, pages and reports only draw."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any, Literal

from outcouple.geometry import Curve, Surface, View
from outcouple.notes import Note
from outcouple.quantities import format_quantity, si_unit

__all__ = [
    "Advice",
    "FailureDirection",
    "Judged",
    "MetricResult",
    "Outcome",
    "Stage",
    "StateOutcome",
    "Verdict",
]

Verdict = Literal["pass", "fail", "open", "none stated"]


@dataclass(frozen=True)
class MetricResult:
    """One metric of a design. ``value`` is None where it is not applicable or open; ``why`` says so."""

    name: str
    label: str
    value: float | None
    kind: str
    unit: str
    better: str
    scope: str
    meaning: str
    at: str = ""
    why: str = ""
    status: Literal["value", "not applicable", "open"] = "value"
    states: Mapping[str, float] = field(default_factory=dict)


@dataclass(frozen=True)
class Stage:
    """One step of the light's way: what is left after it, as a share of the emitter's power and in watts."""

    label: str
    factor: float
    share: float
    power: float
    lost: float


@dataclass(frozen=True)
class StateOutcome:
    """One state, finished.

    score, spread  mean and standard deviation on the decision's axis (same unit as ``level`` of the outcome)
    """

    name: str
    family: str
    expect: str | float
    word: str
    signal: float
    noise: float
    unit: str
    share: float
    score: float | None
    spread: float | None
    stages: tuple[Stage, ...]
    lost: Mapping[str, float]
    channels: Mapping[str, Any]
    role: str = "normal"
    rays: Mapping[str, tuple[tuple[float, ...], ...]] = field(default_factory=dict)


@dataclass(frozen=True)
class Judged:
    """One requirement with its verdict; ``margin`` and ``value`` in SI, ``shortfall`` in units of the limit."""

    metric: str
    label: str
    kind: str
    unit: str
    sense: Literal["at least", "at most"]
    limit: float
    limit_text: str
    state: str
    over: str
    value: float | None
    margin: float | None
    shortfall: float | None
    verdict: Literal["pass", "fail", "open"]
    why: str = ""
    at: str = ""


@dataclass(frozen=True)
class FailureDirection:
    """One row of the failure-direction table."""

    cause: str
    effect: str
    reads: str
    direction: Literal["dangerous", "spurious", "none", "open"]
    covered_by: tuple[str, ...] = ()
    slow: bool = False
    missing: tuple[str, ...] = ()


@dataclass(frozen=True)
class Advice:
    """A change of one input that would move the worst margin."""

    path: str
    before: str
    after: str
    metric: str
    value_before: float
    value_after: float
    text: str


@dataclass(frozen=True)
class Outcome:
    """Everything one evaluation found out about one design. Values are SI; ``to_dict`` is the ``--json`` answer."""

    title: str
    geometry: str
    file: str
    words: tuple[str, str]
    verdict: Verdict
    headline: str
    limiting: str
    worst_state: str
    states: tuple[StateOutcome, ...]
    metrics: Mapping[str, MetricResult]
    requirements: tuple[Judged, ...]
    noise: Mapping[str, float]
    noise_state: str
    level: float | None
    level_kind: str
    notes: tuple[Note, ...]
    failures: tuple[FailureDirection, ...]
    advice: tuple[Advice, ...]
    curve: Curve | None
    surfaces: tuple[Surface, ...]
    tunnelling: Surface | None
    views: tuple[View, ...]
    defaults: tuple[str, ...]
    demand: str
    version: str

    def to_dict(self) -> dict[str, Any]:
        """The outcome as plain data for JSON: numbers, texts, lists; what is not a finite number is null."""
        return {
            "design": self.title,
            "file": self.file,
            "geometry": self.geometry,
            "verdict": self.verdict,
            "headline": self.headline,
            "limiting": self.limiting,
            "worst_state": self.worst_state,
            "metrics": {name: _metric(metric) for name, metric in self.metrics.items()},
            "states": [self._state(state) for state in self.states],
            "stages": [_stage(stage) for stage in self.states[0].stages] if self.states else [],
            "requirements": [_requirement(one) for one in self.requirements],
            "noise": {cause: _number(share) for cause, share in self.noise.items()},
            "noise_state": self.noise_state,
            "level": {"value": _number(self.level), "axis": self.level_kind},
            "cautions": [
                {
                    "code": note.code,
                    "text": note.text,
                    "severity": note.severity,
                    "trigger": note.trigger,
                    "decides": note.decides,
                }
                for note in self.notes
            ],
            "failures": [
                {
                    "cause": row.cause,
                    "effect": row.effect,
                    "reads": row.reads,
                    "direction": row.direction,
                    "covered_by": list(row.covered_by),
                    "slow": row.slow,
                    "could_cover": list(row.missing),
                }
                for row in self.failures
            ],
            "advice": [
                {
                    "path": one.path,
                    "before": one.before,
                    "after": one.after,
                    "metric": one.metric,
                    "value_before": _number(one.value_before),
                    "value_after": _number(one.value_after),
                    "text": one.text,
                }
                for one in self.advice
            ],
            "curve": None if self.curve is None else _surface(self.curve),
            "maps": [_surface(surface) for surface in self.surfaces],
            "tunnelling": None if self.tunnelling is None else _surface(self.tunnelling),
            "unverified_defaults": list(self.defaults),
            "demand": self.demand,
            "version": self.version,
        }

    def _state(self, state: StateOutcome) -> dict[str, Any]:
        return {
            "name": state.name,
            "expect": state.expect,
            "shown_as": state.word,
            "signal": _number(state.signal),
            "noise": _number(state.noise),
            "unit": state.unit,
            "share": _number(state.share),
            "score": _number(state.score),
            "spread": _number(state.spread),
            "channels": dict(state.channels),
            "metrics": {
                name: _number(metric.states[state.name])
                for name, metric in self.metrics.items()
                if state.name in metric.states
            },
            "stages": [_stage(stage) for stage in state.stages],
            "lost": {name: _number(share) for name, share in state.lost.items()},
        }


def _number(value: float | None) -> float | None:
    if value is None or not math.isfinite(value):
        return None
    return float(value)


def _metric(metric: MetricResult) -> dict[str, Any]:
    return {
        "value": _number(metric.value),
        "unit": si_unit(metric.kind) or ("" if metric.kind != "number" else metric.unit),
        "text": "" if metric.value is None else format_quantity(metric.value, metric.kind, metric.unit or None),
        "kind": metric.kind,
        "label": metric.label,
        "scope": metric.scope,
        "at": metric.at,
        "status": metric.status,
        "why": metric.why,
    }


def _stage(stage: Stage) -> dict[str, Any]:
    return {
        "label": stage.label,
        "factor": _number(stage.factor),
        "share": _number(stage.share),
        "power": _number(stage.power),
        "unit": "W",
    }


def _requirement(one: Judged) -> dict[str, Any]:
    return {
        "metric": one.metric,
        "sense": one.sense,
        "limit": _number(one.limit),
        "limit_text": one.limit_text,
        "state": one.state,
        "over": one.over,
        "value": _number(one.value),
        "margin": _number(one.margin),
        "verdict": one.verdict,
        "why": one.why,
        "at": one.at,
    }


def _surface(surface: Surface) -> dict[str, Any]:
    return {
        "name": surface.name,
        "label": surface.label,
        "axes": [{"label": label, "unit": unit, "values": values.tolist()} for label, unit, values in surface.axes],
        "values": [_number(v) for v in surface.values]
        if surface.values.ndim == 1
        else [[_number(v) for v in row] for row in surface.values],
        "unit": surface.unit,
    }
