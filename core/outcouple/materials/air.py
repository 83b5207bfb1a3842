"""Air by wavelength, temperature, pressure, humidity and carbon dioxide (Ciddor 1996)."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = ["air_index", "saturation_pressure"]

GAS_CONSTANT = 8.314472  # J/(mol K), as in the reference
WATER_MOLAR_MASS = 0.018015  # kg/mol


def saturation_pressure(temperature: ArrayLike) -> NDArray[np.float64]:
    """Pressure of saturated water vapour over a plane of water [Pa], -40 to 100 degC.

    Reference: R. S. Davis, Metrologia 29, 67 (1992), as used by P. E. Ciddor, Appl. Opt. 35, 1566 (1996), appendix.
    """
    kelvin = np.asarray(temperature, dtype=float)
    return np.asarray(np.exp(1.2378847e-5 * kelvin**2 - 1.9121316e-2 * kelvin + 33.93711047 - 6343.1645 / kelvin))


def air_index(
    wavelength: ArrayLike,
    *,
    temperature: ArrayLike = 293.15,
    pressure: ArrayLike = 101325.0,
    humidity: ArrayLike = 0.0,
    vapour_pressure: ArrayLike | None = None,
    carbon_dioxide: ArrayLike = 450e-6,
) -> NDArray[np.float64]:
    """Absolute index of air.

    wavelength      in vacuum [m], 230 nm to 1.69 um
    temperature     [K], 233 to 373
    pressure        total [Pa], 80 to 120 kPa
    humidity        relative, 0 to 1; ``vapour_pressure`` (partial) [Pa] instead where known
    carbon_dioxide  mole fraction

    All arguments broadcast. Stated uncertainty 2e-8 in dry air at moderate conditions.

    Reference: P. E. Ciddor, Appl. Opt. 35, 1566-1573 (1996), doi 10.1364/AO.35.001566, appendix B.

    >>> float(air_index(589.3e-9) - 1)
    0.000272406
    """
    micrometres = np.asarray(wavelength, dtype=float) * 1e6
    kelvin, total, parts = (np.asarray(value, dtype=float) for value in (temperature, pressure, carbon_dioxide))
    if vapour_pressure is None:
        enhancement = 1.00062 + 3.14e-8 * total + 5.6e-7 * (kelvin - 273.15) ** 2
        vapour = enhancement * np.asarray(humidity, dtype=float) * saturation_pressure(kelvin)
    else:
        vapour = np.asarray(vapour_pressure, dtype=float)
    moisture = vapour / total
    dry_mass = 1e-3 * (28.9635 + 12.011 * (parts - 400e-6))
    density = total / (_compressibility(total, kelvin, moisture) * GAS_CONSTANT * kelvin)
    dry_reference = 101325.0 * dry_mass / (0.9995922115 * GAS_CONSTANT * 288.15)
    dry = density * (1 - moisture) * dry_mass / dry_reference
    wet = density * moisture * WATER_MOLAR_MASS / 0.00985938
    dry_standard, wet_standard = _standard_refractivities(micrometres, parts)
    return np.asarray(1 + dry * dry_standard + wet * wet_standard)


def _standard_refractivities(micrometres: NDArray[Any], parts: NDArray[Any]) -> tuple[NDArray[Any], NDArray[Any]]:
    """n - 1 of dry air (15 degC, 101325 Pa) and of pure vapour (20 degC, 1333 Pa); eqs. 1 to 3."""
    wavenumber = micrometres**-2
    dry = 1e-8 * (5792105 / (238.0185 - wavenumber) + 167917 / (57.362 - wavenumber))
    dry = dry * (1 + 0.534 * (parts - 450e-6))
    wet = 1.022e-8 * (295.235 + wavenumber * (2.6422 + wavenumber * (-0.032380 + wavenumber * 0.004028)))
    return dry, wet


def _compressibility(total: NDArray[Any], kelvin: NDArray[Any], moisture: NDArray[Any]) -> NDArray[Any]:
    """Compressibility of moist air, eq. 12 (the BIPM density equation)."""
    celsius, ratio = kelvin - 273.15, total / kelvin
    first = 1.58123e-6 + celsius * (-2.9331e-8 + celsius * 1.1043e-10)
    first = first + (5.707e-6 - 2.051e-8 * celsius) * moisture + (1.9898e-4 - 2.376e-6 * celsius) * moisture**2
    return np.asarray(1 - ratio * first + ratio**2 * (1.83e-11 - 0.765e-8 * moisture**2))
