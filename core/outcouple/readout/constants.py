"""Exact constants of the SI (2019) that turn light into charge and heat into noise."""

from __future__ import annotations

from typing import Final

__all__ = ["BOLTZMANN", "CHARGE", "LIGHT_SPEED", "PLANCK"]

CHARGE: Final = 1.602176634e-19
"""Elementary charge [C]."""
BOLTZMANN: Final = 1.380649e-23
"""Boltzmann constant [J/K]."""
PLANCK: Final = 6.62607015e-34
"""Planck constant [J s]."""
LIGHT_SPEED: Final = 299792458.0
"""Speed of light in vacuum [m/s]."""
