"""What a detector on the base of a tip sees of light that a turbid liquid, a deposit or a wall sends back."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from outcouple.light import Relight

__all__ = ["SPOTS", "returns_of"]

Floats = NDArray[np.float64]

SPOTS = 5
"""Places that stand for the spread of what comes back. Light entering a turbid liquid surfaces some millimetres away;
it is taken to leave evenly within a quarter of the base's width of where it entered, along the cross-section."""


def returns_of(
    column: int,
    *,
    centre: Floats,
    half_width: Floats,
    surface: Callable[[Floats], tuple[Floats, Floats]],
    detector: Floats,
    area: Floats,
    through: Callable[[Floats], Floats],
    rays: int,
) -> tuple[Relight, ...]:
    """Diffuse returns from places about ``centre``, straight to the detector through the base.

    centre, half_width  x of where light enters, and half the width of the base [m], (S,)
    surface             x (S,) -> height above the base [m] and slope of the face, positive where it rises with x [rad]
    detector, area      x of its centre [m] and its area [m2], (S,)
    through             cosine from the base's normal (S,) -> share that gets through the base and is taken
    The share of a Lambertian is cos cos A / (pi r^2) per place.
    """
    found = []
    for at in (np.arange(SPOTS) + 0.5) / SPOTS - 0.5:
        x = np.clip(centre + at * half_width, -0.98 * half_width, 0.98 * half_width)
        z, slope = surface(x)
        dx = detector - x
        distance = np.hypot(dx, z)
        inward = np.maximum((np.sin(slope) * dx + np.cos(slope) * z) / distance, 0.0)
        down = z / distance
        share = np.minimum(inward * down * area / (np.pi * distance**2), 1.0) * through(down) / SPOTS
        found.append(
            Relight(
                column=column,
                feed=np.ones((1, 1, rays)),
                share=share[:, None],
                sine=np.sqrt(np.clip(1 - inward**2, 0, 1))[:, None],
                length=distance[:, None, None],
            )
        )
    return tuple(found)
