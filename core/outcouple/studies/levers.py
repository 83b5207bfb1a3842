"""What moves the worst margin: elasticities of every numeric input, and the bounds within which the verdict holds."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from concurrent.futures import Executor
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Design, Requirement
from outcouple.evaluation.advice import numeric_inputs
from outcouple.evaluation.batch import evaluate_batch
from outcouple.evaluation.judge import value_for
from outcouple.fields import Section, leaf_at, leaves
from outcouple.geometry import Metric, MetricValue
from outcouple.metrics import metrics_of
from outcouple.studies.flips import (
    STEP,
    Flip,
    Input,
    all_met,
    is_dear,
    margins_at,
    movers,
    step_about,
    turning_points,
)
from outcouple.studies.margins import deciding, judged_by, label_of, margins, scale_of, wanted_for

__all__ = ["Lever", "Levers", "all_inputs", "levers"]

Floats = NDArray[np.float64]

NOTHING = 1e-9
"""Smallest movement of a margin (in units of its limit) that counts as one."""


@dataclass(frozen=True)
class Lever:
    """One input and what it does to the requirement that decides.

    low, high   values of the difference (SI): one percent to either side, or a small step about zero
    effect      change of the deciding margin over one percent of the input, in units of the limit; over the step
                where the input stands at zero
    elasticity  percent of the deciding metric per percent of the input; nan where either is zero
    below       where the verdict turns on the way down; None where it holds to the end
    above       the same on the way up
    """

    input: Input
    low: float
    high: float
    effect: float
    elasticity: float
    below: Flip | None
    above: Flip | None

    @property
    def moves(self) -> bool:
        """True where it does anything here, or turns the verdict somewhere."""
        turns = any(flip is not None and flip.value is not None for flip in (self.below, self.above))
        return abs(self.effect) > NOTHING or turns


@dataclass(frozen=True)
class Levers:
    """All inputs, the strongest first.

    requirement  the one that decides, with its metric and value
    worst        its margin in units of its limit
    verdict      "pass", "fail" or "open": what the bounds keep
    unknown      requirements without a value here
    few          True where the design is dear: longer steps, and bounds only of inputs that move something here
    """

    title: str
    file: str
    geometry: str
    requirement: Requirement
    metric: Metric
    value: float
    worst: float
    verdict: str
    levers: tuple[Lever, ...]
    unknown: tuple[str, ...] = ()
    stated: bool = True
    few: bool = False


def all_inputs(design: Design) -> list[Input]:
    """Every number that is set: of the sections, of what touches in a state, of an object's place."""
    found = [Input(leaf, leaf.path, value) for leaf, value in numeric_inputs(design)]
    seen = set()
    for state in design.states:
        if state.family in seen:
            continue
        seen.add(state.family)
        models: list[tuple[tuple[str, ...], Section]] = [
            ((), preset) for preset in dict.fromkeys(state.touching.values())
        ]
        models += [(("object",), state.object)] if state.object is not None else []
        for before, model in models:
            for leaf in leaves(type(model)):
                path = ("states", state.family, *before, *leaf.path)
                value = leaf_at(model, leaf.path)[1]
                if not leaf.structural and isinstance(value, float) and path not in {one.path for one in found}:
                    found.append(Input(leaf, path, value))
    return found


def levers(
    design: Design,
    *,
    executor: Executor | None = None,
    progress: Callable[[int, int], None] | None = None,
) -> Levers:
    """Elasticities of the deciding margin to every numeric input, and where each would turn the verdict.

    A design without requirements is judged by its margin in sigma.
    """
    known = metrics_of(design.geometry)
    required = judged_by(design)
    here = evaluate_batch(design, {}, wanted_for(design)).metrics
    rows = margins(design, here)
    worst, at = deciding(rows)
    one = required[int(at[0])]
    inputs = all_inputs(design)
    steps = [step_about(each) for each in inputs]
    points = [(each, value) for each, pair in zip(inputs, steps, strict=True) for value in pair]
    moved = margins_at(design, points, executor=executor, progress=progress)
    passing = bool(worst[0] >= 0)
    known_here = ~np.isnan(rows[:, 0])

    def turned(found: Floats) -> NDArray[np.bool_]:
        if not passing:
            return all_met(found)
        return np.asarray(np.any(~(found[:-1][known_here] >= 0), axis=0))

    few = is_dear(design)
    sought = (movers(inputs, moved) if few else inputs) if np.isfinite(worst[0]) else []
    flips = turning_points(design, sought, turned, few=few, executor=executor, progress=progress)
    turns = {(flip.input.path, flip.upwards): flip for flip in flips}
    value = _value(design, one, here.get(one.metric))
    made = [
        _lever(each, pair, ends, value, scale_of(one), one, turns)
        for each, pair, ends in zip(inputs, steps, moved[int(at[0])].reshape(-1, 2), strict=True)
    ]
    unknown = [label_of(each, known[each.metric]) for each, row in zip(required, rows, strict=True) if np.isnan(row[0])]
    return Levers(
        title=design.title,
        file=design.file,
        geometry=design.geometry.name,
        requirement=one,
        metric=known[one.metric],
        value=value,
        worst=float(worst[0]),
        verdict=("fail" if not passing else "open" if unknown else "pass") if np.isfinite(worst[0]) else "open",
        levers=tuple(sorted(made, key=_strength)),
        unknown=tuple(unknown),
        stated=bool(design.requirements),
        few=few,
    )


def _strength(lever: Lever) -> tuple[bool, float, float, str]:
    """First what moves the margin most, then what turns the verdict soonest."""
    effect = abs(lever.effect) if abs(lever.effect) > NOTHING else 0.0
    soonest = min((flip.relative for flip in (lever.below, lever.above) if flip is not None), default=np.inf)
    return not lever.moves, -effect, soonest, lever.input.name


def _value(design: Design, one: Requirement, found: object) -> float:
    if not isinstance(found, MetricValue):
        return float("nan")
    picked = value_for(one, found, [(state.name, state.family) for state in design.states])
    return float(picked.values[0]) if isinstance(picked, MetricValue) else float("nan")


def _lever(
    one: Input,
    pair: tuple[float, float],
    ends: Sequence[float],
    value: float,
    scale: float,
    requirement: Requirement,
    turns: dict[tuple[tuple[str, ...], bool], Flip],
) -> Lever:
    low, high = pair
    moved = float(ends[1] - ends[0]) if np.all(np.isfinite(ends)) else float("nan")
    width = (high - low) / (abs(one.value) * STEP) if one.value else 1.0
    effect = moved / width if high > low else 0.0
    sign = 1.0 if requirement.at_least is not None else -1.0
    slope = sign * effect * scale / (STEP * value) if one.value and value and np.isfinite(value) else float("nan")
    return Lever(one, low, high, effect, slope, turns.get((one.path, False)), turns.get((one.path, True)))
