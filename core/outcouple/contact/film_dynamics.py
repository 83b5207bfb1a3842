"""How thick a film stays on a face that was wet: drawn out, then drained.

A flat film does not switch a face that reflects totally towards air; its thickness matters where it absorbs,
where it breaks into drops and where it shifts a ray.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cautions import caution
from outcouple.contact.wetting import GRAVITY, capillary_length, capillary_number
from outcouple.notes import Note

__all__ = [
    "drained_thickness",
    "draining_notes",
    "draining_time",
    "drawing_speed",
    "drawn_notes",
    "drawn_thickness",
    "tube_film_thickness",
]

Floats = NDArray[np.float64]
Number = float | Floats

SLOW = 1e-2  # capillary number up to which the two-thirds law holds; usual statement of its validity
PLATE_CONSTANT = 0.944  # Landau and Levich; 0.9458 and 0.94 are met too, 0.6 % apart
TUBE_CONSTANT = 1.34  # Bretherton


def drained_thickness(*, viscosity: Number, density: Number, height: Number, time: Number) -> Floats:
    """Thickness [m] a film on an upright wall has drained to: sqrt(mu z / (rho g t)).

    viscosity  [Pa s]
    density    [kg/m3]
    height     z, distance below the film's top edge [m]
    time       since drainage began [s], above 0; earlier the film is as it was drawn (`drawn_thickness`)
    Range: thin viscous film, no surface tension, no evaporation, starting thick; it never starts from a film
    thinner than this (`draining_notes`). A face tilted by a from upright drains with g cos(a).
    Reference: H. Jeffreys, Proc. Camb. Phil. Soc. 26, 204 (1930) (formula from memory).

    >>> round(float(drained_thickness(viscosity=1.0016e-3, density=998.2, height=0.05, time=10)) * 1e6, 2)
    22.62
    """
    return np.asarray(np.sqrt(np.asarray(viscosity) * height / (np.asarray(density) * GRAVITY * np.asarray(time))))


def draining_time(*, viscosity: Number, density: Number, height: Number, thickness: Number) -> Floats:
    """Time [s] a film takes to drain to a thickness [m], mu z / (rho g h^2)."""
    return np.asarray(np.asarray(viscosity) * height / (np.asarray(density) * GRAVITY * np.asarray(thickness) ** 2))


def draining_notes(*, drawn: Number, drained: Number) -> tuple[Note, ...]:
    """A caution where a film was drawn thinner [m] than drainage would leave it."""
    thinner = np.asarray(drawn) < np.asarray(drained)
    text = "The film was drawn out thinner than drainage would have left it by now: its drawn thickness holds."
    return caution("film-drawn-thin", text, thinner)


def drawn_thickness(*, viscosity: Number, density: Number, surface_tension: Number, speed: Number) -> Floats:
    """Thickness [m] of the film a wall draws out of a wetting liquid, 0.944 l_c Ca^(2/3).

    speed  at which wall and level part [m/s]
    Range: capillary number below 0.01 (`drawn_notes`), perfect wetting, flat wall; a partly wetted wall draws
    no film below a threshold speed.
    Reference: L. Landau, B. Levich, Acta Physicochim. URSS 17, 42 (1942); B. Derjaguin (1943).
    """
    length = capillary_length(surface_tension=surface_tension, density=density)
    number = capillary_number(viscosity=viscosity, speed=speed, surface_tension=surface_tension)
    return np.asarray(PLATE_CONSTANT * length * np.cbrt(number) ** 2)


def drawing_speed(*, viscosity: Number, density: Number, surface_tension: Number, thickness: Number) -> Floats:
    """Speed [m/s] above which a film is drawn out thicker than given [m]: inverse of `drawn_thickness`.

    >>> water = dict(viscosity=1.0016e-3, density=998.2, surface_tension=0.07275)
    >>> round(float(drawing_speed(**water, thickness=30e-6)) * 1e3)
    91
    """
    length = capillary_length(surface_tension=surface_tension, density=density)
    number = (np.asarray(thickness) / (PLATE_CONSTANT * length)) ** 1.5
    return np.asarray(number * np.asarray(surface_tension) / np.asarray(viscosity))


def tube_film_thickness(*, viscosity: Number, surface_tension: Number, speed: Number, radius: Number) -> Floats:
    """Thickness [m] of the film left in a tube, or on a thin fibre, 1.34 r Ca^(2/3).

    radius  of the tube or fibre [m]
    Range: capillary number below 0.01 (`drawn_notes`), radius well below the capillary length, perfect
    wetting.
    Reference: F. P. Bretherton, J. Fluid Mech. 10, 166 (1961); D. Quere, Annu. Rev. Fluid Mech. 31, 347
    (1999).
    """
    number = capillary_number(viscosity=viscosity, speed=speed, surface_tension=surface_tension)
    return np.asarray(TUBE_CONSTANT * np.asarray(radius) * np.cbrt(number) ** 2)


def drawn_notes(*, viscosity: Number, surface_tension: Number, speed: Number) -> tuple[Note, ...]:
    """A caution where the capillary number leaves the range of the two-thirds law."""
    number = capillary_number(viscosity=viscosity, speed=speed, surface_tension=surface_tension)
    text = f"The capillary number exceeds {SLOW:g}: the two-thirds law overstates the drawn film."
    return caution("drawn-fast", text, number > SLOW)
