"""Films whose thickness varies over the face: intensities averaged over the thickness, right where fringes run fast.

Where the phase 4 pi w d / wavelength of a round trip varies little over the distribution, the layers are solved at
nodes of the thickness. Where it varies by more, or the film is thick, no affordable number of nodes follows the
fringes; there the round trips are summed in closed form, their phases averaged by the distribution's characteristic
function.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import cache

import numpy as np
from numpy.typing import ArrayLike

from outcouple.optics.arrays import Array, Complexes, Floats, angles, clear, floats, medium
from outcouple.optics.coherence import group_of
from outcouple.optics.quadrature import gauss_legendre
from outcouple.optics.stack import Powers, reflectance

__all__ = ["SPREADS", "thickness_average"]

TOGETHER = 16_000
"""Points times nodes that are solved in one go."""
MOST_TERMS = 60
"""Round trips summed one by one; beyond, what is left is taken at random phase."""


Rule = tuple[Floats, Floats]
"""Nodes and weights, sum 1, of the distribution's standard variable."""


@dataclass(frozen=True)
class Spread:
    """A distribution of thickness.

    place     (mean, deviation, standard variable) -> thickness
    fine      rule that follows phases up to ``slow`` and resolves short decays
    gentle    rule for phases (or decays) up to ``calm`` [rad]
    scale     (mean, deviation) -> the length whose phase decides
    harmonic  (mean, deviation, wave number per length) -> mean of exp(i wave number d)
    touching  (mean, deviation) -> share at thickness zero, where the distribution would reach below it
    """

    place: Callable[[Floats, Floats, Floats], Floats]
    fine: Callable[[], Rule]
    gentle: Callable[[], Rule]
    scale: Callable[[Floats, Floats], Floats]
    slow: float
    calm: float
    harmonic: Callable[[Floats, Floats, Floats], Complexes]
    touching: Callable[[Floats, Floats], Floats] = lambda mean, deviation: np.zeros_like(mean)


@cache
def _exponential_rule() -> Rule:
    """Panels that resolve a decay a thousand times shorter than the mean."""
    edges = np.array([0, 1e-3, 1e-2, 0.05, 0.15, 0.3, 0.6, 1, 1.5, 2.2, 3.2, 4.6, 6.5, 9, 13, 20])
    t, w = gauss_legendre(8)
    half = np.diff(edges)[:, None] / 2
    nodes = (edges[:-1, None] + half * (t + 1)).ravel()
    weights = (half * w).ravel() * np.exp(-nodes)
    return nodes, weights / weights.sum()


@cache
def _normal_rule() -> Rule:
    """Evenly spaced over six standard deviations either way: for a Gaussian that converges faster than any power."""
    nodes = np.linspace(-6, 6, 193)
    weights = np.exp(-np.square(nodes) / 2)
    return nodes, weights / weights.sum()


@cache
def _hermite_rule() -> Rule:
    nodes, weights = np.polynomial.hermite_e.hermegauss(8)
    return nodes, weights / weights.sum()


@cache
def _laguerre_rule() -> Rule:
    return np.polynomial.laguerre.laggauss(24)


def _uniform_rule(count: int) -> Rule:
    nodes, weights = gauss_legendre(count)
    return nodes, weights / 2


def _lognormal_place(mean: Floats, deviation: Floats, x: Floats) -> Floats:
    variance = np.log1p(np.square(deviation / np.maximum(mean, 1e-300)))
    return np.asarray(mean * np.exp(np.sqrt(variance) * x - variance / 2))


def _half_width(mean: Floats, deviation: Floats) -> Floats:
    return np.asarray(np.sqrt(3) * deviation)


_erfc = np.frompyfunc(math.erfc, 1, 1)


def _normal_touching(mean: Floats, deviation: Floats) -> Floats:
    return np.asarray(_erfc(mean / np.maximum(np.sqrt(2) * deviation, 1e-300)) / 2, dtype=float)


def _uniform_touching(mean: Floats, deviation: Floats) -> Floats:
    half = _half_width(mean, deviation)
    return np.asarray(np.maximum(half - mean, 0.0) / np.maximum(2 * half, 1e-300))


def _uniform_harmonic(mean: Floats, deviation: Floats, wave: Floats) -> Complexes:
    half = np.sqrt(3) * deviation * wave
    return np.asarray(np.exp(1j * wave * mean) * np.sinc(half / np.pi))


def _normal_harmonic(mean: Floats, deviation: Floats, wave: Floats) -> Complexes:
    return np.asarray(np.exp(1j * wave * mean - np.square(wave * deviation) / 2), dtype=complex)


