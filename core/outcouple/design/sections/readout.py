"""The ``[readout]`` section, one model per kind of read-out."""

from __future__ import annotations

from outcouple.design.sections.groups import CONDITIONS, IMPERFECTIONS
from outcouple.fields import Section, choice, count, quantity

__all__ = ["READOUTS", "CameraReadout", "PhotodiodeReadout"]


class _Surroundings(Section):
    """What every read-out shares: its temperature and the optical filter before it."""

    electronics_temperature: float | None = quantity(
        None,
        "temperature",
        optional=True,
        ge="200 K",
        le="450 K",
        describe="of emitter, detector and amplifier, if they stand apart from the wetted part; else the environment's",
        group=CONDITIONS,
    )
    filter_centre: float | None = quantity(
        None,
        "length",
        optional=True,
        ge="300 nm",
        le="1200 nm",
        unit="nm",
        describe="middle of an optical filter",
    )
    filter_width: float = quantity("50 nm", "length", gt="0.1 nm", le="900 nm", unit="nm", describe="of its band")
    filter_transmission: float = quantity("90 %", "ratio", gt="0 %", le="100 %", describe="of the filter in its band")
    filter_blocking: float = quantity(
        "0.1 %", "ratio", ge="0 %", le="100 %", describe="of the filter outside its band", group=IMPERFECTIONS
    )
    intensity_noise: float = quantity(
        "0 %",
        "ratio",
        ge="0 %",
        le="50 %",
        describe="standard deviation of the emitter's power within the bandwidth",
        group=IMPERFECTIONS,
    )


