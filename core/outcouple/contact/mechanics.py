"""How much touches when things are pressed together: spheres, bumps, rough faces, fingertips."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cautions import caution
from outcouple.notes import Note

__all__ = [
    "bump_notes",
    "bump_share",
    "finger_area",
    "finger_notes",
    "finger_share",
    "hertz_area",
    "hertz_notes",
    "hertz_pressure",
    "hertz_radius",
    "persson_share",
    "plane_strain_modulus",
    "pull_off_force",
    "reduced_modulus",
    "ridge_share",
    "rough_slope_share",
    "settled_share",
]

Floats = NDArray[np.float64]
Number = float | Floats

HERTZ_LIMIT = 0.3  # contact radius over sphere radius; common practice, no source
BUMPS_ALONE = 0.3  # share of a bump lattice up to which bumps do not feel each other; common practice, no source
FINGER_RANGE = (0.05, 10.0)  # newtons; from memory


def plane_strain_modulus(*, modulus: Number, poisson: Number) -> Floats:
    """Contact modulus [Pa] of one elastic body against a rigid one, E / (1 - nu^2)."""
    return np.asarray(np.asarray(modulus) / (1 - np.asarray(poisson) ** 2))


def reduced_modulus(*, modulus: Number, poisson: Number, counter_modulus: Number, counter_poisson: Number) -> Floats:
    """Contact modulus [Pa] of two elastic bodies: 1/E* = (1 - nu1^2)/E1 + (1 - nu2^2)/E2.

    Reference: K. L. Johnson, Contact Mechanics (1985), eq. 4.20 (number from memory).
    """
    one = plane_strain_modulus(modulus=modulus, poisson=poisson)
    other = plane_strain_modulus(modulus=counter_modulus, poisson=counter_poisson)
    return np.asarray(1 / (1 / one + 1 / other))


def hertz_radius(*, force: Number, radius: Number, modulus: Number) -> Floats:
    """Contact radius [m] of an elastic sphere pressed on a flat: a^3 = 3 F R / (4 E*).

    force    normal force [N], not negative
    radius   of the sphere [m]
    modulus  contact modulus E* [Pa], see `reduced_modulus`
    Range: no friction, no adhesion, a well below R (`hertz_notes`).
    Reference: K. L. Johnson, Contact Mechanics (1985), eq. 4.22 (number from memory).

    >>> round(float(hertz_radius(force=1.0, radius=0.01, modulus=1e6)) * 1e3, 3)
    1.957
    """
    return np.asarray(np.cbrt(3 * np.asarray(force) * radius / (4 * np.asarray(modulus))))


def hertz_area(*, force: Number, radius: Number, modulus: Number) -> Floats:
    """Contact area [m2] of an elastic sphere on a flat, pi a^2; arguments of `hertz_radius`."""
    return np.asarray(np.pi * hertz_radius(force=force, radius=radius, modulus=modulus) ** 2)


def hertz_pressure(*, force: Number, radius: Number, modulus: Number) -> Floats:
    """Mean pressure [Pa] in the contact, F / (pi a^2) = 4 E* a / (3 pi R); the peak is 3/2 of it."""
    contact = hertz_radius(force=force, radius=radius, modulus=modulus)
    return np.asarray(4 * np.asarray(modulus) * contact / (3 * np.pi * np.asarray(radius)))


def hertz_notes(*, force: Number, radius: Number, modulus: Number) -> tuple[Note, ...]:
    """A caution where the contact radius leaves the small-strain range of Hertz."""
    ratio = hertz_radius(force=force, radius=radius, modulus=modulus) / np.asarray(radius)
    text = f"The contact radius exceeds {HERTZ_LIMIT:g} of the sphere's: Hertz' law is only a first guess."
    return caution("hertz-range", text, ratio > HERTZ_LIMIT)


def pull_off_force(*, radius: Number, adhesion: Number) -> Floats:
    """Force [N] that parts a soft adhesive sphere from a flat: 3/2 pi w R.

    adhesion  work of adhesion w [J/m2]
    Range: soft, large, sticky bodies (Johnson, Kendall, Roberts); small stiff ones part at 2 pi w R instead.
    Reference: K. L. Johnson, K. Kendall, A. D. Roberts, Proc. R. Soc. Lond. A 324, 301 (1971), doi
    10.1098/rspa.1971.0141.
    """
    return np.asarray(1.5 * np.pi * np.asarray(adhesion) * np.asarray(radius))


def persson_share(*, pressure: Number, modulus: Number, slope: Number) -> Floats:
    """Share of the apparent area in real contact when a randomly rough face is pressed on an elastic flat.

    Formula: erf(sqrt(2) p / (E* g)), g = root-mean-square slope of the (combined) roughness; the start is
    sqrt(8/pi) p / (E* g) = 1.60 p / (E* g), and full contact is reached only in the limit.
    Range: random (Gaussian, many-scale) roughness without adhesion, elastic; a regular texture follows
    `bump_share`. Close to full contact and at the start exact numerical work finds the share up to about a
    fifth higher.
    Reference: B. N. J. Persson, J. Chem. Phys. 115, 3840 (2001), doi 10.1063/1.1388626: the share is erf(1/(2
    sqrt G)), G = E*^2 g^2 / (8 p^2).

    pressure  apparent [Pa], not negative
    modulus   contact modulus E* [Pa]

    >>> float(persson_share(pressure=0.0, modulus=1e6, slope=0.2))
    0.0
    """
    load = np.asarray(pressure, dtype=float) / (np.asarray(modulus) * np.asarray(slope))
    return _erf(math.sqrt(2.0) * load)


def rough_slope_share(*, pressure: Number, modulus: Number, slope: Number) -> Floats:
    """The straight start of `persson_share`, sqrt(8/pi) p / (E* g); not a share at high load."""
    load = np.asarray(pressure, dtype=float) / (np.asarray(modulus) * np.asarray(slope))
    return np.asarray(math.sqrt(8 / math.pi) * load)


def bump_share(*, pressure: Number, modulus: Number, radius: Number, pitch: Number) -> Floats:
    """Share in contact when a regular texture of round bumps is pressed on a flat.

    Formula: each bump of a square lattice carries p pitch^2 and touches by Hertz, f = pi (3 p R / (4 E*
    pitch))^(2/3); from f = 0.3 (a = 0.31 pitch) on, neighbours meet and f is joined to 1 by 1 - 0.7
    exp(-(f_Hertz - 0.3)/0.7).
    Range: the Hertz part; the join is smooth and monotonic but no theory (`bump_notes`). The share starts as
    p^(2/3), unlike the straight start of random roughness.
    Reference: `hertz_radius` per bump.

    pressure  apparent [Pa], not negative
    modulus   contact modulus E* [Pa]
    radius    of curvature of a bump's top [m]
    pitch     of the lattice [m]
    """
    alone = _bumps_alone(pressure, modulus, radius, pitch)
    joined = 1 - (1 - BUMPS_ALONE) * np.exp(-np.maximum(alone - BUMPS_ALONE, 0) / (1 - BUMPS_ALONE))
    return np.asarray(np.where(alone <= BUMPS_ALONE, alone, joined))


def bump_notes(*, pressure: Number, modulus: Number, radius: Number, pitch: Number) -> tuple[Note, ...]:
    """A caution where bumps no longer stand alone and `bump_share` is a mere join; its arguments."""
    alone = _bumps_alone(pressure, modulus, radius, pitch)
    text = f"More than {BUMPS_ALONE:.0%} of the texture touches: bumps meet and the share is a smooth guess."
    return caution("bumps-meet", text, alone > BUMPS_ALONE)


def _bumps_alone(pressure: Number, modulus: Number, radius: Number, pitch: Number) -> Floats:
    load = 3 * np.asarray(pressure, dtype=float) * radius / (4 * np.asarray(modulus) * pitch)
    return np.asarray(np.pi * np.cbrt(load) ** 2)


def finger_area(*, force: Number, largest: Number = 250e-6, half_force: Number = 1.0) -> Floats:
    """Gross contact area [m2] of a fingertip pressed on a flat: largest x / (1 + x), x = (F /
    half_force)^(2/3).

    Starts like a soft sphere and saturates because the pad ends. The outline counts as touched all over; what
    really touches is `finger_share` of it.
    Range: 0.05 to 10 N (`finger_notes`). Both defaults are from memory (about 45, 125 and 190 mm2 at 0.1, 1
    and 5 N); people and fingers differ by a factor of two either way.

    >>> round(float(finger_area(force=1.0)) * 1e6)
    125
    """
    load = np.cbrt(np.asarray(force, dtype=float) / half_force) ** 2
    return np.asarray(largest * load / (1 + load))


def finger_share(*, force: Number, least: Number = 0.05, most: Number = 0.6, half_force: Number = 2.0) -> Floats:
    """Share of a fingertip's gross area that really touches: least + (most - least) F / (F + half_force).

    ``least`` and ``most`` are the ends of the range of real over gross area of settled contacts, from memory:
    a dry finger stays near the low end at any force, a moist one reaches the high end, so state both rather
    than trust one.
    Range: as `finger_area`; ``half_force`` is a guess within it.
    """
    load = np.asarray(force, dtype=float)
    return np.asarray(least + (np.asarray(most) - least) * load / (load + half_force))


def finger_notes(*, force: Number) -> tuple[Note, ...]:
    """Cautions about every answer of the fingertip laws, and about forces outside their range."""
    load = np.asarray(force, dtype=float)
    outside = (load < FINGER_RANGE[0]) | (load > FINGER_RANGE[1])
    always = Note(
        "finger-range",
        "Fingertip areas and contact shares are mid-range values from memory; people, moisture and settling "
        "change them by a factor of two and more.",
        severity="info",
        decides="a trial with the people who will use it",
    )
    text = f"The force leaves {FINGER_RANGE[0]:g} to {FINGER_RANGE[1]:g} N, the range of the fingertip laws."
    return (always, *caution("finger-force", text, outside))


def ridge_share(*, width: Number, period: Number) -> Floats:
    """Share of a fingerprint's outline on the tops of its ridges, width / period.

    Ridge tops of 100 to 300 um at a period near 500 um are usual (from memory).
    """
    return np.asarray(np.asarray(width) / np.asarray(period))


def settled_share(*, time: Number, start: Number, end: Number, time_constant: Number = 20.0 / 3) -> Floats:
    """Real contact share a time [s] after pressing: first-order growth, end + (start - end) exp(-t /
    time_constant).

    On glass the keratin softens under its own moisture and settles within about 20 s, whatever the force or
    the moisture at first: the default is a third of that, so 95 % of the way is done by then. On a soft
    counterface the settled contact is there at once (time_constant near 0.1 s).
    Reference: B. Dzidek et al., PNAS 114, 10864 (2017), doi 10.1073/pnas.1706233114 (first-order kinetics, 20
    s).

    >>> float(settled_share(time=0.0, start=0.08, end=0.4))
    0.08
    """
    growth = np.exp(-np.asarray(time, dtype=float) / time_constant)
    return np.asarray(end + (np.asarray(start) - end) * growth)


def _erf(value: Floats) -> Floats:
    return np.asarray(np.frompyfunc(math.erf, 1, 1)(value), dtype=float)
