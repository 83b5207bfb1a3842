"""A photodiode's or phototransistor's reading of one state: photocurrent and its noise by cause."""

from __future__ import annotations

from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from outcouple.notes import Note
from outcouple.readout.ambient import band_centres
from outcouple.readout.converter import Converter
from outcouple.readout.emitted import (
    common_factor,
    electronics_notes,
    electronics_temperature,
    emitted_power,
    passed,
    peak,
)
from outcouple.readout.modulation import RIPPLE_DEPTH, Modulation
from outcouple.readout.noise import NoiseBudget
from outcouple.readout.outside import outside_light, outside_notes
from outcouple.readout.photodiode import (
    PHOTOTRANSISTOR,
    REFERENCE_TEMPERATURE,
    dark_current,
    responsivity,
    responsivity_notes,
)
from outcouple.readout.reading import Lit, Reading
from outcouple.readout.receiver import receiver_budget, signal_gain
from outcouple.readout.reference_channel import against_reference
from outcouple.readout.stage import stage_figures, stage_notes, stage_of
from outcouple.readout.timing import modulation_of, timing_notes
from outcouple.readout.transimpedance import Transimpedance

__all__ = ["read_photodiode"]

Floats = NDArray[np.float64]

SHOT: Final = ("signal shot", "ambient shot", "dark shot")


def read_photodiode(lit: Lit, share: Floats) -> Reading:
    """Photocurrent of every channel.

    share  optical share of the emitter's power per wavelength node, (S, L, C)
    """
    p = lit.p
    readout = p.readout
    stage = stage_of(p)
    modulation = modulation_of(lit, stage)
    curve = _sensitivity(lit)
    power = (emitted_power(p) * passed(p))[:, None]
    signal = power * np.sum((lit.weights * curve)[:, :, None] * share, axis=1)
    ambient = _ambient(lit, signal)
    dark = _gain(p) * dark_current(readout.dark_current, temperature=electronics_temperature(p))[:, None]
    full_scale = stage.full_scale()
    reading = Reading(
        mean=_read(signal, np.asarray(ambient + dark), full_scale, modulation),
        unlit=_read(0 * signal, np.asarray(ambient + dark), full_scale, modulation),
        budget=_budget(p, stage, modulation, signal=signal, ambient=ambient, dark=dark),
        ambient=ambient,
        load=signal + ambient + dark,
        full_scale=full_scale[:, 0],
        per_watt=np.sum(lit.weights * curve, axis=1),
        bandwidth=np.atleast_2d(modulation.noise_bandwidth())[:, 0],
        settling=(np.atleast_2d(modulation.time) + stage.settling_time(1e-3))[:, 0],
        unit="A",
        notes=_notes(lit, stage, modulation),
        stage=stage_figures(p, stage, signal + ambient + dark),
    )
    return against_reference(p, reading, common_factor(p)) if readout.reference_channel == "yes" else reading


def _curve(p: Any) -> str:
    return "silicon infrared" if p.readout.detector == "phototransistor" else str(p.readout.detector)


def _gain(p: Any) -> Floats:
    """Current gain behind the junction, (S, 1)."""
    if p.readout.detector == "phototransistor":
        return np.asarray(p.readout.transistor_gain[:, None])
    return np.ones((1, 1))


def _sensitivity(lit: Lit) -> Floats:
    """Photocurrent per watt at every wavelength node, (S, L), gain of a phototransistor in it."""
    readout, temperature = lit.p.readout, electronics_temperature(lit.p)
    curve = responsivity(lit.wavelengths, _curve(lit.p), temperature=temperature[:, None])
    if readout.responsivity is not None:
        middle = lit.wavelengths.shape[1] // 2
        warm = 1 + readout.responsivity_drift * (temperature - REFERENCE_TEMPERATURE)
        curve = curve / curve[:, middle : middle + 1] * np.maximum(readout.responsivity * warm, 0.0)[:, None]
    return np.asarray(curve * _gain(lit.p))


def _ambient(lit: Lit, signal: Floats) -> Floats:
    """Photocurrent of outside light, (S, C); a measured one wins."""
    p = lit.p
    if p.readout.ambient_current is not None:
        return np.asarray(signal * 0 + p.readout.ambient_current[:, None])
    temperature = electronics_temperature(p)
    at_peak = responsivity(peak(p), _curve(p), temperature=temperature)
    scale = np.ones(1)
    if p.readout.responsivity is not None:
        scale = p.readout.responsivity / np.maximum(at_peak, 1e-12)
    seen = outside_light(lit, responsivity(band_centres(), _curve(p)), at_peak)
    return np.asarray(signal * 0 + seen * scale[:, None] * _gain(p))


def _read(signal: Floats, beside: Floats, full: Floats, modulation: Modulation) -> Floats:
    """Reading [A]: what ambient and dark current leave stays in it; nothing beyond the stage's full scale is seen."""
    on = np.minimum(signal + beside, full)
    return np.asarray(on if modulation.ambient_share() else on - np.minimum(beside, full))


def _budget(
    p: Any, stage: Transimpedance, modulation: Modulation, *, signal: Floats, ambient: Floats, dark: Floats
) -> NoiseBudget:
    readout, kind = p.readout, p.environment.ambient
    depth = RIPPLE_DEPTH[kind] if p.readout.ambient_ripple is None else p.readout.ambient_ripple[:, None]
    budget = receiver_budget(
        stage,
        modulation,
        signal=signal,
        ambient=ambient,
        dark=dark,
        converter=Converter(
            bits=readout.bits,
            full_scale=readout.full_scale[:, None],
            noise=readout.converter_noise[:, None],
            reference_noise=readout.reference_noise[:, None],
            samples=readout.conversions,
        ),
        ripple_depth=depth if np.any(ambient) else 0.0,
        mains=float(readout.mains[0]),
    )
    # a phototransistor multiplies what its junction's shot noise already holds
    parts = {cause: part * _gain(p) if cause in SHOT else part for cause, part in budget.variances.items()}
    if not modulation.ambient_share():
        # worst slope of either sign counts like a standard deviation
        left = ambient * p.environment.ambient_change[:, None] * modulation.ramp_leak()
        parts["ambient change"] = left**2
    return NoiseBudget(parts).plus("emitter intensity", (signal * readout.intensity_noise[:, None]) ** 2)


def _notes(lit: Lit, stage: Transimpedance, modulation: Modulation) -> tuple[Note, ...]:
    p = lit.p
    notes = [*electronics_notes(p), *stage_notes(stage), *timing_notes(lit, stage, signal_gain(stage, modulation))]
    if p.readout.responsivity is None:
        notes += responsivity_notes(peak(p), _curve(p), temperature=electronics_temperature(p))
    if p.readout.ambient_current is None:
        notes += outside_notes(lit)
    if p.readout.detector == "phototransistor":
        gain = PHOTOTRANSISTOR
        notes.append(
            Note(
                "phototransistor-spread",
                f"Phototransistors of one type differ in gain from {gain.least:.0f} to {gain.most:.0f}, from memory: "
                "read a share of each sensor's own bright reading, and try both ends of readout.transistor_gain.",
                trigger=f"largest over smallest {gain.spread():.1f}",
                decides="the maker's gain bins",
            )
        )
    return tuple(notes)
