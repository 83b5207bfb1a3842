"""Light through one gap: frustrated total reflection in closed form."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from outcouple.optics.arrays import Array, Floats, angles, clear, floats, in_chunks, medium
from outcouple.optics.stack import stack_response

__all__ = ["gap_transmittance"]

SMALL = 1e-300
"""Added where a zero would be divided by: |u|, so that sinh(x) / sqrt(u) at u = 0 comes out as its limit."""


def gap_transmittance(
    n_guide: ArrayLike, n_gap: ArrayLike, n_contact: ArrayLike, gap: ArrayLike, angle: ArrayLike, wavelength: ArrayLike
) -> tuple[Floats, Floats]:
    """Share of the power that crosses a gap into what lies behind it, (Ts, Tp).

    n_guide    real index of the guide; n_gap of the gap; n_contact (n + i k) of what lies behind
    gap        width [m], 0 and more
    angle      of incidence in the guide [rad]
    wavelength in vacuum [m]

    All broadcast. Exact for flat parallel faces, also at the critical angle of the gap and for gaps of metres. Lossless
    media take a form in real numbers (with e = n^2, q^2 = e - e_guide sin^2, k = 2 pi / wavelength, and S the square of
    sin(k gap q1) / q1, which is sinh where q1 is imaginary):
    Ts = 4 q0 q2 / ((q0 + q2)^2 + S (e0 - e1)(e2 - e1)),
    Tp = 4 e0 e2 q0 q2 / ((e0 q2 + e2 q0)^2 + (S / e1^2)(e0^2 u - e1^2 q0^2)(e2^2 u - e1^2 q2^2)), u = q1^2;
    absorbing ones the layer recursion. Same as S. Zhu, A. W. Yu, D. Hawley, R. Roy, Am. J. Phys. 54, 601 (1986),
    doi 10.1119/1.14514.

    >>> Ts, Tp = gap_transmittance(1.51, 1.0, 1.51, 200e-9, np.radians(45), 850e-9)
    >>> round(float(Ts), 3), round(float(Tp), 3)
    (0.535, 0.737)
    """
    media = (medium(n_gap), medium(n_contact))
    if any(np.iscomplexobj(index) for index in media):
        found = stack_response((n_guide, n_gap, n_contact), (gap,), angle, wavelength)
        return found.Ts, found.Tp
    arrays = [clear(n_guide), *media, floats(gap), angles(angle), floats(wavelength)]
    shape = np.broadcast_shapes(*(array.shape for array in arrays))
    Ts, Tp = in_chunks(_clear_gap, arrays)
    return np.broadcast_to(Ts, shape), np.broadcast_to(Tp, shape)


def _clear_gap(
    n_guide: Floats, n_gap: Floats, n_contact: Floats, gap: Floats, angle: Floats, wavelength: Floats
) -> tuple[Array, ...]:
    e0, e1, e2 = np.square(n_guide), np.square(n_gap), np.square(n_contact)
    sine, cosine = np.sin(angle), np.cos(angle)
    tangential = e0 * np.square(sine)
    q0 = n_guide * cosine
    q2 = np.sqrt(np.maximum(e2 - tangential, 0.0))
    u = e1 - tangential
    root = np.sqrt(np.abs(u) + SMALL)
    phase = (2 * np.pi) * gap / wavelength * root
    swing, scale = _swing(phase, u)
    S = swing / np.square(root)
    both = 4 * q0 * q2 * scale
    # SMALL: no light, not 0 / 0, where guide and contact graze together.
    Ts = both / (np.square(q0 + q2) * scale + S * ((e0 - e1) * (e2 - e1)) + SMALL)
    cross = (np.square(e0) * u - np.square(e1 * q0)) * (np.square(e2) * u - np.square(e1 * q2))
    Tp = both * (e0 * e2) / (np.square(e0 * q2 + e2 * q0) * scale + S / np.square(e1) * cross + SMALL)
    return Ts, Tp


def _swing(phase: Floats, u: Floats) -> tuple[Floats, Floats | float]:
    """(sin or sinh of the phase)^2 times a scale, and that scale, which keeps thick gaps from overflowing."""
    lowest, highest = u.min(initial=np.inf), u.max(initial=-np.inf)
    if lowest > 0:
        return np.square(np.sin(phase)), 1.0
    with np.errstate(under="ignore"):
        fall = np.exp(-phase)
        swing, scale = np.square(0.5 * np.expm1(-2 * phase)), np.square(fall)
    if highest <= 0:
        return swing, scale
    forward = u > 0
    return np.where(forward, np.square(np.sin(phase)), swing), np.where(forward, 1.0, scale)
