"""All materials under one light: what a list of materials shows."""

from __future__ import annotations

from dataclasses import dataclass

from outcouple.materials.catalogue import Catalogue, builtin_catalogue
from outcouple.notes import Note

__all__ = ["ListedMaterial", "search", "table"]


@dataclass(frozen=True)
class ListedMaterial:
    """One line of a list.

    index        real absolute index; ``extinction`` its imaginary part
    absorption   [1/m], None where it is not known
    uncertainty  half-width of the index
    verified     "published", "computed" or "unverified"
    notes        cautions at that wavelength and temperature
    """

    name: str
    aliases: tuple[str, ...]
    kind: str
    index: float
    extinction: float
    absorption: float | None
    uncertainty: float
    verified: str
    summary: str
    source: str
    notes: tuple[Note, ...]


def table(
    catalogue: Catalogue | None = None,
    *,
    wavelength: float = 850e-9,
    temperature: float = 293.15,
    kind: str | None = None,
) -> tuple[ListedMaterial, ...]:
    """Every material of a catalogue by name; of one kind where asked. Wavelength in vacuum [m], temperature [K]."""
    rows = []
    for material in catalogue or builtin_catalogue():
        if kind is not None and material.kind != kind:
            continue
        index = material.index(wavelength, temperature)
        rows.append(
            ListedMaterial(
                name=material.name,
                aliases=material.aliases,
                kind=material.kind,
                index=float(index.real),
                extinction=float(index.imag),
                absorption=None if material.absorbs is None else float(material.absorption(wavelength)),
                uncertainty=material.uncertainty,
                verified=material.verified,
                summary=material.summary,
                source=material.source,
                notes=material.notes(wavelength, temperature),
            )
        )
    return tuple(rows)


def search(
    *,
    like: float,
    wavelength: float = 850e-9,
    temperature: float = 293.15,
    kind: str | None = None,
    catalogue: Catalogue | None = None,
) -> tuple[ListedMaterial, ...]:
    """Materials by how near their index is to ``like``, nearest first.

    >>> search(like=1.003, kind="gas")[0].name
    'carbon dioxide'
    """
    rows = table(catalogue, wavelength=wavelength, temperature=temperature, kind=kind)
    return tuple(sorted(rows, key=lambda row: abs(row.index - like)))
