"""Layers thicker than the light is coherent: intensities add instead of fields."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from outcouple.optics.arrays import Array, Complexes, Floats, angles, clear, floats, medium
from outcouple.optics.stack import Powers, reflectance, solve

__all__ = ["Group", "coherence_length", "group_of", "incoherent_layers", "mixed_response"]


def coherence_length(wavelength: ArrayLike, linewidth: ArrayLike) -> Floats:
    """Optical path over which light interferes with itself, wavelength^2 / linewidth [m]; infinite for no width.

    Fringes of a Gaussian line (full width at half maximum ``linewidth``) have a contrast of exp(-3.56 x^2) at x times
    this path: 0.028 at x = 1.

    >>> round(float(coherence_length(850e-9, 40e-9)) * 1e6, 1)
    18.1
    """
    with np.errstate(divide="ignore"):
        return np.asarray(np.square(floats(wavelength)) / floats(linewidth))


def incoherent_layers(
    indices: Sequence[ArrayLike],
    thicknesses: Sequence[ArrayLike],
    angle: ArrayLike,
    wavelength: ArrayLike,
    *,
    linewidth: ArrayLike,
) -> tuple[np.ndarray[tuple[int, ...], np.dtype[np.bool_]], ...]:
    """Per layer, where its round trip 2 n d cos exceeds the coherence length; never where the wave in it decays."""
    tangential = np.square(clear(indices[0]) * np.sin(angles(angle)))
    reach = coherence_length(wavelength, linewidth)
    found = []
    for index, thickness in zip(indices[1:-1], thicknesses, strict=True):
        square = np.square(np.real(medium(index))) - tangential
        found.append(np.asarray(2 * floats(thickness) * np.sqrt(np.maximum(square, 0.0)) > reach))
    return tuple(found)


@dataclass(frozen=True)
class Group:
    """Coherent layers between two media, at a given tangential index; s and p on the first axis, (2, ...).

    front, back  amplitude reflectances from either side
    across       product of the amplitude transmittances there and back, up to a phase that s and p share
    T            transmitted share of power, the same both ways
    """

    front: Complexes
    back: Complexes
    across: Complexes
    T: Floats


def group_of(tangential: Floats, wavelength: Floats, media: Sequence[Array], thicknesses: Sequence[Floats]) -> Group:
    """The group of coherent layers between the first and the last of ``media``; both count as clear."""
    n_first, n_last = np.real(media[0]), np.real(media[-1])
    y0, below, above, load = solve(_angle(tangential, n_first), wavelength, [n_first, *media[1:]], thicknesses)
    _, below_back, above_back, _ = solve(
        _angle(tangential, n_last), wavelength, [n_last, *media[-2::-1]], thicknesses[::-1]
    )
    across = np.asarray(4 * y0 * load.exit / np.square(below) * load.passed, dtype=complex)
    return Group(above / below, above_back / below_back, across, np.abs(across))


def _angle(tangential: Floats, index: Floats) -> Floats:
    return np.asarray(np.arcsin(np.minimum(np.sqrt(tangential) / index, 1.0)))


def mixed_response(
    indices: Sequence[ArrayLike],
    thicknesses: Sequence[ArrayLike],
    angle: ArrayLike,
    wavelength: ArrayLike,
    *,
    linewidth: ArrayLike,
) -> Powers:
    """Rs, Rp, X, Ts, Tp of layers that are coherent or not, each by :func:`incoherent_layers`, point by point.

    Arguments as for :func:`outcouple.optics.stack_response`; ``linewidth`` is the full width at half maximum [m] of the
    line that ``wavelength`` is a node of. Thin layers show fringes that the nodes of the line average; thick ones add
    the intensities of all round trips, their absorption included. An absorbing incoherent layer counts as clear at its
    faces (k much less than n).
    """
    masks = incoherent_layers(indices, thicknesses, angle, wavelength, linewidth=linewidth)
    if not any(np.any(mask) for mask in masks):
        return reflectance(indices, thicknesses, angle, wavelength)
    arrays = [angles(angle), floats(wavelength), clear(indices[0]), *(medium(n) for n in indices[1:])]
    arrays += [floats(d) for d in thicknesses]
    shape = np.broadcast_shapes(*(a.shape for a in arrays), *(m.shape for m in masks))
    flat = [np.broadcast_to(a, shape).reshape(-1) for a in arrays]
    code = sum((np.broadcast_to(mask, shape).reshape(-1) << at for at, mask in enumerate(masks)), np.zeros(1, int))
    whole = tuple(np.empty(flat[0].shape, dtype=kind) for kind in (float, float, complex, float, float))
    for one in np.unique(code):
        here = np.broadcast_to(code, flat[0].shape) == one
        part = _cut([a[here] for a in flat], len(thicknesses), int(one))
        for target, values in zip(whole, part, strict=True):
            target[here] = values
    Rs, Rp, X, Ts, Tp = (part.reshape(shape) for part in whole)
    return Rs, Rp, X, Ts, Tp


def _cut(flat: Sequence[Array], layers: int, code: int) -> tuple[Array, ...]:
    """Points whose incoherent layers are the set bits of ``code``: groups between them, folded from the back."""
    angle, wavelength = flat[0], flat[1]
    media, depths = list(flat[2 : layers + 4]), list(flat[layers + 4 :])
    if not code:
        return reflectance(media, depths, angle, wavelength)
    tangential = np.square(media[0] * np.sin(angle))
    cuts = [0, *(at + 1 for at in range(layers) if code >> at & 1), layers + 1]
    back: tuple[Floats, Complexes, Floats] | None = None
    for first, last in zip(cuts[-2::-1], cuts[:0:-1], strict=True):
        group = group_of(tangential, wavelength, media[first : last + 1], depths[first : last - 1])
        if back is None:
            back = np.square(np.abs(group.front)), group.front[0] * np.conj(group.front[1]), group.T
        else:
            back = _behind(group, back, _fade(media[last], depths[last - 1], tangential, wavelength))
    assert back is not None
    R, X, T = back
    return R[0], R[1], X, T[0], T[1]


def _fade(index: Array, depth: Floats, tangential: Floats, wavelength: Floats) -> Floats:
    """Share of the power left after one crossing of a layer."""
    if not np.iscomplexobj(index):
        return np.ones_like(depth)
    normal = np.sqrt(np.square(index) - tangential)
    return np.asarray(np.exp(-4 * np.pi * np.abs(normal.imag) * depth / wavelength))


def _behind(group: Group, back: tuple[Floats, Complexes, Floats], fade: Floats) -> tuple[Floats, Complexes, Floats]:
    """R, X, T of a group with an incoherent layer and what is already folded behind it."""
    R, X, T = back
    twice = np.square(fade)
    inside = 1 - np.square(np.abs(group.back)) * R * twice
    front = np.square(np.abs(group.front))
    gained = np.square(group.T) * R * twice / inside
    cross = group.across[0] * np.conj(group.across[1]) * X * twice
    cross = cross / (1 - group.back[0] * np.conj(group.back[1]) * X * twice)
    return front + gained, group.front[0] * np.conj(group.front[1]) + cross, group.T * fade * T / inside
