"""Absent, present or fault: bands of the reading, and how surely a broken sensor falls into the fault bands.

A two-state output cannot tell a wet tip from a dead lamp. With bands below and above the readings a healthy sensor can
give, a fault that drives the reading there is seen. Readings are shares of the bright state when new.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.decision.detection import tail_probability

__all__ = ["Bands", "band_probabilities", "dark_fault_limit", "fault_coverage"]

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Bands:
    """Limits of the reading, rising: fault below ``low``, dark up to ``level``, bright up to ``high``, fault above.

    Arrays over samples and channels in one unit. Which of dark and bright means present is the sensor's principle.
    """

    low: ArrayLike
    level: ArrayLike
    high: ArrayLike

    def __post_init__(self) -> None:
        if np.any(np.asarray(self.low) > np.asarray(self.level)) or np.any(
            np.asarray(self.level) > np.asarray(self.high)
        ):
            raise ValueError("the limits of the bands must rise: low, level, high")


def band_probabilities(bands: Bands, *, mean: ArrayLike, noise: ArrayLike) -> dict[str, Floats]:
    """Chances that a Gaussian reading falls in "fault low", "dark", "bright" and "fault high"; they sum to 1."""
    z = [
        (np.asarray(limit) - np.asarray(mean)) / np.asarray(noise, dtype=float)
        for limit in (bands.low, bands.level, bands.high)
    ]
    above = [tail_probability(one) for one in z]
    return {
        "fault low": tail_probability(-z[0]),
        "dark": _between(z[0], z[1]),
        "bright": _between(z[1], z[2]),
        "fault high": above[2],
    }


def _between(low: Floats, high: Floats) -> Floats:
    """Chance between two standard limits, from the tail on the side where both lie so that nothing cancels."""
    flip = np.where(low > 0, 1.0, -1.0)
    first, second = tail_probability(flip * low), tail_probability(flip * high)
    return np.asarray(np.abs(first - second))


def fault_coverage(bands: Bands, *, mean: ArrayLike, noise: ArrayLike) -> Floats:
    """Chance that one reading of a broken sensor, with this mean and noise, is told as a fault."""
    found = band_probabilities(bands, mean=mean, noise=noise)
    return np.asarray(found["fault low"] + found["fault high"])


def dark_fault_limit(*, mean: ArrayLike, noise: ArrayLike, z: ArrayLike) -> Floats:
    """Highest lower limit that a healthy dark reading undercuts only beyond z standard deviations: mean - z noise.

    mean, noise  of the darkest healthy state at the end of life (liquid, fouling and temperature that return least)
    A dead lamp is told only if this limit lies above its own reading (dark current, leakage, ambient) by its noise:
    crosstalk or a wet return well above zero is what makes the band possible, so a very clean wet state has none.
    """
    return np.asarray(np.asarray(mean, dtype=float) - np.asarray(z) * np.asarray(noise))
