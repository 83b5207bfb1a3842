"""Sections of the design file of a plate under a soft skin."""

from __future__ import annotations

from outcouple.fields import Section, choice, name, quantity
from outcouple_plugins.edge_camera.parameters import Parameters as CameraParameters

__all__ = ["Overlay", "Parameters"]


class Overlay(Section):
    """A skin whose textured underside keeps it off the plate until it is pressed."""

    material: str = name("silicone", describe="material of the skin", deciding=True)
    pressure: float = quantity(
        "0 kPa", "pressure", ge="0 Pa", le="20 MPa", describe="pressed on the skin from above; states set it"
    )
    modulus: float = quantity(
        "0.6 MPa", "pressure", ge="1 kPa", le="1 GPa", unit="MPa", describe="Young's modulus of the skin", deciding=True
    )
    poisson: float = quantity(0.49, "number", ge=0, le=0.5, describe="Poisson's ratio of the skin")
    thickness: float = quantity("1 mm", "length", ge="0.05 mm", le="20 mm", describe="of the skin", deciding=True)
    texture: str = choice(
        "random", ["random", "bumps"], describe="of the underside: random roughness, or a square lattice of round bumps"
    )
    height: float = quantity(
        "8 um", "length", ge="0.2 um", le="500 um", unit="um", describe="of the texture, valley to peak", deciding=True
    )
    pitch: float = quantity(
        "25 um", "length", ge="2 um", le="5 mm", unit="um", describe="of the texture, peak to peak", deciding=True
    )
    albedo: float = quantity(
        "60 %", "ratio", ge="0 %", le="100 %", describe="share of the light entering the skin that comes back diffusely"
    )
    adhesion: float = quantity(
        "5 mN/m",
        "surface_tension",
        ge="0 N/m",
        le="10 N/m",
        describe="work of adhesion between skin and plate",
        reference="clean smooth silicone on glass about 40 mN/m, from memory; powder or a hard texture lowers it",
    )
    relaxation: float = quantity(
        "0.3 s", "time", ge="1 ms", le="1000 s", unit="s", describe="time constant with which the skin recovers",
        reference="0.1 to 100 s, from memory",
    )  # fmt: skip
    released: float = quantity(
        "2 s", "time", ge="1 ms", le="1000 s", unit="s", describe="time after release at which what is left counts"
    )
    active: float = quantity(
        "10 %", "ratio", gt="0 %", lt="100 %", describe="share in contact at which the skin counts as pressed"
    )


class Parameters(CameraParameters):
    """A plate lit at its edges under a soft skin, looked at by a camera."""

    overlay: Overlay = Overlay()
