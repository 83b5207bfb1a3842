"""Shapes, checks and chunks shared by the plane-wave functions."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

__all__ = ["CHUNK", "Array", "Complexes", "Floats", "angles", "clear", "floats", "in_chunks", "medium"]

Floats = NDArray[np.float64]
Complexes = NDArray[np.complex128]
Array = NDArray[Any]

CHUNK = 8192
"""Points worked on at a time: their temporaries stay in the second-level cache."""

_HEAP_PRIMER = 1 << 21


def floats(values: ArrayLike) -> Floats:
    """Real numbers as an array."""
    return np.asarray(values, dtype=float)


def medium(index: ArrayLike) -> Array:
    """An absolute index as an array, real where nothing absorbs.

    Raises ValueError for a gain medium (negative imaginary part): exp(-i omega t) is used throughout.
    """
    array = np.asarray(index)
    if not np.iscomplexobj(array):
        return floats(array)
    if np.any(array.imag < 0):
        raise ValueError("an index is n + i k with k >= 0 (fields go as exp(-i omega t)); a negative k was given")
    return array.astype(complex, copy=False) if np.any(array.imag) else floats(array.real)


def clear(index: ArrayLike) -> Floats:
    """Real part of an index: what a guide counts with, its absorption belonging to the way and not to the face."""
    return floats(np.real(np.asarray(index)))


def angles(angle: ArrayLike) -> Floats:
    """Angles of incidence [rad]; ValueError beyond 90 degrees from the normal."""
    array = floats(angle)
    if array.size and max(array.max(), -array.min()) > math.pi / 2 + 1e-9:
        raise ValueError("an angle of incidence lies within 90 degrees (pi/2 rad) of the normal; give radians")
    return array


def in_chunks(
    function: Callable[..., tuple[Array, ...]], arrays: Sequence[Array], *, points: int = CHUNK
) -> tuple[Array, ...]:
    """``function`` of broadcastable arrays, evaluated at most ``points`` at a time.

    Every result has the broadcast shape of all arguments. An argument of length 1 along the axis that is cut stays
    short, so what does not depend on that axis is computed once per chunk.
    """
    if math.prod(np.broadcast_shapes(*(a.shape for a in arrays))) > points:
        # Freeing one large block makes the C library keep the chunks' temporaries instead of returning their pages.
        np.empty(_HEAP_PRIMER)
    return _in_chunks(function, arrays, points)


def _in_chunks(function: Callable[..., tuple[Array, ...]], arrays: Sequence[Array], points: int) -> tuple[Array, ...]:
    shape = np.broadcast_shapes(*(a.shape for a in arrays))
    size = math.prod(shape)
    if size <= points:
        return tuple(_filled(result, shape) for result in function(*arrays))
    axis = next(at for at, length in enumerate(shape) if length > 1)
    step = max(1, points * shape[axis] // size)
    whole: tuple[Array, ...] = ()
    for low in range(0, shape[axis], step):
        part = _in_chunks(function, [_cut(a, axis - len(shape), low, low + step) for a in arrays], points)
        if not whole:
            whole = tuple(np.empty(shape, dtype=piece.dtype) for piece in part)
        for target, piece in zip(whole, part, strict=True):
            target[(slice(None),) * axis + (slice(low, low + step),)] = piece
    return whole


def _filled(result: Array, shape: tuple[int, ...]) -> Array:
    return result if result.shape == shape else np.array(np.broadcast_to(result, shape))


def _cut(array: Array, axis: int, low: int, high: int) -> Array:
    if array.ndim < -axis or array.shape[axis] == 1:
        return array
    return array[(..., slice(low, high)) + (slice(None),) * (-axis - 1)]
