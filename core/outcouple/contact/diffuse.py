"""Light sent back diffusely: by turbid liquids and skin, by floors and walls behind a clear liquid, by foam.

Everything is a share of flux. Light that leaves a scattering medium of index n_c is taken as Lambertian in
that medium; inside a guide of higher index n it fills the directions with sin(angle) < n_c / n, Lambertian up
to that cut.
"""

from __future__ import annotations

from functools import cache

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cautions import caution
from outcouple.contact.fresnel import fresnel_amplitudes
from outcouple.notes import Note

__all__ = [
    "bubble_share",
    "cone_share",
    "diffuse_notes",
    "diffuse_reflectance",
    "diffuse_transmittance",
    "escape_share",
    "foam_wet_share",
    "internal_albedo",
    "mirror_return",
    "returned_within",
    "spread_length",
    "wall_return",
]

Floats = NDArray[np.float64]
Number = float | Floats

LEAST_ALBEDO = 0.9  # scattering about ten times absorption: usual statement of where diffusion theory holds
ROUND_BUBBLES = 0.7405  # gas share of close-packed spheres, pi / sqrt(18)


def diffuse_reflectance(
    *, scattering: Number, absorption: Number, n_medium: Number, n_guide: Number, cosine: Number = 1.0
) -> Floats:
    """Share of the light entering a deep turbid medium that comes back out of it, by diffusion theory.

    Formula: a / ((1 + c s) (1 + 2 A s / 3)), a = mu_s' / (mu_s' + mu_a), s = sqrt(3 (1 - a)), c the cosine of
    the light's direction inside the medium and A = (1 + r)/(1 - r) for the medium's own internal reflection
    r: the solution for an exponential source with a partial-current boundary; for c = 1 it is the formula of
    S. T. Flock et al., IEEE Trans. Biomed. Eng. 36, 1162 (1989), doi 10.1109/TBME.1989.1173624. r from both
    Fresnel moments: R. C. Haskell et al., J. Opt. Soc. Am. A 11, 2727 (1994), doi 10.1364/JOSAA.11.002727.
    Range: mu_s' at least about ten times mu_a (`diffuse_notes`); within 0.02 of exact transfer there for
    isotropic scattering and matched indices. Medium deep and wide against `spread_length`; light that enters
    is counted after the face's own reflection.

    scattering  reduced scattering coefficient mu_s' [1/m]
    absorption  mu_a [1/m]
    n_medium    index of the turbid medium
    n_guide     index of the guide it touches
    cosine      of the angle from the normal inside the medium

    >>> value = diffuse_reflectance(scattering=1000.0, absorption=10.0, n_medium=1.35, n_guide=1.64)
    >>> round(float(value), 2)
    0.75
    """
    albedo = _albedo(scattering, absorption)
    sink = np.sqrt(3 * (1 - albedo))
    barrier = _barrier(n_medium, n_guide)
    return np.asarray(albedo / ((1 + np.asarray(cosine) * sink) * (1 + 2 * barrier * sink / 3)))


def diffuse_notes(*, scattering: Number, absorption: Number) -> tuple[Note, ...]:
    """A caution where absorption is too strong for diffusion theory."""
    text = "Absorption exceeds about a tenth of the reduced scattering: diffusion theory is a rough guide."
    return caution("diffusion-range", text, np.asarray(_albedo(scattering, absorption) < LEAST_ALBEDO))


def spread_length(*, scattering: Number, absorption: Number = 0.0) -> Floats:
    """Length [m] over which light that comes back has spread sideways, 1 / (mu_s' + mu_a).

    About half of it surfaces within two of these lengths (`returned_within`); a spread wider than the
    sensor's face takes light away from it.
    """
    return np.asarray(1 / (np.asarray(scattering) + np.asarray(absorption)))


