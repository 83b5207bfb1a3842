"""Water (IAPWS R9-97) with its density at one atmosphere, and sea water (Quan and Fry 1995)."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.materials.mixing import index_from_refraction

__all__ = ["quan_fry", "sea_water_index", "water_density", "water_index"]

Floats = NDArray[np.float64]

# IAPWS R9-97, table 2: a0 to a7 and the two resonances, in units of 0.589 um
RELEASE = (
    0.244257733,
    9.74634476e-3,
    -3.73234996e-3,
    2.68678472e-4,
    1.58920570e-3,
    2.45934259e-3,
    0.900704920,
    -1.66626219e-2,
)
ULTRAVIOLET, INFRARED = 0.2292020, 5.432937

KELL_TOP = (999.83952, 16.945176, -7.9870401e-3, -46.170461e-6, 105.56302e-9, -280.54253e-12)
KELL_BOTTOM = 16.879850e-3
# Kell's scale peaks at 999.972 kg/m3; the peak now agreed is 999.97495 kg/m3 (Tanaka et al., Metrologia 38, 301, 2001)
RESCALE = 999.97495 / 999.972


def water_density(temperature: ArrayLike) -> Floats:
    """Density of air-free water at 101325 Pa [kg/m3]; temperature [K], 273.15 to 423 K.

    Within 2e-3 kg/m3 of IAPWS-95 from 0 to 99 degC (6e-7 in index); colder, supercooled water is an extrapolation.

    Reference: G. S. Kell, J. Chem. Eng. Data 20, 97 (1975), doi 10.1021/je60064a005, eq. 16, temperatures taken to
    IPTS-68.

    >>> float(water_density(293.15))
    998.206
    """
    celsius = (np.asarray(temperature, dtype=float) - 273.15) * 1.00024
    top = np.zeros_like(celsius)
    for coefficient in reversed(KELL_TOP):
        top = top * celsius + coefficient
    return np.asarray(RESCALE * top / (1 + KELL_BOTTOM * celsius))


def water_index(wavelength: ArrayLike, temperature: ArrayLike = 293.15, *, density: ArrayLike | None = None) -> Floats:
    """Absolute index of water or steam.

    wavelength   in vacuum [m], 0.2 to 1.1 um (usable to 1.9 um)
    temperature  [K], 261 to 773
    density      [kg/m3], 0 to 1060; that at one atmosphere where not given

    Uncertainty 1.5e-5 in the visible at one atmosphere, 2e-4 towards 1.1 um.

    Reference: IAPWS R9-97, Release on the Refractive Index of Ordinary Water Substance (1997), eq. 1.

    >>> float(water_index(0.2265e-6, 298.15, density=997.047435))
    1.39277824
    """
    kelvin = np.asarray(temperature, dtype=float)
    rho = (water_density(kelvin) if density is None else np.asarray(density, dtype=float)) / 1000
    warmth = kelvin / 273.15
    square = (np.asarray(wavelength, dtype=float) / 0.589e-6) ** 2
    a = RELEASE
    refraction = a[0] + a[1] * rho + a[2] * warmth + a[3] * square * warmth + a[4] / square + a[7] * rho**2
    refraction = refraction + a[5] / (square - ULTRAVIOLET**2) + a[6] / (square - INFRARED**2)
    return index_from_refraction(rho * refraction)


def quan_fry(wavelength: ArrayLike, temperature: ArrayLike, *, salinity: ArrayLike) -> Floats:
    """Index of sea water relative to air.

    wavelength   in vacuum [m], 400 to 700 nm
    temperature  [K], 273.15 to 303.15
    salinity     mass fraction of salts, 0 to 0.035 (35 per mille)

    Reference: X. Quan and E. S. Fry, Appl. Opt. 34, 3477-3480 (1995), doi 10.1364/AO.34.003477, eq. 3.

    >>> float(quan_fry(589.3e-9, 293.15, salinity=0.035))
    1.3394059
    """
    nanometres = np.asarray(wavelength, dtype=float) * 1e9
    celsius = np.asarray(temperature, dtype=float) - 273.15
    mille = np.asarray(salinity, dtype=float) * 1e3
    base = 1.31405 - 2.02e-6 * celsius**2
    salt = (1.779e-4 - 1.05e-6 * celsius + 1.6e-8 * celsius**2) * mille
    first = (15.868 + 0.01155 * mille - 0.00423 * celsius) / nanometres
    return np.asarray(base + salt + first - 4382 / nanometres**2 + 1.1455e6 / nanometres**3)


def sea_water_index(wavelength: ArrayLike, temperature: ArrayLike = 293.15, *, salinity: ArrayLike = 0.035) -> Floats:
    """Absolute index of sea water: pure water (IAPWS) plus what salt adds by Quan and Fry.

    Within 4e-5 of Quan and Fry where they measured; in the near infrared it keeps the dispersion of pure water, which
    their formula misses by 2e-4 at 850 nm. Arguments as in ``quan_fry``.

    >>> float(sea_water_index(850e-9))
    1.33396
    """
    fresh = quan_fry(wavelength, temperature, salinity=0.0)
    salted = quan_fry(wavelength, temperature, salinity=salinity)
    return np.asarray(water_index(wavelength, temperature) + (salted - fresh) * 1.00027)
