"""Which change of one input alone makes a design that misses its requirements meet them."""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import Executor
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Design
from outcouple.evaluation.advice import changeable
from outcouple.studies.flips import Flip, Input, turning_points

__all__ = ["Rescue", "rescue"]


@dataclass(frozen=True)
class Rescue:
    """What the search found.

    found     changes after which every requirement is met, the smallest relative change first
    searched  inputs that were searched, up and down to the bounds their fields declare
    """

    found: tuple[Flip, ...]
    searched: int


def rescue(
    design: Design,
    *,
    executor: Executor | None = None,
    progress: Callable[[int, int], None] | None = None,
) -> Rescue:
    """Search every numeric input a designer may choose, one at a time, each within its bounds.

    A requirement without a value counts as not met.
    """
    inputs = [Input(leaf, leaf.path, value) for leaf, value in changeable(design)]
    flips = turning_points(design, inputs, _all_met, executor=executor, progress=progress)
    good = sorted((flip for flip in flips if flip.value is not None), key=lambda flip: flip.relative)
    return Rescue(tuple(good), len(inputs))


def _all_met(margins: NDArray[np.float64]) -> NDArray[np.bool_]:
    return np.asarray(np.all(margins >= 0, axis=0))
