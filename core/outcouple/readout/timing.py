"""How long one reading takes, and how it is modulated."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final

import numpy as np
from numpy.typing import NDArray

from outcouple.notes import Note
from outcouple.readout.modulation import Modulation
from outcouple.readout.reading import Lit
from outcouple.readout.transimpedance import Transimpedance

__all__ = ["modulation_of", "timing_notes"]

Floats = NDArray[np.float64]

KIND: Final[Mapping[str, str]] = {"steady": "steady", "difference": "on-off", "synchronous": "square"}
"""A design's word -> the kind of `Modulation`."""
BANDWIDTH_TIME: Final[Mapping[str, float]] = {"steady": 0.5, "difference": 2.0, "synchronous": 2.0}
"""Integration time times noise bandwidth of a reading."""
SETTLED: Final = 0.01
"""Share of a step the stage may still lack when a time slot's integration begins."""
LEAST_SHARE: Final = 0.05
"""Share of a time slot that is integrated at least, however slow the stage."""
TOO_SLOW: Final = 0.9
"""Share of the modulated light a stage should pass."""


def modulation_of(lit: Lit, stage: Transimpedance) -> Modulation:
    """The design's modulation, times (S, 1).

    The integration time is the stated one, else that which gives the stated noise bandwidth; a time slot ends it.
    """
    readout = lit.p.readout
    word = str(readout.modulation)
    time = BANDWIDTH_TIME[word] / readout.bandwidth if readout.integration is None else readout.integration
    time = np.asarray(time, dtype=float)[:, None]
    if lit.slot is not None:
        slot = lit.slot[:, None]
        time = np.minimum(time, np.maximum(slot - stage.settling_time(SETTLED), LEAST_SHARE * slot))
    if word != "synchronous":
        return Modulation(KIND[word], time)
    return Modulation(KIND[word], time, np.maximum(readout.modulation_frequency[:, None], 1 / time))


def timing_notes(lit: Lit, stage: Transimpedance, gain: Floats) -> tuple[Note, ...]:
    """Cautions where the stage is too slow for its time slot or its modulation.

    gain  share of the modulated light that the stage passes
    """
    slow = np.atleast_2d(gain)[:, 0] < TOO_SLOW
    notes = [
        Note(
            "stage-slow",
            "The stage is too slow for the modulation and loses light: lower readout.modulation_frequency or "
            "readout.feedback_capacitance.",
            trigger=f"{float(np.min(gain)):.0%} of the modulated light passes".replace("%", " %"),
            where=slow,
        )
    ]
    if lit.slot is not None:
        settling = stage.settling_time(SETTLED)[:, 0]
        notes.append(
            Note(
                "slot-short",
                "The stage settles to 1 % in no less than half of its time slot: neighbouring emitters leak into each "
                "other. Lower readout.feedback_resistance or lengthen the slot.",
                trigger=f"settling {float(np.max(settling)) * 1e6:.3g} us of {float(np.min(lit.slot)) * 1e6:.3g} us",
                where=settling > 0.5 * lit.slot,
            )
        )
    return tuple(note for note in notes if note.holds())
