"""Metrics against requirements."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from outcouple.design import Requirement
from outcouple.geometry import Metric, MetricValue, Missing
from outcouple.outcome import Judged, Verdict

__all__ = ["judge", "value_for", "verdict_of"]


def value_for(
    requirement: Requirement, found: MetricValue | Missing, states: Sequence[tuple[str, str]]
) -> MetricValue | Missing:
    """The values a requirement speaks of: the metric's own, or those of one state (the worst of its low, mid and high).

    states  (name, family) of every state
    """
    if isinstance(found, Missing) or not requirement.state:
        return found
    names = [name for name, family in states if requirement.state in (name, family) and name in found.states]
    if not names:
        return Missing(f"has no value for the state {requirement.state!r}")
    stack = np.stack([found.states[name] for name in names])
    pick = np.argmin(requirement.margin(stack), axis=0)
    return MetricValue(stack[pick, np.arange(stack.shape[1])], names[int(pick[0])])


def judge(
    requirements: Sequence[Requirement],
    metrics: Mapping[str, Metric],
    found: Mapping[str, MetricValue | Missing],
    states: Sequence[tuple[str, str]],
    *,
    over: str = "nominal",
) -> tuple[Judged, ...]:
    """Verdict of every requirement at the first sample; what was not evaluated here is open, never a pass."""
    return tuple(_judged(one, metrics[one.metric], found.get(one.metric), states, over) for one in requirements)


def _judged(
    one: Requirement,
    metric: Metric,
    found: MetricValue | Missing | None,
    states: Sequence[tuple[str, str]],
    over: str,
) -> Judged:
    value: float | None = None
    at, why = "", ""
    if one.over != over:
        why = f"asked for over {one.over}, which this evaluation did not run"
    elif found is None:
        why = "needs a map, which was not asked for" if metric.cost == "map" else "was not evaluated here"
    else:
        picked = value_for(one, found, states)
        if isinstance(picked, Missing):
            why = picked.why
        else:
            value, at = float(picked.values[0]), picked.at
            if np.isnan(value):
                value, why = None, "has no value for this design"
    verdict, margin, shortfall = "open", None, None
    if value is not None:
        verdict = "pass" if bool(one.met(value)) else "fail"
        margin = float(one.margin(value))
        shortfall = -margin / abs(one.limit) if one.limit else -margin
    return Judged(
        metric=one.metric,
        label=metric.label,
        kind=metric.kind,
        unit=metric.unit,
        sense="at least" if one.at_least is not None else "at most",
        limit=one.limit,
        limit_text=one.text,
        state=one.state,
        over=one.over,
        value=value,
        margin=margin,
        shortfall=shortfall,
        verdict=verdict,  # type: ignore[arg-type]
        why=why,
        at=at,
    )


def verdict_of(judged: Sequence[Judged]) -> Verdict:
    """fail if one is missed, open if one is open, pass if all are met, none stated without requirements."""
    verdicts = {one.verdict for one in judged}
    if not verdicts:
        return "none stated"
    for word in ("fail", "open"):
        if word in verdicts:
            return word
    return "pass"
