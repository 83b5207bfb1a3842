"""What to change: a cheap step in every numeric input, one at a time, all in one batch."""

from __future__ import annotations

import copy
from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Design
from outcouple.design.load import design_from_mapping, design_model
from outcouple.design.sections.groups import CONDITIONS, IMPERFECTIONS
from outcouple.evaluation.judge import value_for
from outcouple.evaluation.table import Table, tabulate
from outcouple.fields import Leaf, leaves
from outcouple.geometry import MetricValue, Missing
from outcouple.metrics import metrics_of
from outcouple.outcome import Advice, Judged
from outcouple.quantities import format_quantity

__all__ = ["advise", "changeable", "numeric_inputs", "worst_margin"]

Floats = NDArray[np.float64]

STEP = 0.2
"""Relative step of every input; inputs at zero step by a fifth of their range's lower decade."""
KEPT = 3
TOO_DEAR = 40_000_000
"""Array elements of the deciding steps from which there is no advice: several seconds."""
DEAR = 10_000_000
"""Array elements of all steps together from which only the deciding inputs step."""
EMITTERS = tuple(nm * 1e-9 for nm in (470, 525, 590, 625, 660, 740, 810, 850, 880, 940, 1050))
"""Peak wavelengths [m] that light-emitting diodes are widely sold with; common practice, no source."""
NEEDS: Mapping[str, tuple[str, tuple[str, ...]]] = {
    "transistor_gain": ("detector", ("phototransistor",)),
    "reference_share": ("reference_channel", ("yes",)),
    "modulation_frequency": ("modulation", ("synchronous",)),
}
"""Inputs of the read-out that take effect only with one word of another."""
OF_THE_FILTER = ("filter_width", "filter_transmission", "filter_blocking")
"""Inputs that take effect only where a filter is stated."""
TOLD = ("dead_emitter_unnoticed", "undetected_dangerous_causes")
"""Metrics that diagnostics change and numbers do not."""
DIAGNOSTICS = (("decision", "diagnostics", "reference"), ("decision", "diagnostics", "second_channel"))
"""What to try for them, cheapest first."""
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


def changeable(design: Design) -> list[tuple[Leaf, float]]:
    """The numeric inputs a designer may choose: no conditions, no requirements, nothing idle."""
    return [
        (leaf, value)
        for leaf, value in numeric_inputs(design)
        if leaf.path[0] not in LEFT_ALONE
        and leaf.group != CONDITIONS
        and leaf.path != design.geometry.measurand
        and not _idle(design, leaf)
    ]


def _steps(design: Design) -> list[tuple[Leaf, float, float]]:
    """(leaf, value, stepped value), up and down, inside the leaf's bounds; only what a designer may choose."""
    return [
        (leaf, value, stepped)
        for leaf, value in changeable(design)
        for stepped in _stepped(leaf, value)
        if stepped != value
    ]


def _idle(design: Design, leaf: Leaf) -> bool:
    """True for inputs of the read-out that the design's own choices leave without effect."""
    section, name = leaf.path[0], leaf.path[-1]
    if section != "readout":
        return False
    readout: Any = design.sections.readout  # type: ignore[attr-defined]
    if name in OF_THE_FILTER:
        return readout.filter_centre is None
    return name in NEEDS and getattr(readout, NEEDS[name][0]) not in NEEDS[name][1]


def _stepped(leaf: Leaf, value: float) -> list[float]:
    if leaf.path == ("emitter", "wavelength"):
        return _neighbours(value)
    if leaf.group == IMPERFECTIONS:
        return [leaf.clip(value * (1 - STEP))]
    return [leaf.clip(value * (1 + sign * STEP) if value else sign * leaf.small_step()) for sign in (1.0, -1.0)]


def _neighbours(wavelength: float) -> list[float]:
    """The next shorter and longer wavelength that emitters come in."""
    shorter = [one for one in EMITTERS if one < wavelength - 1e-9]
    longer = [one for one in EMITTERS if one > wavelength + 1e-9]
    return [*shorter[-1:], *longer[:1]]


