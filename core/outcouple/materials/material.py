"""A material: what it is, how well it is known, and its index wherever one asks."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.materials.dispersion import interpolated
from outcouple.notes import Note

__all__ = ["KINDS", "VERIFIED", "Absorption", "Material"]

Floats = NDArray[np.float64]
Span = tuple[float, float]

KINDS = ("solid", "elastomer", "liquid", "gas", "tissue", "metal")
ROUNDING = 1e-9
VERIFIED = ("published", "computed", "unverified")


@dataclass(frozen=True, eq=False)
class Absorption:
    """What a material absorbs.

    wavelengths  [m], rising; a single one where the value holds everywhere
    values       absorption coefficient [1/m] there; straight lines between, the value at the end beyond
    source       where the values come from
    """

    wavelengths: Floats
    values: Floats
    source: str

    @property
    def span(self) -> Span:
        """Wavelengths the values cover [m]."""
        if self.wavelengths.size == 1:
            return (0.0, np.inf)
        return (float(self.wavelengths[0]), float(self.wavelengths[-1]))

    def __call__(self, wavelength: ArrayLike) -> Floats:
        return interpolated(self.wavelengths, self.values)(np.asarray(wavelength, dtype=float))  # type: ignore[arg-type]


@dataclass(frozen=True, eq=False)
class Material:
    """One material.

    name               as design files write it
    kind               one of KINDS
    summary            what it is, in a line
    source             reference of the index
    verified           "published", "computed" (from published parts) or "unverified" (a default from memory)
    real               (wavelength [m], temperature [K]) -> real absolute index, arrays that broadcast
    wavelength_range   where the source holds [m]
    temperature_range  where the source holds [K]
    uncertainty        half-width of the index within the ranges, spread between sources included
    absorbs            absorption, or None where nobody knows
    aliases            other names
    remark             a standing caution, or empty
    """

    name: str
    kind: str
    summary: str
    source: str
    verified: str
    real: Callable[[Floats, Floats], Floats]
    wavelength_range: Span
    temperature_range: Span
    uncertainty: float
    absorbs: Absorption | None = None
    aliases: tuple[str, ...] = ()
    remark: str = ""

    def index(self, wavelength: ArrayLike, temperature: ArrayLike = 293.15) -> NDArray[np.complex128]:
        """Absolute complex index n + i kappa, kappa > 0 absorbing.

        wavelength   in vacuum [m]; temperature [K]; they broadcast. Outside its ranges a material still answers;
        ``notes`` says so.
        """
        across, warm = np.asarray(wavelength, dtype=float), np.asarray(temperature, dtype=float)
        real = self.real(across, warm)
        kappa = 0.0 if self.absorbs is None else self.absorbs(across) * across / (4 * np.pi)
        return np.asarray(real + 1j * kappa)[()]

    def absorption(self, wavelength: ArrayLike) -> Floats:
        """Absorption coefficient alpha [1/m] by wavelength in vacuum [m]; 0 where it is not known."""
        across = np.asarray(wavelength, dtype=float)
        return np.zeros_like(across) if self.absorbs is None else self.absorbs(across)

    def notes(self, wavelength: ArrayLike, temperature: ArrayLike = 293.15) -> tuple[Note, ...]:
        """Cautions that apply at these wavelengths [m] and temperatures [K]; their masks have the broadcast shape."""
        across, warm = np.broadcast_arrays(np.asarray(wavelength, dtype=float), np.asarray(temperature, dtype=float))
        found = [
            self._range_note(across, self.wavelength_range, "wavelength", _nanometres),
            self._range_note(warm, self.temperature_range, "temperature", _celsius),
            *self._standing_notes,
        ]
        if self.absorbs is not None and self.kind in ("solid", "elastomer"):
            found.append(self._absorption_note(across, self.absorbs))
        return tuple(note for note in found if note.holds())

    @cached_property
    def _standing_notes(self) -> tuple[Note, ...]:
        notes: list[Note] = []
        if self.verified == "unverified":
            text = f"The index of {self.name} is an unverified default (±{self.uncertainty:.2g})."
            notes.append(Note("material-unverified", text, decides="a data sheet or a measurement"))
        if self.absorbs is None and self.kind in ("solid", "elastomer"):
            text = f"The absorption of {self.name} is not known and taken as zero."
            notes.append(Note("material-absorption", text, severity="info", decides="a data sheet or a measurement"))
        if self.remark:
            notes.append(Note("material-remark", f"{self.name}: {self.remark}", severity="info"))
        return tuple(notes)

    def _range_note(self, values: Floats, span: Span, what: str, show: Callable[[float], str]) -> Note:
        outside = _outside(values, span)
        known = f"{what}s from {show(span[0])} to {show(span[1])}"
        text = f"The index of {self.name} is known for {known}; outside, it is estimated."
        return Note("material-range", text, trigger=_extremes(values, outside, show), where=outside)

    def _absorption_note(self, values: Floats, absorbs: Absorption) -> Note:
        low, high = absorbs.span
        outside = _outside(values, (low, high))
        text = (
            f"The absorption of {self.name} is known from {_nanometres(low)} to {_nanometres(high)}; "
            "beyond, the value at the end is taken."
        )
        return Note("material-absorption", text, trigger=_extremes(values, outside, _nanometres), where=outside)


def _outside(values: Floats, span: Span) -> NDArray[np.bool_]:
    """Where values leave a range by more than rounding: -20 degC in kelvin is 253.15 but for its last digit."""
    return np.asarray((values < span[0] * (1 - ROUNDING)) | (values > span[1] * (1 + ROUNDING)))


def _extremes(values: Floats, where: NDArray[np.bool_], show: Callable[[float], str]) -> str:
    if not np.any(where):
        return ""
    low, high = show(float(values[where].min())), show(float(values[where].max()))
    return low if low == high else f"{low} to {high}"


def _nanometres(metres: float) -> str:
    return f"{metres * 1e9:.4g} nm"


def _celsius(kelvin: float) -> str:
    return f"{kelvin - 273.15:.4g} degC"
