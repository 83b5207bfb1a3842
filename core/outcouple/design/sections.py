"""Sections every design file shares: where the sensor stands and what shines into it."""

from __future__ import annotations

from outcouple.fields import Section, choice, quantity

__all__ = ["Emitter", "Environment"]


class Environment(Section):
    """Where the sensor works."""

    temperature: float = quantity(
        "20 degC",
        "temperature",
        ge="2 K",
        le="800 K",
        describe="temperature of the sensor and of what touches it",
        deciding=True,
    )
    ambient: str = choice(
        "none",
        ["none", "daylight", "sun", "incandescent", "led lamps", "fluorescent"],
        describe="kind of light from outside",
    )
    illuminance: float = quantity(
        "0 lx", "illuminance", ge="0 lx", le="200 klx", describe="of that light on the sensor", unit="lx"
    )
    irradiance: float | None = quantity(
        None,
        "irradiance",
        ge="0 W/m2",
        le="2000 W/m2",
        optional=True,
        describe="of that light within the detector's own band, measured; wins over the illuminance",
    )
    explosive: str = choice(
        "no", ["no", "yes"], describe="an explosive atmosphere may be present (fuel, solvent, oxygen, dust)"
    )


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
        gt="0 deg",
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
