"""Noise by cause: densities, variances, and the budget that says what limits a reading."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.readout.constants import BOLTZMANN, CHARGE

__all__ = [
    "CAUSES",
    "NoiseBudget",
    "counting_variance",
    "intensity_variance",
    "ktc_charge",
    "ktc_voltage",
    "shot_density",
    "shot_equals_thermal_voltage",
    "shot_variance",
    "thermal_current_density",
    "thermal_variance",
    "thermal_voltage_density",
]

Floats = NDArray[np.float64]

CAUSES: Mapping[str, str] = {
    "signal shot": "shot noise of the signal",
    "ambient shot": "shot noise of ambient light",
    "dark shot": "shot noise of the dark current",
    "resistor thermal": "thermal noise of the feedback resistor",
    "amplifier voltage": "amplifier voltage noise through the input capacitance",
    "amplifier current": "amplifier current noise",
    "flicker": "1/f noise of the amplifier",
    "converter": "converter noise and quantisation",
    "emitter intensity": "intensity noise of the emitter",
    "ripple": "ripple of ambient light left by the demodulation",
    "reference channel": "noise of the reference photodiode",
    "ambient change": "change of ambient light within a reading",
    "drop statistics": "statistics of the drops",
    "dark": "dark noise of the camera",
    "nonuniformity": "fixed pattern left after correction",
}
"""Display text of the causes used in this project; a geometry may add its own names."""


@dataclass(frozen=True)
class NoiseBudget:
    """Variances of one reading by cause, all referred to the same quantity.

    variances   cause -> variance, shapes broadcast to (S, C)
    unit        of the reading: "A" (photocurrent; variances in A^2) or "e-" (electrons)

    Causes are taken as independent, so variances add. A variance may be zero, never negative.

    >>> budget = NoiseBudget({"ambient shot": np.array([[3.0]]), "converter": np.array([[1.0]])})
    >>> budget.limited_by()
    'limited by shot noise of ambient light, 75 %'
    """

    variances: Mapping[str, Floats]
    unit: str = "A"

    def __post_init__(self) -> None:
        for cause, variance in self.variances.items():
            if np.any(np.asarray(variance) < 0):
                raise ValueError(f"the variance of {cause!r} is negative")

    @property
    def shape(self) -> tuple[int, ...]:
        """Common shape of all variances."""
        return np.broadcast_shapes(*(np.shape(variance) for variance in self.variances.values()))

    @property
    def total(self) -> Floats:
        """Sum of the variances."""
        return np.asarray(sum(self.variances.values(), np.zeros(self.shape)))

    @property
    def rms(self) -> Floats:
        """Standard deviation of the reading."""
        return np.asarray(np.sqrt(self.total))

    def shares(self) -> dict[str, Floats]:
        """Share of each cause in the noise power; zeros where there is no noise at all."""
        total = self.total
        safe = np.where(total > 0, total, 1.0)
        return {cause: np.broadcast_to(part / safe, self.shape) for cause, part in self.variances.items()}

    def plus(self, cause: str, variance: ArrayLike) -> NoiseBudget:
        """The budget with a further cause; a cause already there grows."""
        more = np.asarray(variance, dtype=float)
        return NoiseBudget({**self.variances, cause: self.variances.get(cause, np.zeros(())) + more}, self.unit)

    def scaled(self, factor: ArrayLike, unit: str | None = None) -> NoiseBudget:
        """The budget of ``factor`` times the reading (variances times its square)."""
        square = np.asarray(factor, dtype=float) ** 2
        scaled = {cause: np.asarray(part * square) for cause, part in self.variances.items()}
        return NoiseBudget(scaled, self.unit if unit is None else unit)

    def limiting(self) -> tuple[NDArray[np.str_], Floats]:
        """The largest cause per sample and channel, and its share; both of `shape`."""
        names = np.array(list(self.variances))
        stack = np.stack(list(self.shares().values()))
        at = np.argmax(stack, axis=0)
        return np.asarray(names[at]), np.asarray(np.max(stack, axis=0))

    def limited_by(self, sample: int = 0, channel: int | None = None) -> str:
        """One line naming the largest cause of a sample; of its noisiest channel unless one is given."""
        total = np.atleast_2d(self.total)[sample]
        pick = int(np.argmax(total)) if channel is None else channel
        if total[pick] == 0:
            return "no noise"
        names, shares = self.limiting()
        cause = str(np.atleast_2d(names)[sample, pick])
        return f"limited by {CAUSES.get(cause, cause)}, {np.atleast_2d(shares)[sample, pick]:.0%}".replace("%", " %")

    def equivalent_power(self, responsivity: ArrayLike) -> Floats:
        """Noise-equivalent power [W]: optical power whose reading equals the standard deviation.

        responsivity  reading per optical power at the detector, [A/W] or [e-/W]
        """
        return np.asarray(self.rms / np.asarray(responsivity, dtype=float))


def shot_density(current: ArrayLike) -> Floats:
    """Shot noise density of a photocurrent [A/sqrt(Hz)], one-sided: sqrt(2 q I).

    current  [A], not negative. Range: independent carriers, far below the transit frequency.
    Reference: W. Schottky, Ann. Phys. 362, 541 (1918), doi 10.1002/andp.19183622304.

    >>> float(shot_density(1e-6))
    5.6607007e-13
    """
    return np.asarray(np.sqrt(2 * CHARGE * np.asarray(current, dtype=float)))


def shot_variance(current: ArrayLike, *, bandwidth: ArrayLike) -> Floats:
    """Shot noise variance [A^2] of a current [A] in a noise bandwidth [Hz]."""
    return np.asarray(shot_density(current) ** 2 * np.asarray(bandwidth, dtype=float))


def thermal_voltage_density(resistance: ArrayLike, *, temperature: ArrayLike) -> Floats:
    """Thermal noise density of a resistor [V/sqrt(Hz)], one-sided: sqrt(4 k T R).

    resistance   [ohm]
    temperature  [K]
    Range: frequencies far below k T / h (6 THz at room temperature).
    Reference: J. B. Johnson and H. Nyquist, Phys. Rev. 32, 97 and 110 (1928), doi 10.1103/PhysRev.32.110.
    """
    return np.asarray(np.sqrt(4 * BOLTZMANN * np.asarray(temperature) * np.asarray(resistance, dtype=float)))


def thermal_current_density(resistance: ArrayLike, *, temperature: ArrayLike) -> Floats:
    """The same noise as a current [A/sqrt(Hz)]: sqrt(4 k T / R)."""
    return np.asarray(thermal_voltage_density(resistance, temperature=temperature) / np.asarray(resistance))


def thermal_variance(resistance: ArrayLike, *, temperature: ArrayLike, bandwidth: ArrayLike) -> Floats:
    """Thermal current noise variance [A^2] of a resistor in a noise bandwidth [Hz]."""
    return np.asarray(thermal_current_density(resistance, temperature=temperature) ** 2 * np.asarray(bandwidth))


def shot_equals_thermal_voltage(temperature: ArrayLike) -> Floats:
    """Mean voltage [V] across a resistor above which shot noise exceeds its thermal noise: 2 k T / q.

    >>> float(shot_equals_thermal_voltage(300.0))
    0.0517040
    """
    return np.asarray(2 * BOLTZMANN * np.asarray(temperature, dtype=float) / CHARGE)


def ktc_voltage(capacitance: ArrayLike, *, temperature: ArrayLike) -> Floats:
    """Standard deviation [V] of the voltage a switch leaves on a capacitance [F]: sqrt(k T / C)."""
    return np.asarray(np.sqrt(BOLTZMANN * np.asarray(temperature) / np.asarray(capacitance, dtype=float)))


def ktc_charge(capacitance: ArrayLike, *, temperature: ArrayLike) -> Floats:
    """The same as a charge [electrons]: sqrt(k T C) / q."""
    return np.asarray(np.sqrt(BOLTZMANN * np.asarray(temperature) * np.asarray(capacitance, dtype=float)) / CHARGE)


def intensity_variance(signal: ArrayLike, *, density: ArrayLike, bandwidth: ArrayLike) -> Floats:
    """Variance [A^2] from intensity noise of the emitter and its driver: I^2 RIN B.

    signal     photocurrent of the emitter's light [A]
    density    relative intensity noise [1/Hz], one-sided
    bandwidth  noise bandwidth [Hz]
    It grows with the signal, so no amount of light averages it away; a ratio to a reference channel does.
    """
    return np.asarray(np.asarray(signal, dtype=float) ** 2 * np.asarray(density) * np.asarray(bandwidth))


def counting_variance(signal: ArrayLike, *, count: ArrayLike) -> Floats:
    """Variance of a reading made by ``count`` equal objects that come at random (Poisson): S^2 / count.

    For example drops in the patch a channel sees: 20 drops give a relative deviation of 22 %.

    >>> float(counting_variance(1.0, count=20) ** 0.5)
    0.2236
    """
    return np.asarray(np.asarray(signal, dtype=float) ** 2 / np.asarray(count, dtype=float))
