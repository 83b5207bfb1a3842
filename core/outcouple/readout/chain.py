"""Optical shares to readings: the design's [readout] section joined with the detector's physics."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, Protocol

import numpy as np
from numpy.typing import NDArray

from outcouple.notes import Note
from outcouple.readout.noise import NoiseBudget, shot_variance, thermal_variance
from outcouple.readout.photodiode import dark_current, responsivity

__all__ = ["Lit", "Reading", "read"]

Floats = NDArray[np.float64]


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


@dataclass(frozen=True)
class Reading:
    """Mean and noise of one state.

    mean        photocurrent [A] or electrons, (S, C)
    budget      variances by cause
    ambient     reading of outside light, (S, C)
    full_scale  largest reading the stage takes, (S,)
    per_watt    reading per watt at the read-out, (S,)
    bandwidth   noise bandwidth, (S,); settling time to a new value [s], (S,)
    """

    mean: Floats
    budget: NoiseBudget
    ambient: Floats
    full_scale: Floats
    per_watt: Floats
    bandwidth: Floats
    settling: Floats
    unit: str
    notes: tuple[Note, ...] = ()

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


def read(kind: str, lit: Lit, share: Floats) -> Reading:
    """Reading of one state.

    share  optical share of the emitter's power per wavelength node, (S, L, C)
    """
    return READERS[kind](lit, share)


def _photodiode(lit: Lit, share: Floats) -> Reading:
    readout, environment = lit.p.readout, lit.p.environment
    curve = responsivity(lit.wavelengths, readout.detector, temperature=environment.temperature[:, None])
    if readout.responsivity is not None:
        middle = lit.wavelengths.shape[1] // 2
        curve = curve / curve[:, middle : middle + 1] * readout.responsivity[:, None]
    power = lit.p.emitter.power[:, None]
    mean = power * np.sum(lit.weights[:, None] * curve[:, :, None] * share, axis=1)
    per_watt = np.sum(lit.weights * curve, axis=1)
    ambient = np.zeros_like(mean) if readout.ambient_current is None else mean * 0 + readout.ambient_current[:, None]
    dark = dark_current(readout.dark_current, temperature=environment.temperature)[:, None]
    bandwidth, resistance = readout.bandwidth[:, None], readout.feedback_resistance[:, None]
    step = readout.full_scale[:, None] / 2**readout.bits / resistance
    budget = NoiseBudget(
        {
            "signal shot": shot_variance(mean, bandwidth=bandwidth),
            "ambient shot": shot_variance(ambient, bandwidth=bandwidth),
            "dark shot": shot_variance(dark, bandwidth=bandwidth),
            "resistor thermal": thermal_variance(
                resistance, temperature=environment.temperature[:, None], bandwidth=bandwidth
            ),
            "converter": step**2 / 12,
            "emitter intensity": (mean * readout.intensity_noise[:, None]) ** 2,
        }
    )
    full_scale = readout.full_scale / readout.feedback_resistance
    settling = 1 / (2 * readout.bandwidth)
    return Reading(mean, budget, ambient, full_scale, per_watt, readout.bandwidth, settling, "A")


def _camera(lit: Lit, share: Floats) -> Reading:
    raise NotImplementedError


READERS: Mapping[str, Callable[[Lit, Floats], Reading]] = {"photodiode": _photodiode, "camera": _camera}
