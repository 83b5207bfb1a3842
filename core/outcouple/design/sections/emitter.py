"""The ``[emitter]`` section: the lamp."""

from __future__ import annotations

from outcouple.design.sections.groups import CONDITIONS, IMPERFECTIONS
from outcouple.fields import Section, choice, quantity

__all__ = ["Emitter"]


class Emitter(Section):
    """The lamp: one LED or a row of equal ones."""

    wavelength: float = quantity(
        "850 nm",
        "length",
        ge="350 nm",
        le="1100 nm",
        unit="nm",
        describe="peak wavelength in vacuum",
        deciding=True,
    )
    linewidth: float = quantity(
        "40 nm",
        "length",
        gt="0.01 nm",
        le="200 nm",
        unit="nm",
        describe="full width at half maximum of the spectrum",
        reference="typical of infrared LEDs, common practice, no source",
        group=IMPERFECTIONS,
    )
    power: float = quantity(
        "10 mW",
        "power",
        ge="0 W",
        le="100 W",
        describe="optical power sent out, all emitters together",
        deciding=True,
        slider="log",
    )
    half_angle: float = quantity(
        "15 deg",
        "angle",
        ge="0.01 deg",
        le="90 deg",
        describe="angle from the axis at which the lobe is cut, in the medium it emits into",
        deciding=True,
    )
    exponent: float = quantity(
        1, "number", ge=0, le=200, describe="m of the lobe cos^m within the half-angle; 1 is Lambertian"
    )
    polarization: str = choice(
        "none",
        ["none", "s", "p"],
        describe="s: field across the plane of incidence of the sensor's cross-section; p: in it",
    )
    kind: str = choice(
        "led", ["led", "laser"], describe="a laser falls under other safety rules and is not screened here"
    )
    duty: float = quantity(
        "100 %",
        "ratio",
        gt="0 %",
        le="100 %",
        describe="share of time it is on, for the eye-safety screening",
        group=CONDITIONS,
    )
    source_size: float | None = quantity(
        None,
        "length",
        optional=True,
        ge="10 um",
        le="1 m",
        describe="diameter of one emitter's bright area, for the eye-safety screening of the retina",
        group=CONDITIONS,
    )
    drive: float = quantity(
        "100 %", "ratio", gt="0 %", le="1000 %", describe="current over that at which the power is stated"
    )
    drive_exponent: float = quantity(
        1,
        "number",
        ge=0.3,
        le=2,
        describe="x in power = current^x; a little below 1 where the emitter droops",
        group=CONDITIONS,
    )
    power_drift: float = quantity(
        "0 %/K",
        "per_kelvin",
        ge="-5 %/K",
        le="5 %/K",
        describe="change of power with the electronics' temperature, from 25 degC",
        reference="infrared LEDs: about -0.5 %/K (-0.9 to -0.3), from memory",
        group=IMPERFECTIONS,
    )
    peak_drift: float = quantity(
        "0 nm/K",
        "length_per_kelvin",
        ge="-2 nm/K",
        le="2 nm/K",
        unit="nm/K",
        describe="shift of the peak with the electronics' temperature, from 25 degC",
        reference="infrared LEDs: about 0.25 nm/K (0.1 to 0.3), from memory",
        group=IMPERFECTIONS,
    )
    age_left: float = quantity(
        "100 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="power left by ageing; 70 % is the customary end of life",
        group=CONDITIONS,
    )
