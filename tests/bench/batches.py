"""A batch of the prism: samples per second, peak memory."""

from __future__ import annotations

import resource
import time
from collections.abc import Iterator
from pathlib import Path

import numpy as np

from outcouple.design import load_design
from outcouple.evaluation import evaluate_batch

__all__ = ["rows"]

TANK = Path(__file__).parents[2] / "demo_configs" / "oil_tank_overfill.toml"
SAMPLES = 20_000


def rows() -> Iterator[tuple[str, float, str]]:
    """20,000 samples of the five states of the day tank, three inputs varying."""
    design = load_design(TANK)
    rng = np.random.default_rng(0)
    samples = {
        ("prism", "base"): rng.uniform(7e-3, 9e-3, SAMPLES),
        ("emitter", "power"): rng.uniform(1e-3, 5e-3, SAMPLES),
        ("prism", "crosstalk"): rng.uniform(0.01, 0.04, SAMPLES),
    }
    begun = time.perf_counter()
    evaluate_batch(design, samples, ["worst_ratio", "margin_sigma"])
    taken = time.perf_counter() - begun
    how = f"{SAMPLES} samples x {len(design.states)} states"
    yield "prism samples per second", SAMPLES / taken, how
    yield "peak memory of the process [MB]", resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024, how
