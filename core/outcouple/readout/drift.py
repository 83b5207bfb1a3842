"""Slow changes: the emitter's power and wavelength, ageing, fouling, and what ratio and baseline tracking
leave of them.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = [
    "POWER_PER_KELVIN",
    "WAVELENGTH_PER_KELVIN",
    "Usual",
    "age_factor",
    "current_factor",
    "fouling_factor",
    "held_time",
    "peak_wavelength",
    "power_factor",
    "ratio_change",
    "ratio_noise",
    "slowest_rise",
    "time_constant_limit",
    "tracked_peak",
    "tracked_ramp",
]

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Usual:
    """A default with the range it usually lies in."""

    value: float
    low: float
    high: float
    reference: str


POWER_PER_KELVIN: Final = Usual(-0.005, -0.009, -0.003, "from memory; an older handbook gives -0.009")
"""Relative change of an infrared LED's power per kelvin at constant current."""
WAVELENGTH_PER_KELVIN: Final = Usual(0.25e-9, 0.1e-9, 0.3e-9, "from memory")
"""Shift of its peak wavelength [m/K]."""


def power_factor(
    temperature: ArrayLike, *, coefficient: ArrayLike = POWER_PER_KELVIN.value, reference: float = 298.15
) -> Floats:
    """Emitter power at a temperature [K] over that at ``reference``, constant current: exp(c (T - T0)).

    Range: about 230 to 370 K; the junction's temperature counts, warmed by its own heat.

    >>> round(float(power_factor(338.15)), 3)
    0.819
    """
    return np.asarray(np.exp(np.asarray(coefficient) * (np.asarray(temperature, dtype=float) - reference)))


def peak_wavelength(
    at_reference: ArrayLike,
    *,
    temperature: ArrayLike,
    coefficient: ArrayLike = WAVELENGTH_PER_KELVIN.value,
    reference: float = 298.15,
) -> Floats:
    """Peak wavelength [m] at a junction temperature [K]: straight shift."""
    rise = np.asarray(temperature, dtype=float) - reference
    return np.asarray(np.asarray(at_reference, dtype=float) + np.asarray(coefficient) * rise)


def current_factor(current: ArrayLike, *, reference: ArrayLike, exponent: ArrayLike = 0.95) -> Floats:
    """Emitter power at a drive current over that at ``reference`` [A]: (I / I0)^exponent.

    The exponent lies a little below 1 where efficiency droops and above it at very small currents; from
    memory.
    """
    return np.asarray((np.asarray(current, dtype=float) / np.asarray(reference)) ** np.asarray(exponent))


def age_factor(hours: ArrayLike, *, life: ArrayLike, end: ArrayLike = 0.7) -> Floats:
    """Emitter power after so many hours of light over that when new: end^(hours / life).

    life  hours until it has fallen to ``end`` (70 % by custom); doubles or halves with every 10 K or so
    Range: exponential decline, the form used to project lamp life; early rises are left out.
    """
    return np.asarray(np.asarray(end, dtype=float) ** (np.asarray(hours, dtype=float) / np.asarray(life)))


def fouling_factor(loss: ArrayLike, *, passes: ArrayLike = 2) -> Floats:
    """Light left by a deposit that takes ``loss`` of it at each of ``passes``: (1 - loss)^passes.

    It dims only; what a deposit scatters back reads as light and is a state of the face, not a factor.
    """
    return np.asarray((1 - np.asarray(loss, dtype=float)) ** np.asarray(passes))


def ratio_change(*, source: ArrayLike, reference: ArrayLike) -> Floats:
    """Relative change of signal over reference when their own relative changes are ``source`` and
    ``reference``.

    (1 + s)/(1 + r) - 1. Cancels what both see alike: power over temperature, age and current. Keeps what
    one sees: fouling and scratches of the tip, misalignment, different responsivity at a shifted
    wavelength, leads.

    >>> float(ratio_change(source=-0.2, reference=-0.2))
    0.0
    """
    return np.asarray((1 + np.asarray(source, dtype=float)) / (1 + np.asarray(reference, dtype=float)) - 1)


def ratio_noise(signal: ArrayLike, *, reference: ArrayLike, common: ArrayLike = 0.0) -> Floats:
    """Relative standard deviation of a ratio from those of signal and reference and of what is common to
    both.

    sqrt(s^2 + r^2 - 2 c^2); ``common`` is the intensity noise of the emitter, contained in both and
    cancelled. First order: for relative deviations well below 1.
    """
    square = np.asarray(signal, dtype=float) ** 2 + np.asarray(reference, dtype=float) ** 2
    return np.asarray(np.sqrt(np.maximum(square - 2 * np.asarray(common, dtype=float) ** 2, 0.0)))


def tracked_ramp(slope: ArrayLike, *, time: ArrayLike, time_constant: ArrayLike) -> Floats:
    """What a first-order baseline tracker leaves of a ramp: slope tau (1 - exp(-t / tau)); slope tau in the
    end.
    """
    tau = np.asarray(time_constant, dtype=float)
    return np.asarray(-np.asarray(slope, dtype=float) * tau * np.expm1(-np.asarray(time, dtype=float) / tau))


def time_constant_limit(slope: ArrayLike, *, allowed: ArrayLike) -> Floats:
    """Longest time constant [s] that keeps the residual of a drift of ``slope`` below ``allowed`` (same
    unit).
    """
    return np.asarray(np.asarray(allowed, dtype=float) / np.asarray(slope, dtype=float))


def tracked_peak(amplitude: ArrayLike, *, rise: ArrayLike, time_constant: ArrayLike) -> Floats:
    """Largest tracked reading of a change that grows evenly to ``amplitude`` within ``rise`` [s] and stays."""
    duration = np.asarray(rise, dtype=float)
    safe = np.maximum(duration, 1e-300)
    return np.asarray(
        np.where(
            duration > 0,
            tracked_ramp(np.asarray(amplitude) / safe, time=duration, time_constant=time_constant),
            amplitude,
        )
    )


def held_time(amplitude: ArrayLike, *, level: ArrayLike, time_constant: ArrayLike) -> Floats:
    """Time [s] a resting object of sudden ``amplitude`` stays above ``level``: tau ln(amplitude / level),
    at least 0.
    """
    ratio = np.asarray(amplitude, dtype=float) / np.asarray(level, dtype=float)
    return np.asarray(np.asarray(time_constant, dtype=float) * np.log(np.maximum(ratio, 1.0)))


def slowest_rise(amplitude: ArrayLike, *, level: ArrayLike, time_constant: ArrayLike) -> Floats:
    """Longest rise [s] of a change to ``amplitude`` that still reaches ``level`` through the tracker.

    Root of (1 - exp(-x)) / x = level / amplitude with x = rise / tau; slower ones are swallowed. 0 where
    even a sudden change stays below. Newton's rule on x = (1 - exp(-x)) amplitude / level from the right.
    """
    share = np.asarray(level, dtype=float) / np.asarray(amplitude, dtype=float)
    x = np.where(share < 1, 1 / np.clip(share, 1e-300, 1.0), 1.0)
    for _ in range(60):
        x = x - (share * x + np.expm1(-x)) / np.maximum(share - np.exp(-x), 1e-300)
        x = np.maximum(x, 0.0)
    return np.asarray(np.where(share < 1, x, 0.0) * np.asarray(time_constant, dtype=float))
