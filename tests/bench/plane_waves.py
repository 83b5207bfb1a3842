"""The plane-wave engine against a loop of the package tmm, and against one complex exp and sqrt per point."""

from __future__ import annotations

import time
from collections.abc import Callable, Iterator

import numpy as np
import tmm

from outcouple import optics

__all__ = ["rows"]

POINTS, LOOP, RUNS = 1_000_000, 300, 7
LINE = 850e-9
INDICES, DEPTHS = (1.5, 1.38, 2.1, 1.38, 2.1, 1.45, 1.33), (1e-7, 2e-7, 1e-7, 2e-7, 1e-7)


def rows() -> Iterator[tuple[str, float, str]]:
    """One row per structure and comparison."""
    angle = np.random.default_rng(0).uniform(0, 1.57, POINTS)
    numbers = np.exp(1j * angle)
    floor = _least(lambda: (np.exp(numbers), np.sqrt(numbers)))
    gap = _least(lambda: optics.gap_transmittance(1.484, 1.0, 1.43, 2e-7, angle, LINE))
    stack = _least(lambda: optics.stack_response(INDICES, DEPTHS, angle, LINE))
    how = f"{POINTS} points, s and p together"
    yield "gap, per complex exp + sqrt (at most 1.2)", gap / floor, how
    yield "five layers, per complex exp + sqrt (at most 3.5)", stack / floor, how
    few = angle[:LOOP]
    against = f"loop of {LOOP} points taken to {POINTS}"
    for what, mine, indices, depths in (
        ("gap (at least 1,500)", gap, (1.484, 1.0, 1.43), (2e-7,)),
        ("five layers (at least 600)", stack, INDICES, DEPTHS),
    ):
        loop = _least(lambda indices=indices, depths=depths: _loop(few, indices, depths), runs=3)  # type: ignore[misc]
        yield f"tmm loop over {what}", loop / LOOP * POINTS / mine, against


def _loop(angles: np.ndarray, indices: tuple[float, ...], depths: tuple[float, ...]) -> None:
    whole = [np.inf, *depths, np.inf]
    for angle in angles:
        for polarisation in "sp":
            tmm.coh_tmm(polarisation, indices, whole, angle, LINE)


def _least(work: Callable[[], object], runs: int = RUNS) -> float:
    """Least time of several runs [s]."""
    found = []
    for _ in range(runs):
        begun = time.process_time()
        work()
        found.append(time.process_time() - begun)
    return min(found)
