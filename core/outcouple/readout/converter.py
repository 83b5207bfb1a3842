"""The analogue-to-digital converter: step, quantisation, reference noise, bits that are used."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = ["Converter", "ideal_snr_db", "quantisation_rms"]

Floats = NDArray[np.float64]


def quantisation_rms(step: ArrayLike) -> Floats:
    """Standard deviation of rounding to steps: step / sqrt 12.

    Range: at least half a step of noise or motion in front of it; a quiet input sticks to one code and its
    error is then a constant of up to half a step. Reference: W. R. Bennett, Bell Syst. Tech. J. 27, 446
    (1948), doi 10.1002/j.1538-7305.1948.tb01340.x.
    """
    return np.asarray(np.asarray(step, dtype=float) / math.sqrt(12.0))


def ideal_snr_db(bits: ArrayLike) -> Floats:
    """Signal-to-noise ratio [dB] of a full-scale sine on an ideal converter: 20 log10(2^N sqrt(3/2)).

    >>> round(float(ideal_snr_db(12)), 2)
    74.01
    """
    return np.asarray(20 * np.log10(2.0 ** np.asarray(bits, dtype=float) * math.sqrt(1.5)))


@dataclass(frozen=True)
class Converter:
    """A converter at the output of the stage; numbers may be arrays over samples and channels.

    bits             resolution
    full_scale       input range [V]
    noise            its own input noise per sample [V rms], without quantisation
    reference_noise  relative standard deviation of the reference voltage per reading
    samples          conversions averaged per reading
    """

    bits: ArrayLike
    full_scale: ArrayLike
    noise: ArrayLike = 0.0
    reference_noise: ArrayLike = 0.0
    samples: ArrayLike = 1

    @property
    def step(self) -> Floats:
        """One code [V]: range / 2^bits."""
        return np.asarray(np.asarray(self.full_scale, dtype=float) / 2.0 ** np.asarray(self.bits))

    def sample_variance(self) -> Floats:
        """Variance [V^2] of the plain mean of all samples of a reading: quantisation and own noise."""
        own = quantisation_rms(self.step) ** 2 + np.asarray(self.noise, dtype=float) ** 2
        return np.asarray(own / np.asarray(self.samples))

    def reference_variance(self, level: ArrayLike) -> Floats:
        """Variance [V^2] that reference noise gives a reading of a level [V]; the samples of a reading
        share it.
        """
        return np.asarray((np.asarray(level, dtype=float) * np.asarray(self.reference_noise)) ** 2)

    def codes(self, voltage: ArrayLike) -> Floats:
        """Codes a voltage span [V] covers."""
        return np.asarray(np.asarray(voltage, dtype=float) / self.step)

    def bits_used(self, voltage: ArrayLike) -> Floats:
        """Bits of the converter a voltage span [V] makes use of; 0 where it is less than one code."""
        return np.asarray(np.log2(np.maximum(self.codes(voltage), 1.0)))