SPREADS: dict[str, Spread] = {
    "exponential": Spread(
        place=lambda mean, deviation, x: mean * x,
        fine=_exponential_rule,
        gentle=_laguerre_rule,
        scale=lambda mean, deviation: mean,
        slow=4.0,
        calm=0.5,
        harmonic=lambda mean, deviation, wave: np.asarray(1 / (1 - 1j * wave * mean)),
    ),
    "normal": Spread(
        place=lambda mean, deviation, x: np.maximum(mean + deviation * x, 0.0),
        fine=_normal_rule,
        gentle=_hermite_rule,
        scale=lambda mean, deviation: deviation,
        slow=2.5,
        calm=0.5,
        harmonic=_normal_harmonic,
        touching=_normal_touching,
    ),
    # At phases the nodes do not follow, a lognormal's harmonics are gone whatever their shape.
    "lognormal": Spread(
        place=_lognormal_place,
        fine=_normal_rule,
        gentle=_hermite_rule,
        scale=lambda mean, deviation: deviation,
        slow=5.0,
        calm=0.3,
        harmonic=_normal_harmonic,
    ),
    "uniform": Spread(
        place=lambda mean, deviation, x: np.maximum(mean + np.sqrt(3) * deviation * x, 0.0),
        fine=lambda: _uniform_rule(48),
        gentle=lambda: _uniform_rule(12),
        scale=_half_width,
        slow=5.0,
        calm=1.0,
        harmonic=_uniform_harmonic,
        touching=_uniform_touching,
    ),
}
"""By the name in a design file. A normal or uniform spread that reaches below zero touches there."""

CLIPPED = 1e-8
"""Share of a spread below zero thickness from which the fine rule is taken: the gentle one does not see the edge."""


def thickness_average(
    indices: Sequence[ArrayLike],
    thicknesses: Sequence[ArrayLike],
    angle: ArrayLike,
    wavelength: ArrayLike,
    *,
    layer: int,
    spread: str,
    deviation: ArrayLike,
) -> Powers:
    """Rs, Rp, X, Ts, Tp averaged over the thickness of one layer, the others coherent.

    indices, thicknesses, angle, wavelength  as for :func:`outcouple.optics.stack_response`; the layer's thickness is
                                             its mean
    layer      index of the layer in ``thicknesses``
    spread     "normal", "exponential", "lognormal" or "uniform"
    deviation  standard deviation [m]; an exponential spread needs none
    Against brute force for means from 0.1 to 100 um, also near critical angles: within 2e-4 (exponential), 1e-3
    (others, up to a deviation of 30 % of the mean), 3e-2 in X beyond (tests). Absorption over many fringes counts at
    the mean thickness. KeyError for an unknown spread.
    """
    points = _Points(
        media=[clear(indices[0]), *(medium(index) for index in indices[1:])],
        depths=[floats(depth) for depth in thicknesses],
        theta=angles(angle),
        wavelength=floats(wavelength),
        deviation=floats(deviation),
        layer=layer,
        spread=SPREADS[spread],
    )
    shape, ways = points.shape, points.ways()
    whole = tuple(np.empty(shape, dtype=kind) for kind in (float, float, complex, float, float))
    for way, here in ways.items():
        share = np.mean(np.broadcast_to(here, shape))
        if share == 0:
            continue
        # The way of most points is gone by all, which keeps what does not vary short; the rest is overwritten.
        chosen = points if share > 0.5 and way == "gentle" else points.at(here)
        target_here = ... if chosen is points else np.broadcast_to(here, shape)
        for target, values in zip(whole, chosen.average(way), strict=True):
            target[target_here] = values
    Rs, Rp, X, Ts, Tp = whole
    return Rs, Rp, X, Ts, Tp


