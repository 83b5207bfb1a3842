"""The transimpedance stage of a design, and its figures."""

from __future__ import annotations

import math
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from outcouple.notes import Note
from outcouple.readout.converter import Converter
from outcouple.readout.emitted import electronics_temperature
from outcouple.readout.photodiode import PHOTOTRANSISTOR
from outcouple.readout.transimpedance import Transimpedance, compensation_for

__all__ = ["stage_figures", "stage_notes", "stage_of"]

Floats = NDArray[np.float64]

MARGIN: Final = math.radians(65.0)
"""Phase margin a feedback capacitance is chosen for where none is stated: a flat step, common practice, no source."""
LEAST_MARGIN: Final = math.radians(45.0)
"""Below it the stage rings and peaks; common practice, no source."""
LOAD: Final = 1e3
"""Load [ohm] at which the corner of `PHOTOTRANSISTOR` is stated; it falls as the load rises."""


def stage_of(p: Any) -> Transimpedance:
    """The design's stage, numbers (S, 1)."""
    readout = p.readout
    resistance, gain_bandwidth, capacitance = (
        np.asarray(value)[:, None]
        for value in (readout.feedback_resistance, readout.gain_bandwidth, readout.input_capacitance)
    )
    return Transimpedance(
        resistance=resistance,
        feedback_capacitance=_feedback(p, resistance, gain_bandwidth, capacitance),
        gain_bandwidth=gain_bandwidth,
        input_capacitance=capacitance,
        voltage_noise=readout.voltage_noise[:, None],
        current_noise=readout.current_noise[:, None],
        voltage_corner=readout.voltage_corner[:, None],
        current_corner=readout.current_corner[:, None],
        temperature=electronics_temperature(p)[:, None],
        swing=readout.full_scale[:, None],
    )


def _feedback(p: Any, resistance: Floats, gain_bandwidth: Floats, capacitance: Floats) -> Floats:
    """C_f [F]: stated, or the least that keeps `MARGIN`; a phototransistor's own slowness comes on top."""
    readout = p.readout
    if readout.feedback_capacitance is not None:
        chosen = np.asarray(readout.feedback_capacitance)[:, None]
    else:
        chosen = compensation_for(
            MARGIN, resistance=resistance, gain_bandwidth=gain_bandwidth, input_capacitance=capacitance
        )
    if readout.detector == "phototransistor":
        chosen = chosen + 1 / (2 * np.pi * LOAD * PHOTOTRANSISTOR.corner)
    return np.asarray(chosen)


def stage_figures(p: Any, stage: Transimpedance, load: Floats) -> dict[str, Floats]:
    """Metrics of the stage, (S,) each: bandwidth [Hz], phase margin [rad], settling to a thousandth [s], bits used by
    the largest load."""
    readout = p.readout
    converter = Converter(bits=readout.bits, full_scale=readout.full_scale)
    largest = np.max(load, axis=1) * readout.feedback_resistance
    return {
        "stage_bandwidth": stage.bandwidth()[:, 0],
        "phase_margin": stage.phase_margin()[:, 0],
        "stage_settling": stage.settling_time(1e-3)[:, 0],
        "bits_used": converter.bits_used(np.minimum(largest, readout.full_scale)),
    }


def stage_notes(stage: Transimpedance) -> tuple[Note, ...]:
    """A caution where the stage is close to ringing."""
    margin = stage.phase_margin()[:, 0]
    note = Note(
        "stage-rings",
        "The stage's phase margin lies below 45 deg: it peaks and rings. Raise readout.feedback_capacitance.",
        trigger=f"{math.degrees(float(np.min(margin))):.0f} deg",
        decides="a step response on hardware",
        where=margin < LEAST_MARGIN,
    )
    return (note,) if note.holds() else ()
