"""Fresnel's amplitudes between two clear media, for what is traced or averaged ray by ray."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["fresnel_amplitudes"]

Floats = NDArray[np.float64]
Complexes = NDArray[np.complex128]
Number = float | Floats


def fresnel_amplitudes(*, n_from: Number, n_to: Number, cosine: Number) -> Complexes:
    """Amplitude reflectances (s, p) on the last axis; complex beyond the critical angle.

    The p axis keeps its sense along (direction x s), so at normal incidence r_p = -r_s; fields go as exp(-i
    omega t).

    cosine  of the angle of incidence, clipped to 0 to 1
    """
    near = np.clip(np.asarray(cosine, dtype=float), 0, 1)
    before, after = np.asarray(n_from, dtype=float), np.asarray(n_to, dtype=float)
    inner = before * near
    outer = np.sqrt((after**2 - before**2 * (1 - near**2)).astype(complex))
    s = (inner - outer) / (inner + outer)
    p = (after**2 * inner - before**2 * outer) / (after**2 * inner + before**2 * outer)
    return np.stack(np.broadcast_arrays(s, p), axis=-1)
