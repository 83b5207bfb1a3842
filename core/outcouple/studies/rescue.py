"""Which change of one input alone makes a design that misses its requirements meet them."""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import Executor
from dataclasses import dataclass

from outcouple.design import Design
from outcouple.evaluation.advice import changeable
from outcouple.studies.flips import Flip, Input, all_met, is_dear, margins_at, movers, step_about, turning_points

__all__ = ["Rescue", "rescue"]


@dataclass(frozen=True)
class Rescue:
    """What the search found.

    found     changes after which every requirement is met, the smallest relative change first
    searched  inputs that were searched, up and down to the bounds their fields declare
    few       True where the design is dear: longer steps, and only inputs that move a requirement where it stands
    """

    found: tuple[Flip, ...]
    searched: int
    few: bool = False


def rescue(
    design: Design,
    *,
    executor: Executor | None = None,
    progress: Callable[[int, int], None] | None = None,
) -> Rescue:
    """Search every numeric input a designer may choose, one at a time, each within its bounds.

    A requirement without a value counts as not met, and so does a state that is not told right.
    """
    inputs = [Input(leaf, leaf.path, value) for leaf, value in changeable(design)]
    few = is_dear(design)
    if few:
        ends = [(one, value) for one in inputs for value in step_about(one)]
        inputs = movers(inputs, margins_at(design, ends, executor=executor, progress=progress))
    flips = turning_points(design, inputs, all_met, few=few, executor=executor, progress=progress)
    good = sorted((flip for flip in flips if flip.value is not None), key=lambda flip: flip.relative)
    return Rescue(tuple(good), len(inputs), few)
