"""The ``[decision]`` section."""

from __future__ import annotations

from typing import Self

from pydantic import model_validator
from pydantic_core import PydanticCustomError

from outcouple.fields import Section, choice, count, flag, quantity

__all__ = ["Decision", "Diagnostics"]


class Diagnostics(Section):
    """What would reveal a failure before it does harm; a reference channel and fault bands count by themselves."""

    reference: bool = flag(False, describe="a photodiode watches the emitter and its failing is a fault")
    drive_monitor: bool = flag(False, describe="the emitter's current is measured; open and short circuit are a fault")
    dark_test: bool = flag(False, describe="the reading is taken with the emitter off and must be dark")
    second_channel: bool = flag(False, describe="a second, separate sensor of another kind is compared")
    lift_switch: bool = flag(False, describe="a contact tells that the sensor sits in its place")
    trend: bool = flag(False, describe="the bright reading is recorded, and its slow fall raises maintenance")
    proof_test: bool = flag(False, describe="the sensor is wetted and dried on purpose at intervals")


class Decision(Section):
    """How a reading becomes present, absent or a fault."""

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
    calibration: str = choice(
        "each sensor",
        ["each sensor", "none"],
        describe="each sensor: its level is set by its own readings when new; none: the level stands where the design "
        "as written has it, so that spread and tolerances of the light move the readings past it",
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
    correlation: float = quantity(
        "0 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="of the noise of two readings in a window; slow noise makes confirming worth less",
    )
    channels: int = count(1, ge=1, le=10000, describe="channels that must see an object for it to be present")
    tracking: float | None = quantity(
        None,
        "time",
        optional=True,
        ge="1 ms",
        le="1000000 s",
        unit="s",
        describe="time constant with which the untouched reading is followed, for sensors that read changes",
    )
    fault_low: float | None = quantity(
        None,
        "ratio",
        optional=True,
        ge="0 %",
        le="1000 %",
        describe="share of the first bright state's reading below which a reading is a fault",
    )
    fault_high: float | None = quantity(
        None,
        "ratio",
        optional=True,
        ge="0 %",
        le="1000 %",
        describe="share of the first bright state's reading above which a reading is a fault",
    )
    diagnostics: Diagnostics = Diagnostics()

    @model_validator(mode="after")
    def _fits(self) -> Self:
        """k of n needs k up to n, and the fault bands a gap between them."""
        if self.confirm > self.window:
            raise PydanticCustomError(
                "outcouple",
                "confirm is {confirm} of a window of only {window} readings",
                {"confirm": self.confirm, "window": self.window},
            )
        low, high = self.fault_low, self.fault_high
        if low is not None and high is not None and low >= high:
            raise PydanticCustomError("outcouple", "fault_low must lie below fault_high", {})
        return self
