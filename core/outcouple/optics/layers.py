"""Surface admittances of layered media: the recursion behind every plane-wave function.

With tangential index q, a medium of permittivity e = n^2 has the normal index w = sqrt(e - q^2), Im w >= 0, and the
admittance y = w for s, w / e for p. Behind each interface the pair (B, C) of tangential fields is carried; C / B is the
admittance seen from the front. A layer of phase d = 2 pi w thickness / wavelength takes it to

    B' = B cos d - i C (sin d) / y,     C' = C cos d - i B y sin d

(characteristic matrices, F. Abeles, Ann. Phys. (Paris) 12, 596, 1950; reference from memory). In decaying layers both
lines carry the factor exp(i d), so nothing grows with thickness, and (sin d) / w is formed as one function that stays
finite at w = 0.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from outcouple.optics.arrays import Array, Complexes, Floats

__all__ = ["Layer", "Load", "front_load", "unit"]

SMALL = 1e-300
"""Added to |w^2|, so that (sin d) / w at w = 0 comes out as its limit, d / w."""


@dataclass(frozen=True)
class Layer:
    """One layer: permittivity, Re w^2, and 2 pi thickness / wavelength."""

    permittivity: Array
    square: Floats
    path: Floats


@dataclass(frozen=True)
class Load:
    """Tangential fields at the front of layers, (2, ...) with s and p on the first axis.

    exit    real part of the exit medium's admittance: what carries power away
    passed  |exp(i d)|^2 over all layers: what both fields were scaled by
    """

    B: Complexes
    C: Complexes
    exit: Floats
    passed: Floats | float = 1.0


def front_load(layers: Sequence[Layer], permittivity: Array, square: Floats) -> Load:
    """Fields at the front of ``layers`` (from the guide outwards) over the exit medium, and the exit's admittance."""
    admittance = exit_admittance(permittivity, square)
    if not layers:
        return Load(np.ones_like(admittance), admittance, admittance.real)
    if any(np.iscomplexobj(layer.permittivity) for layer in layers):
        return _absorbing_front(layers, admittance)
    return _clear_front(layers, admittance)


def exit_admittance(permittivity: Array, square: Floats) -> Complexes:
    """Admittances (s, p) of the exit medium, (2, ...)."""
    if np.iscomplexobj(permittivity):
        w = _complex(*_root(square, permittivity.imag))
    else:
        w = _complex(np.sqrt(np.maximum(square, 0.0)), np.sqrt(np.maximum(-square, 0.0)))
    return w / unit(permittivity)


def _clear_front(layers: Sequence[Layer], admittance: Complexes) -> Load:
    """Layers without absorption: the matrices of (B, i C) are real, so the parts of the fields go separately."""
    shape = np.broadcast_shapes(
        admittance.shape[1:], *(np.broadcast_shapes(x.square.shape, x.path.shape) for x in layers)
    )
    B = np.zeros((2, 2, *shape))
    B[0] = 1.0
    iC = np.empty_like(B)
    iC[0], iC[1] = -admittance.imag, admittance.real
    passed: Floats | float = 1.0
    for layer in reversed(layers):
        cosine, sine, decay = _clear_layer(layer)
        step = unit(layer.permittivity)
        along, back = sine * step, sine * layer.square / step
        along, back = along * iC, back * B
        B *= cosine
        B -= along
        iC *= cosine
        iC += back
        passed = passed * decay
    return Load(_complex(B[0], B[1]), _complex(iC[1], -iC[0]), admittance.real, passed)


def _clear_layer(layer: Layer) -> tuple[Floats, Floats, Floats | float]:
    """cos d, (sin d) / w and |exp(i d)|^2 of a clear layer; where it decays, the first two times exp(i d)."""
    w = np.sqrt(np.abs(layer.square) + SMALL)
    phase = layer.path * w
    lowest, highest = layer.square.min(initial=np.inf), layer.square.max(initial=-np.inf)
    if lowest > 0:
        cosine, sine = _swing(phase)
        return cosine, sine / w, 1.0
    cosine, sine, decay = _decay(phase)
    if highest > 0:
        forward = layer.square > 0
        cosine_f, sine_f = _swing(phase)
        cosine, sine = np.where(forward, cosine_f, cosine), np.where(forward, sine_f, sine)
        decay = np.where(forward, 1.0, decay)
    return cosine, sine / w, decay


def _swing(phase: Floats) -> tuple[Floats, Floats]:
    """cos and sin up to a common sign, from the tangent, which numpy has vectorised."""
    tangent = np.tan(phase)
    cosine = 1.0 / np.sqrt(1.0 + tangent * tangent)
    return cosine, tangent * cosine


def _decay(phase: Floats) -> tuple[Floats, Floats, Floats]:
    """exp(-x) cosh x, exp(-x) sinh x and exp(-2 x)."""
    half = -0.5 * np.expm1(-2.0 * phase)
    return 1.0 - half, half, 1.0 - 2.0 * half


def _absorbing_front(layers: Sequence[Layer], admittance: Complexes) -> Load:
    B, C, exit = np.ones_like(admittance), admittance, admittance.real
    passed: Floats | float = 1.0
    for layer in reversed(layers):
        cosine, sine, back, decay = _absorbing_layer(layer)
        step = unit(layer.permittivity)
        B, C = cosine * B + sine * step * C, cosine * C + back / step * B
        passed = passed * decay
    return Load(B, C, exit, passed)


def _absorbing_layer(layer: Layer) -> tuple[Complexes, Complexes, Complexes, Floats]:
    """cos d, -i (sin d) / w and -i w sin d, each times exp(i d), and |exp(i d)|^2; no cancellation at small d."""
    real, imag = _root(layer.square, np.imag(layer.permittivity))
    change = np.expm1(-2.0 * layer.path * imag)
    decay = 1.0 + change
    tangent = np.tan(layer.path * real)
    swing = 2.0 * decay / (1.0 + tangent * tangent) * tangent
    half = _complex(0.5 * (swing * tangent - change), -0.5 * swing)
    w = _complex(real, imag)
    return 1.0 - half, half / w, half * w, decay


def _root(square_real: Floats, square_imag: Floats) -> tuple[Floats, Floats]:
    """Parts of w, both >= 0, from the parts of w^2 (imaginary part >= 0), each to rounding."""
    size = np.sqrt(square_real * square_real + square_imag * square_imag)
    larger = np.sqrt(0.5 * (size + np.abs(square_real)) + SMALL)
    smaller = 0.5 * square_imag / larger
    forward = square_real > 0
    return np.where(forward, larger, smaller), np.where(forward, smaller, larger)


def _complex(real: Floats, imag: Floats) -> Complexes:
    result = np.empty(np.broadcast_shapes(real.shape, imag.shape), dtype=complex)
    result.real, result.imag = real, imag
    return result


def unit(permittivity: Array) -> Array:
    """What s and p divide a normal index by to get the admittance, on a new first axis: 1 and the permittivity."""
    return np.stack([np.ones_like(permittivity), permittivity])
