"""Presets of solids that touch: gloves, elastomer tips, cloth, gaskets, labels, ice, paint, deposits, scratches."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

import numpy as np

from outcouple.contact.cover import Cover, Film, Patch
from outcouple.contact.mechanics import hertz_notes, hertz_pressure, persson_share, plane_strain_modulus
from outcouple.fields import choice, name, quantity
from outcouple.notes import Note
from outcouple.touching.base import Touching

__all__ = ["Cloth", "Deposit", "ElastomerTip", "Gasket", "Glove", "Ice", "Ink", "Label", "Scratch"]


def _partly(material: str, share: Any, albedo: Any, gas: str = "air") -> Cover:
    """A material on a share of the face, gas far thicker than the wave reaches on the rest."""
    return Cover((Patch(share, material, albedo=albedo), Patch(1 - np.asarray(share), gas)))


class _RangedSolid(Touching):
    """A solid whose contact share is known as a range."""

    kind: ClassVar[str] = "object"
    span: ClassVar[Mapping[str, float]]
    """Contact share of the low, mid and high cover."""

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """Low, mid and high; one cover where the contact is given."""
        if p.contact is not None:
            return {"": _partly(p.material, p.contact, p.albedo)}
        return {level: _partly(p.material, share, p.albedo) for level, share in cls.span.items()}


def _contact(describe: str) -> Any:
    return quantity(None, "ratio", optional=True, ge="0 %", le="100 %", describe=describe)


class Glove(_RangedSolid):
    """A gloved finger."""

    what: ClassVar[str] = "glove"
    summary: ClassVar[str] = "gloved fingertip (low, mid, high)"
    span: ClassVar[Mapping[str, float]] = {"low": 0.1, "mid": 0.25, "high": 0.45}

    material: str = name("nitrile rubber", describe="material of the glove", deciding=True)
    contact: float | None = _contact("share of the outline that touches; unset: 10, 25 and 45 %, from memory")
    albedo: float = quantity(
        "30 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="share of the light entering it that comes back",
        reference="from memory",
    )


class Cloth(_RangedSolid):
    """Dry cloth lying on the face."""

    what: ClassVar[str] = "cloth"
    summary: ClassVar[str] = "dry cloth or paper: fibres touch here and there (low, mid, high)"
    kind: ClassVar[str] = "any"
    span: ClassVar[Mapping[str, float]] = {"low": 0.005, "mid": 0.02, "high": 0.06}

    material: str = name("cellulose", describe="material of the fibres")
    contact: float | None = _contact("share of the outline that touches; unset: 0.5, 2 and 6 %, from memory")
    albedo: float = quantity(
        "60 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="share of the light entering it that comes back",
        reference="from memory",
    )


class Gasket(_RangedSolid):
    """A gasket, foam tape or seal: a touch that never ends."""

    what: ClassVar[str] = "gasket"
    summary: ClassVar[str] = "gasket or seal on the face, a permanent touch (low, mid, high)"
    kind: ClassVar[str] = "any"
    span: ClassVar[Mapping[str, float]] = {"low": 0.2, "mid": 0.5, "high": 0.9}

    material: str = name("silicone", describe="material of the gasket", deciding=True)
    contact: float | None = _contact("share of its area that touches; unset: 20, 50 and 90 %, from memory")
    albedo: float = quantity(
        "5 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="share of the light entering it that comes back",
        reference="from memory",
    )


class ElastomerTip(Touching):
    """A soft round tip pressed on the face; the object's diameter is that of the contact."""

    what: ClassVar[str] = "elastomer-tip"
    summary: ClassVar[str] = "soft round tip: contact pressure by Hertz, real contact of its roughness by Persson"
    kind: ClassVar[str] = "object"

    material: str = name("silicone", describe="material of the tip", deciding=True)
    force: float = quantity("1 N", "force", ge="0.001 N", le="100 N", describe="normal force", deciding=True)
    radius: float = quantity("4 mm", "length", ge="0.1 mm", le="100 mm", describe="radius of curvature of the tip")
    modulus: float = quantity(
        "2 MPa",
        "pressure",
        ge="10 kPa",
        le="1 GPa",
        describe="Young's modulus",
        reference="soft elastomers 0.5 to 5 MPa, from memory",
    )
    poisson: float = quantity(0.49, "number", ge=0, le=0.5, describe="Poisson's ratio; rubbers are nearly 0.5")
    slope: float = quantity(
        0.1, "number", gt=0, le=2, describe="root-mean-square slope of its roughness", reference="from memory"
    )
    albedo: float = quantity("20 %", "ratio", ge="0 %", le="100 %", describe="share of entering light that comes back")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """Contact of the roughness at Hertz' mean pressure."""
        modulus = plane_strain_modulus(modulus=p.modulus, poisson=p.poisson)
        pressure = hertz_pressure(force=p.force, radius=p.radius, modulus=modulus)
        share = persson_share(pressure=pressure, modulus=modulus, slope=p.slope)
        return {"": _partly(p.material, share, p.albedo)}

    @classmethod
    def notes(cls, p: Any) -> tuple[Note, ...]:
        """Where the tip is pressed too flat for Hertz."""
        modulus = plane_strain_modulus(modulus=p.modulus, poisson=p.poisson)
        return hertz_notes(force=p.force, radius=p.radius, modulus=modulus)


