"""Which states drive the read-out beyond its full scale, and what to change."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from outcouple.notes import Note

if TYPE_CHECKING:
    from outcouple.evaluation.table import StateRow

__all__ = ["saturation_notes"]

Floats = NDArray[np.float64]

REMEDY: Mapping[str, str] = {
    "A": "lower readout.feedback_resistance or emitter.power",
    "e-": "shorten readout.exposure or lower emitter.power",
}


def saturation_notes(rows: Sequence[StateRow], samples: int) -> tuple[Note, ...]:
    """One caution for all saturated states; a saturated reading says nothing of what lies beyond full scale."""
    found = {row.laid.state.name: np.broadcast_to(row.reading.headroom(), (samples,)) for row in rows}
    full = {name: headroom for name, headroom in found.items() if np.any(headroom < 1)}
    if not full:
        return ()
    least = min(full, key=lambda name: float(np.min(full[name])))
    row = next(row for row in rows if row.laid.state.name == least)
    outside = np.max(row.reading.ambient) > 0.5 * np.max(row.reading.load)
    names = ", ".join(repr(name) for name in full)
    remedy = "keep outside light away or filter it" if outside else REMEDY[row.reading.unit]
    return (
        Note(
            "saturated",
            f"The read-out saturates in {names}: the reading ends at full scale and hides what lies beyond, so margins "
            f"mean nothing. To mend it, {remedy}.",
            severity="danger",
            trigger=f"full scale is {float(np.min(full[least])):.3g} times what {least!r} brings",
            decides="a measurement of the brightest state under the worst outside light",
            where=np.any(np.stack(list(full.values())) < 1, axis=0),
        ),
    )
