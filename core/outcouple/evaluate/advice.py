"""What to change: a cheap step in every numeric input, one at a time, all in one batch."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Design
from outcouple.design.load import design_model
from outcouple.errors import UserMistake
from outcouple.evaluate.judge import value_for
from outcouple.evaluate.overlay import check_samples
from outcouple.evaluate.table import Table, tabulate
from outcouple.fields import Leaf, leaves
from outcouple.geometry import MetricValue, Missing
from outcouple.outcome import Advice, Judged
from outcouple.quantities import format_quantity

__all__ = ["advise", "numeric_inputs", "worst_margin"]

Floats = NDArray[np.float64]

STEP = 0.2
"""Relative step of every input; inputs at zero step by a fifth of their range's lower decade."""
KEPT = 3
LEFT_ALONE = ("environment", "decision")
"""Sections that state the requirement rather than the design."""


def numeric_inputs(design: Design) -> list[tuple[Leaf, float]]:
    """Every numeric input that is set, with its value."""
    found = []
    for leaf in leaves(design_model(type(design.geometry))):
        value: Any = design.sections
        for key in leaf.path:
            value = getattr(value, key, None)
        if not leaf.structural and isinstance(value, float | int) and not isinstance(value, bool):
            found.append((leaf, float(value)))
    return found


def worst_margin(
    design: Design, found: Mapping[str, MetricValue | Missing], states: Sequence[tuple[str, str]]
) -> tuple[Floats, list[str]]:
    """Least margin over all requirements in units of their limits, (S,), and the metric it belongs to per sample.

    Without requirements: the margin in sigma. A requirement without a value counts as -inf (unknown is not a pass).
    """
    margins, names = [], []
    for one in design.requirements:
        picked = value_for(one, found.get(one.metric, Missing("", "open")), states)
        if isinstance(picked, MetricValue):
            scaled = one.margin(picked.values) / (abs(one.limit) or 1.0)
            margins.append(np.where(np.isnan(scaled), -np.inf, scaled))
            names.append(one.metric)
    if not margins:
        sigma = found.get("margin_sigma")
        if not isinstance(sigma, MetricValue):
            return np.full(1, np.nan), [""]
        return sigma.values, ["margin_sigma"] * len(sigma.values)
    stack = np.stack(np.broadcast_arrays(*margins))
    pick = np.argmin(stack, axis=0)
    return stack[pick, np.arange(stack.shape[1])], [names[int(at)] for at in pick]


def _steps(design: Design) -> list[tuple[Leaf, float, float]]:
    """(leaf, value, stepped value), up and down, inside the leaf's bounds."""
    found = []
    for leaf, value in numeric_inputs(design):
        if leaf.path[0] in LEFT_ALONE or leaf.path == design.geometry.measurand:
            continue
        for sign in (1.0, -1.0):
            stepped = leaf.clip(value * (1 + sign * STEP) if value else sign * leaf.small_step())
            if stepped != value:
                found.append((leaf, value, stepped))
    return found


def advise(
    design: Design,
    table: Table,
    judged: Sequence[Judged],
    found: Mapping[str, MetricValue | Missing],
) -> tuple[Advice, ...]:
    """The few inputs whose step of 20 % moves the worst margin most, best first."""
    from outcouple.evaluate.batch import measure

    steps = _steps(design)
    names = [one.metric for one in design.requirements if found.get(one.metric) is not None] or [
        "margin_sigma"
    ]
    states = [(row.laid.state.name, row.laid.state.family) for row in table.rows]
    before, _ = worst_margin(design, found, states)
    if not steps or not np.isfinite(before[0]):
        return ()
    columns: dict[tuple[str, ...], Floats] = {}
    for at, (leaf, value, stepped) in enumerate(steps):
        column = columns.setdefault(leaf.path, np.full(len(steps), value))
        column[at] = stepped
    try:
        check_samples(design, columns)
    except UserMistake:
        return ()
    after, _ = worst_margin(design, measure(tabulate(design, columns), names), states)
    gains = np.broadcast_to(after, (len(steps),)) - before[0]
    best = [at for at in np.argsort(-gains) if np.isfinite(gains[at]) and gains[at] > 1e-9 * abs(before[0])]
    seen: dict[tuple[str, ...], Advice] = {}
    for at in best:
        leaf, value, stepped = steps[at]
        if leaf.path not in seen and len(seen) < KEPT:
            seen[leaf.path] = _advice(leaf, value, stepped, float(before[0]), float(after[at]), design)
    return tuple(seen.values())


def _advice(leaf: Leaf, value: float, stepped: float, before: float, after: float, design: Design) -> Advice:
    path = ".".join(leaf.path)
    old, new = (format_quantity(x, leaf.kind, unit=leaf.unit or None) for x in (value, stepped))
    if design.requirements:
        text = f"{path} from {old} to {new}: worst margin {before:+.0%} -> {after:+.0%} of its limit"
        metric = "worst margin"
    else:
        text = f"{path} from {old} to {new}: worst margin {before:.3g} -> {after:.3g} sigma"
        metric = "margin_sigma"
    return Advice(path, old, new, metric, before, after, text)
