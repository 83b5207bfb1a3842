"""Sweeps against the same loop of single evaluations, in one run on one machine: ratios, no absolute times.

The loop is run on a few points and taken to the length of the sweep. ``rows`` yields (what, ratio, how it was found).
"""

from __future__ import annotations

import time
from collections.abc import Callable, Iterator
from pathlib import Path

import numpy as np

from outcouple.design import Design, load_design
from outcouple.evaluation import evaluate_batch
from outcouple.studies import read_axes, sweep
from outcouple.studies.sweep import wanted_metrics

__all__ = ["rows"]

DEMOS = Path(__file__).parents[2] / "demo_configs"
LOOP = 12
"""Points of the loop that are run."""
SWEEPS = (
    ("dewar_ladder_silica", ("prism.base from 4 mm to 8 mm in 200", "emitter.half_angle from 1 deg to 8 deg in 200")),
    ("cooktop_strip", ("plate.thickness from 3 mm to 5 mm in 20", "emitter.power from 10 mW to 60 mW in 20")),
)


def rows() -> Iterator[tuple[str, float, str]]:
    """One row per sweep: how many times faster than the loop."""
    for name, axes in SWEEPS:
        design = load_design(DEMOS / f"{name}.toml")
        shape = tuple(len(axis.values) for axis in read_axes(design, axes))
        count = int(np.prod(shape))
        _loop(design, axes, 1)
        alone = _seconds(lambda design=design, axes=axes: _loop(design, axes, LOOP)) / LOOP * count  # type: ignore[misc]
        whole = _seconds(lambda design=design, axes=axes: sweep(design, axes))  # type: ignore[misc]
        size = " x ".join(map(str, shape))
        yield f"sweep of {name}, {size}", alone / whole, f"loop of {LOOP} single evaluations taken to {count}"


def _loop(design: Design, axes: tuple[str, ...], points: int) -> None:
    """Single evaluations of the same metrics at the first points of a sweep."""
    read = read_axes(design, axes)
    want = wanted_metrics(design, ())
    for flat in range(points):
        at = np.unravel_index(flat, tuple(len(axis.values) for axis in read))
        point = {axis.place.path: np.array([axis.values[int(one)]]) for axis, one in zip(read, at, strict=True)}
        evaluate_batch(design, point, want)


def _seconds(work: Callable[[], object]) -> float:
    begun = time.process_time()
    work()
    return time.process_time() - begun


if __name__ == "__main__":
    for what, ratio, how in rows():
        print(f"{what}: {ratio:.1f} times faster ({how})")
