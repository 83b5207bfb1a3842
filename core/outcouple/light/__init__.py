"""Where the light goes: a sensor's ways from emitter to read-out, laid out once.

The room promises arrays that know where things are and never what they are: no material, no contact, no electronics.
Whoever lays out light (a geometry) fills a :class:`Light`; whoever follows it (``outcouple.evaluation``) needs
nothing else.
"""

from __future__ import annotations

from outcouple.light.emission import cone_share, lobe_density
from outcouple.light.layout import Light, LightError, Relight, Spot, Strips
from outcouple.light.rays import Vector, turn_between

__all__ = [
    "Light",
    "LightError",
    "Relight",
    "Spot",
    "Strips",
    "Vector",
    "cone_share",
    "lobe_density",
    "turn_between",
]
