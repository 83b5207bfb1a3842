"""Sections of a droplet plate's design file."""

from __future__ import annotations

from outcouple.design.sections import Emitter
from outcouple.fields import Section, choice, count, name, quantity
from outcouple_plugins.close_readout import CloseReadout

__all__ = ["Drops", "Parameters", "Plate", "PlateEmitter"]


class Plate(Section):
    """A plate that carries a beam from emitter to detector by total reflection."""

    material: str = name("crown glass", describe="material of the plate", deciding=True)
    thickness: float = quantity("4 mm", "length", ge="0.2 mm", le="100 mm", describe="between the faces", deciding=True)
    incidence: float = quantity(
        "45 deg", "angle", ge="20 deg", le="85 deg", describe="of the beam's axis on the faces, inside", deciding=True
    )
    bounces: int = count(4, ge=1, le=200, describe="reflections at the outer face on the way", deciding=True)
    patch: float = quantity(
        "5 cm2", "area", ge="0.01 cm2", le="1 m2", describe="of the outer face that the beam samples"
    )
    detector_half_angle: float = quantity(
        "5 deg",
        "angle",
        gt="0 deg",
        le="60 deg",
        describe="about its axis, up to which the detector takes light, in the medium it stands in",
    )
    coupling: str = choice("air", ["air", "bonded"], describe="of emitter and detector to the plate")
    crosstalk: float = quantity(
        "1 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="light that reaches the detector past the outer face, as a share of what a dry plate returns",
        reference="1 to 5 % is common practice, no source",
    )


class Drops(Section):
    """What the drops look like, for counting them."""

    diameter: float = quantity(
        "2 mm", "length", ge="5 um", le="20 mm", describe="mean diameter of a drop's footprint", deciding=True
    )


class PlateEmitter(Emitter):
    """A lamp with a lens: one LED or a row of equal ones."""

    half_angle: float = quantity(
        "2 deg",
        "angle",
        gt="0 deg",
        le="90 deg",
        describe="angle from the axis at which the lobe is cut, in the medium it emits into",
        deciding=True,
    )


class Parameters(Section):
    """A plate read through several bounces, for rain, dew and condensation."""

    emitter: PlateEmitter = PlateEmitter()
    plate: Plate = Plate()
    drops: Drops = Drops()
    readout: CloseReadout = CloseReadout()
