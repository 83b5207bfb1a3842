"""Cautions about objects on a plate, shared by the plate geometries."""

from __future__ import annotations

import numpy as np

from outcouple.geometry import Setting
from outcouple.notes import Note

__all__ = ["place_notes"]


def place_notes(setting: Setting) -> tuple[Note, ...]:
    """Which states' objects do not lie whole on the plate, one note for each."""
    p, spread = setting.p, setting.spread
    found = []
    for name, state in p.states.items():
        if state.object is None:
            continue
        radius = spread(state.object.diameter) / 2
        beyond = np.zeros(setting.samples, dtype=bool)
        for place, side in ((state.object.x, p.plate.width), (state.object.y, p.plate.height)):
            beyond |= np.abs(spread(0.0 if place is None else place)) + radius > spread(side) / 2 * (1 + 1e-9)
        found.append(
            Note(
                "object-beyond-plate",
                f"The object of {name!r} does not lie whole on the plate; what it reads means little.",
                trigger="object's place and half its diameter beyond half the plate",
                where=beyond,
            )
        )
    return tuple(found)
