"""Published formulas that give an index by wavelength and temperature together, by name."""

from __future__ import annotations

from collections.abc import Callable, Mapping

import numpy as np
from numpy.typing import NDArray

from outcouple.materials.air import air_index
from outcouple.materials.water import sea_water_index, water_index

__all__ = ["LAWS"]

Floats = NDArray[np.float64]

LAWS: Mapping[str, Callable[[Floats, Floats], Floats]] = {
    "water": water_index,
    "sea water": sea_water_index,
    "air": lambda wavelength, temperature: air_index(wavelength, temperature=temperature),
}
