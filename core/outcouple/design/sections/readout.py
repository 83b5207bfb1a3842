"""The ``[readout]`` section, one model per kind of read-out."""

from __future__ import annotations

from outcouple.fields import Section, choice, count, quantity

__all__ = ["READOUTS", "CameraReadout", "PhotodiodeReadout"]


class PhotodiodeReadout(Section):
    """A photodiode, its transimpedance stage and its converter."""

    detector: str = choice(
        "silicon infrared", ["silicon visible", "silicon infrared"], describe="responsivity curve of the photodiode"
    )
    responsivity: float | None = quantity(
        None,
        "responsivity",
        optional=True,
        ge="0.001 A/W",
        le="1.2 A/W",
        describe="at the emitter's peak; wins over the curve",
    )
    dark_current: float = quantity(
        "2 nA", "current", ge="0 A", le="1 mA", describe="at 25 degC; doubles every 10 K", slider="log"
    )
    ambient_current: float | None = quantity(
        None,
        "current",
        optional=True,
        ge="0 A",
        le="10 mA",
        describe="photocurrent of outside light, measured; wins over the environment",
    )
    feedback_resistance: float = quantity(
        "1 Mohm", "resistance", ge="100 ohm", le="100 Gohm", describe="of the transimpedance stage", slider="log"
    )
    bandwidth: float = quantity(
        "1 kHz",
        "frequency",
        ge="1 mHz",
        le="100 MHz",
        describe="noise bandwidth of one reading",
        slider="log",
        deciding=True,
    )
    bits: int = count(12, ge=4, le=32, describe="resolution of the converter")
    full_scale: float = quantity(
        "3 V", "voltage", ge="10 mV", le="50 V", describe="range of the stage and its converter"
    )
    intensity_noise: float = quantity(
        "0 %", "ratio", ge="0 %", le="50 %", describe="standard deviation of the emitter's power within the bandwidth"
    )


class CameraReadout(Section):
    """A camera: one pixel per channel."""

    quantum_efficiency: float = quantity(
        "30 %", "ratio", ge="0.1 %", le="100 %", describe="at the emitter's peak", deciding=True
    )
    full_well: float = quantity("10 ke-", "electrons", ge="100 e-", le="10 Me-", describe="saturation capacity")
    dark_noise: float = quantity("6 e-", "electrons", ge="0 e-", le="1 ke-", describe="temporal dark noise")
    dark_current: float = quantity(
        "100 e-", "electrons", ge="0 e-", le="1 Me-", describe="electrons per second at 25 degC"
    )
    gain: float = quantity("0.1 DN/e-", "gain", gt="0 DN/e-", le="100 DN/e-", describe="overall system gain")
    exposure: float = quantity(
        "8 ms", "time", ge="1 us", le="10 s", describe="exposure time", deciding=True, slider="log"
    )
    nonuniformity: float = quantity("1 %", "ratio", ge="0 %", le="50 %", describe="photo-response nonuniformity (PRNU)")
    dark_nonuniformity: float = quantity(
        "2 e-", "electrons", ge="0 e-", le="1 ke-", describe="dark signal nonuniformity (DSNU)"
    )


READOUTS: dict[str, type[Section]] = {"photodiode": PhotodiodeReadout, "camera": CameraReadout}
"""Model of the section by the kind a geometry asks for."""
