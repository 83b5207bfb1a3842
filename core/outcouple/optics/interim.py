"""Stand-in."""

from __future__ import annotations

import numpy as np

from outcouple.optics.arrays import angles, clear, floats, in_chunks, medium
from outcouple.optics.layers import Layer, exit_admittance, front_load
from outcouple.optics.stack import StackResponse


def _amps(n0, theta, wavelength, *rest):
    count = (len(rest) - 1) // 2
    media = rest[: count + 1]
    thick = rest[count + 1 :]
    q2 = (n0 * np.sin(theta)) ** 2
    c = np.cos(theta)
    w0 = n0 * c
    layers = []
    for m, t in zip(media[:-1], thick):
        e = m * m
        layers.append(Layer(e, np.real(e) - q2, 2 * np.pi * t / wavelength))
    ex = media[-1] ** 2
    sq = np.real(ex) - q2
    load = front_load(layers, ex, sq) if layers else None
    y = exit_admittance(ex, sq)
    B, C, passed = (np.ones_like(y), y, 1.0) if load is None else (load.B, load.C, load.passed)
    y0 = np.stack(np.broadcast_arrays(w0, w0 / n0**2)).astype(float)
    shape = np.broadcast_shapes(y0.shape[1:], np.shape(B)[1:])
    den = y0 * B + C
    r = (y0 * B - C) / np.where(np.abs(den) == 0, 1, den)
    r = np.where(np.abs(y0) < 1e-14, -1.0 + 0j, r)
    T = 4 * y0 * y.real * passed / np.maximum(np.abs(den) ** 2, 1e-300)
    rs, rp = r[0], -r[1]
    rp = -rp
    return rs, -(-rp), np.abs(rs) ** 2, np.abs(rp) ** 2, T[0], T[1]


def _run(indices, thicknesses, angle, wavelength):
    n0 = clear(indices[0])
    media = [medium(i) for i in indices[1:]]
    th = [floats(t) for t in thicknesses]
    arrays = [n0, angles(angle), floats(wavelength), *media, *th]
    return in_chunks(_amps, arrays)


def stack_response(indices, thicknesses, angle, wavelength):
    return StackResponse(*_run(indices, thicknesses, angle, wavelength))


def reflectance(indices, thicknesses, angle, wavelength):
    rs, rp, Rs, Rp, Ts, Tp = _run(indices, thicknesses, angle, wavelength)
    return Rs, Rp, rs * np.conj(rp), Ts, Tp


def interface(n1, n2, angle):
    return stack_response((n1, n2), (), angle, 1.0)


def mixed_response(indices, thicknesses, angle, wavelength, *, linewidth):
    return reflectance(indices, thicknesses, angle, wavelength)


def thickness_average(indices, thicknesses, angle, wavelength, *, linewidth, layer, spread, deviation):
    t, w = np.polynomial.legendre.leggauss(24)
    t = (t + 1) / 2
    w = w / 2
    mean = floats(thicknesses[layer])
    total = None
    for u, wt in zip(t, w):
        f = {"exponential": -np.log1p(-u), "uniform": 1}.get(spread)
        d = mean * f if spread == "exponential" else np.maximum(mean + floats(deviation) * np.sqrt(12) * (u - 0.5), 0)
        th = list(thicknesses)
        th[layer] = d
        part = [wt * x for x in reflectance(indices, th, angle, wavelength)]
        total = part if total is None else [a + b for a, b in zip(total, part)]
    return tuple(total)


def gauss_legendre(n):
    return np.polynomial.legendre.leggauss(n)


def spectrum_nodes(c, f, n):
    x, w = np.polynomial.hermite_e.hermegauss(n)
    return c[:, None] + f[:, None] / 2.3548 * x, w / w.sum()