class Label(Touching):
    """A glued label or tape: full contact."""

    what: ClassVar[str] = "label"
    summary: ClassVar[str] = "glued label or tape, full permanent contact"

    material: str = name("polyurethane", describe="adhesive")
    albedo: float = quantity("60 %", "ratio", ge="0 %", le="100 %", describe="share of entering light that comes back")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """The adhesive all over."""
        return {"": Cover((Patch(1.0, p.material, albedo=p.albedo),))}


class Ink(Touching):
    """A dried mark of ink or paint."""

    what: ClassVar[str] = "ink"
    summary: ClassVar[str] = "dried mark of ink or paint: a pigmented binder in full contact"

    material: str = name("polyurethane", describe="binder")
    coverage: float = quantity("100 %", "ratio", ge="0 %", le="100 %", describe="share of the mark that is covered")
    albedo: float = quantity(
        "10 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="share of entering light that comes back: a few % for black, 80 % for white in the infrared",
        reference="from memory; many dark inks are clear in the infrared",
    )

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """Binder on the covered share."""
        return {"": _partly(p.material, p.coverage, p.albedo)}


class Ice(Touching):
    """Ice or frost on the face."""

    what: ClassVar[str] = "ice"
    summary: ClassVar[str] = "ice on the face: clear or frosted, in part lifted off"

    contact: float = quantity("80 %", "ratio", ge="0 %", le="100 %", describe="share of the face it touches")
    albedo: float = quantity(
        "20 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="share of entering light that comes back; frost 60 %",
        reference="from memory",
    )

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """Ice on the touched share."""
        return {"": _partly("ice", p.contact, p.albedo)}


class Deposit(Touching):
    """Scale or dried product on the face."""

    what: ClassVar[str] = "deposit"
    summary: ClassVar[str] = "deposit: a clear flat film, a rough one that scatters, or a pigmented one"

    nature: str = choice("rough", ["clear", "rough", "pigmented"], describe="what it looks like", deciding=True)
    material: str = name("crown glass", describe="a material of the deposit's index")
    coverage: float = quantity("50 %", "ratio", ge="0 %", le="100 %", describe="share of the face", deciding=True)
    thickness: float = quantity("20 um", "length", ge="10 nm", le="5 mm", describe="mean thickness, where it is clear")
    outside: str = name("air", describe="what lies on a clear deposit")
    albedo: float | None = quantity(
        None,
        "ratio",
        optional=True,
        ge="0 %",
        le="100 %",
        describe="share of entering light that comes back; unset: rough 50 %, pigmented 15 %, from memory",
    )

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """A flat film does not switch the face; a rough or pigmented deposit takes light and sends some back."""
        if p.nature == "clear":
            film = Film(p.material, p.thickness, "exponential")
            return {"": Cover((Patch(p.coverage, p.outside, (film,)), Patch(1 - np.asarray(p.coverage), p.outside)))}
        albedo = p.albedo if p.albedo is not None else {"rough": 0.5, "pigmented": 0.15}[p.nature]
        return {"": _partly(p.material, p.coverage, albedo, p.outside)}


class Scratch(Touching):
    """Scratches or crazing."""

    what: ClassVar[str] = "scratch"
    summary: ClassVar[str] = "scratched or crazed face: a share of it throws light out and about"

    share: float = quantity(
        "2 %", "ratio", ge="0 %", le="100 %", describe="share of the face that is damaged", deciding=True
    )
    albedo: float = quantity(
        "50 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="share of the light taken out that is thrown back into the guide",
    )
    medium: str = name("sapphire", describe="stands for the damage: an index above the guide's takes every ray out")
    outside: str = name("air", describe="what lies on the rest")

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """Damage takes every ray that meets it."""
        return {"": _partly(p.medium, p.share, p.albedo, p.outside)}
