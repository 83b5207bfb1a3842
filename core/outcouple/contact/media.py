"""Indices of materials at the wavelengths and temperature of a batch, each looked up once."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import NDArray

from outcouple.materials import Catalogue
from outcouple.notes import Note

__all__ = ["Media"]

Floats = NDArray[np.float64]
Complexes = NDArray[np.complex128]


class Media:
    """Materials under the conditions of one state.

    catalogue    where names are looked up
    wavelengths  vacuum wavelengths of the emitter's line [m], shape (S, L)
    temperature  of everything [K], shape (S,)
    linewidth    full width at half maximum of the emitter's line [m], shape (S,)
    extra        trial media: real index (S,) by a name of their own
    """

    def __init__(
        self,
        catalogue: Catalogue,
        *,
        wavelengths: Floats,
        temperature: Floats,
        linewidth: Floats,
        extra: Mapping[str, Floats] | None = None,
    ) -> None:
        self.catalogue = catalogue
        self.wavelengths = wavelengths
        self.temperature = temperature
        self.linewidth = linewidth
        self._indices: dict[str, Complexes] = {
            name: np.broadcast_to(np.asarray(index, dtype=complex)[:, None], wavelengths.shape)
            for name, index in (extra or {}).items()
        }
        self._notes: list[Note] = []

    def index(self, name: str) -> Complexes:
        """Absolute complex index of a material, shape (S, L)."""
        if name not in self._indices:
            material = self.catalogue.lookup(name)
            temperature = self.temperature[:, None]
            self._indices[name] = np.asarray(material.index(self.wavelengths, temperature), dtype=complex)
            centre = self.wavelengths[:, self.wavelengths.shape[1] // 2]
            self._notes.extend(material.notes(centre, self.temperature))
        return self._indices[name]

    def centre(self, name: str) -> Floats:
        """Real part of the index at the centre of the line, shape (S,)."""
        index = self.index(name)
        return np.asarray(index[:, index.shape[1] // 2].real)

    def absorption(self, name: str) -> Floats:
        """Absorption coefficient at the centre of the line [1/m], shape (S,)."""
        middle = self.wavelengths.shape[1] // 2
        return np.asarray(4 * np.pi * self.index(name)[:, middle].imag / self.wavelengths[:, middle])

    @property
    def notes(self) -> tuple[Note, ...]:
        """Cautions of every material looked up so far."""
        return tuple(self._notes)
