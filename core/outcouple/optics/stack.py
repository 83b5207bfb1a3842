"""Reflection, transmission and absorption of plane waves at layered faces."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from outcouple.optics.arrays import Array, Complexes, Floats

__all__ = ["Powers", "StackResponse", "interface", "reflectance", "stack_response"]

Powers = tuple[Floats, Floats, Complexes, Floats, Floats]
"""Rs, Rp, X, Ts, Tp."""


@dataclass(frozen=True)
class StackResponse:
    """What a face does with a plane wave; every array has the broadcast shape of the arguments.

    rs, rp  amplitude reflectances; at normal incidence rp = -rs (see the room's docstring)
    Rs, Rp  reflected share of the power
    Ts, Tp  share that enters the exit medium
    """

    rs: Complexes
    rp: Complexes
    Rs: Floats
    Rp: Floats
    Ts: Floats
    Tp: Floats

    @property
    def As(self) -> Floats:
        """Share of s absorbed in the layers."""
        return 1 - self.Rs - self.Ts

    @property
    def Ap(self) -> Floats:
        """Share of p absorbed in the layers."""
        return 1 - self.Rp - self.Tp

    @property
    def X(self) -> Complexes:
        """rs conj(rp): what a reflection multiplies the cross term <Es conj(Ep)> of the coherency matrix with."""
        return self.rs * np.conj(self.rp)


def stack_response(
    indices: Sequence[ArrayLike], thicknesses: Sequence[ArrayLike], angle: ArrayLike, wavelength: ArrayLike
) -> StackResponse:
    """Response of coherent layers between a guide and an exit medium.

    indices      absolute index of guide, layers from the guide outwards, exit: n + i k, k >= 0. Of the guide the real
                 part counts
    thicknesses  of the layers [m], one fewer than interfaces
    angle        of incidence in the guide, from the face normal [rad], up to 90 degrees
    wavelength   in vacuum [m]

    All broadcast. Valid for plane waves on flat, parallel, isotropic, non-magnetic layers of any thickness, also at
    the critical angle of any of them. Raises ValueError where the counts do not fit, for a gain medium (k < 0) and
    for angles beyond 90 degrees.

    >>> import numpy as np
    >>> film = stack_response((1.5, 1.0, 1.5), (0.5e-6,), np.radians(45), 1e-6)
    >>> round(float(film.Ts), 4), round(float(film.Tp), 4)
    (0.3042, 0.4858)
    """
    rs, rp, Rs, Rp, Ts, Tp = _evaluate(_amplitudes, indices, thicknesses, angle, wavelength)
    return StackResponse(rs, rp, Rs, Rp, Ts, Tp)


def reflectance(
    indices: Sequence[ArrayLike], thicknesses: Sequence[ArrayLike], angle: ArrayLike, wavelength: ArrayLike
) -> Powers:
    """Rs, Rp, X = rs conj(rp), Ts, Tp: what an evaluation needs of :func:`stack_response`, without the amplitudes."""
    Rs, Rp, X, Ts, Tp = _evaluate(_powers, indices, thicknesses, angle, wavelength)
    return Rs, Rp, X, Ts, Tp


def interface(n1: ArrayLike, n2: ArrayLike, angle: ArrayLike) -> StackResponse:
    """Response of one bare interface, from ``n1`` to ``n2``; ``angle`` [rad] is measured in ``n1``.

    >>> round(float(interface(1.0, 1.5, 0.0).Rs), 12)
    0.04
    """
    return stack_response((n1, n2), (), angle, 1.0)


def _evaluate(
    finish: object,
    indices: Sequence[ArrayLike],
    thicknesses: Sequence[ArrayLike],
    angle: ArrayLike,
    wavelength: ArrayLike,
) -> tuple[Array, ...]:
    raise NotImplementedError
