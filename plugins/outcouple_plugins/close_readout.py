"""The read-out section of sensors whose detector gets most of the emitter's light."""

from __future__ import annotations

from outcouple.design.sections import PhotodiodeReadout
from outcouple.fields import quantity

__all__ = ["CloseReadout"]


class CloseReadout(PhotodiodeReadout):
    """A photodiode, its transimpedance stage, its modulation and its converter."""

    feedback_resistance: float = quantity(
        "500 ohm",
        "resistance",
        ge="100 ohm",
        le="100 Gohm",
        describe="of the transimpedance stage; most of the emitter's light arrives here",
        slider="log",
        deciding=True,
    )
