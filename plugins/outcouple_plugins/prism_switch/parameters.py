"""Sections of a prism switch's design file."""

from __future__ import annotations

from outcouple.fields import Section, choice, name, quantity
from outcouple_plugins.close_readout import CloseReadout

__all__ = ["Layout", "Parameters", "Prism"]


class Prism(Section):
    """The tip: a straight body that ends in two inclined faces."""

    material: str = name("polycarbonate", describe="material of the prism", what="material", deciding=True)
    base: float = quantity(
        "8 mm",
        "length",
        ge="1 mm",
        le="60 mm",
        describe="width of the base, across the two faces",
        deciding=True,
    )
    face_angle: float = quantity(
        "45 deg",
        "angle",
        ge="20 deg",
        le="70 deg",
        describe="angle of each face from the base; the two incidences of a ray along the axis are this angle and "
        "180 deg minus three times it, equal only at 45 deg (an apex of 90 deg)",
    )
    stem: float = quantity(
        "0 mm",
        "length",
        ge="0 mm",
        le="200 mm",
        describe="straight length between the base plane and the faces",
    )
    crosstalk: float = quantity(
        "2 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="light that reaches the detector without touching a face, as a share of what a perfect tip would "
        "return; measure it on the real part",
        reference="1 to 5 % is common practice, no source",
        deciding=True,
    )


class Layout(Section):
    """Emitter and detector, discs on the base plane; x runs across the faces from the middle of the base."""

    emitter_position: float = quantity(
        "-2 mm",
        "length",
        ge="-30 mm",
        le="30 mm",
        describe="x of the emitter's centre; the emitter face is at negative x",
    )
    emitter_radius: float = quantity("0.5 mm", "length", ge="10 um", le="20 mm", describe="radius of the emitting disc")
    emitter_tilt: float = quantity(
        "0 deg",
        "angle",
        ge="-60 deg",
        le="60 deg",
        describe="tilt of the emitter's axis in the plane of the cross-section, towards positive x, in the medium it "
        "emits into",
    )
    detector_position: float = quantity(
        "2 mm", "length", ge="-30 mm", le="30 mm", describe="x of the detector's centre"
    )
    detector_radius: float = quantity("1 mm", "length", ge="10 um", le="20 mm", describe="radius of the detector")
    detector_half_angle: float = quantity(
        "60 deg",
        "angle",
        gt="0 deg",
        le="90 deg",
        describe="angle from the base's normal up to which the detector takes light, in air (inside the prism if "
        "bonded)",
    )
    coupling: str = choice(
        "air",
        ["air", "bonded"],
        describe="air: emitter and detector stand behind an air film and the flat base takes its Fresnel losses; "
        "bonded: both are index-matched to the prism",
    )


class Parameters(Section):
    """A two-face prism with an emitter and a detector on its base."""

    prism: Prism = Prism()
    layout: Layout = Layout()
    readout: CloseReadout = CloseReadout()
