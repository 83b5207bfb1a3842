"""The work of a study in chunks, on any executor of ``concurrent.futures`` or on none.

Chunks depend on the design and the samples alone, never on the number of workers, so that any number of workers gives
the same numbers.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from concurrent.futures import Executor, as_completed
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Design, design_from_mapping
from outcouple.evaluation.batch import Batch, evaluate_batch, sample_elements
from outcouple.evaluation.overlay import Samples
from outcouple.evaluation.table import tabulate

__all__ = ["CHUNK", "Task", "chunked", "elements_of", "run_tasks"]

CHUNK = 128
"""Samples of one chunk: big enough that arrays carry the work, small enough for progress and an early stop."""


@dataclass(frozen=True)
class Task:
    """Metrics of one design over a chunk of samples; pickles as the design's plain data, read again by the worker.

    places    where the answers belong, (S,)
    elements  array elements of one sample, where they are known
    """

    design: Design
    samples: Samples
    want: tuple[str, ...]
    places: NDArray[np.int64]
    elements: int | None = None

    def __call__(self) -> Batch:
        """Do it. What cannot be computed at the far end of an input is nan: a value that is not there, no warning."""
        with np.errstate(all="ignore"):
            return evaluate_batch(self.design, self.samples, self.want, elements=self.elements)

    def __reduce__(self) -> tuple[Any, ...]:
        data = (dict(self.design.raw), self.design.file)
        return _task, (*data, dict(self.samples), self.want, self.places, self.elements)


def _task(raw: dict[str, Any], file: str, samples: Samples, want: tuple[str, ...], *rest: Any) -> Task:
    return Task(design_from_mapping(raw, file=file), samples, want, *rest)


def chunked(
    design: Design,
    samples: Samples,
    want: Sequence[str],
    places: NDArray[np.int64],
    *,
    elements: int | None = None,
) -> Iterator[Task]:
    """Tasks of at most ``CHUNK`` samples."""
    for start in range(0, len(places), CHUNK):
        part = {path: values[start : start + CHUNK] for path, values in samples.items()}
        yield Task(design, part, tuple(want), places[start : start + CHUNK], elements)


def elements_of(design: Design) -> int:
    """Array elements of one sample of a design."""
    with np.errstate(all="ignore"):
        return sample_elements(tabulate(design))


def run_tasks(tasks: Sequence[Task], executor: Executor | None = None) -> Iterator[tuple[Task, Batch]]:
    """Tasks with their answers, as they come; what has not begun is dropped when the caller stops asking."""
    if executor is None:
        for task in tasks:
            yield task, task()
        return
    futures = {executor.submit(_call, task): task for task in tasks}
    try:
        for future in as_completed(futures):
            yield futures[future], future.result()
    finally:
        for future in futures:
            future.cancel()


def _call(task: Task) -> Batch:
    return task()
