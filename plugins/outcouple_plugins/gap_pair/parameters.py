"""Sections of a gap pair's design file."""

from __future__ import annotations

from outcouple.fields import Section, choice, name, quantity
from outcouple_plugins.close_readout import CloseReadout

__all__ = ["Gap", "Pair", "Parameters"]


class Pair(Section):
    """The two prisms."""

    material: str = name("crown glass", describe="material of the first prism", what="material", deciding=True)
    second_material: str = name("crown glass", describe="material of the second prism", what="material")
    incidence: float = quantity(
        "45 deg",
        "angle",
        ge="5 deg",
        le="89 deg",
        describe="incidence of the beam's axis on the gap, inside the first prism",
        deciding=True,
    )
    coupling: str = choice(
        "air",
        ["air", "bonded"],
        describe="air: the beam enters and leaves through flat faces at right angles to its axis",
    )


class Gap(Section):
    """The gap, what changes it, and what blurs it."""

    distance: float = quantity(
        "200 nm",
        "length",
        ge="0 nm",
        le="100 um",
        unit="nm",
        describe="mean width of the gap; states with a number as expect set it",
        deciding=True,
    )
    medium: str = name("air", describe="medium in the gap", what="material")
    roughness: float = quantity(
        "0 nm",
        "length",
        ge="0 nm",
        le="10 um",
        unit="nm",
        describe="standard deviation of the width over the beam",
    )
    tilt: float = quantity("0 urad", "angle", ge="0 rad", le="1 deg", unit="urad", describe="wedge between the faces")
    beam: float = quantity("5 mm", "length", gt="0 mm", le="100 mm", describe="width of the beam along the wedge")
    stiffness: float = quantity(
        "2 N/um",
        "stiffness",
        gt="0 N/m",
        le="1e9 N/m",
        unit="N/um",
        describe="of the flexure that closes the gap",
    )
    thermal_drift: float = quantity(
        "12 nm/K",
        "length_per_kelvin",
        ge="0 nm/K",
        le="10 um/K",
        describe="change of the width with temperature",
        reference="1 mm of steel expands by 12 nm/K, common practice, no source",
    )
    temperature_change: float = quantity(
        "5 K", "temperature_difference", ge="0 K", le="300 K", describe="drift of temperature to allow for"
    )


class Parameters(Section):
    """Two prisms that face each other over a gap."""

    pair: Pair = Pair()
    gap: Gap = Gap()
    readout: CloseReadout = CloseReadout()
