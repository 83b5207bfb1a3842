"""What a sweep found: metrics, margins and verdicts over its grid."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Requirement
from outcouple.geometry import Metric
from outcouple.notes import Note
from outcouple.studies.axes import Axis
from outcouple.studies.margins import scale_of

__all__ = ["Limit", "Sweep", "SweptMetric"]

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]


@dataclass(frozen=True)
class SweptMetric:
    """One metric over the grid of a sweep.

    values  SI, one axis of the array per axis of the sweep; nan where there is no value
    states  the same per state
    why     what was said where there is no value
    """

    metric: Metric
    values: Floats
    states: Mapping[str, Floats]
    why: tuple[str, ...] = ()


@dataclass(frozen=True)
class Limit:
    """One requirement over the grid.

    margin  distance to the limit in the metric's own unit, positive where it is met; nan where unknown
    scaled  the same in units of the limit (of the metric's unit where the limit is zero)
    why     why it is open throughout; empty where it was judged
    """

    requirement: Requirement
    label: str
    margin: Floats
    why: str = ""

    @property
    def scaled(self) -> Floats:
        """Margins in units of the limit."""
        return self.margin / scale_of(self.requirement)

    @property
    def met(self) -> Bools:
        """True where it is known to be met."""
        return np.asarray(self.margin >= 0)


@dataclass(frozen=True)
class Sweep:
    """What a sweep found. Arrays have one axis per axis of the sweep.

    signals  state -> reading of its faintest channel (SI)
    done     points that were evaluated; all of them unless it was interrupted
    reading  the metric that says what the signals are
    notes    cautions, each with the points it holds for (flat, in the order of the arrays)
    standing  cautions of the design as it stands: its purpose, its conditions
    """

    title: str
    file: str
    geometry: str
    axes: tuple[Axis, ...]
    metrics: Mapping[str, SweptMetric]
    signals: Mapping[str, Floats]
    limits: tuple[Limit, ...]
    done: Bools
    reading: Metric
    notes: tuple[Note, ...] = ()
    standing: tuple[Note, ...] = ()
    raw: Mapping[str, Any] = field(default_factory=dict)

    @property
    def shape(self) -> tuple[int, ...]:
        """Points on every axis."""
        return tuple(len(axis.values) for axis in self.axes)

    @property
    def finished(self) -> bool:
        """True where nothing was left out."""
        return bool(np.all(self.done))

    @property
    def dangers(self) -> list[str]:
        """Codes of the dangers that hold at every point, in the flat order of the arrays; "" where none does."""
        dangers = [note for note in self.notes if note.severity == "danger"]
        held = [np.ones(self.done.size, dtype=bool) if note.where is None else note.where for note in dangers]
        codes = [note.code for note in dangers]
        return [
            ", ".join(code for code, where in zip(codes, held, strict=True) if where[at])
            for at in range(self.done.size)
        ]

    @property
    def worst(self) -> Floats:
        """Least margin over all requirements in units of their limits; nan where one is open or nothing is asked."""
        if not self.limits:
            return np.full(self.shape, np.nan)
        return np.asarray(np.min(np.stack([limit.scaled for limit in self.limits]), axis=0))

    @property
    def verdicts(self) -> NDArray[np.str_]:
        """ "pass", "fail", "open" or "none stated" at every point; "" where it was not evaluated."""
        if not self.limits:
            return np.where(self.done, "none stated", "")
        stack = np.stack([limit.margin for limit in self.limits])
        missed, unknown = np.any(stack < 0, axis=0), np.any(np.isnan(stack), axis=0)
        return np.where(~self.done, "", np.where(missed, "fail", np.where(unknown, "open", "pass")))
