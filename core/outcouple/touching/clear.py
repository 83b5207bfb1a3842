"""Presets of clear media: nothing, a liquid, a film, drops, and patches written out."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

from outcouple.contact.cover import Cover, Drops, Film, Patch, immersed
from outcouple.fields import Section, choice, flag, name, quantity
from outcouple.touching.base import Touching

__all__ = ["Droplets", "Dry", "Immersed", "Patches", "ResidualFilm"]


class Dry(Touching):
    """Nothing but a gas."""

    what: ClassVar[str] = "dry"
    summary: ClassVar[str] = "nothing touches; a gas lies on the faces"

    gas: str = name("air", describe="gas on the faces", what="material")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        return {"": immersed(p.gas)}


class Immersed(Touching):
    """A clear liquid (or any medium) all over."""

    what: ClassVar[str] = "immersed"
    summary: ClassVar[str] = "a clear medium all over the faces"

    liquid: str = name("water", describe="medium", what="material")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        return {"": immersed(p.liquid)}


class ResidualFilm(Touching):
    """A flat film left behind."""

    what: ClassVar[str] = "film"
    summary: ClassVar[str] = "a flat film left behind, a gas outside; does not switch a totally reflecting face"

    liquid: str = name("water", describe="material of the film", what="material")
    thickness: float = quantity(
        "10 um", "length", ge="0 nm", le="10 mm", describe="mean thickness", slider="log", deciding=True
    )
    spread: str = choice(
        "exponential",
        ["none", "normal", "exponential", "lognormal", "uniform"],
        describe="how the thickness varies over the face",
    )
    deviation: float = quantity(
        "0 um", "length", ge="0 nm", le="10 mm", describe="standard deviation, for the spreads that need one"
    )
    gas: str = name("air", describe="gas outside the film", what="material")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        film = Film(p.liquid, p.thickness, p.spread, p.deviation)
        return {"": Cover((Patch(1.0, p.gas, (film,)),))}


class Droplets(Touching):
    """Sessile drops on part of the face."""

    what: ClassVar[str] = "droplets"
    summary: ClassVar[str] = "drops as spherical caps on a share of the face, a gas between them"

    liquid: str = name("water", describe="liquid of the drops", what="material")
    coverage: float = quantity(
        "30 %", "ratio", ge="0 %", le="100 %", describe="share of the face that drops cover", deciding=True
    )
    contact_angle: float = quantity(
        "60 deg", "angle", ge="0 deg", le="120 deg", describe="contact angle of the drops", deciding=True
    )
    coarse: bool = flag(False, describe="true: drops are as large as the beam, a way is wholly under them or not")
    gas: str = name("air", describe="gas between the drops", what="material")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        drops = Patch(p.coverage, Drops(p.liquid, p.contact_angle))
        return {"": Cover((drops, Patch(1 - p.coverage, p.gas)), finer=not p.coarse)}


class WrittenFilm(Section):
    """One film of a patch."""

    material: str = name(..., describe="material of the film", what="material")
    thickness: float = quantity(..., "length", ge="0 nm", le="100 mm", describe="mean thickness")
    spread: str = choice("none", ["none", "normal", "exponential", "lognormal", "uniform"], describe="spread")
    deviation: float = quantity("0 nm", "length", ge="0 nm", le="100 mm", describe="standard deviation")


class WrittenPatch(Section):
    """One patch: a share of the face with its films and what backs them."""

    share: float = quantity("100 %", "ratio", ge="0 %", le="100 %", describe="share of the face")
    films: tuple[WrittenFilm, ...] = ()
    backing: str = name("air", describe="medium behind the films", what="material")
    albedo: float = quantity(
        "0 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="share of the light entering the backing that comes back diffusely",
    )
    drops: bool = flag(False, describe="true: the backing sits as drops on the face")
    contact_angle: float = quantity("60 deg", "angle", ge="0 deg", le="120 deg", describe="of the drops")


class Patches(Touching):
    """Patches written out; what every other preset boils down to."""

    what: ClassVar[str] = "patches"
    summary: ClassVar[str] = "shares of the face, each with films, backing and diffuse return, written out"

    patches: tuple[WrittenPatch, ...] = ()
    coarse: bool = flag(False, describe="true: patches are as large as the beam")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        return {"": Cover(tuple(cls._patch(patch) for patch in p.patches), finer=not p.coarse)}

    @staticmethod
    def _patch(p: WrittenPatch) -> Patch:
        films = tuple(Film(f.material, f.thickness, f.spread, f.deviation) for f in p.films)  # type: ignore[arg-type]
        backing: str | Drops = Drops(p.backing, p.contact_angle) if p.drops else p.backing
        return Patch(p.share, backing, films, p.albedo)