class PhotodiodeReadout(_Surroundings):
    """A photodiode or phototransistor, its transimpedance stage, its modulation and its converter."""

    detector: str = choice(
        "silicon infrared",
        ["silicon visible", "silicon infrared", "silicon daylight filter", "phototransistor"],
        describe="responsivity curve of the photodiode; a phototransistor amplifies it, slowly and with a wide spread",
    )
    responsivity: float | None = quantity(
        None,
        "responsivity",
        optional=True,
        ge="0.001 A/W",
        le="1.2 A/W",
        describe="at the emitter's peak and 25 degC; wins over the curve",
        group=CONDITIONS,
    )
    responsivity_drift: float = quantity(
        "0 %/K",
        "per_kelvin",
        ge="-2 %/K",
        le="2 %/K",
        describe="change of a stated responsivity from 25 degC",
        group=IMPERFECTIONS,
    )
    transistor_gain: float = quantity(
        400,
        "number",
        ge=1,
        le=10000,
        describe="current gain of a phototransistor over its own junction",
        reference="from memory: 150 to 1000 over unsorted parts of one type",
    )
    dark_current: float = quantity(
        "2 nA",
        "current",
        ge="0 A",
        le="1 mA",
        describe="at 25 degC; doubles every 10 K",
        slider="log",
        group=IMPERFECTIONS,
    )
    ambient_current: float | None = quantity(
        None,
        "current",
        optional=True,
        ge="0 A",
        le="10 mA",
        describe="photocurrent of outside light, measured; wins over the environment",
        group=CONDITIONS,
    )
    ambient_ripple: float | None = quantity(
        None,
        "ratio",
        optional=True,
        ge="0 %",
        le="150 %",
        describe="amplitude of outside light at twice the mains frequency over its mean; else by its kind",
        group=CONDITIONS,
    )
    mains: float = quantity(
        "50 Hz", "frequency", ge="10 Hz", le="500 Hz", describe="frequency of the mains", group=CONDITIONS
    )
    feedback_resistance: float = quantity(
        "1 Mohm", "resistance", ge="100 ohm", le="100 Gohm", describe="of the transimpedance stage", slider="log"
    )
    feedback_capacitance: float | None = quantity(
        None,
        "capacitance",
        optional=True,
        ge="0.001 pF",
        le="1 uF",
        describe="parallel to it, strays included; else the least for a phase margin of 65 deg",
    )
    input_capacitance: float = quantity(
        "50 pF",
        "capacitance",
        ge="0.1 pF",
        le="100 nF",
        describe="detector, amplifier and wiring together",
        reference="a photodiode of a few mm2 with its wiring, common practice, no source",
        group=IMPERFECTIONS,
    )
    gain_bandwidth: float = quantity(
        "10 MHz", "frequency", ge="1 kHz", le="10 GHz", describe="gain-bandwidth product of the amplifier", slider="log"
    )
    voltage_noise: float = quantity(
        "10 nV/rtHz",
        "voltage_noise",
        ge="0 V/rtHz",
        le="1 uV/rtHz",
        describe="of the amplifier, white part",
        group=IMPERFECTIONS,
    )
    current_noise: float = quantity(
        "10 fA/rtHz",
        "current_noise",
        ge="0 A/rtHz",
        le="100 pA/rtHz",
        describe="of the amplifier, white part",
        group=IMPERFECTIONS,
    )
    voltage_corner: float = quantity(
        "100 Hz",
        "frequency",
        ge="0 Hz",
        le="1 MHz",
        describe="below which the amplifier's voltage noise rises as 1/f",
        group=IMPERFECTIONS,
    )
    current_corner: float = quantity(
        "0 Hz",
        "frequency",
        ge="0 Hz",
        le="1 MHz",
        describe="below which its current noise rises as 1/f",
        group=IMPERFECTIONS,
    )
    modulation: str = choice(
        "steady",
        ["steady", "difference", "synchronous"],
        describe="steady: emitter always on, outside light stays in the reading; difference: one on less one off; "
        "synchronous: many on-off periods in one reading",
    )
    modulation_frequency: float = quantity(
        "10 kHz", "frequency", gt="0 Hz", le="10 MHz", describe="of synchronous reading", slider="log"
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
    integration: float | None = quantity(
        None,
        "time",
        optional=True,
        ge="10 ns",
        le="1000 s",
        describe="integration time of one reading; wins over the bandwidth, and a time slot ends it",
    )
    bits: int = count(12, ge=4, le=32, describe="resolution of the converter")
    full_scale: float = quantity(
        "3 V", "voltage", ge="10 mV", le="50 V", describe="range of the stage and its converter"
    )
    converter_noise: float = quantity(
        "0 V",
        "voltage",
        ge="0 V",
        le="1 V",
        describe="own noise of the converter in one conversion, rms",
        group=IMPERFECTIONS,
    )
    reference_noise: float = quantity(
        "0 %",
        "ratio",
        ge="0 %",
        le="10 %",
        describe="of the converter's reference voltage in one reading",
        group=IMPERFECTIONS,
    )
    conversions: int = count(1, ge=1, le=1000000, describe="averaged in one reading")
    reference_channel: str = choice(
        "no", ["no", "yes"], describe="a second photodiode watches the emitter, and the reading is the ratio to it"
    )
    reference_share: float = quantity(
        "1 %", "ratio", gt="0 %", le="50 %", describe="of the emitter's power on that second photodiode"
    )


class CameraReadout(_Surroundings):
    """A camera: one pixel, or a few alike ones averaged, per channel."""

    quantum_efficiency: float = quantity(
        "30 %", "ratio", ge="0.1 %", le="100 %", describe="at the emitter's peak", deciding=True
    )
    full_well: float = quantity("10 ke-", "electrons", ge="100 e-", le="10 Me-", describe="saturation capacity")
    dark_noise: float = quantity(
        "6 e-", "electrons", ge="0 e-", le="1 ke-", describe="temporal dark noise", group=IMPERFECTIONS
    )
    dark_current: float = quantity(
        "100 e-", "electrons", ge="0 e-", le="1 Me-", describe="electrons per second at 25 degC", group=IMPERFECTIONS
    )
    dark_doubling: float = quantity(
        "8 K",
        "temperature_difference",
        ge="3 K",
        le="20 K",
        describe="warming that doubles the dark current",
        group=CONDITIONS,
    )
    gain: float = quantity("0.1 DN/e-", "gain", gt="0 DN/e-", le="100 DN/e-", describe="overall system gain")
    bits: int = count(12, ge=4, le=24, describe="of the digital number; it saturates where they end")
    exposure: float = quantity(
        "8 ms", "time", ge="1 us", le="10 s", describe="exposure time", deciding=True, slider="log"
    )
    strobe: float | None = quantity(
        None, "time", optional=True, ge="1 us", le="10 s", describe="time the emitter is on in it; else all of it"
    )
    modulation: str = choice(
        "steady",
        ["steady", "difference"],
        describe="steady: outside light stays in the reading; difference: a frame with the emitter less one without",
    )
    pixels: int = count(1, ge=1, le=1000000, describe="alike pixels averaged in one channel")
    nonuniformity: float = quantity(
        "1 %", "ratio", ge="0 %", le="50 %", describe="photo-response nonuniformity (PRNU)", group=IMPERFECTIONS
    )
    dark_nonuniformity: float = quantity(
        "2 e-", "electrons", ge="0 e-", le="1 ke-", describe="dark signal nonuniformity (DSNU)", group=IMPERFECTIONS
    )


READOUTS: dict[str, type[Section]] = {"photodiode": PhotodiodeReadout, "camera": CameraReadout}
"""Model of the section by the kind a geometry asks for."""
