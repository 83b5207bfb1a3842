"""A camera's reading of one state: electrons per channel by the linear model of EMVA Standard 1288."""

from __future__ import annotations

from functools import cache
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from outcouple.notes import Note
from outcouple.readout.ambient import band_centres
from outcouple.readout.camera import Camera
from outcouple.readout.constants import LIGHT_SPEED, PLANCK
from outcouple.readout.emitted import electronics_notes, electronics_temperature, emitted_power, passed, peak
from outcouple.readout.outside import outside_light, outside_notes
from outcouple.readout.photodiode import quantum_ceiling, responsivity
from outcouple.readout.reading import Lit, Reading

__all__ = ["read_camera"]

Floats = NDArray[np.float64]

SHAPE: Final = "silicon visible"
"""Detector whose quantum efficiency over wavelength a camera's is shaped like; its size is the design's."""


def read_camera(lit: Lit, share: Floats) -> Reading:
    """Electrons of every channel.

    share  optical share of the emitter's power per wavelength node, (S, L, C)
    """
    p = lit.p
    readout, camera = p.readout, camera_of(p)
    lit_time = readout.exposure if readout.strobe is None else np.minimum(readout.strobe, readout.exposure)
    per_watt = lit_time[:, None] * _electrons_per_joule(p, lit.wavelengths)
    power = (emitted_power(p) * passed(p))[:, None]
    signal = power * np.sum((lit.weights * per_watt)[:, :, None] * share, axis=1)
    ambient = _ambient(lit, signal)
    dark = camera.dark_electrons(exposure=readout.exposure[:, None], temperature=electronics_temperature(p)[:, None])
    difference = readout.modulation == "difference"
    load = signal + ambient + dark
    capacity = camera.capacity()
    efficiency = np.asarray(camera.quantum_efficiency)
    mean = _read(load, np.asarray(ambient + dark), capacity, difference=difference)
    unlit = _read(0 * signal + ambient + dark, np.asarray(ambient + dark), capacity, difference=difference)
    budget = camera.budget(
        signal=np.minimum(signal, capacity) / efficiency,
        ambient=np.minimum(ambient, capacity) / efficiency,
        dark_electrons=dark,
        difference=difference,
        pixels=float(readout.pixels),
    )
    budget = budget.plus("emitter intensity", (np.minimum(signal, capacity) * readout.intensity_noise[:, None]) ** 2)
    return Reading(
        mean=mean,
        unlit=unlit,
        budget=budget,
        ambient=ambient,
        load=load,
        full_scale=capacity[:, 0],
        per_watt=np.sum(lit.weights * per_watt, axis=1),
        bandwidth=1 / (2 * readout.exposure),
        settling=readout.exposure * (2.0 if difference else 1.0),
        unit="e-",
        notes=(*electronics_notes(p), *outside_notes(lit), *_notes(p)),
        stage={"bits_used": np.log2(np.maximum(np.max(camera.gain * np.minimum(load, capacity), axis=1), 1))},
    )


def camera_of(p: Any) -> Camera:
    """The design's camera; numbers (S, 1), ready for channels."""
    readout = p.readout
    return Camera(
        quantum_efficiency=readout.quantum_efficiency[:, None],
        gain=readout.gain[:, None],
        dark_noise=readout.dark_noise[:, None],
        full_well=readout.full_well[:, None],
        dark_current=readout.dark_current[:, None],
        dark_nonuniformity=readout.dark_nonuniformity[:, None],
        nonuniformity=readout.nonuniformity[:, None],
        doubling=readout.dark_doubling[:, None],
        bits=readout.bits,
    )


def _read(load: Floats, beside: Floats, capacity: Floats, *, difference: bool) -> Floats:
    """The pixel's electrons, none beyond its capacity; of a difference, less what the frame without emitter holds."""
    full = np.minimum(load, capacity)
    return np.asarray(full - np.minimum(beside, capacity) if difference else full)


@cache
def _shape() -> Floats:
    """Quantum efficiency of `SHAPE` at the bands' middles."""
    return np.asarray(responsivity(band_centres(), SHAPE) / quantum_ceiling(band_centres()))


def _relative(wavelength: Floats, top: Floats) -> Floats:
    """Quantum efficiency at a wavelength over that at the emitter's peak."""
    here, most = (responsivity(one, SHAPE) / quantum_ceiling(one) for one in (wavelength, top))
    return np.asarray(here / np.maximum(most, 1e-12))


def _electrons_per_joule(p: Any, wavelengths: Floats) -> Floats:
    """Photoelectrons per joule at the pixel, (S, L)."""
    photons = wavelengths / (PLANCK * LIGHT_SPEED)
    efficiency = p.readout.quantum_efficiency[:, None] * _relative(wavelengths, peak(p)[:, None])
    return np.asarray(photons * np.minimum(efficiency, 1.0))


def _ambient(lit: Lit, signal: Floats) -> Floats:
    """Electrons of outside light in one exposure, (S, C)."""
    p = lit.p
    at = peak(p)
    top = responsivity(at, SHAPE) / quantum_ceiling(at)
    scale = p.readout.quantum_efficiency / np.maximum(top, 1e-12)
    # per watt of outside light: photons times the shape; the size of the efficiency is put on afterwards
    shape = _shape() * band_centres() / (PLANCK * LIGHT_SPEED)
    rate = outside_light(lit, shape, at * top / (PLANCK * LIGHT_SPEED))
    return np.asarray(signal * 0 + rate * (scale * p.readout.exposure)[:, None])


def _notes(p: Any) -> tuple[Note, ...]:
    readout = p.readout
    if readout.strobe is None:
        return ()
    long = np.atleast_1d(readout.strobe > readout.exposure)
    note = Note(
        "strobe-beyond-exposure",
        "The strobe is longer than the exposure: what falls outside is lost.",
        where=long,
    )
    return (note,) if note.holds() else ()
