"""Sections of a leak puck's design file."""

from __future__ import annotations

from outcouple.fields import Section, choice, name, quantity
from outcouple_plugins.close_readout import CloseReadout

__all__ = ["Floor", "Parameters", "Puck", "Puddle"]


class Puck(Section):
    """A prism that stands on feet with its base down; light meets the base once."""

    material: str = name("polycarbonate", describe="material of the puck", deciding=True)
    incidence: float = quantity(
        "45 deg", "angle", ge="20 deg", le="80 deg", describe="incidence of the beam's axis on the base", deciding=True
    )
    base: float = quantity("10 mm", "length", ge="1 mm", le="100 mm", describe="width of the base")
    foot: float = quantity(
        "0.3 mm",
        "length",
        ge="0.01 mm",
        le="50 mm",
        describe="height of the feet: the gap between base and floor; liquid must stand this high to enter it",
        deciding=True,
    )
    detector_half_angle: float = quantity(
        "20 deg",
        "angle",
        gt="0 deg",
        le="60 deg",
        describe="about its axis, up to which the detector takes light, in air",
    )
    coupling: str = choice("air", ["air", "bonded"], describe="of emitter and detector to the side faces")
    crosstalk: float = quantity(
        "2 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="light that reaches the detector without meeting the base, as a share of what a dry puck returns",
        reference="1 to 5 % is common practice, no source",
        deciding=True,
    )


class Puddle(Section):
    """The leaked liquid as it stands and creeps."""

    depth: float = quantity(
        "5 mm",
        "length",
        ge="0 mm",
        le="1 m",
        describe="depth in which the puck stands; a state may set it",
        deciding=True,
    )
    surface_tension: float = quantity(
        "72 mN/m",
        "surface_tension",
        ge="1 mN/m",
        le="1 N/m",
        describe="of the liquid",
        reference="water at 25 degC, IAPWS R1-76",
    )
    density: float = quantity("997 kg/m3", "density", ge="100 kg/m3", le="20000 kg/m3", describe="of the liquid")
    viscosity: float = quantity("1 mPa.s", "viscosity", ge="0.01 mPa.s", le="1000 Pa.s", describe="of the liquid")
    contact_angle: float = quantity(
        "30 deg",
        "angle",
        ge="0 deg",
        le="180 deg",
        describe="of the liquid on the floor",
        deciding=True,
        reference="from memory",
    )


class Floor(Section):
    """What the puck stands on."""

    reflectance: float = quantity(
        "5 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="diffuse reflectance: a pale floor sends light back",
        deciding=True,
    )
    area: float = quantity(
        "60 cm2", "area", ge="0.1 cm2", le="100 m2", describe="that a puddle covers before it reaches the puck"
    )
    leak_rate: float = quantity(
        "0.5 L/h", "flow", gt="0 L/h", le="100000 L/h", describe="least leak that must be found"
    )


class Parameters(Section):
    """A puck, the puddle it waits for, and the floor."""

    puck: Puck = Puck()
    puddle: Puddle = Puddle()
    floor: Floor = Floor()
    readout: CloseReadout = CloseReadout()
