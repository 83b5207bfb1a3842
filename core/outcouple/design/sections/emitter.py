"""The ``[emitter]`` section: the lamp."""

from __future__ import annotations

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
