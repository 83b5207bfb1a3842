"""Silicon photodiodes: responsivity, dark current, capacitance; and the phototransistor, coarsely."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.notes import Note
from outcouple.readout.constants import CHARGE, LIGHT_SPEED, PLANCK
from outcouple.readout.tables import columns

__all__ = [
    "DETECTORS",
    "PHOTOTRANSISTOR",
    "PhototransistorGain",
    "dark_current",
    "junction_capacitance",
    "quantum_ceiling",
    "quantum_efficiency",
    "responsivity",
    "responsivity_notes",
]

Floats = NDArray[np.float64]

REFERENCE_TEMPERATURE: Final = 298.15
"""Temperature [K] at which responsivity and dark current are stated."""

DETECTORS: Mapping[str, str] = {
    "silicon visible": "visible",
    "silicon infrared": "infrared",
    "silicon daylight filter": "daylight_filter",
}
"""Columns of the responsivity table; the last is the infrared type in a package black to visible light."""

SPREAD: Final = 0.10
"""Relative half-range of responsivity between makes and lots; common practice, no source."""


def quantum_ceiling(wavelength: ArrayLike) -> Floats:
    """Responsivity [A/W] of one electron per photon: q lambda / (h c), lambda in vacuum [m].

    >>> round(float(quantum_ceiling(850e-9)), 6)
    0.685571
    """
    return np.asarray(CHARGE * np.asarray(wavelength, dtype=float) / (PLANCK * LIGHT_SPEED))


def quantum_efficiency(responsivity: ArrayLike, *, wavelength: ArrayLike) -> Floats:
    """Electrons per photon at a responsivity [A/W] and wavelength [m]."""
    return np.asarray(np.asarray(responsivity, dtype=float) / quantum_ceiling(wavelength))


def responsivity(
    wavelength: ArrayLike,
    detector: str = "silicon infrared",
    *,
    temperature: ArrayLike = REFERENCE_TEMPERATURE,
) -> Floats:
    """Responsivity [A/W] of a typical photodiode, straight between rows of the table.

    wavelength   in vacuum [m], any shape; zero outside the table (see `responsivity_notes`)
    detector     a key of `DETECTORS`
    temperature  of the junction [K], broadcasts with ``wavelength``

    The temperature coefficient [1/K] is near zero where silicon absorbs everything and grows towards the
    band edge, where warmth makes it absorb more. Curve and coefficient are typical values from memory, good
    to about 10 % (1000 nm and beyond: 30 %): a measured responsivity wins. Held between zero and one electron per
    photon where the straight coefficient leaves them, with a caution (`responsivity_notes`).
    """
    straight = _straight(wavelength, detector, temperature)
    return np.asarray(np.clip(straight, 0.0, quantum_ceiling(wavelength)))


def _straight(wavelength: ArrayLike, detector: str, temperature: ArrayLike) -> Floats:
    """Responsivity [A/W] with its temperature coefficient drawn straight, however far."""
    table = columns("silicon_responsivity.csv")
    nm = np.asarray(wavelength, dtype=float) * 1e9
    at = table["wavelength_nm"]
    base = np.interp(nm, at, table[DETECTORS[detector]], left=0.0, right=0.0)
    slope = np.interp(nm, at, table["per_kelvin"])
    return np.asarray(base * (1 + slope * (np.asarray(temperature) - REFERENCE_TEMPERATURE)))


def responsivity_notes(
    wavelength: ArrayLike,
    detector: str = "silicon infrared",
    *,
    temperature: ArrayLike = REFERENCE_TEMPERATURE,
) -> tuple[Note, ...]:
    """What to know about `responsivity` at these wavelengths (S,) and temperatures (S,)."""
    nm = np.asarray(wavelength, dtype=float) * 1e9
    at = columns("silicon_responsivity.csv")["wavelength_nm"]
    straight = _straight(wavelength, detector, temperature)
    typical = Note(
        "responsivity-typical",
        f"Responsivity of the {detector} photodiode is a typical curve from memory, {SPREAD:.0%} either way.",
        severity="info",
        decides="the maker's curve or a measurement",
    )
    ranges = Note(
        "responsivity-range",
        f"The wavelength leaves the responsivity table, {at[0]:.0f} to {at[-1]:.0f} nm; zero is used.",
        where=_mask((nm < at[0]) | (nm > at[-1])),
    )
    ceiling = Note(
        "responsivity-ceiling",
        "Too hot for the temperature coefficient: the responsivity is held at one electron per photon.",
        where=_mask(straight > quantum_ceiling(wavelength)),
    )
    floor = Note(
        "responsivity-cold",
        "Too cold for the temperature coefficient: the responsivity is held at zero. Measure it, or keep the detector "
        "warm.",
        where=_mask(straight < 0),
    )
    return (typical, *(note for note in (ranges, ceiling, floor) if note.holds()))


def _mask(condition: NDArray[np.bool_]) -> NDArray[np.bool_]:
    return np.atleast_1d(condition)


def dark_current(
    at_reference: ArrayLike,
    *,
    temperature: ArrayLike,
    doubling: ArrayLike = 10.0,
    reference: float = REFERENCE_TEMPERATURE,
) -> Floats:
    """Dark current [A] at a temperature [K]: doubles every ``doubling`` kelvin from its value at
    ``reference``.

    Range: about 250 to 370 K; 8 to 12 K per doubling is usual (common practice, no source).

    >>> float(dark_current(2e-9, temperature=318.15))
    8e-09
    """
    rise = (np.asarray(temperature, dtype=float) - reference) / np.asarray(doubling, dtype=float)
    return np.asarray(np.asarray(at_reference, dtype=float) * np.exp2(rise))


def junction_capacitance(
    at_zero: ArrayLike, *, reverse_bias: ArrayLike, built_in: ArrayLike = 0.6, grading: ArrayLike = 0.5
) -> Floats:
    """Junction capacitance [F] under reverse bias [V]: C0 / (1 + V / V_bi)^m.

    at_zero   capacitance without bias, C0 [F]
    built_in  V_bi [V]; grading  m: 1/2 for an abrupt junction, 1/3 for a graded one
    Range: until the intrinsic layer is depleted, then constant (the maker states that value).
    Reference: depletion approximation, any device textbook.

    >>> float(junction_capacitance(72e-12, reverse_bias=5.0) * 1e12)
    23.57
    """
    ratio = 1 + np.asarray(reverse_bias, dtype=float) / np.asarray(built_in, dtype=float)
    return np.asarray(np.asarray(at_zero, dtype=float) / ratio ** np.asarray(grading, dtype=float))


@dataclass(frozen=True)
class PhototransistorGain:
    """Current gain of a phototransistor over a photodiode of its base: range over one part number, not a
    tolerance.

    least, typical, most  gain [-]
    corner                bandwidth at a load of 1 kohm [Hz]
    """

    least: float
    typical: float
    most: float
    corner: float

    def spread(self) -> float:
        """Largest over smallest gain."""
        return self.most / self.least


PHOTOTRANSISTOR: Final = PhototransistorGain(least=150.0, typical=400.0, most=1000.0, corner=50e3)
"""From memory: unsorted parts of one type differ by a factor of six or so; sorted bins by about two."""
