"""Photodiode, stage, modulation and converter together: the noise budget of one reading of one channel."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.readout.constants import CHARGE
from outcouple.readout.converter import Converter
from outcouple.readout.modulation import Modulation
from outcouple.readout.noise import NoiseBudget, intensity_variance
from outcouple.readout.transimpedance import Transimpedance

__all__ = ["Moments", "receiver_budget", "signal_gain", "stage_moments"]

Floats = NDArray[np.float64]
Complexes = NDArray[np.complex128]


@dataclass(frozen=True)
class Moments:
    """Variance of a reading per coefficient of the input-referred one-sided noise density.

    white           for a density S [A^2/Hz], [Hz]
    rising          for S f^2, [Hz^3]
    flicker         for S / f, [1]
    rising_flicker  for S f, [Hz^2]
    gain            of the reading for the emitter's light: 1 where the stage settles at once
    """

    white: Floats
    rising: Floats
    flicker: Floats
    rising_flicker: Floats
    gain: Floats


def stage_moments(stage: Transimpedance, modulation: Modulation, *, memory: ArrayLike = 3600.0) -> Moments:
    """What a reading picks up of noise that passes the stage's second-order response.

    White input noise leaves the stage with the correlation sum c_i exp(-p_i |t|) of its two poles, f^2
    noise with c_i -> -c_i p_i^2 / (2 pi)^2; the reading's weights turn each exponential into a closed form
    (`_kernel`). Exact for white and rising noise. The 1/f part ignores the stage's roll-off; its rising
    part holds to a few percent for a stage much faster than the reading (a third for a single on-off pair).

    memory  time [s] a steady reading keeps its zero (`Modulation.flicker_number`)
    """
    p1, p2 = stage.poles()
    front = (p1 * p2) ** 2 / (p2**2 - p1**2)
    white, rising = np.zeros((), dtype=complex), np.zeros((), dtype=complex)
    for pole, sign in ((p1, 1.0), (p2, -1.0)):
        part = sign * front / (4 * pole) * _kernel(pole, modulation)
        white = white + part
        rising = rising - part * pole**2 / (4 * np.pi**2)
    return Moments(
        white=np.asarray(np.real(white)),
        rising=np.asarray(np.maximum(np.real(rising), 0.0)),
        flicker=modulation.flicker_number(memory),
        rising_flicker=_rising_flicker(stage, modulation),
        gain=signal_gain(stage, modulation),
    )


def _kernel(pole: Complexes, modulation: Modulation) -> Complexes:
    """Double integral of the reading's weights over exp(-p |t - t'|)."""
    total = modulation.time
    if modulation.kind == "steady":
        return np.asarray(2 / total**2 * (total / pole + np.expm1(-pole * total) / pole**2))
    if modulation.kind == "sine":
        omega = 2 * np.pi / modulation.period
        common = pole**2 + omega**2
        return np.asarray(32 / total**2 * (pole * total / 2 - omega**2 * np.expm1(-pole * total) / common) / common)
    half, count = modulation.period / 2, 2 * modulation.periods
    fall = -np.expm1(-pole * half)
    ratio = -np.exp(-pole * half)
    same = 2 * count * (half / pole - fall / pole**2)
    cross = -2 * (fall / pole) ** 2 * (count - 1 - count * ratio + ratio**count) / (1 - ratio) ** 2
    return np.asarray(4 / total**2 * (same + cross))


def signal_gain(stage: Transimpedance, modulation: Modulation) -> Floats:
    """Share of the emitter's photocurrent that a reading keeps behind the stage, in the periodic steady
    state.

    Square: each pole of the stage keeps 1 - (2 / p h) tanh(p h / 2) of a square wave of half-period h.
    Sine: |Z / R| at the modulation frequency, the reference aligned in phase.
    """
    if modulation.kind == "steady":
        return np.ones(())
    if modulation.kind == "sine":
        return np.asarray(np.abs(stage.response(1 / modulation.period)))
    p1, p2 = stage.poles()
    half = modulation.period / 2
    gain = np.zeros((), dtype=complex)
    for pole, other in ((p1, p2), (p2, p1)):
        x = pole * half
        gain = gain + other / (other - pole) * (1 - 2 / x * np.tanh(x / 2))
    return np.asarray(np.real(gain))


def _rising_flicker(stage: Transimpedance, modulation: Modulation) -> Floats:
    """Integral of f |Z/R|^2 over the reading's response: logarithms up to the stage's effective end."""
    end = _logarithmic_end(stage)
    if modulation.kind == "steady":
        turns = np.log(np.maximum(2 * np.pi * end * modulation.time, 1.0)) + np.euler_gamma
        return np.asarray(turns / (2 * np.pi**2 * modulation.time**2))
    if modulation.kind == "sine":
        fm = 1 / modulation.period
        return np.asarray(4 / modulation.time * fm * np.abs(stage.response(fm)) ** 2)
    turns = np.log(np.maximum(2 * end * modulation.period, 1.0)) + np.euler_gamma
    return np.asarray(8 / (np.pi**2 * modulation.time * modulation.period) * turns)


def _logarithmic_end(stage: Transimpedance) -> Floats:
    """Frequency X [Hz] for which a cut at X has the same integral of |Z/R|^2 / f as the stage.

    ln(X / f0) = -(b/2) times the integral of 1 / (u^2 + b u + 1) from 1 up, b = 1/Q^2 - 2.
    """
    b = (1 / stage.quality**2 - 2).astype(complex)
    root = np.sqrt(b**2 - 4)
    root = np.where(np.abs(root) < 1e-6, 1e-6, root)
    tail = np.log((2 + b + root) / (2 + b - root)) / root
    return np.asarray(stage.natural_frequency * np.exp(-np.real(b * tail) / 2))


def receiver_budget(
    stage: Transimpedance,
    modulation: Modulation,
    *,
    signal: ArrayLike,
    ambient: ArrayLike = 0.0,
    dark: ArrayLike = 0.0,
    converter: Converter | None = None,
    intensity_density: ArrayLike = 0.0,
    ripple_depth: ArrayLike = 0.0,
    mains: float = 50.0,
    memory: ArrayLike = 3600.0,
) -> NoiseBudget:
    """Noise of one reading by cause, referred to the emitter's full-on photocurrent [A^2].

    signal             photocurrent while the emitter is on [A]
    ambient, dark      photocurrent of outside light and dark current [A]
    intensity_density  relative intensity noise of the emitter [1/Hz]
    ripple_depth       first-harmonic amplitude of the lamps' ripple over ``ambient``

    Everything is divided by the square of the reading's gain, so a stage too slow for the modulation shows
    as noise.
    """
    moments = stage_moments(stage, modulation, memory=memory)
    on = np.asarray(signal, dtype=float)
    seen = on * modulation.signal_duty()
    white = stage.white_densities()
    corner = np.asarray(stage.voltage_corner, dtype=float)
    rising = stage.rising_density()
    parts = {
        "signal shot": 2 * CHARGE * np.abs(seen) * moments.white,
        "ambient shot": 2 * CHARGE * np.abs(np.asarray(ambient, dtype=float)) * moments.white,
        "dark shot": 2 * CHARGE * np.abs(np.asarray(dark, dtype=float)) * moments.white,
        "resistor thermal": white["resistor thermal"] * moments.white,
        "amplifier voltage": white["amplifier voltage"] * moments.white + rising * moments.rising,
        "amplifier current": white["amplifier current"] * moments.white,
        "flicker": (white["amplifier voltage"] * corner + white["amplifier current"] * np.asarray(stage.current_corner))
        * moments.flicker
        + rising * corner * moments.rising_flicker,
        "emitter intensity": intensity_variance(
            on, density=intensity_density, bandwidth=modulation.intensity_bandwidth()
        ),
        "ripple": modulation.ripple_variance(ambient, depth=ripple_depth, mains=mains),
    }
    if converter is not None:
        resistance = np.asarray(stage.resistance, dtype=float)
        steady = np.asarray(ambient, dtype=float) + np.asarray(dark, dtype=float)
        level = resistance * (on + steady * modulation.ambient_share())
        variance = modulation.sample_weight() * converter.sample_variance() + converter.reference_variance(level)
        parts["converter"] = variance / resistance**2
    return NoiseBudget({cause: np.asarray(part / moments.gain**2) for cause, part in parts.items()})
