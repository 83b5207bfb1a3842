"""Margins of all requirements over samples: what every study judges by."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Design, Requirement
from outcouple.evaluation.judge import value_for
from outcouple.geometry import Metric, MetricValue, Missing
from outcouple.metrics import metrics_of

__all__ = ["SIGMA", "deciding", "judged_by", "label_of", "margins", "scale_of", "wanted_for"]

Floats = NDArray[np.float64]

SIGMA = Requirement(metric="margin_sigma", at_least=0.0, text="0")
"""What a design without requirements is judged by: every state on its own side of the level."""


def judged_by(design: Design) -> tuple[Requirement, ...]:
    """The requirements of a design, or that every state is told right where it has none."""
    return design.requirements or (SIGMA,)


def wanted_for(design: Design, *, maps: bool = False) -> tuple[str, ...]:
    """Metrics the requirements name; those that cost a map only where ``maps``."""
    known = metrics_of(design.geometry)
    names = [one.metric for one in judged_by(design) if maps or known[one.metric].cost == "scalar"]
    return tuple(dict.fromkeys(names))


def scale_of(requirement: Requirement) -> float:
    """The size of a requirement's limit, by which its margin is measured; one where the limit is zero."""
    return abs(requirement.limit) or 1.0


def margins(
    design: Design, found: Mapping[str, MetricValue | Missing], requirements: Sequence[Requirement] | None = None
) -> Floats:
    """Margins in units of the limits, (requirements, S); nan where a metric has no value."""
    states = [(state.name, state.family) for state in design.states]
    rows = []
    for one in judged_by(design) if requirements is None else requirements:
        picked = value_for(one, found.get(one.metric, Missing("was not evaluated here", "open")), states)
        value = one.margin(picked.values) if isinstance(picked, MetricValue) else np.full(1, np.nan)
        rows.append(value / scale_of(one))
    return np.stack(np.broadcast_arrays(*rows))


def deciding(rows: Floats) -> tuple[Floats, NDArray[np.int64]]:
    """The least known margin per sample and the requirement it belongs to; nan where none is known."""
    filled = np.where(np.isnan(rows), np.inf, rows)
    at = np.argmin(filled, axis=0)
    least = filled[at, np.arange(rows.shape[1])]
    return np.where(np.all(np.isnan(rows), axis=0), np.nan, least), at


def label_of(requirement: Requirement, metric: Metric) -> str:
    """A requirement for people: its metric, and the state it is about."""
    return f"{metric.label} [{requirement.state}]" if requirement.state else metric.label
