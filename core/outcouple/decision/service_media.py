"""What the media a sensor meets say about its service: fuels, solvents, oxygen, food, and limits of tip materials."""

from __future__ import annotations

from collections.abc import Collection
from typing import Final

from outcouple.notes import Note

__all__ = ["ENVELOPE", "cracking_notes", "envelope_notes", "service_of"]

SERVICE: Final[dict[str, tuple[str, ...]]] = {
    "oxygen": ("liquid oxygen", "oxygen"),
    "fuel": (
        "biodiesel",
        "diesel",
        "diesel high",
        "diesel low",
        "gasoline",
        "heating oil",
        "kerosene",
        "liquid hydrogen",
        "hydrogen",
    ),
    "solvent": (
        "1-propanol",
        "acetic acid",
        "acetone",
        "cyclohexane",
        "ethanol",
        "heptane",
        "hexane",
        "isooctane",
        "isopropanol",
        "methanol",
        "toluene",
    ),
    "food": ("milk serum", "olive oil", "vegetable oil"),
}
"""Service -> media of the catalogue that set its cautions off; solutions go by what is dissolved."""

ENVELOPE: Final[dict[str, float]] = {
    "PMMA": 80.0,
    "cyclo-olefin copolymer": 120.0,
    "cyclo-olefin polymer": 120.0,
    "polycarbonate": 115.0,
    "polystyrene": 70.0,
    "polysulfone": 150.0,
    "polyetherimide": 170.0,
    "fluoropolymer": 240.0,
    "silicone": 180.0,
    "borosilicate": 250.0,
    "thin borosilicate": 250.0,
    "crown glass": 250.0,
}
"""Continuous service [degC] that transparent materials of a tip usually stand; from memory, for screening only."""

CRACKING: Final = ("PMMA", "polycarbonate", "polystyrene", "polysulfone")
"""Glassy plastics that solvents, fuels and greases can craze; common practice, no source."""


def service_of(media: Collection[str]) -> tuple[str, ...]:
    """Services that the media on the faces point to, in the order of their danger.

    >>> service_of(["air", "heating oil"])
    ('fuel',)
    """
    return tuple(service for service, known in SERVICE.items() if any(name.startswith(known) for name in media))


def envelope_notes(material: str, *, hottest: float) -> tuple[Note, ...]:
    """A caution where a tip's material is used hotter than it usually stands.

    hottest  temperature of any state [K]
    """
    limit = ENVELOPE.get(material)
    if limit is None or hottest - 273.15 <= limit:
        return ()
    return (
        Note(
            "envelope-temperature",
            f"{material} usually serves continuously up to about {limit:.0f} degC (from memory, for screening): at "
            "higher temperatures it creeps, crazes or ages. Choose another tip material or lead the light out.",
            severity="danger",
            trigger=f"{hottest - 273.15:.0f} degC",
            decides="the maker's data for that grade and a test under load",
        ),
    )


def cracking_notes(material: str, services: Collection[str]) -> tuple[Note, ...]:
    """A caution where a glassy plastic meets what may craze it."""
    if material not in CRACKING or not {"fuel", "solvent"} & set(services):
        return ()
    return (
        Note(
            "stress-cracking",
            f"{material} can craze under stress in fuels, solvents and greases: its face then hazes and its bright "
            "reading falls.",
            trigger=f"{material} in {', '.join(sorted({'fuel', 'solvent'} & set(services)))}",
            decides="a soak test of moulded parts under load",
        ),
    )
