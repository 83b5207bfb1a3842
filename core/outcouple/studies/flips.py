"""How far one input at a time can go before the verdict turns: a ladder of steps to its bounds, then closing in."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from concurrent.futures import Executor
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Design
from outcouple.fields import Leaf
from outcouple.quantities import format_number, from_unit, in_unit
from outcouple.studies.margins import SIGMA, judged_by, margins, wanted_for
from outcouple.studies.work import Task, chunked, elements_of, run_tasks

__all__ = ["Flip", "Input", "all_met", "is_dear", "ladder", "margins_at", "movers", "step_about", "turning_points"]

Floats = NDArray[np.float64]

NEAR = (0.003, 0.01, 0.03, 0.1)
"""First relative steps away from the value."""
FAR = 8
"""Steps from there to the bound."""
FEW_NEAR, FEW_FAR = (0.02, 0.1), 4
"""The same where an evaluation is dear."""
DEAR = 50_000
"""Array elements of one sample from which an evaluation is dear: channels by the thousand, or a curve per sample."""
REACH = 100.0
"""Factor up to which an input without a bound is tried."""
TOLD = 1e-6
"""Standard deviations from the level below which a state is not told from the other."""
STEP = 0.01
"""Relative step of differences."""
ROUNDS = 3
INSIDE = 8
"""Points between two steps in every round of closing in: three rounds leave a 700th of the step."""


@dataclass(frozen=True)
class Input:
    """A number of the design: what is known about it, where samples of it go, and its value (SI)."""

    leaf: Leaf
    path: tuple[str, ...]
    value: float

    @property
    def name(self) -> str:
        """As a person writes it."""
        return ".".join(self.path)


@dataclass(frozen=True)
class Flip:
    """Where the verdict turns when one input moves one way.

    upwards   direction
    value     the first value found beyond the turn, in SI; None where the verdict holds as far as ``tried``
    tried     farthest value tried
    """

    input: Input
    upwards: bool
    value: float | None
    tried: float

    @property
    def relative(self) -> float:
        """Relative change to the turn; inf where there is none. An input at zero counts in its tried range."""
        if self.value is None:
            return float("inf")
        size = abs(self.input.value) or abs(self.tried) or 1.0
        return abs(self.value - self.input.value) / size


def is_dear(design: Design) -> bool:
    """True where a search takes fewer steps, and leaves out inputs that move nothing here."""
    return elements_of(design) > DEAR


def ladder(one: Input, *, upwards: bool, few: bool = False) -> Floats:
    """Values from an input's own towards its bound, nearest first, the bound last.

    Even ratios where value and bound are positive and far apart, growing steps otherwise.
    """
    near_steps, count = (FEW_NEAR, FEW_FAR) if few else (NEAR, FAR)
    value, sign = one.value, 1.0 if upwards else -1.0
    bound = one.leaf.high if upwards else one.leaf.low
    size = abs(value) or one.leaf.small_step()
    end = value + sign * size * REACH if bound is None else one.leaf.clip(bound)
    if not upwards and one.leaf.lowest is not None and one.leaf.lowest.open and bound == 0.0:
        end = value / REACH**2
    if (end - value) * sign <= 0:
        return np.zeros(0)
    near = value + sign * size * np.array(near_steps)
    start, part = near[-1], np.arange(1, count + 1) / count
    if value > 0 and end > 0 and max(end / start, start / end) > 3:
        far = start * (end / start) ** part
    else:
        far = np.concatenate([value + sign * size * np.array([0.3, 0.6, 0.9]), start + (end - start) * part**2])
    far[-1] = end
    steps = np.concatenate([near, far])
    inside = (steps - value) * sign
    kept = steps[(inside > 0) & (inside <= (end - value) * sign * (1 + 1e-12))]
    return np.asarray(np.unique(kept)[:: 1 if upwards else -1])


def margins_at(
    design: Design,
    points: Sequence[tuple[Input, float]],
    *,
    executor: Executor | None = None,
    progress: Callable[[int, int], None] | None = None,
) -> Floats:
    """Margins with one input at a time moved to a value: a row per requirement, the last the margin in sigma."""
    rows = (*judged_by(design), SIGMA)
    found = np.full((len(rows), len(points)), np.nan)
    done = 0
    for task, batch in run_tasks(_tasks(design, points), executor):
        found[:, task.places] = margins(design, batch.metrics, rows)
        done += len(task.places)
        if progress is not None:
            progress(done, len(points))
    return found


def _tasks(design: Design, points: Sequence[tuple[Input, float]]) -> list[Task]:
    """A batch per input: what does not depend on it is computed once for all its values."""
    places: dict[tuple[str, ...], list[int]] = {}
    for at, (one, _) in enumerate(points):
        places.setdefault(one.path, []).append(at)
    want = tuple(dict.fromkeys([*wanted_for(design), SIGMA.metric]))
    size = elements_of(design) if points else None
    return [
        task
        for path, mine in places.items()
        for task in chunked(
            design, {path: np.array([points[at][1] for at in mine])}, want, np.array(mine), elements=size
        )
    ]


def step_about(one: Input) -> tuple[float, float]:
    """A percent to either side, within the bounds; a hundredth of a small step about zero."""
    step = abs(one.value) * STEP or one.leaf.small_step() * STEP
    return one.leaf.clip(one.value - step), one.leaf.clip(one.value + step)


def movers(inputs: Sequence[Input], moved: Floats) -> list[Input]:
    """The inputs that move any margin; ``moved`` as :func:`margins_at` gives it at the two ends of every step."""
    low, high = moved[:, 0::2], moved[:, 1::2]
    still = np.all((low == high) | (np.isnan(low) & np.isnan(high)), axis=0)
    return [one for one, idle in zip(inputs, still, strict=True) if not idle]


def all_met(found: Floats) -> NDArray[np.bool_]:
    """True where every requirement is met and every state is told right: a sensor that sees nothing is no pass.

    found  as :func:`margins_at` gives them; a sensor without binary states has no margin in sigma, and needs none
    """
    return np.asarray(np.all(found[:-1] >= 0, axis=0) & ~(found[-1] < TOLD))


def turning_points(
    design: Design,
    inputs: Sequence[Input],
    good: Callable[[Floats], NDArray[np.bool_]],
    *,
    few: bool = False,
    executor: Executor | None = None,
    progress: Callable[[int, int], None] | None = None,
) -> list[Flip]:
    """For every input and direction the nearest value at which ``good(margins)`` turns true; in the input's own unit
    rounded to three or four digits where that still holds.

    few  take longer steps

    What lies between two steps of the ladder is not seen: a verdict that turns twice within one step goes unnoticed.
    """
    runs = [(one, up, ladder(one, upwards=up, few=few)) for one in inputs for up in (True, False)]
    runs = [run for run in runs if len(run[2])]
    points = [(one, float(value)) for one, _, steps in runs for value in steps]
    turned = good(margins_at(design, points, executor=executor, progress=progress))
    brackets, flips, start = [], [], 0
    for one, up, steps in runs:
        mine = turned[start : start + len(steps)]
        start += len(steps)
        if not np.any(mine):
            flips.append(Flip(one, up, None, float(steps[-1])))
            continue
        at = int(np.argmax(mine))
        brackets.append((one, up, float(steps[at - 1]) if at else one.value, float(steps[at]), float(steps[-1])))
    return flips + _closed_in(design, brackets, good, executor)


def _closed_in(
    design: Design,
    brackets: list[tuple[Input, bool, float, float, float]],
    good: Callable[[Floats], NDArray[np.bool_]],
    executor: Executor | None,
) -> list[Flip]:
    for _ in range(ROUNDS):
        inner = [np.linspace(before, after, INSIDE + 2)[1:-1] for _, _, before, after, _ in brackets]
        points = [(row[0], float(value)) for row, values in zip(brackets, inner, strict=True) for value in values]
        turned = good(margins_at(design, points, executor=executor)).reshape(len(brackets), INSIDE)
        narrower = []
        for (one, up, before, after, tried), values, mine in zip(brackets, inner, turned, strict=True):
            at = int(np.argmax(mine)) if np.any(mine) else INSIDE
            ends = [before, *map(float, values), after]
            narrower.append((one, up, ends[at], ends[at + 1], tried))
        brackets = narrower
    rounded = [[_rounded(one, after, digits, up) for digits in (2, 3, 4)] for one, up, _, after, _ in brackets]
    points = [(row[0], value) for row, values in zip(brackets, rounded, strict=True) for value in values]
    holds = good(margins_at(design, points, executor=executor)).reshape(len(brackets), 3)
    found = []
    for (one, up, _, after, tried), marks, mine in zip(brackets, rounded, holds, strict=True):
        slack = 0.02 * min(abs(after - one.value), abs(after) or np.inf)
        near = [abs(value - after) <= slack for value in marks]
        fit = [value for value, held, close in zip(marks, mine, near, strict=True) if held and close]
        found.append(Flip(one, up, fit[0] if fit else after, tried))
    return found


def _rounded(one: Input, value: float, digits: int, upwards: bool) -> float:
    """A value in the input's unit to some digits, away from where the input stands."""
    number = float(in_unit(value, one.leaf.kind, one.leaf.unit))
    if number == 0.0 or not np.isfinite(number):
        return value
    step = 10.0 ** (np.floor(np.log10(abs(number))) - digits + 1)
    whole = np.ceil(number / step - 1e-9) if upwards else np.floor(number / step + 1e-9)
    return one.leaf.clip(float(from_unit(float(format_number(float(whole * step), 6)), one.leaf.kind, one.leaf.unit)))
