"""Dispersion laws: real index by vacuum wavelength.

Coefficients are taken as the sources print them, in powers of the micrometre; wavelengths come in metres.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
from numpy.typing import NDArray

__all__ = ["Dispersion", "cauchy", "constant", "gas", "interpolated", "sellmeier", "series", "square_series"]

Floats = NDArray[np.float64]
Dispersion = Callable[[Floats], Floats]
Pairs = Sequence[Sequence[float]]


def constant(index: float) -> Dispersion:
    """The same index everywhere."""
    return lambda wavelength: np.full_like(wavelength, index)


def sellmeier(terms: Pairs, offset: float = 0.0) -> Dispersion:
    """n^2 = 1 + offset + sum B w^2 / (w^2 - C), terms (B, C [um^2])."""

    def law(wavelength: Floats) -> Floats:
        square = (wavelength * 1e6) ** 2
        return _root(np.asarray(1 + offset + sum(b * square / (square - c) for b, c in terms)))

    return law


def square_series(terms: Pairs) -> Dispersion:
    """n^2 = sum c w^p, terms (c, p), w in um."""

    def law(wavelength: Floats) -> Floats:
        micrometres = wavelength * 1e6
        return _root(sum((c * micrometres**p for c, p in terms), np.zeros_like(micrometres)))

    return law


def series(terms: Pairs) -> Dispersion:
    """n = sum c w^p, terms (c, p), w in um."""

    def law(wavelength: Floats) -> Floats:
        micrometres = wavelength * 1e6
        return np.asarray(sum((c * micrometres**p for c, p in terms), np.zeros_like(micrometres)))

    return law


def cauchy(coefficients: Sequence[float]) -> Dispersion:
    """n = A + B / w^2 + C / w^4 ..., w in um."""
    return series([(value, -2.0 * order) for order, value in enumerate(coefficients)])


def gas(terms: Pairs, offset: float = 0.0) -> Dispersion:
    """n - 1 = offset + sum B / (C - w^-2), terms (B, C [1/um^2])."""

    def law(wavelength: Floats) -> Floats:
        wavenumber = (wavelength * 1e6) ** -2
        return np.asarray(1 + offset + sum(b / (c - wavenumber) for b, c in terms))

    return law


def interpolated(wavelengths: Sequence[float], values: Sequence[float]) -> Dispersion:
    """Straight lines between the rows of a table; beyond its ends the value at the end."""
    across, up = np.asarray(wavelengths, dtype=float), np.asarray(values, dtype=float)
    return lambda wavelength: np.interp(wavelength, across, up)


def _root(square: Floats) -> Floats:
    """Index from its square; past a resonance, far outside any range, zero instead of no number."""
    return np.asarray(np.sqrt(np.maximum(square, 0.0)))
