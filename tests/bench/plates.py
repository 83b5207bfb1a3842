"""Maps of a perimeter-read plate against moving the object from cell to cell, and samples per second of its batches.

Ratios in one run on one machine; processor times stand beside them. ``rows`` yields (what, ratio, how it was found).
"""

from __future__ import annotations

import time
from collections.abc import Callable, Iterator
from pathlib import Path

import numpy as np

from outcouple.design import Design, design_from_mapping, load_design
from outcouple.evaluation import evaluate_batch
from outcouple.evaluation.batch import results_of
from outcouple.evaluation.table import tabulate
from outcouple.geometry import Results
from outcouple_plugins.edge_perimeter.maps import field_map, objects

__all__ = ["rows"]

DEMOS = Path(__file__).parents[2] / "demo_configs"
SIDE = 128
"""Emitters, and detectors, of the dense plate."""
CELLS, SAMPLES, LOOP = 24, 64, 6
"""Cells the object is moved to, samples of a batch, and those of them that are run one by one."""


def rows() -> Iterator[tuple[str, float, str]]:
    """Map of a dense plate, batch of a demo."""
    dense = _dense()
    results = results_of(tabulate(dense), None)
    _mapped(results)
    whole = _seconds(lambda: _mapped(results))
    moved = _seconds(lambda: _moved(dense)) / CELLS * 200 * 120
    yield (
        f"coverage and position maps of {SIDE} x {SIDE} chords on 200 x 120 cells",
        moved / whole,
        f"object moved to {CELLS} cells, taken to all; the maps took {whole:.2f} s of processor time",
    )
    console = load_design(DEMOS / "theatre_console.toml")
    path, values = ("plate", "thickness"), np.linspace(2e-3, 6e-3, SAMPLES)
    together = _seconds(lambda: evaluate_batch(console, {path: values}))
    alone = _seconds(lambda: [evaluate_batch(console, {path: values[at : at + 1]}) for at in range(LOOP)])
    yield (
        f"batch of {SAMPLES} theatre consoles",
        alone / LOOP * SAMPLES / together,
        f"loop of {LOOP} taken to all; {SAMPLES / together:.1f} samples a second of processor time",
    )


def _dense() -> Design:
    raw = dict(load_design(DEMOS / "theatre_console.toml").raw)
    raw["emitters"] = {**raw["emitters"], "edges": "bottom", "per_edge": SIDE}
    raw["detectors"] = {**raw["detectors"], "edges": "top", "per_edge": SIDE}
    raw["states"] = raw["states"][:2]
    del raw["requirements"]
    return design_from_mapping(raw)


def _mapped(results: Results) -> None:
    results.memo.clear()
    field = field_map(results, objects(results)[0], 0)
    assert field is not None
    np.sum(field.counts)
    field.position_error()


def _moved(design: Design) -> None:
    """The state's own evaluation with the object at a few cells."""
    path = ("states", "gloved finger", "object")
    x = np.linspace(-0.2, 0.2, CELLS)
    evaluate_batch(design, {(*path, "x"): x, (*path, "y"): x / 2}, ["chords_darkened"])


def _seconds(work: Callable[[], object]) -> float:
    begun = time.process_time()
    work()
    return time.process_time() - begun


if __name__ == "__main__":
    for what, ratio, how in rows():
        print(f"{what}: {ratio:.1f} times faster ({how})")
