"""What things are made of: index and absorption by name, wavelength and temperature.

The room promises absolute (vacuum) complex indices, n + i kappa with kappa > 0 absorbing, SI throughout, numpy alone.
A value outside the range of its source is still given; ``Material.notes`` carries the caution. Nothing here is global
but the shipped catalogue, which never changes: ``Catalogue.with_materials`` gives a larger one.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from outcouple.materials.air import air_index
from outcouple.materials.aqueous import Concentration, concentration, solution_index
from outcouple.materials.catalogue import Catalogue, builtin_catalogue
from outcouple.materials.listing import ListedMaterial, search, table
from outcouple.materials.material import KINDS, Absorption, Material
from outcouple.materials.mixing import lorentz_lorenz
from outcouple.materials.row_checks import KEYS
from outcouple.materials.rows import material_from_mapping
from outcouple.materials.water import sea_water_index, water_density, water_index

__all__ = [
    "KEYS",
    "KINDS",
    "Absorption",
    "Catalogue",
    "Concentration",
    "ListedMaterial",
    "Material",
    "air_index",
    "builtin_catalogue",
    "concentration",
    "index",
    "lookup",
    "lorentz_lorenz",
    "material_from_mapping",
    "names",
    "sea_water_index",
    "search",
    "solution_index",
    "table",
    "water_density",
    "water_index",
]


def lookup(name: str) -> Material:
    """The shipped material of that name; UserMistake with the nearest name where there is none."""
    return builtin_catalogue().lookup(name)


def index(name: str, wavelength: ArrayLike, temperature: ArrayLike = 293.15) -> NDArray[np.complex128]:
    """Absolute complex index of a shipped material; wavelength in vacuum [m] and temperature [K] broadcast.

    >>> complex(index("crown glass", 850e-9)).real
    1.51025
    """
    return lookup(name).index(wavelength, temperature)


def names() -> tuple[str, ...]:
    """Names of all shipped materials."""
    return builtin_catalogue().names()
