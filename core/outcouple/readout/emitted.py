"""The emitter's light as the read-out knows it: power after drift, age and fouling, and the filter it passes."""

from __future__ import annotations

import math
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from outcouple.notes import Note
from outcouple.readout.drift import current_factor, fouling_factor, peak_wavelength, power_factor

__all__ = [
    "ELECTRONICS",
    "common_factor",
    "electronics_notes",
    "electronics_temperature",
    "emitted_power",
    "passed",
    "peak",
]

Floats = NDArray[np.float64]

ELECTRONICS: Final = (233.15, 398.15)
"""Range of temperature [K] in which emitters, detectors and amplifiers are described: -40 to 125 degC, common practice,
no source."""
WIDTH_TO_DEVIATION: Final = 1 / (2 * math.sqrt(2 * math.log(2)))
"""Standard deviation over full width at half maximum of a Gaussian line."""

_erf = np.frompyfunc(math.erf, 1, 1)


def _stated(p: Any) -> Floats:
    own = p.readout.electronics_temperature
    return np.asarray(p.environment.temperature if own is None else own, dtype=float)


def electronics_temperature(p: Any) -> Floats:
    """Temperature of emitter, detector and amplifier [K], (S,): stated, else the environment's; held at the ends of the
    range their descriptions cover (see `electronics_notes`)."""
    return np.asarray(np.clip(_stated(p), *ELECTRONICS))


def electronics_notes(p: Any) -> tuple[Note, ...]:
    """A caution where the electronics is taken at the nearest temperature it is described for."""
    stated = _stated(p)
    outside = (stated < ELECTRONICS[0]) | (stated > ELECTRONICS[1])
    note = Note(
        "electronics-temperature",
        "Emitter, detector and amplifier are described from -40 to 125 degC only and are taken at the nearer end. "
        "Where they stand elsewhere, say so: readout.electronics_temperature.",
        trigger=f"{float(stated.flat[0]):.4g} K",
        where=np.atleast_1d(outside),
    )
    return (note,) if note.holds() else ()


def peak(p: Any) -> Floats:
    """Peak wavelength of the emitter at its own temperature [m], (S,)."""
    return peak_wavelength(
        p.emitter.wavelength, temperature=electronics_temperature(p), coefficient=p.emitter.peak_drift
    )


def common_factor(p: Any) -> Floats:
    """What temperature, drive and age leave of the emitter's stated power, (S,): the part that a reference sees too."""
    emitter = p.emitter
    warm = power_factor(electronics_temperature(p), coefficient=emitter.power_drift)
    drive = current_factor(emitter.drive, reference=1.0, exponent=emitter.drive_exponent)
    return np.asarray(warm * drive * emitter.age_left)


def emitted_power(p: Any) -> Floats:
    """Optical power that counts [W], (S,): stated power after drift, drive, age and fouled windows."""
    return np.asarray(p.emitter.power * common_factor(p) * fouling_factor(p.environment.fouling))


def passed(p: Any) -> Floats:
    """Share of the emitter's Gaussian line that an optical filter before the detector passes, (S,); 1 without one."""
    readout, emitter = p.readout, p.emitter
    if readout.filter_centre is None:
        return np.ones(1)
    deviation = emitter.linewidth * WIDTH_TO_DEVIATION
    low, high = (
        (readout.filter_centre + side * readout.filter_width / 2 - peak(p)) / (deviation * math.sqrt(2))
        for side in (-1, 1)
    )
    inside = (np.asarray(_erf(high), dtype=float) - np.asarray(_erf(low), dtype=float)) / 2
    return np.asarray(readout.filter_transmission * inside + readout.filter_blocking * (1 - inside))