def advise(
    design: Design,
    table: Table,
    judged: Sequence[Judged],
    found: Mapping[str, MetricValue | Missing],
) -> tuple[Advice, ...]:
    """The few inputs whose step of a fifth moves the worst margin most, best first.

    Metrics that cost a map take no part; of a dear design only the deciding inputs step, of one too dear none.
    """
    from outcouple.evaluation.batch import evaluate_batch, sample_elements

    known = metrics_of(design.geometry)
    found = {name: value for name, value in found.items() if known[name].cost == "scalar"}
    states = [(row.laid.state.name, row.laid.state.family) for row in table.rows]
    before, owners = worst_margin(design, found, states)
    if owners[0] in TOLD:
        watched = found[owners[0]]
        return _telling(design, owners[0], float(watched.values[0])) if isinstance(watched, MetricValue) else ()
    steps = _steps(design)
    if len(steps) * sample_elements(table) > DEAR:
        steps = [step for step in steps if step[0].deciding]
    if len(steps) * sample_elements(table) > TOO_DEAR:
        return ()
    if not steps or not np.isfinite(before[0]) or not owners[0]:
        return ()
    samples = _samples(steps)
    names = tuple(dict.fromkeys([*(one.metric for one in design.requirements if one.metric in found), owners[0]]))
    measured = evaluate_batch(design, samples, names).metrics
    after, _ = worst_margin(design, measured, states)
    gains = np.broadcast_to(after, (len(steps),)) - before[0]
    best: dict[tuple[str, ...], int] = {}
    for at in np.argsort(-gains):
        if np.isfinite(gains[at]) and gains[at] > 1e-6 * max(abs(before[0]), 1e-6) and len(best) < KEPT:
            best.setdefault(steps[at][0].path, int(at))
    watched = found[owners[0]]
    if not isinstance(watched, MetricValue):
        return ()
    moved = measured[owners[0]]
    return tuple(
        _advice(design, steps[at], owners[0], watched, moved, at)
        for at in best.values()
        if isinstance(moved, MetricValue)
    )


def _telling(design: Design, name: str, before: float) -> tuple[Advice, ...]:
    """A diagnostic that would tell what no number mends."""
    from outcouple.evaluation.batch import measure

    metric = metrics_of(design.geometry)[name]
    for path in DIAGNOSTICS:
        raw = copy.deepcopy(dict(design.raw))
        section = raw
        for key in path[:-1]:
            section = section.setdefault(key, {})
        if section.get(path[-1]):
            continue
        section[path[-1]] = True
        table = tabulate(design_from_mapping(raw, host=design.host))
        after = measure(table, [name])[name]
        if isinstance(after, MetricValue) and after.values[0] < before:
            shown = [
                format_quantity(x, metric.kind, unit=metric.unit or None) for x in (before, float(after.values[0]))
            ]
            text = f"{'.'.join(path)} from false to true: {metric.label} {shown[0]} -> {shown[1]}"
            return (Advice(".".join(path), "false", "true", name, before, float(after.values[0]), text),)
    return ()


def _samples(steps: Sequence[tuple[Leaf, float, float]]) -> dict[tuple[str, ...], Floats]:
    """One sample per step: every input at its value but the one that steps."""
    columns: dict[tuple[str, ...], Floats] = {}
    for at, (leaf, value, stepped) in enumerate(steps):
        columns.setdefault(leaf.path, np.full(len(steps), value))[at] = stepped
    return columns


def _advice(
    design: Design,
    step: tuple[Leaf, float, float],
    name: str,
    watched: MetricValue,
    moved: MetricValue,
    at: int,
) -> Advice:
    leaf, value, stepped = step
    metric = metrics_of(design.geometry)[name]
    old, new = (format_quantity(x, leaf.kind, unit=leaf.unit or None) for x in (value, stepped))
    before, after = (
        float(watched.values[0]),
        float(np.broadcast_to(moved.values, (at + 1,))[at] if len(moved.values) == 1 else moved.values[at]),
    )
    shown = [format_quantity(x, metric.kind, unit=metric.unit or None) for x in (before, after)]
    text = f"{leaf.name} from {old} to {new}: {metric.label} {shown[0]} -> {shown[1]}"
    return Advice(leaf.name, old, new, name, before, after, text)
