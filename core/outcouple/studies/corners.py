"""The corners a design declares: its tolerances at their limits, inputs of one group together.

All corners where there are few enough; otherwise, for every requirement, the corner that steps of one group at a time
point to. Which of the two it was is always told.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from concurrent.futures import Executor
from dataclasses import dataclass
from itertools import product
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Design, Requirement, Tolerance
from outcouple.evaluation.judge import value_for
from outcouple.geometry import MetricValue, Missing
from outcouple.studies.work import chunked, elements_of, run_tasks

__all__ = ["CORNERS", "Cornered", "Worst", "corner_groups", "evaluate_corners"]

Floats = NDArray[np.float64]
Path = tuple[str, ...]

CORNERS = 1024
"""Corners that are all evaluated: ten groups."""
ELEMENTS = 1_000_000_000
"""Array elements that all corners together may hold."""


@dataclass(frozen=True)
class Worst:
    """The worst value one requirement meets at the corners (its nominal value counts among them).

    value   SI; None where there is none, and why says why not
    where   group -> "low" or "high"; empty where nominal is worst
    at      state of the value
    """

    value: float | None
    where: Mapping[str, str]
    at: str = ""
    why: str = ""


@dataclass(frozen=True)
class Cornered:
    """What the corners of one design gave.

    groups     name -> tolerances that move together
    method     "all": every corner; "steps": worst found by one-at-a-time steps; "none": nothing is declared
    evaluated  corners (or steps) that were evaluated
    worst      per requirement asked for
    """

    groups: Mapping[str, tuple[Tolerance, ...]]
    method: Literal["all", "steps", "none"]
    evaluated: int
    worst: tuple[Worst, ...]


def corner_groups(design: Design) -> dict[str, tuple[Tolerance, ...]]:
    """Tolerances by the name of their group; one without is a group under its own path."""
    found: dict[str, list[Tolerance]] = {}
    for one in design.tolerances:
        found.setdefault(one.group or ".".join(one.path), []).append(one)
    return {name: tuple(members) for name, members in found.items()}


def evaluate_corners(
    design: Design,
    requirements: Sequence[Requirement],
    *,
    most: int = CORNERS,
    executor: Executor | None = None,
    progress: Callable[[int, int], None] | None = None,
) -> Cornered:
    """The worst value of every requirement's metric at the corners of a design.

    most  corners up to which all are evaluated
    """
    groups = corner_groups(design)
    if not groups:
        none = Worst(None, {}, why="the design declares no tolerances")
        return Cornered(groups, "none", 0, (none,) * len(requirements))
    count = 2 ** len(groups)
    dear = count * elements_of(design) > ELEMENTS
    run = _Run(design, requirements, groups, executor, progress)
    if count <= most and not dear:
        signs = _all_signs(len(groups))
        values, at, why = run.values(signs)
        return Cornered(groups, "all", count, run.worst(signs, values, at, why))
    steps = np.concatenate([np.zeros((1, len(groups))), np.eye(len(groups)), -np.eye(len(groups))])
    values, at, why = run.values(steps)
    pointed = run.pointed(values)
    more, more_at, _ = run.values(pointed)
    signs = np.concatenate([steps, pointed])
    joined = np.concatenate([values, more], axis=1)
    return Cornered(groups, "steps", len(signs) - 1, run.worst(signs, joined, [*at, *more_at], why))


def _all_signs(groups: int) -> Floats:
    """The nominal design, then every corner: a row of -1 and 1 each."""
    return np.array([[0.0] * groups, *product((-1.0, 1.0), repeat=groups)])


class _Run:
    """Evaluates rows of signs, one sign per group."""

    def __init__(
        self,
        design: Design,
        requirements: Sequence[Requirement],
        groups: Mapping[str, tuple[Tolerance, ...]],
        executor: Executor | None,
        progress: Callable[[int, int], None] | None,
    ) -> None:
        self.design, self.requirements, self.groups = design, requirements, groups
        self.executor, self.progress = executor, progress
        self.states = [(state.name, state.family) for state in design.states]

    def values(self, signs: Floats) -> tuple[Floats, list[list[str]], list[str]]:
        """Values (requirements, rows), the states they belong to per row, and why a requirement has none."""
        found = np.full((len(self.requirements), len(signs)), np.nan)
        at = [[""] * len(self.requirements) for _ in signs]
        why = [""] * len(self.requirements)
        want = tuple(dict.fromkeys(one.metric for one in self.requirements))
        done = 0
        tasks = list(chunked(self.design, self._samples(signs), want, np.arange(len(signs))))
        for task, batch in run_tasks(tasks, self.executor):
            for row, one in enumerate(self.requirements):
                picked = value_for(one, batch.metrics[one.metric], self.states)
                if isinstance(picked, MetricValue):
                    found[row, task.places] = picked.values
                    for sample, place in enumerate(task.places):
                        at[int(place)][row] = _state_of(batch.metrics[one.metric], picked, sample)
                else:
                    why[row] = picked.why
            done += len(task.places)
            if self.progress is not None:
                self.progress(done, len(signs))
        return found, at, why

    def _samples(self, signs: Floats) -> dict[Path, Floats]:
        samples = {}
        for column, members in enumerate(self.groups.values()):
            for one in members:
                centre = _nominal(self.design, one)
                sign = signs[:, column]
                samples[one.path] = np.where(sign < 0, one.low, np.where(sign > 0, one.high, centre))
        return samples

    def pointed(self, values: Floats) -> Floats:
        """For every requirement the corner its steps point to: each group to the side that leaves less margin."""
        count = len(self.groups)
        rows = []
        for one, row in zip(self.requirements, values, strict=True):
            margin = np.where(np.isnan(row), np.inf, one.margin(row))
            up, down = margin[1 : 1 + count], margin[1 + count : 1 + 2 * count]
            rows.append(np.where(up < down, 1.0, -1.0))
        return np.array(rows).reshape(-1, count)

    def worst(
        self, signs: Floats, values: Floats, at: Sequence[Sequence[str]], why: Sequence[str]
    ) -> tuple[Worst, ...]:
        """The row of least margin per requirement; a corner without a value leaves it open."""
        found = []
        for row, one in enumerate(self.requirements):
            if np.any(np.isnan(values[row])):
                missing = int(np.argmax(np.isnan(values[row])))
                reason = why[row] or f"has no value at a corner ({_said(self._where(signs[missing])) or 'nominal'})"
                found.append(Worst(None, self._where(signs[missing]), why=reason))
                continue
            pick = int(np.argmin(one.margin(values[row])))
            found.append(Worst(float(values[row, pick]), self._where(signs[pick]), at[pick][row]))
        return tuple(found)

    def _where(self, signs: Floats) -> dict[str, str]:
        return {name: "low" if sign < 0 else "high" for name, sign in zip(self.groups, signs, strict=True) if sign}


def _said(where: Mapping[str, str]) -> str:
    return ", ".join(f"{name} {side}" for name, side in where.items())


def _state_of(found: MetricValue | Missing, picked: MetricValue, sample: int) -> str:
    """The state a picked value belongs to at one sample."""
    states = found.states if isinstance(found, MetricValue) else {}
    value = picked.values[sample]
    same = [name for name, values in states.items() if np.broadcast_to(values, picked.values.shape)[sample] == value]
    return same[0] if same else picked.at


def _nominal(design: Design, one: Tolerance) -> float:
    value: object = design.sections
    for key in one.path:
        value = getattr(value, key)
    return float(value)  # type: ignore[arg-type]
