"""A camera pixel by the linear model of EMVA Standard 1288, and the fit of its photon-transfer curve."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.readout.constants import LIGHT_SPEED, PLANCK
from outcouple.readout.noise import NoiseBudget

__all__ = ["Camera", "PhotonTransfer", "photon_transfer_fit", "photons_per_pixel"]

Floats = NDArray[np.float64]

QUANTISATION = 1.0 / 12.0
"""Variance of rounding to whole digital numbers [DN^2]."""


def photons_per_pixel(irradiance: ArrayLike, *, exposure: ArrayLike, area: ArrayLike, wavelength: ArrayLike) -> Floats:
    """Mean photons on a pixel: A E t lambda / (h c).

    irradiance on the sensor [W/m2], exposure [s], area of the whole pixel [m2], wavelength in vacuum [m].
    Reference: EMVA Standard 1288, Release 4.0 Linear (2021), equation for mu_p (50.34 with its mixed units).
    """
    energy = np.asarray(irradiance, dtype=float) * np.asarray(exposure) * np.asarray(area)
    return np.asarray(energy * np.asarray(wavelength, dtype=float) / (PLANCK * LIGHT_SPEED))


@dataclass(frozen=True)
class Camera:
    """Parameters of a camera in the words of EMVA 1288; numbers may be arrays over samples and channels.

    quantum_efficiency     eta, of the whole pixel [e-/photon]
    gain                   overall system gain K [DN/e-]
    dark_noise             temporal, sigma_d [e-]
    full_well              saturation capacity [e-]
    dark_current           [e-/s] at ``reference``
    dark_nonuniformity     DSNU [e-]
    nonuniformity          PRNU, relative
    doubling               temperature rise that doubles the dark current [K]
    reference              temperature of ``dark_current`` [K]
    bits                   of the digital number; None where the full well ends the range

    Linear: every quantity holds below saturation only. Reference: EMVA Standard 1288, Release 4.0 Linear
    (2021).
    """

    quantum_efficiency: ArrayLike
    gain: ArrayLike
    dark_noise: ArrayLike
    full_well: ArrayLike
    dark_current: ArrayLike = 0.0
    dark_nonuniformity: ArrayLike = 0.0
    nonuniformity: ArrayLike = 0.0
    doubling: ArrayLike = 8.0
    reference: float = 298.15
    bits: int | None = None

    def electrons(self, photons: ArrayLike) -> Floats:
        """Mean photoelectrons: eta mu_p."""
        return np.asarray(np.asarray(self.quantum_efficiency, dtype=float) * np.asarray(photons))

    def dark_electrons(self, *, exposure: ArrayLike, temperature: ArrayLike = 298.15) -> Floats:
        """Mean dark electrons of an exposure [s] at a temperature [K]; their number is their variance."""
        rise = (np.asarray(temperature, dtype=float) - self.reference) / np.asarray(self.doubling)
        return np.asarray(np.asarray(self.dark_current, dtype=float) * np.exp2(rise) * np.asarray(exposure))

    def mean(self, photons: ArrayLike, *, dark_electrons: ArrayLike = 0.0) -> Floats:
        """Mean grey value above the black level [DN]: K (eta mu_p + mu_d)."""
        return np.asarray(np.asarray(self.gain, dtype=float) * (self.electrons(photons) + np.asarray(dark_electrons)))

    def variance(self, photons: ArrayLike, *, dark_electrons: ArrayLike = 0.0) -> Floats:
        """Temporal variance of the grey value [DN^2]: K^2 (sigma_d^2 + mu_d + eta mu_p) + 1/12."""
        charge = np.asarray(self.dark_noise, dtype=float) ** 2 + np.asarray(dark_electrons) + self.electrons(photons)
        return np.asarray(np.asarray(self.gain, dtype=float) ** 2 * charge + QUANTISATION)

    def snr(self, photons: ArrayLike, *, dark_electrons: ArrayLike = 0.0) -> Floats:
        """Temporal signal-to-noise ratio of one pixel: K eta mu_p over the square root of `variance`."""
        noise = np.sqrt(self.variance(photons, dark_electrons=dark_electrons))
        return np.asarray(np.asarray(self.gain) * self.electrons(photons) / noise)

    def total_snr(self, photons: ArrayLike, *, dark_electrons: ArrayLike = 0.0) -> Floats:
        """The same with dark-signal and photo-response nonuniformity counted as noise over the pixels."""
        budget = self.budget(signal=photons, dark_electrons=dark_electrons)
        return np.asarray(self.electrons(photons) / budget.rms)

    def threshold(self, *, dark_electrons: ArrayLike = 0.0) -> Floats:
        """Absolute sensitivity threshold [photons], SNR = 1: (sqrt(sigma^2 + 1/4) + 1/2) / eta.

        sigma^2 is the dark noise with quantisation, sigma_d^2 + mu_d + 1 / (12 K^2).
        """
        floor = np.asarray(self.dark_noise, dtype=float) ** 2 + np.asarray(dark_electrons)
        floor = floor + QUANTISATION / np.asarray(self.gain) ** 2
        return np.asarray((np.sqrt(floor + 0.25) + 0.5) / np.asarray(self.quantum_efficiency))

    def capacity(self) -> Floats:
        """Electrons at which the grey value saturates: the full well, or the end of the digital range
        before it.
        """
        well = np.asarray(self.full_well, dtype=float)
        if self.bits is None:
            return well
        return np.asarray(np.minimum(well, (2.0**self.bits - 1) / np.asarray(self.gain)))

    def dynamic_range(self) -> Floats:
        """Saturation over threshold, both in photons."""
        return np.asarray(self.capacity() / np.asarray(self.quantum_efficiency) / self.threshold())

    def saturation_margin(self, photons: ArrayLike, *, dark_electrons: ArrayLike = 0.0) -> Floats:
        """Capacity over mean charge of all light (signal and ambient) and dark current; below 1 the pixel
        is full.
        """
        charge = self.electrons(photons) + np.asarray(dark_electrons)
        with np.errstate(divide="ignore"):
            return np.asarray(self.capacity() / charge)

    def exposure_for(self, *, photon_rate: ArrayLike, fill: ArrayLike = 0.7) -> Floats:
        """Exposure [s] that fills a share of the capacity with light of a rate [photons/s]; no dark
        current.
        """
        with np.errstate(divide="ignore"):
            return np.asarray(np.asarray(fill, dtype=float) * self.capacity() / self.electrons(photon_rate))

    def budget(
        self,
        *,
        signal: ArrayLike,
        ambient: ArrayLike = 0.0,
        dark_electrons: ArrayLike = 0.0,
        difference: bool = False,
        pixels: ArrayLike = 1.0,
    ) -> NoiseBudget:
        """Noise of one reading by cause [e-^2].

        signal, ambient  photons of the emitter and of outside light in the exposure
        difference       the reading is a frame with the emitter on minus one with it off: temporal noise of
                         ambient, dark and read-out counts twice, the fixed pattern is left of the signal
                         only
        pixels           alike pixels averaged
        """
        twice = 2.0 if difference else 1.0
        on, out = self.electrons(signal), self.electrons(ambient)
        dark = np.asarray(dark_electrons, dtype=float)
        pattern = (np.asarray(self.nonuniformity, dtype=float) * (on if difference else on + out)) ** 2
        if not difference:
            pattern = pattern + np.asarray(self.dark_nonuniformity, dtype=float) ** 2
        parts = {
            "signal shot": on,
            "ambient shot": twice * out,
            "dark shot": twice * dark,
            "dark": twice * np.asarray(self.dark_noise, dtype=float) ** 2,
            "converter": twice * QUANTISATION / np.asarray(self.gain, dtype=float) ** 2,
            "nonuniformity": pattern,
        }
        return NoiseBudget({cause: np.asarray(part / np.asarray(pixels)) for cause, part in parts.items()}, "e-")


@dataclass(frozen=True)
class PhotonTransfer:
    """What a photon-transfer series says of a camera; meanings as in `Camera`.

    responsivity  K eta [DN/photon]
    saturation    photons at which the temporal variance is largest
    used          points of the series the fit used
    """

    gain: float
    responsivity: float
    quantum_efficiency: float
    dark_noise: float
    saturation: float
    used: int


def photon_transfer_fit(
    photons: ArrayLike,
    *,
    mean: ArrayLike,
    dark_mean: ArrayLike,
    variance: ArrayLike,
    dark_variance: ArrayLike,
    upto: float = 0.7,
) -> PhotonTransfer:
    """Gain, responsivity and quantum efficiency from a series of rising exposures.

    photons                  per pixel
    mean, dark_mean          grey values [DN], lit and dark
    variance, dark_variance  temporal [DN^2]
    upto                     share of the saturation up to which points count, 0.7 in the standard

    K is the slope of the dark-corrected variance over the dark-corrected mean, the responsivity the slope
    of that mean over photons, both through the origin (least squares); eta is their quotient. Saturation is
    where the variance peaks. The dark noise is that of the first exposure. Reference: EMVA Standard 1288,
    Release 4.0 Linear (2021).
    """
    light = np.asarray(photons, dtype=float)
    signal = np.asarray(mean, dtype=float) - np.asarray(dark_mean, dtype=float)
    noise = np.asarray(variance, dtype=float) - np.asarray(dark_variance, dtype=float)
    full = int(np.argmax(np.asarray(variance)))
    used = light <= upto * light[full]
    if np.sum(used) < 2:
        raise ValueError("fewer than two points lie below the saturation share")
    gain = _slope(signal[used], noise[used])
    response = _slope(light[used], signal[used])
    dark = max(float(np.asarray(dark_variance)[0]) - QUANTISATION, 0.0)
    return PhotonTransfer(
        gain, response, response / gain, math.sqrt(dark) / gain, float(light[full]), int(np.sum(used))
    )


def _slope(x: Floats, y: Floats) -> float:
    return float(np.sum(x * y) / np.sum(x * x))
