"""What dissolves in water: measured tables of the index by mass share, and the solutes they belong to."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from outcouple.errors import UserMistake, nearest
from outcouple.materials.air import air_index
from outcouple.materials.material import Material
from outcouple.materials.mixing import index_from_refraction, refraction
from outcouple.materials.rows import SODIUM_D
from outcouple.materials.water import sea_water_index, water_index

__all__ = ["REFERENCE", "SOLUTES", "SeaWater", "Solute", "Tabled", "find_solute", "is_solute"]

Floats = NDArray[np.float64]
Span = tuple[float, float]
Lookup = Callable[[str], Material]
REFERENCE = 293.15
"""Temperature of the tables [K]."""


class Solute(Protocol):
    """Something that dissolves in water.

    name         as messages and materials show it; ``aliases`` are taken too
    liquid       name of the pure liquid among the materials, or empty
    uncertainty  of the solution's index within the ranges
    verified     as in Material
    source       reference
    """

    @property
    def name(self) -> str: ...
    @property
    def aliases(self) -> tuple[str, ...]: ...
    @property
    def liquid(self) -> str: ...
    @property
    def uncertainty(self) -> float: ...
    @property
    def verified(self) -> str: ...
    @property
    def source(self) -> str: ...
    @property
    def limits(self) -> Span:
        """Mass shares that are known."""
        ...

    @property
    def wavelength_range(self) -> Span: ...
    @property
    def temperature_range(self) -> Span: ...

    def index(self, share: Floats, wavelength: Floats, temperature: Floats, lookup: Lookup) -> Floats:
        """Real absolute index of the solution; ``lookup`` finds the pure liquid."""
        ...


@dataclass(frozen=True)
class Tabled:
    """A solute with a table in ``data/materials/aqueous.csv``; see ``aqueous`` for the method.

    warming  -d ln L / dT of a dissolved solid [1/K], at share 0 and its change over share 1
    """

    name: str
    aliases: tuple[str, ...]
    source: str
    liquid: str = ""
    warming: Span = (0.0, 0.0)
    uncertainty: float = 5e-4
    verified: str = "published"
    wavelength_range: Span = (400e-9, 1000e-9)
    temperature_range: Span = (278.15, 313.15)

    @property
    def limits(self) -> Span:
        across, _ = _table(self.name)
        return (float(across[0]), float(across[-1]))

    def index(self, share: Floats, wavelength: Floats, temperature: Floats, lookup: Lookup) -> Floats:
        """Real absolute index of the solution."""
        tabled = refraction(_smooth(share, *_table(self.name)) * float(air_index(SODIUM_D)))
        water = refraction(water_index(wavelength, temperature)) / _water_at_reference()
        solute = self._change(share, wavelength, temperature, lookup)
        return index_from_refraction(tabled * ((1 - share) * water + share * solute))

    def _change(self, share: Floats, wavelength: Floats, temperature: Floats, lookup: Lookup) -> Floats:
        """Ls / Ls0 of the pure solute."""
        if self.liquid:
            real = lookup(self.liquid).real
            at_reference = refraction(real(np.asarray(SODIUM_D), np.asarray(REFERENCE)))
            return np.asarray(refraction(real(wavelength, temperature)) / at_reference)
        dispersion = refraction(water_index(wavelength, REFERENCE)) / _water_at_reference()
        warming = self.warming[0] + self.warming[1] * share
        return np.asarray(dispersion * np.exp(-warming * (temperature - REFERENCE)))


@dataclass(frozen=True)
class SeaWater:
    """The salts of the sea."""

    name: str = "sea water"
    aliases: tuple[str, ...] = ("seawater", "sea salt")
    liquid: str = ""
    source: str = "IAPWS R9-97 and X. Quan and E. S. Fry, Appl. Opt. 34, 3477 (1995), doi 10.1364/AO.34.003477"
    uncertainty: float = 1e-4
    verified: str = "published"
    limits: Span = (0.0, 0.042)
    wavelength_range: Span = (400e-9, 1100e-9)
    temperature_range: Span = (273.15, 303.15)

    def index(self, share: Floats, wavelength: Floats, temperature: Floats, lookup: Lookup) -> Floats:
        """Real absolute index of the solution."""
        return sea_water_index(wavelength, temperature, salinity=share)


CRC = "CRC Handbook of Chemistry and Physics, concentrative properties of aqueous solutions (20 degC, sodium D)"
SOLUTES: tuple[Solute, ...] = (
    Tabled(
        "sugar",
        ("sucrose", "sugar solution", "sugar syrup", "syrup", "saccharose"),
        "ICUMSA 1974 scale for sucrose; warming fitted to OIV-MA-AS2-02, table I, 10 to 17 degC",
        warming=(6.05e-4, -2.9e-4),
        uncertainty=4e-4,
    ),
    Tabled(
        "salt",
        ("salt water", "sodium chloride", "brine", "table salt"),
        f"{CRC}; warming from X. Quan and E. S. Fry, Appl. Opt. 34, 3477 (1995)",
        warming=(7.9e-4, 0.0),
        uncertainty=4e-4,
    ),
    Tabled("ethanol", ("alcohol", "ethyl alcohol"), CRC, "ethanol"),
    Tabled("methanol", ("methyl alcohol",), CRC, "methanol"),
    Tabled("isopropanol", ("2-propanol", "isopropyl alcohol"), CRC, "isopropanol"),
    Tabled("glycerol", ("glycerin", "glycerine"), CRC, "glycerol", uncertainty=1e-3),
    Tabled(
        "ethylene glycol",
        ("glycol", "antifreeze", "coolant", "monoethylene glycol"),
        f"{CRC}, to 60 %; drawn on to the pure liquid",
        "ethylene glycol",
        uncertainty=1e-3,
    ),
    Tabled(
        "propylene glycol",
        (),
        "Lorentz-Lorenz from the pure liquids with densities of the mixture from memory",
        "propylene glycol",
        uncertainty=3e-3,
        verified="unverified",
    ),
    SeaWater(),
)


def is_solute(name: str) -> bool:
    """True where ``find_solute`` would answer."""
    return name.casefold() in _by_name()


def find_solute(name: str) -> Solute:
    """The solute of that name or alias; UserMistake with the nearest name where there is none."""
    if not is_solute(name):
        known = ", ".join(one.name for one in SOLUTES)
        raise UserMistake(f"no table of {name!r} in water{nearest(name, _by_name())}; known: {known}")
    return _by_name()[name.casefold()]


@cache
def _by_name() -> dict[str, Solute]:
    return {name: one for one in SOLUTES for name in (one.name, *one.aliases)}


@cache
def _water_at_reference() -> float:
    return float(refraction(water_index(SODIUM_D, REFERENCE)))


@cache
def _table(solute: str) -> tuple[Floats, Floats]:
    """Shares and indices (relative to air) of a solute, rising shares."""
    text = (files("outcouple") / "data" / "materials" / "aqueous.csv").read_text(encoding="utf-8")
    cells = [line.split(",") for line in text.splitlines() if line.startswith(f"{solute},")]
    values = np.array([[float(share), float(index)] for _, share, index, _ in cells])
    return values[:, 0], values[:, 1]


def _smooth(at: Floats, across: Floats, up: Floats) -> Floats:
    """Cubic through the rows of a table, slopes from three rows each."""
    slopes = np.gradient(up, across, edge_order=2)
    cell = np.clip(np.searchsorted(across, at, side="right") - 1, 0, across.size - 2)
    width = across[cell + 1] - across[cell]
    t = (at - across[cell]) / width
    low, high = slopes[cell] * width, slopes[cell + 1] * width
    rise = up[cell + 1] - up[cell]
    return np.asarray(up[cell] + t * (low + t * ((3 * rise - 2 * low - high) + t * (low + high - 2 * rise))))