def returned_within(
    *, radius: Number, scattering: Number, absorption: Number, n_medium: Number, n_guide: Number
) -> Floats:
    """Share of the returning light that surfaces within a radius [m] of where a thin beam entered.

    Formula: integral of the two-source solution of T. J. Farrell, M. S. Patterson, B. Wilson, Med. Phys. 19,
    879 (1992), doi 10.1118/1.596777, over a disc, over its total. Source at z0 = 1/mu_t', image at z0 (1 + 4
    A / 3).
    Range: `diffuse_notes`; poor within about z0 of the beam.
    """
    total = np.asarray(scattering) + np.asarray(absorption)
    decay = np.sqrt(3 * np.asarray(absorption) * total)
    within, everywhere = 0.0, 0.0
    for depth in (1 / total, (1 + 4 * _barrier(n_medium, n_guide) / 3) / total):
        slant = np.sqrt(depth**2 + np.asarray(radius) ** 2)
        whole = np.exp(-decay * depth)
        within = within + whole - depth / slant * np.exp(-decay * slant)
        everywhere = everywhere + whole
    return np.asarray(within / everywhere)


def internal_albedo(*, reflectance: Number, n_medium: Number, specular_included: bool = True) -> Floats:
    """Share of diffuse light a scattering body sends back inside, from its reflectance measured in air.

    Formula: R_i = B / (B r + (1 - f)(1 - r)), f = Fresnel reflectance at normal incidence, r = internal
    diffuse reflectance, B the measured reflectance, less f where the gloss was included.
    Reference: J. L. Saunderson, J. Opt. Soc. Am. 32, 727 (1942), doi 10.1364/JOSA.32.000727.

    >>> round(float(internal_albedo(reflectance=0.55, n_medium=1.43)), 2)
    0.72
    """
    index = np.asarray(n_medium, dtype=float)
    gloss = ((index - 1) / (index + 1)) ** 2
    body = np.asarray(reflectance) - (gloss if specular_included else 0.0)
    inside = 1 - diffuse_transmittance(n_from=index, n_to=1.0)
    return np.asarray(body / (body * inside + (1 - gloss) * (1 - inside)))


def diffuse_transmittance(*, n_from: Number, n_to: Number) -> Floats:
    """Share of Lambertian light in one medium that crosses a bare face into another (Fresnel, unpolarised).

    Into air from 1.484 it is 0.413, of the 0.454 that total reflection allows.
    """
    return _moments(np.asarray(n_to, dtype=float) / np.asarray(n_from))[0]


def escape_share(*, n_guide: Number, n_contact: Number, n_outside: Number = 1.0) -> Floats:
    """Share of diffuse light, sent back into a guide by a medium of index n_contact, that leaves by one bare
    face.

    Formula: Lambertian up to sin(angle) = n_contact / n_guide; where that cut holds, the light is denser in
    the escape cone by (n_guide / n_contact)^2. Media above the guide's index fill all directions.

    >>> round(float(escape_share(n_guide=1.484, n_contact=1.43)), 3)
    0.445
    """
    cut = np.minimum(np.asarray(n_contact) / np.asarray(n_guide), 1.0)
    plain = diffuse_transmittance(n_from=n_guide, n_to=n_outside)
    return np.asarray(np.minimum(plain / cut**2, 1.0))


def cone_share(*, half_angle: Number, n_guide: Number = 1.0, n_contact: Number = np.inf) -> Floats:
    """Share of diffuse light within a cone [rad] about the normal inside the guide, sin^2 over the cut's."""
    cut = np.minimum(np.asarray(n_contact) / np.asarray(n_guide), 1.0)
    return np.asarray(np.minimum((np.sin(half_angle) / cut) ** 2, 1.0))


def wall_return(*, distance: Number, diameter: Number, reflectance: Number, offset: Number = 0.0) -> Floats:
    """Share of a narrow beam that a matt wall parallel to the face sends back onto a round face.

    Formula: reflectance times the view factor from a small element to a parallel disc of radius a at distance
    z whose axis passes at x, (1 - (x^2 + z^2 - a^2) / sqrt((x^2 + z^2 + a^2)^2 - 4 a^2 x^2)) / 2; on the axis
    a^2/(a^2 + z^2).
    Range: the lit spot small against distance or face; a clear liquid between; what comes back still meets
    the face's own angles and Fresnel losses. A polished wall follows `mirror_return`.
    Reference: catalogue of view factors, e.g. J. R. Howell, differential element to parallel disc (from
    memory).

    distance, diameter  of the wall and of the face [m]
    offset              of the lit spot from the face's axis, distance times tan(angle in the liquid) [m]
    """
    radius = np.asarray(diameter, dtype=float) / 2
    far = np.asarray(offset, dtype=float) ** 2 + np.asarray(distance, dtype=float) ** 2
    root = np.sqrt((far + radius**2) ** 2 - 4 * radius**2 * np.asarray(offset) ** 2)
    return np.asarray(np.asarray(reflectance) * (1 - (far - radius**2) / root) / 2)


