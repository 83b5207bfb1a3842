"""Total reflection: critical angle, Brewster angle, and how far the field reaches beyond the face."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from outcouple.optics.arrays import Floats, angles, floats

__all__ = ["beam_shift", "brewster_angle", "critical_angle", "effective_thickness", "penetration_depth"]


def critical_angle(n_guide: ArrayLike, n_outside: ArrayLike) -> Floats:
    """Angle of incidence beyond which all light is reflected, asin(n_outside / n_guide) [rad].

    nan where the outside is not the rarer medium: nothing is totally reflected there. Real indices, any shapes that
    broadcast. Source: Snell's law.

    >>> round(float(np.degrees(critical_angle(1.484, 1.0003))), 2)
    42.38
    """
    ratio = floats(n_outside) / floats(n_guide)
    return np.asarray(np.arcsin(np.where(ratio < 1, ratio, np.nan)))


def brewster_angle(n_guide: ArrayLike, n_outside: ArrayLike) -> Floats:
    """Angle of incidence at which p is not reflected, atan(n_outside / n_guide) [rad]; real indices.

    >>> round(float(np.degrees(brewster_angle(1.0, 1.5))), 2)
    56.31
    """
    return np.asarray(np.arctan(floats(n_outside) / floats(n_guide)))


def penetration_depth(n_guide: ArrayLike, n_outside: ArrayLike, angle: ArrayLike, wavelength: ArrayLike) -> Floats:
    """Depth at which the field has fallen to 1/e, wavelength / (2 pi sqrt(q^2 - n_outside^2)) [m]; the intensity's is
    half.

    q = n_guide sin(angle). Infinite up to the critical angle. Source: N. J. Harrick, Internal Reflection Spectroscopy
    (1967).

    >>> round(float(penetration_depth(1.484, 1.0, np.radians(45), 850e-9)) * 1e9)
    425
    """
    over = np.square(floats(n_guide) * np.sin(angles(angle))) - np.square(floats(n_outside))
    with np.errstate(divide="ignore"):
        return np.asarray(floats(wavelength) / (2 * np.pi * np.sqrt(np.maximum(over, 0.0))))


def effective_thickness(
    n_guide: ArrayLike, n_outside: ArrayLike, angle: ArrayLike, wavelength: ArrayLike
) -> tuple[Floats, Floats]:
    """Path in a weakly absorbing outside that absorbs as much as one total reflection does, (s, p) [m].

    A reflection keeps 1 - alpha d for small alpha d; d_s = (wavelength / n_guide) n cos(angle) / (pi (1 - n^2) G),
    n = n_outside / n_guide, G = sqrt(sin^2 - n^2), and d_p = d_s (2 sin^2 - n^2) / ((1 + n^2) sin^2 - n^2). A deep
    outside; nan up to the critical angle. Source: N. J. Harrick, Internal Reflection Spectroscopy (1967).
    """
    theta = angles(angle)
    n = floats(n_outside) / floats(n_guide)
    sine2, n2 = np.square(np.sin(theta)), np.square(n)
    decay = np.sqrt(np.where(sine2 > n2, sine2 - n2, np.nan))
    s = floats(wavelength) / floats(n_guide) * n * np.cos(theta) / (np.pi * (1 - n2) * decay)
    return np.asarray(s), np.asarray(s * (2 * sine2 - n2) / ((1 + n2) * sine2 - n2))


def beam_shift(
    n_guide: ArrayLike, n_outside: ArrayLike, angle: ArrayLike, wavelength: ArrayLike
) -> tuple[Floats, Floats]:
    """Sideways shift of a totally reflected beam, across the beam, (s, p) [m] (Goos-Haenchen).

    s = wavelength sin / (pi n_guide sqrt(sin^2 - n^2)), p = s / ((1 + 1/n^2) sin^2 - 1): wide beams beyond the critical
    angle, nan up to it. Source: K. Artmann, Ann. Phys. 437, 87 (1948).
    """
    theta = angles(angle)
    n2 = np.square(floats(n_outside) / floats(n_guide))
    sine2 = np.square(np.sin(theta))
    decay = np.sqrt(np.where(sine2 > n2, sine2 - n2, np.nan))
    s = floats(wavelength) / floats(n_guide) * np.sin(theta) / (np.pi * decay)
    return np.asarray(s), np.asarray(s / ((1 + 1 / n2) * sine2 - 1))