@dataclass(frozen=True)
class _Points:
    """Arguments of :func:`thickness_average` as arrays that broadcast."""

    media: Sequence[Array]
    depths: Sequence[Floats]
    theta: Floats
    wavelength: Floats
    deviation: Floats
    layer: int
    spread: Spread

    @property
    def shape(self) -> tuple[int, ...]:
        """Of all arguments together."""
        arrays = (*self.media, *self.depths, self.theta, self.wavelength, self.deviation)
        return np.broadcast_shapes(*(array.shape for array in arrays))

    @property
    def mean(self) -> Floats:
        """Of the layer's thickness."""
        return self.depths[self.layer]

    @property
    def touching(self) -> Floats:
        """Share of the layer's area without thickness."""
        return self.spread.touching(self.mean, self.deviation)

    @property
    def tangential(self) -> Floats:
        """Square of the tangential index."""
        return np.asarray(np.square(self.media[0] * np.sin(self.theta)))

    def at(self, here: Array) -> _Points:
        """The points where ``here`` is true, on one axis."""
        shape = self.shape
        mask = np.broadcast_to(here, shape)

        def pick(array: Array) -> Array:
            return np.asarray(np.broadcast_to(array, shape)[mask])

        return replace(
            self,
            media=[pick(index) for index in self.media],
            depths=[pick(depth) for depth in self.depths],
            theta=pick(self.theta),
            wavelength=pick(self.wavelength),
            deviation=pick(self.deviation),
        )

    def ways(self) -> dict[str, Array]:
        """Where to take which way; "gentle" first."""
        square = np.square(np.real(self.media[self.layer + 1])) - self.tangential
        scale = self.spread.scale(self.mean, self.deviation)
        phase = 4 * np.pi * np.sqrt(np.abs(square)) / self.wavelength * scale
        trips = (phase > self.spread.slow) & (square > 0)
        gentle = (phase <= self.spread.calm) & (self.touching < CLIPPED)
        return {"gentle": gentle, "fine": ~(gentle | trips), "trips": trips}

    def average(self, way: str) -> Powers:
        """All points by one way."""
        if way == "trips":
            return self._touched(self._by_round_trips())
        return self._by_nodes(self.spread.gentle() if way == "gentle" else self.spread.fine())

    def _by_nodes(self, rule: Rule) -> Powers:
        """Several nodes at a time on an axis of their own, as many as keep the arrays short."""
        total: list[Array] = [np.zeros(self.shape, dtype=kind) for kind in (float, float, complex, float, float)]
        every = list(self.depths)
        nodes, weights = rule
        size = max(1, TOGETHER // max(1, math.prod(self.shape)))
        for start in range(0, len(nodes), size):
            x, weight = (array[start : start + size].reshape(-1, *(1,) * len(self.shape)) for array in (nodes, weights))
            every[self.layer] = self.spread.place(self.mean, self.deviation, x)
            for sum_, part in zip(total, reflectance(self.media, every, self.theta, self.wavelength), strict=True):
                sum_ += np.sum(weight * part, axis=0)
        return total[0], total[1], total[2], total[3], total[4]

    def _by_round_trips(self) -> Powers:
        cut = self.layer + 1
        before = group_of(self.tangential, self.wavelength, self.media[: cut + 1], self.depths[: self.layer])
        behind = group_of(self.tangential, self.wavelength, self.media[cut:], self.depths[cut:])
        normal = np.sqrt(np.square(self.media[cut]) + 0j - self.tangential)
        fade = np.exp(-4 * np.pi * normal.imag * self.mean / self.wavelength)
        trip, gain = before.back * behind.front, before.across * behind.front
        wave = 4 * np.pi * normal.real / self.wavelength
        first, further = _phase_sums(trip, wave, self.mean, self.deviation, self.spread)

        def both(a: int, b: int) -> Complexes:
            """<r_a conj r_b> for polarisations a and b."""
            direct = before.front[a] * np.conj(before.front[b])
            mixed = before.front[a] * np.conj(gain[b] * first[b]) + gain[a] * first[a] * np.conj(before.front[b])
            around = (1 + further[a] + np.conj(further[b])) / (1 - trip[a] * np.conj(trip[b]) * np.square(fade))
            return np.asarray(direct + mixed * fade + gain[a] * np.conj(gain[b]) * np.square(fade) * around)

        inside = 1 - np.square(np.abs(trip)) * np.square(fade)
        T = before.T * behind.T * fade * (1 + 2 * further.real) / inside
        return both(0, 0).real, both(1, 1).real, both(0, 1), T[0], T[1]

    def _touched(self, part: Powers) -> Powers:
        """``part`` where the layer is open, and the layers without it on the share that touches."""
        share = self.touching
        if not np.any(share > CLIPPED):
            return part
        closed = list(self.depths)
        closed[self.layer] = np.zeros_like(self.mean)
        contact = reflectance(self.media, closed, self.theta, self.wavelength)
        Rs, Rp, X, Ts, Tp = ((1 - share) * a + share * b for a, b in zip(part, contact, strict=True))
        return Rs, Rp, X, Ts, Tp


def _phase_sums(
    trip: Complexes, wave: Floats, mean: Floats, deviation: Floats, rule: Spread
) -> tuple[Complexes, Complexes]:
    """Sums over m of trip^m <z^(m+1)> from m = 0, and of trip^m <z^m> from m = 1, z = exp(i wave d); (2, ...)."""
    first = np.zeros_like(trip)
    further = np.zeros_like(trip)
    power = np.ones_like(trip)
    for m in range(1, MOST_TERMS + 1):
        mean_phase = rule.harmonic(mean, deviation, m * wave)
        first = first + power * mean_phase
        power = power * trip
        further = further + power * mean_phase
        if np.max(np.abs(power), initial=0.0) < 1e-7:
            break
    return first, further