def mirror_return(*, distance: Number, diameter: Number, angle: Number, reflectance: Number) -> Floats:
    """Share of a beam as wide as the round face that a parallel polished wall sends back onto it.

    Formula: overlap of two equal circles, the second moved by 2 z tan(angle).

    angle  in the liquid, from the normal [rad]
    """
    shift = 2 * np.asarray(distance) * np.tan(angle) / np.asarray(diameter)
    apart = np.clip(shift, 0.0, 1.0)
    overlap = 2 / np.pi * (np.arccos(apart) - apart * np.sqrt(1 - apart**2))
    return np.asarray(np.asarray(reflectance) * overlap)


def bubble_share(*, density: Number, contact_area: Number) -> Floats:
    """Share of a wet face that scattered bubbles keep dry, 1 - exp(-N a): randomly placed, free to overlap.

    density       bubbles per area of face [1/m2]
    contact_area  each keeps dry [m2]; a bubble behind an unbroken liquid film keeps nothing dry
    """
    return np.asarray(-np.expm1(-np.asarray(density) * np.asarray(contact_area)))


def foam_wet_share(*, gas_share: Number) -> Floats:
    """Share of a wall under dense foam that liquid wets between the flattened bubbles.

    Formula: 3.20 / sqrt(g / (1 - g) + 7.70), g the gas share by volume; 1 below 0.7405, where bubbles are
    round and only touch, and nearly 0 for the driest.
    Range: foam of like bubbles, still standing; the films on the flattened parts are plane and do not switch.
    Reference: H. M. Princen, A. D. Kiss, Langmuir 3, 36 (1987) (formula from memory; its end at close packing
    agrees).

    >>> round(float(foam_wet_share(gas_share=0.99)), 2)
    0.31
    """
    gas = np.asarray(gas_share, dtype=float)
    crowded = np.clip(gas, ROUND_BUBBLES, 1 - 1e-12)
    wet = 3.20 / np.sqrt(crowded / (1 - crowded) + 7.70)
    return np.asarray(np.where(gas < ROUND_BUBBLES, 1.0, wet))


def _albedo(scattering: Number, absorption: Number) -> Floats:
    return np.asarray(np.asarray(scattering) / (np.asarray(scattering) + np.asarray(absorption)))


def _barrier(n_medium: Number, n_guide: Number) -> Floats:
    """(1 + r)/(1 - r): how much the medium's boundary holds diffuse light back."""
    crossing, current = _moments(np.asarray(n_guide, dtype=float) / np.asarray(n_medium))
    flux, density = 1 - crossing, 1 - current
    held = (flux + density) / (2 - flux + density)
    return np.asarray((1 + held) / (1 - held))


def _moments(ratio: Floats) -> tuple[Floats, Floats]:
    """Means of the Fresnel transmittance over 2 c dc and 3 c^2 dc, c the cosine of incidence; ratio = n_to /
    n_from.

    Integrated over the far side's or the near side's cosine, whichever spans the open cone, so that no kink
    is met.
    """
    nodes, weights = _gauss()
    relative = np.asarray(ratio, dtype=float)[..., None]
    least = np.sqrt(np.maximum(1 - np.minimum(relative, 1.0) ** 2, 0))
    # squares keep the square-root start at the critical angle smooth
    cosine = least + (1 - least) * nodes**2
    amplitude = fresnel_amplitudes(n_from=1.0, n_to=relative, cosine=cosine)
    through = 1 - (np.abs(amplitude) ** 2).mean(axis=-1)
    step = (1 - least) * 2 * nodes * weights * through
    return np.asarray((2 * cosine * step).sum(axis=-1)), np.asarray((3 * cosine**2 * step).sum(axis=-1))


@cache
def _gauss() -> tuple[Floats, Floats]:
    nodes, weights = np.polynomial.legendre.leggauss(48)
    return (nodes + 1) / 2, weights / 2
