"""How an index changes with temperature, from its value at a reference temperature."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
from numpy.typing import NDArray

__all__ = ["Thermal", "gas_law", "glass", "linear"]

Floats = NDArray[np.float64]
Thermal = Callable[[Floats, Floats, Floats], Floats]
"""(index at the reference, wavelength [m], temperature [K]) -> index"""


def linear(slope: float, reference: float, held: tuple[float, float] | None = None) -> Thermal:
    """A constant dn/dT [1/K]; ``held``: temperatures [K] beyond which the index no longer changes."""

    def law(index: Floats, wavelength: Floats, temperature: Floats) -> Floats:
        inside = temperature if held is None else np.clip(temperature, *held)
        return np.asarray(index + slope * (inside - reference))

    return law


def glass(coefficients: Sequence[float], reference: float) -> Thermal:
    """Makers' formula for the absolute index of glass, coefficients D0, D1, D2, E0, E1 and resonance [um].

    dn = (n^2 - 1) / (2 n) [D0 t + D1 t^2 + D2 t^3 + (E0 t + E1 t^2) / (w^2 - r^2)], t from the reference.

    Reference: H. J. Hoffmann, W. W. Jochs, G. Westenberger, Proc. SPIE 1780 (1992), doi 10.1117/12.140967.
    """
    d0, d1, d2, e0, e1, resonance = coefficients

    def law(index: Floats, wavelength: Floats, temperature: Floats) -> Floats:
        t = temperature - reference
        dispersive = (e0 + e1 * t) * t / ((wavelength * 1e6) ** 2 - resonance**2)
        polynomial = t * (d0 + t * (d1 + t * d2))
        return np.asarray(index + (index**2 - 1) / (2 * index) * (polynomial + dispersive))

    return law


def gas_law(reference: float) -> Thermal:
    """Refractivity n - 1 inversely as temperature, at constant pressure."""
    return lambda index, wavelength, temperature: np.asarray(1 + (index - 1) * reference / temperature)
