"""Reflection, transmission and absorption of plane waves at layered faces."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from outcouple.optics.arrays import Array, Complexes, Floats, angles, clear, floats, in_chunks, medium
from outcouple.optics.layers import Layer, Load, front_load, unit

__all__ = ["Powers", "StackResponse", "interface", "reflectance", "solve", "stack_response"]

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
    (0.1642, 0.3347)
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
    finish: Callable[..., tuple[Array, ...]],
    indices: Sequence[ArrayLike],
    thicknesses: Sequence[ArrayLike],
    angle: ArrayLike,
    wavelength: ArrayLike,
) -> tuple[Array, ...]:
    """``finish`` over all points, in chunks."""
    if len(indices) != len(thicknesses) + 2:
        raise ValueError(
            f"{len(indices)} indices need {len(indices) - 2} thicknesses (of the layers between guide and exit), "
            f"not {len(thicknesses)}"
        )
    media = [clear(indices[0]), *(medium(index) for index in indices[1:])]
    arrays = [angles(angle), floats(wavelength), *media, *(floats(d) for d in thicknesses)]
    shape = np.broadcast_shapes(*(array.shape for array in arrays))
    # As many axes each, since s and p go on an axis in front.
    arrays = [array.reshape((1,) * (len(shape) - array.ndim) + array.shape) for array in arrays]
    return tuple(np.broadcast_to(part, shape) for part in in_chunks(finish, arrays))


def solve(
    angle: Floats, wavelength: Floats, media: Sequence[Array], thicknesses: Sequence[Floats]
) -> tuple[Floats, Complexes, Complexes, Load]:
    """Guide's admittances and the admittances' denominator y0 B + C and numerator y0 B - C, (2, ...), s first."""
    tangential = np.square(media[0] * np.sin(angle))
    guide = media[0] * np.cos(angle)
    squares = [np.square(index) for index in media[1:]]
    layers = [
        Layer(e, np.real(e) - tangential, (2 * np.pi) * d / wavelength)
        for e, d in zip(squares[:-1], thicknesses, strict=True)
    ]
    load = front_load(layers, squares[-1], np.real(squares[-1]) - tangential)
    front = guide / unit(np.square(media[0]))
    carried = front * load.B
    below = carried + load.C
    # A grazing ray (guide's admittance zero) turns back with reversed field, whatever lies there.
    above = carried - load.C
    grazing = below == 0
    if np.any(grazing):
        below, above = np.where(grazing, 1.0, below), np.where(grazing, -1.0, above)
    return front, below, above, load


def _powers(angle: Floats, wavelength: Floats, *rest: Array) -> tuple[Array, ...]:
    front, below, above, load = _solve_flat(angle, wavelength, rest)
    amplitude, T = _finished(front, below, above, load)
    R = np.square(amplitude.real) + np.square(amplitude.imag)
    return R[0], R[1], amplitude[0] * np.conj(amplitude[1]), T[0], T[1]


def _amplitudes(angle: Floats, wavelength: Floats, *rest: Array) -> tuple[Array, ...]:
    front, below, above, load = _solve_flat(angle, wavelength, rest)
    amplitude, T = _finished(front, below, above, load)
    R = np.square(amplitude.real) + np.square(amplitude.imag)
    return amplitude[0], amplitude[1], R[0], R[1], T[0], T[1]


def _finished(front: Floats, below: Complexes, above: Complexes, load: Load) -> tuple[Complexes, Floats]:
    """Amplitude reflectances and transmitted power, (2, ...)."""
    whole = 1 / (np.square(below.real) + np.square(below.imag))
    return above * np.conj(below) * whole, 4 * front * load.exit * load.passed * whole


def _solve_flat(angle: Floats, wavelength: Floats, rest: Sequence[Array]) -> tuple[Floats, Complexes, Complexes, Load]:
    count = (len(rest) + 2) // 2
    return solve(angle, wavelength, rest[:count], rest[count:])
