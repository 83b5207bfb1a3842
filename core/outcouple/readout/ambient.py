"""Light from outside: lux of daylight, sun and lamps as irradiance in a band, and as photocurrent.

Spectra are held as means over bands of 5 nm from 300 to 1200 nm, per lux. Below and above, silicon sees
nothing.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from functools import cache
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.notes import Note
from outcouple.readout.constants import BOLTZMANN, LIGHT_SPEED, PLANCK
from outcouple.readout.photodiode import responsivity
from outcouple.readout.tables import columns

__all__ = [
    "KINDS",
    "ambient_notes",
    "band_centres",
    "band_irradiance",
    "blackbody_efficacy",
    "blackbody_exitance",
    "current_density",
    "etendue_current",
    "illuminance_of",
    "irradiance_per_lux",
    "mean_sensitivity",
    "sensed_density",
]

Floats = NDArray[np.float64]

STEP: Final = 5.0
"""Width of a band of the tables [nm]."""
STARTS: Final = np.arange(300.0, 1200.0, STEP)
"""First wavelength of each band [nm]."""
EFFICACY: Final = 683.0
"""Luminous efficacy at 555 nm [lm/W]: 683.002 in the SI since 2019, 683 in the older tables used here."""
INCANDESCENT: Final = 2856.0
"""Temperature [K] of CIE illuminant A; household lamps burn at 2700 K and give a third more infrared per
lux.
"""

KINDS: Mapping[str, str] = {
    "none": "no light from outside",
    "daylight": "open sky and sun together, air mass 1.5 (ASTM G173-03 global)",
    "sun": "direct sun, air mass 1.5 (ASTM G173-03 direct)",
    "incandescent": "filament lamp, black body of 2856 K",
    "led lamps": "white LED lamps (CIE LED-B3, tail beyond 780 nm extrapolated)",
    "fluorescent": "fluorescent lamps (CIE FL2, infrared lines from memory)",
}


def band_centres() -> Floats:
    """Middle of every band of the tables [m]."""
    return (STARTS + STEP / 2) * 1e-9


def illuminance_of(wavelengths_nm: Floats, density: Floats) -> float:
    """Illuminance [lx] of a spectral irradiance [W/(m2 nm)] at rising wavelengths [nm]: 683 times the
    integral of V E.

    V of the CIE 1924 observer, its logarithm straight between the rows 10 nm apart, on a 1 nm grid.
    """
    table = columns("luminous_efficiency.csv")
    grid = np.arange(380.0, 780.5, 1.0)
    weight = np.exp(np.interp(grid, table["wavelength_nm"], np.log(table["efficiency"])))
    return EFFICACY * float(np.trapezoid(weight * np.interp(grid, wavelengths_nm, density), grid))


def blackbody_exitance(wavelength: ArrayLike, *, temperature: ArrayLike) -> Floats:
    """Spectral exitance of a black body [W/m3], per metre of wavelength: 2 pi h c^2 / l^5 / (exp(h c / l k
    T) - 1).

    wavelength in vacuum [m], temperature [K], broadcast. Reference: M. Planck, Ann. Phys. 309, 553 (1901),
    doi 10.1002/andp.19013090310.
    """
    at = np.asarray(wavelength, dtype=float)
    x = PLANCK * LIGHT_SPEED / (at * BOLTZMANN * np.asarray(temperature, dtype=float))
    return np.asarray(2 * np.pi * PLANCK * LIGHT_SPEED**2 / at**5 / np.expm1(x))


def blackbody_efficacy(temperature: float) -> float:
    """Luminous efficacy [lm/W] of a black body's whole radiation.

    >>> round(blackbody_efficacy(2856.0), 1)
    16.4
    """
    grid = np.arange(380.0, 780.5, 1.0)
    density = blackbody_exitance(grid * 1e-9, temperature=temperature) * 1e-9
    stefan = 2 * math.pi**5 * BOLTZMANN**4 / (15 * PLANCK**3 * LIGHT_SPEED**2)
    return illuminance_of(grid, density) / (stefan * temperature**4)


@cache
def irradiance_per_lux(kind: str, temperature: float = INCANDESCENT) -> Floats:
    """Mean spectral irradiance per illuminance [W/(m2 nm lx)] of the bands that start at `STARTS`.

    kind         a key of `KINDS`
    temperature  of the filament [K], for "incandescent"
    """
    centre = STARTS + STEP / 2
    if kind not in KINDS:
        raise ValueError(f"kind must be one of {', '.join(KINDS)}; got {kind!r}")
    if kind == "none":
        return np.zeros_like(STARTS)
    if kind in ("led lamps", "fluorescent"):
        return np.asarray(columns("lamps.csv")[kind.replace(" ", "_")])
    if kind == "incandescent":
        density = blackbody_exitance(centre * 1e-9, temperature=temperature) * 1e-9
    else:
        density = columns("sun_am15.csv")["global" if kind == "daylight" else "direct"]
    return np.asarray(density / illuminance_of(centre, density))


def band_irradiance(
    kind: str,
    *,
    illuminance: ArrayLike,
    centre: ArrayLike,
    width: ArrayLike,
    temperature: float = INCANDESCENT,
) -> Floats:
    """Irradiance [W/m2] within a rectangular band: centre and full width [m], illuminance [lx]; all
    broadcast.

    >>> round(float(band_irradiance("incandescent", illuminance=1.0, centre=850e-9, width=20e-9)) * 1e6, -1)
    730.0
    """
    return np.asarray(
        np.asarray(illuminance, dtype=float) * _within(irradiance_per_lux(kind, temperature), centre, width)
    )


def current_density(
    kind: str,
    *,
    illuminance: ArrayLike,
    detector: str = "silicon infrared",
    centre: ArrayLike | None = None,
    width: ArrayLike | None = None,
    transmission: ArrayLike = 1.0,
    blocking: ArrayLike = 0.0,
) -> Floats:
    """Photocurrent per detector area [A/m2]: integral of E R over the pass band of the optical filter.

    detector       a key of `photodiode.DETECTORS`
    centre, width  of the filter [m], ``transmission`` inside, ``blocking`` outside; None: no filter, the
                   detector's own band
    """
    sensitivity = responsivity(band_centres(), detector)
    return sensed_density(
        kind,
        sensitivity,
        illuminance=illuminance,
        centre=centre,
        width=width,
        transmission=transmission,
        blocking=blocking,
    )


def sensed_density(
    kind: str,
    sensitivity: Floats,
    *,
    illuminance: ArrayLike,
    centre: ArrayLike | None = None,
    width: ArrayLike | None = None,
    transmission: ArrayLike = 1.0,
    blocking: ArrayLike = 0.0,
) -> Floats:
    """Reading per detector area of a kind of light: its spectrum times any ``sensitivity`` (per W) at the middle of
    every band, through the filter of `current_density`."""
    weighted = irradiance_per_lux(kind) * sensitivity
    everything = float(np.sum(weighted)) * STEP
    if centre is None or width is None:
        share = np.asarray(everything * np.asarray(transmission, dtype=float))
    else:
        inside = _within(weighted, centre, width)
        share = inside * np.asarray(transmission) + (everything - inside) * np.asarray(blocking)
    return np.asarray(np.asarray(illuminance, dtype=float) * share)


def mean_sensitivity(
    kind: str, sensitivity: Floats, *, centre: ArrayLike | None = None, width: ArrayLike | None = None
) -> Floats:
    """Mean of a sensitivity (per W) over the spectrum of a kind of light, where the sensitivity or the filter's band
    reaches."""
    lamp = irradiance_per_lux(kind)
    if centre is None or width is None:
        seen = lamp * (sensitivity > 0)
        return np.asarray(np.sum(seen * sensitivity) / np.sum(seen))
    return np.asarray(_within(lamp * sensitivity, centre, width) / _within(lamp, centre, width))


def etendue_current(current_per_area: ArrayLike, *, etendue: ArrayLike) -> Floats:
    """Photocurrent [A] where a read-out sees evenly lit surroundings within an etendue [m2 sr]: J G / pi.

    An irradiance E from a uniform half-space is a radiance E / pi. A lamp or the sun in the field of view
    is brighter than that mean by the ratio of pi to its solid angle: block it.
    """
    return np.asarray(np.asarray(current_per_area, dtype=float) * np.asarray(etendue) / np.pi)


def _within(density: Floats, centre: ArrayLike, width: ArrayLike) -> Floats:
    """Integral of a banded density over [centre - width/2, centre + width/2], both in metres."""
    edges = np.concatenate([STARTS, [STARTS[-1] + STEP]])
    running = np.concatenate([[0.0], np.cumsum(density) * STEP])
    middle, half = np.asarray(centre, dtype=float) * 1e9, np.asarray(width, dtype=float) * 0.5e9
    return np.asarray(np.interp(middle + half, edges, running) - np.interp(middle - half, edges, running))


def ambient_notes(kind: str) -> tuple[Note, ...]:
    """What to know about the infrared content of a kind of light."""
    texts = {
        "daylight": "Daylight is a clear sky at air mass 1.5; overcast sky holds less infrared per lux, low sun more.",
        "sun": "Direct sun is taken at air mass 1.5; a low sun holds more infrared per lux.",
        "incandescent": "Filament lamps are taken at 2856 K; dimmed or warmer lamps hold more infrared per lux.",
        "led lamps": "Infrared of LED lamps is extrapolated beyond 780 nm, nearly nil; camera lamps differ.",
        "fluorescent": "Infrared lines of fluorescent lamps are sizes from memory, a factor of three either way.",
    }
    if kind not in texts:
        return ()
    return (Note(f"ambient-{kind.replace(' ', '-')}", texts[kind], severity="info", decides="a measurement on site"),)
