"""The ``[decision]`` section."""

from __future__ import annotations

from outcouple.fields import Section, choice, count, quantity

__all__ = ["Decision"]


class Decision(Section):
    """How a reading becomes present or absent."""

    demand: str = choice(
        "",
        ["", "high level", "low level", "leak"],
        describe="what the function must not miss, for level and leak sensors: high level and leak demand wet, low "
        "level demands dry; blank leaves the dangerous direction open",
    )
    level: str = choice(
        "midpoint",
        ["midpoint", "optimal", "given", "noise"],
        describe="midpoint between the nearest absent and present states; optimal: where both err equally often; "
        "given: share; noise: as many sigma from the absent states as the false alarms allow",
    )
    share: float = quantity(
        "50 %",
        "ratio",
        ge="-100 %",
        le="1000 %",
        describe="for a given level: share of the first absent state's reading (a change: the relative change itself)",
    )
    false_alarms: float = quantity(
        1, "number", gt=0, le=1e9, describe="false alarms per year allowed, for a level set by noise"
    )
    hysteresis: float = quantity(
        "0 %", "ratio", ge="0 %", le="90 %", describe="dead band about the level, as a share of the span"
    )
    rate: float = quantity("10 Hz", "frequency", gt="0 Hz", le="1 MHz", describe="decisions per second and channel")
    confirm: int = count(1, ge=1, le=1000, describe="readings of the window that must agree (k of n)")
    window: int = count(1, ge=1, le=1000, describe="readings in the window (n)")
    channels: int = count(1, ge=1, le=10000, describe="channels that must see an object for it to be present")
