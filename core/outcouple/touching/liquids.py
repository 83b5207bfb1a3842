"""Presets of liquids that are not clear, calm or alone: dew, foam, bubbles, milky liquids, a wall behind, oil."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

import numpy as np

from outcouple.contact.cover import Cover, Drops, Film, Patch
from outcouple.contact.diffuse import diffuse_notes, diffuse_reflectance, foam_wet_share, wall_return
from outcouple.fields import flag, name, quantity
from outcouple.notes import Note
from outcouple.touching.base import Touching
from outcouple.touching.clear import Droplets

__all__ = ["Bubbles", "Condensate", "Foam", "Milky", "OilSmear", "Wall"]

GUIDE = 1.5
"""Index taken for the guide in the formula for turbid liquids; between 1.45 and 1.65 its answer moves by 0.01."""
LIQUID = 1.33


class Condensate(Droplets):
    """Dew: many small flat drops."""

    what: ClassVar[str] = "condensate"
    summary: ClassVar[str] = "dew on the face: many small, rather flat drops"

    coverage: float = quantity(
        "60 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="share of the face that drops cover",
        deciding=True,
        reference="from memory",
    )
    contact_angle: float = quantity(
        "30 deg",
        "angle",
        ge="0 deg",
        le="120 deg",
        describe="contact angle of the drops: 10 deg on clean glass, 70 to 90 deg on plastics",
        deciding=True,
        reference="from memory",
    )


class Foam(Touching):
    """Standing foam."""

    what: ClassVar[str] = "foam"
    summary: ClassVar[str] = "foam: wet seams between flattened bubbles, whose flat films do not switch the face"

    liquid: str = name("water", describe="liquid of the foam")
    gas_share: float = quantity(
        "95 %", "ratio", ge="0 %", le="99.9 %", describe="share of the foam's volume that is gas", deciding=True
    )
    gas: str = name("air", describe="gas in the bubbles")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """Liquid on the wet share of the wall, Princen and Kiss (1987)."""
        wet = foam_wet_share(gas_share=p.gas_share)
        return {"": Cover((Patch(wet, p.liquid), Patch(1 - wet, p.gas)))}


class Bubbles(Touching):
    """Bubbles that cling to a wet face."""

    what: ClassVar[str] = "bubbles"
    summary: ClassVar[str] = "liquid with bubbles on the face that keep a share of it dry"

    liquid: str = name("water", describe="liquid")
    share: float = quantity("10 %", "ratio", ge="0 %", le="100 %", describe="share of the face kept dry", deciding=True)
    coarse: bool = flag(False, describe="true: bubbles are as large as the beam")
    gas: str = name("air", describe="gas of the bubbles")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """Dry and wet shares."""
        return {"": Cover((Patch(p.share, p.gas), Patch(1 - np.asarray(p.share), p.liquid)), finer=not p.coarse)}


class Milky(Touching):
    """A turbid liquid, deep and wide."""

    what: ClassVar[str] = "milky"
    summary: ClassVar[str] = "milky or absorbing liquid: sends back diffusely what diffusion theory says"

    liquid: str = name("water", describe="liquid the particles float in")
    scattering: float = quantity(
        "10 1/cm",
        "inverse_length",
        ge="0.1 1/cm",
        le="1000 1/cm",
        unit="1/cm",
        describe="reduced scattering coefficient",
        deciding=True,
        reference="dairy products 5 to 60 /cm, J. Near Infrared Spectrosc. 21, 375 (2013)",
    )
    absorption: float = quantity(
        "0.1 1/cm",
        "inverse_length",
        ge="0 1/cm",
        le="1000 1/cm",
        unit="1/cm",
        describe="absorption coefficient",
        reference="dairy products 0.05 to 0.5 /cm, J. Near Infrared Spectrosc. 21, 375 (2013)",
    )

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """A backing whose albedo is its diffuse reflectance."""
        albedo = diffuse_reflectance(scattering=p.scattering, absorption=p.absorption, n_medium=LIQUID, n_guide=GUIDE)
        return {"": Cover((Patch(1.0, p.liquid, albedo=albedo),))}

    @classmethod
    def notes(cls, p: Any) -> tuple[Note, ...]:
        """Where diffusion theory is rough, and what the model leaves out."""
        spread = Note(
            "milky-spread",
            "Light in a milky liquid comes back spread over 1/mu_s' and more; a tip smaller than that gets less back.",
            severity="info",
        )
        straight = Note(
            "turbid-returns",
            "Of what a turbid liquid sends back into a tip only the straight way to the detector counts. Ways over a "
            "further reflection or a second return are left out: the liquid may give back some ten times more (a cone "
            "in milk: 2 to 3 % of its dry light), so it may read drier than told.",
            decides="a trial in the turbid liquid",
        )
        return (spread, straight, *diffuse_notes(scattering=p.scattering, absorption=p.absorption))


class Wall(Touching):
    """A clear liquid with a matt wall or floor behind it."""

    what: ClassVar[str] = "wall"
    summary: ClassVar[str] = "clear liquid with a matt wall or floor close behind, which sends light back"

    liquid: str = name("water", describe="liquid between face and wall")
    distance: float = quantity(
        "5 mm", "length", ge="0 mm", le="1 m", describe="of the wall from the face", deciding=True
    )
    reflectance: float = quantity(
        "60 %", "ratio", ge="0 %", le="100 %", describe="diffuse reflectance of the wall", deciding=True
    )
    diameter: float = quantity("8 mm", "length", ge="0.1 mm", le="200 mm", describe="of the face, taken as round")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """The liquid, with the share the wall sends back onto the face as its albedo."""
        back = wall_return(distance=p.distance, diameter=p.diameter, reflectance=p.reflectance)
        return {"": Cover((Patch(1.0, p.liquid, albedo=back),))}

    @classmethod
    def notes(cls, p: Any) -> tuple[Note, ...]:
        """The model's limit."""
        return (
            Note(
                "wall-matt",
                "The wall counts as matt and straight behind the face; a polished one throws light one way only.",
                severity="info",
            ),
        )


class OilSmear(Touching):
    """An oil smear: a thin flat film with some drops."""

    what: ClassVar[str] = "oil-smear"
    summary: ClassVar[str] = "oil smear: a thin film, which does nothing, and droplets, which do"

    liquid: str = name("vegetable oil", describe="the oil", deciding=True)
    drops: float = quantity(
        "20 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="share under droplets or ridges",
        deciding=True,
        reference="from memory",
    )
    contact_angle: float = quantity(
        "20 deg", "angle", ge="0 deg", le="120 deg", describe="contact angle of the droplets", reference="from memory"
    )
    thickness: float = quantity("2 um", "length", ge="10 nm", le="1 mm", describe="mean thickness of the film between")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """Drops on a share, film on the rest."""
        film = Film(p.liquid, p.thickness, "exponential")
        return {
            "": Cover(
                (Patch(p.drops, Drops(p.liquid, p.contact_angle)), Patch(1 - np.asarray(p.drops), "air", (film,)))
            )
        }
