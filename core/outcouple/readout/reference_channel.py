"""A reading as the ratio to a reference photodiode that watches the emitter."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.readout.emitted import electronics_temperature, peak
from outcouple.readout.noise import NoiseBudget, shot_variance, thermal_variance
from outcouple.readout.photodiode import responsivity
from outcouple.readout.reading import Reading

__all__ = ["against_reference"]

Floats = NDArray[np.float64]

FILL = 0.5
"""Share of its full scale that the reference stage is laid out for, common practice, no source."""


def against_reference(p: Any, reading: Reading, common: Floats) -> Reading:
    """The reading at the emitter's stated power, whatever temperature, drive and age have left of it.

    common  share of the stated power left, (S,): what signal and reference both see

    Intensity noise cancels, the reference's own noise comes in. What only one of the two sees stays: fouling,
    scratches.
    A dead emitter leaves nothing to divide by; its reading stays what it is, and the reference tells that it is dead.
    """
    factor = np.where(common > 0, common, 1.0)[:, None]
    relative = _relative_variance(p, reading.bandwidth, common)[:, None]
    parts = {cause: part / factor**2 for cause, part in reading.variances.items() if cause != "emitter intensity"}
    mean = reading.mean / factor
    budget = NoiseBudget({**parts, "reference channel": mean**2 * relative}, reading.unit)
    return replace(reading, mean=mean, budget=budget)


def _relative_variance(p: Any, bandwidth: Floats, common: Floats) -> Floats:
    """Variance of the reference over its square, (S,): shot and thermal noise of its own stage; 0 without light."""
    temperature = electronics_temperature(p)
    per_watt = responsivity(peak(p), temperature=temperature)
    full = p.emitter.power * p.readout.reference_share * per_watt
    current = full * common
    safe = np.where(current > 0, current, 1.0)
    resistance = FILL * p.readout.full_scale / np.where(full > 0, full, 1.0)
    variance = shot_variance(current, bandwidth=bandwidth) + thermal_variance(
        resistance, temperature=temperature, bandwidth=bandwidth
    )
    return np.asarray(np.where(current > 0, variance / safe**2, 0.0))
