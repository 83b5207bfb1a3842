"""What a reader is given and what it hands back."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any, Final, Protocol

import numpy as np
from numpy.typing import NDArray

from outcouple.notes import Note
from outcouple.readout.noise import NoiseBudget

__all__ = ["Lit", "Reading"]

Floats = NDArray[np.float64]

OF_THE_LIGHT: Final = ("signal shot", "emitter intensity", "reference channel")
"""Causes of noise that go out with the emitter."""


class Lit(Protocol):
    """What the chain needs to know of a state's light; it knows no faces."""

    @property
    def p(self) -> Any:
        """The design's sections over samples."""

    @property
    def wavelengths(self) -> Floats:
        """Of the emitter's line, (S, L)."""

    @property
    def weights(self) -> Floats:
        """Of the line's nodes, (L,), sum 1."""

    @property
    def etendue(self) -> Floats:
        """With which each channel sees the outside, (S, C) [m2 sr]."""

    @property
    def slot(self) -> Floats | None:
        """Time each channel has for one reading [s], (S,); None where channels do not take turns."""


@dataclass(frozen=True)
class Reading:
    """Mean and noise of one state.

    mean        photocurrent [A] or electrons, (S, C); with what ambient and dark current leave in it; clipped where the
                stage saturates
    unlit       reading while the emitter gives no light, (S, C)
    budget      variances by cause
    ambient     what outside light brings to the stage, whether or not the reading keeps it, (S, C)
    load        all the stage carries: signal, ambient and dark, (S, C)
    full_scale  largest load the stage takes, (S,)
    per_watt    reading per watt at the read-out, (S,)
    bandwidth   noise bandwidth, (S,); settling time to a new value [s], (S,)
    stage       figures of the stage by the name of their metric, (S,) each
    """

    mean: Floats
    unlit: Floats
    budget: NoiseBudget
    ambient: Floats
    load: Floats
    full_scale: Floats
    per_watt: Floats
    bandwidth: Floats
    settling: Floats
    unit: str
    notes: tuple[Note, ...] = ()
    stage: Mapping[str, Floats] = field(default_factory=dict)

    @property
    def variances(self) -> Mapping[str, Floats]:
        """By cause."""
        return self.budget.variances

    @property
    def variance(self) -> Floats:
        """Total, (S, C)."""
        return np.broadcast_to(self.budget.total, self.mean.shape)

    @property
    def noise(self) -> Floats:
        """Standard deviation, (S, C)."""
        return np.asarray(np.sqrt(self.variance))

    @property
    def unlit_noise(self) -> Floats:
        """Standard deviation of ``unlit``, (S, C): what the emitter's light does not bring with it."""
        parts = (part for cause, part in self.variances.items() if cause not in OF_THE_LIGHT)
        return np.asarray(np.sqrt(np.broadcast_to(sum(parts, np.zeros(())), self.mean.shape)))

    def headroom(self) -> Floats:
        """Full scale over the largest load of any channel, (S,); below 1 the stage saturates."""
        most = np.max(self.load, axis=1)
        with np.errstate(divide="ignore"):
            return np.asarray(np.where(most > 0, self.full_scale / np.where(most > 0, most, 1.0), np.inf))
