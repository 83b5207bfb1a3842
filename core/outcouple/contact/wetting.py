"""Where liquids stand and how much of them stays: rise, puddles, caps, hanging drops, filling of gaps."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cautions import caution
from outcouple.notes import Note

__all__ = [
    "GRAVITY",
    "cap_height",
    "cap_notes",
    "cap_radius",
    "cap_volume",
    "capillary_length",
    "capillary_number",
    "gap_fill_time",
    "gap_rise",
    "hanging_drop_volume",
    "hanging_spacing",
    "held_drop_volume",
    "held_plug_length",
    "leaked_volume",
    "pool_depth_on_slope",
    "puddle_depth",
    "tube_fill_time",
    "tube_rise",
    "wall_rise",
]

Floats = NDArray[np.float64]
Number = float | Floats

GRAVITY = 9.80665  # [m/s2], standard acceleration of gravity (ISO 80000-3)


def capillary_length(*, surface_tension: Number, density: Number) -> Floats:
    """Length [m] below which surface tension beats weight: sqrt(gamma / (rho g)).

    surface_tension  [N/m]
    density          of the liquid, less that of what surrounds it [kg/m3]
    Reference: P.-G. de Gennes, F. Brochard-Wyart, D. Quere, Capillarity and Wetting Phenomena (2004), ch. 2.

    >>> round(float(capillary_length(surface_tension=0.07275, density=998.2)) * 1e3, 3)
    2.726
    """
    return np.asarray(np.sqrt(np.asarray(surface_tension) / (np.asarray(density) * GRAVITY)))


def tube_rise(*, surface_tension: Number, density: Number, radius: Number, contact_angle: Number = 0.0) -> Floats:
    """Height [m] a liquid rises in an upright tube, 2 gamma cos(phi) / (rho g r) (Jurin); negative: pushed
    down.

    Range: radius well below the capillary length.
    """
    length = capillary_length(surface_tension=surface_tension, density=density)
    return np.asarray(2 * length**2 * np.cos(contact_angle) / np.asarray(radius))


def gap_rise(*, surface_tension: Number, density: Number, gap: Number, contact_angle: Number = 0.0) -> Floats:
    """Height [m] a liquid rises between upright plates, 2 gamma cos(phi) / (rho g d); the same wall on both
    sides.

    A gap whose walls differ takes the mean of the two cosines. Range: gap below about the capillary length.
    """
    length = capillary_length(surface_tension=surface_tension, density=density)
    return np.asarray(2 * length**2 * np.cos(contact_angle) / np.asarray(gap))


def wall_rise(*, surface_tension: Number, density: Number, contact_angle: Number = 0.0) -> Floats:
    """Height [m] of the meniscus on an upright flat wall, l_c sqrt(2 (1 - sin(phi))); negative beyond 90
    degrees.

    Range: walls wide against the capillary length.
    """
    length = capillary_length(surface_tension=surface_tension, density=density)
    angle = np.asarray(contact_angle, dtype=float)
    return np.asarray(np.sign(math.pi / 2 - angle) * length * np.sqrt(2 * (1 - np.sin(angle))))


def puddle_depth(*, surface_tension: Number, density: Number, contact_angle: Number) -> Floats:
    """Depth [m] at which a wide puddle stands on a level floor, 2 l_c sin(phi/2).

    Range: puddles many capillary lengths wide; use the advancing angle while it spreads. Perfect wetting (0)
    leaves no least depth.
    Reference: de Gennes, Brochard-Wyart, Quere (2004), ch. 2.
    """
    length = capillary_length(surface_tension=surface_tension, density=density)
    return np.asarray(2 * length * np.sin(np.asarray(contact_angle) / 2))


def leaked_volume(*, surface_tension: Number, density: Number, contact_angle: Number, area: Number) -> Floats:
    """Least volume [m3] leaked when a puddle covers an area [m2] of level floor: area times puddle depth."""
    depth = puddle_depth(surface_tension=surface_tension, density=density, contact_angle=contact_angle)
    return np.asarray(np.asarray(area) * depth)


def pool_depth_on_slope(*, deepest: Number, slope: Number, distance: Number) -> Floats:
    """Depth [m] of standing liquid a distance [m] up a slope [rad] from where it is deepest; 0 beyond its
    edge.

    Geometry only: a level surface over an inclined floor. A sensor that far uphill stays dry until the pool's
    deepest point has risen by distance tan(slope).
    """
    return np.asarray(np.maximum(np.asarray(deepest) - np.asarray(distance) * np.tan(slope), 0))


def cap_height(*, base_radius: Number, contact_angle: Number) -> Floats:
    """Height [m] of a spherical cap on a base of given radius, a tan(phi/2)."""
    return np.asarray(np.asarray(base_radius) * np.tan(np.asarray(contact_angle) / 2))


def cap_volume(*, base_radius: Number, contact_angle: Number) -> Floats:
    """Volume [m3] of a spherical cap, pi h (3 a^2 + h^2) / 6 with h = a tan(phi/2)."""
    height = cap_height(base_radius=base_radius, contact_angle=contact_angle)
    return np.asarray(np.pi * height * (3 * np.asarray(base_radius) ** 2 + height**2) / 6)


def cap_radius(*, volume: Number, contact_angle: Number) -> Floats:
    """Base radius [m] of a spherical cap of given volume [m3]: inverse of `cap_volume`."""
    unit = cap_volume(base_radius=1.0, contact_angle=contact_angle)
    return np.asarray(np.cbrt(np.asarray(volume) / unit))


def cap_notes(*, base_radius: Number, surface_tension: Number, density: Number) -> tuple[Note, ...]:
    """A caution where drops are so large that weight flattens them."""
    length = capillary_length(surface_tension=surface_tension, density=density)
    text = "Drops wider than about a capillary length are flattened by their weight and no spherical caps."
    return caution("drops-flattened", text, np.asarray(base_radius) > length / 2)


def hanging_drop_volume(
    *, surface_tension: Number, density: Number, tip_radius: Number, fraction: Number = 0.65
) -> Floats:
    """Largest volume [m3] of a drop that falls from a tip, 2 pi r gamma f / (rho g) (Tate's law).

    fraction  share of the ideal drop that leaves: about 0.60 to 0.75 by tip radius over the cube root of the
              volume (W. D. Harkins, F. E. Brown, J. Am. Chem. Soc. 41, 499 (1919); range from memory). What
              stays hanging after the fall is up to (1 - f) of the ideal drop.
    Range: tips from about 0.2 to 2 capillary lengths wide, wetted to their edge.
    """
    length = capillary_length(surface_tension=surface_tension, density=density)
    return np.asarray(2 * np.pi * np.asarray(tip_radius) * length**2 * fraction)


def hanging_spacing(*, surface_tension: Number, density: Number) -> Floats:
    """Spacing [m] of the drops a film on a downward face breaks into, 2 pi sqrt(2) l_c (Rayleigh-Taylor).

    Reference: M. Fermigier et al., J. Fluid Mech. 236, 349 (1992): fastest growing wave of a thin hanging
    film.
    """
    length = capillary_length(surface_tension=surface_tension, density=density)
    return np.asarray(2 * np.pi * np.sqrt(2.0) * length)


def held_drop_volume(
    *,
    surface_tension: Number,
    density: Number,
    width: Number,
    slope: Number,
    advancing: Number,
    receding: Number,
) -> Floats:
    """Largest drop [m3] held on a tilted face by the difference of its contact angles.

    Formula: rho V g sin(slope) = width gamma (cos(receding) - cos(advancing)).
    Range: an estimate, right within a factor of about 1.5 by the drop's outline. Infinite on a level face.
    Reference: C. G. L. Furmidge, J. Colloid Sci. 17, 309 (1962), doi 10.1016/0095-8522(62)90011-9.

    width                of the drop across the slope [m]
    slope                of the face from level [rad]
    advancing, receding  contact angles [rad]
    """
    length = capillary_length(surface_tension=surface_tension, density=density)
    hold = length**2 * np.asarray(width) * (np.cos(receding) - np.cos(advancing))
    pull = np.sin(np.asarray(slope, dtype=float))
    level = pull <= 0
    return np.asarray(np.where(level, np.inf, hold / np.where(level, 1, pull)))


def held_plug_length(
    *,
    surface_tension: Number,
    density: Number,
    gap: Number,
    slope: Number,
    advancing: Number,
    receding: Number,
) -> Floats:
    """Longest plug [m] a tilted narrow gap holds, 2 gamma (cos(receding) - cos(advancing)) / (rho g d
    sin(slope)).

    The plug fills the gap between two like plates; longer ones run out downhill. Infinite on the level.
    """
    length = capillary_length(surface_tension=surface_tension, density=density)
    hold = 2 * length**2 * (np.cos(receding) - np.cos(advancing)) / np.asarray(gap)
    pull = np.sin(np.asarray(slope, dtype=float))
    level = pull <= 0
    return np.asarray(np.where(level, np.inf, hold / np.where(level, 1, pull)))


def gap_fill_time(
    *, surface_tension: Number, viscosity: Number, gap: Number, length: Number, contact_angle: Number = 0.0
) -> Floats:
    """Time [s] a liquid takes to draw itself a length [m] into a level gap, 3 mu L^2 / (gamma d cos(phi)).

    Infinite for contact angles of 90 degrees and more: the gap does not fill by itself.
    Range: level, full supply, viscous flow (not the first instants of a thin liquid).
    Reference: E. W. Washburn, Phys. Rev. 17, 273 (1921), with the flow between plates, doi
    10.1103/PhysRev.17.273.

    viscosity  [Pa s]
    """
    return _fill_time(3.0, surface_tension, viscosity, gap, length, contact_angle)


def tube_fill_time(
    *, surface_tension: Number, viscosity: Number, radius: Number, length: Number, contact_angle: Number = 0.0
) -> Floats:
    """Time [s] a liquid takes to draw itself a length [m] into a level tube, 2 mu L^2 / (gamma r cos(phi)).

    Range and reference: as `gap_fill_time`.
    """
    return _fill_time(2.0, surface_tension, viscosity, radius, length, contact_angle)


def _fill_time(
    factor: float,
    surface_tension: Number,
    viscosity: Number,
    size: Number,
    length: Number,
    contact_angle: Number,
) -> Floats:
    pull = np.cos(np.asarray(contact_angle, dtype=float))
    draws = pull > 1e-12
    work = factor * np.asarray(viscosity) * np.asarray(length) ** 2 / (np.asarray(surface_tension) * size)
    return np.asarray(np.where(draws, work / np.where(draws, pull, 1), np.inf))


def capillary_number(*, viscosity: Number, speed: Number, surface_tension: Number) -> Floats:
    """Viscous over capillary stress, mu U / gamma; speed [m/s]."""
    return np.asarray(np.asarray(viscosity) * speed / np.asarray(surface_tension))
