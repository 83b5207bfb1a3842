"""Sections of a round tip's design file."""

from __future__ import annotations

from outcouple.fields import Section, choice, name, quantity
from outcouple_plugins.close_readout import CloseReadout
from outcouple_plugins.prism_switch.parameters import Layout

__all__ = ["Parameters", "Tip"]


class Tip(Section):
    """A tip of revolution on a flat base."""

    shape: str = choice(
        "cone",
        ["cone", "dome", "truncated"],
        describe="cone: straight sides to an apex; dome: a hemisphere; truncated: a cone with a flat end",
        deciding=True,
    )
    material: str = name("polycarbonate", describe="material of the tip", deciding=True)
    diameter: float = quantity("8 mm", "length", ge="0.5 mm", le="100 mm", describe="of the base", deciding=True)
    face_angle: float = quantity(
        "45 deg",
        "angle",
        ge="20 deg",
        le="75 deg",
        describe="of the side from the base, for cones; 45 deg is an apex of 90 deg, 60 deg suits a flat end",
    )
    end_diameter: float = quantity(
        "4 mm", "length", ge="0.1 mm", le="100 mm", describe="of the flat end, for a truncated cone"
    )
    opening: float | None = quantity(
        None,
        "length",
        optional=True,
        ge="0.1 mm",
        le="100 mm",
        describe="diameter of the opening in a mask on the base; keeps light from the rim, which stays reflecting when "
        "wet",
    )
    crosstalk: float = quantity(
        "2 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="light that reaches the detector without touching a face, as a share of what a dry tip returns; "
        "measure it on the real part",
        reference="1 to 5 % is common practice, no source",
        deciding=True,
    )


class Parameters(Section):
    """A round tip with an emitter and a detector on its base."""

    tip: Tip = Tip()
    layout: Layout = Layout()
    readout: CloseReadout = CloseReadout()
