"""Presets of skin: fingertips dry, wet and greasy, a palm.

A fingertip touches with the tops of its ridges, and those only in part; under the rest of the ridge tops lies about a
micrometre of air, within reach of the evanescent field; in the valleys air, sweat or grease. The three covers span what
people differ by.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

import numpy as np

from outcouple.contact.cover import Cover, Film, Patch
from outcouple.contact.diffuse import internal_albedo
from outcouple.contact.mechanics import finger_notes, finger_share, settled_share
from outcouple.fields import name, quantity
from outcouple.notes import Note
from outcouple.touching.base import Touching

__all__ = ["ChildFinger", "Fingertip", "GreasyFinger", "Palm", "WetFinger"]

SKIN = {"low": "epidermis low", "mid": "epidermis mid", "high": "epidermis high"}
SPAN = {"low": 0.5, "mid": 1.0, "high": 1.6}
"""Factors on the contact share: people differ by a factor of two and more about the middle; from memory."""
SKIN_INDEX = 1.42
"""For the albedo inside from the reflectance in air; H. Ding et al., Phys. Med. Biol. 51, 1479 (2006), at 850 nm."""


class Fingertip(Touching):
    """An ordinary fingertip."""

    what: ClassVar[str] = "fingertip"
    summary: ClassVar[str] = "fingertip: ridge tops that touch in part, air in the valleys (low, mid, high)"
    kind: ClassVar[str] = "object"

    force: float = quantity(
        "0.5 N",
        "force",
        ge="0 N",
        le="50 N",
        describe="normal force",
        deciding=True,
        reference="common practice, no source",
    )
    time: float = quantity(
        "1 s",
        "time",
        ge="0 s",
        le="1000 s",
        describe="since it was put down; contact on hard plates grows for some 20 s",
        reference="B. Dzidek et al., PNAS 114, 10864 (2017), doi 10.1073/pnas.1706233114",
    )
    ridges: float = quantity(
        "50 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="share of the outline on ridge tops",
        reference="ridges of 100 to 300 um at a period near 500 um, from memory",
    )
    contact: float | None = quantity(
        None,
        "ratio",
        optional=True,
        ge="0 %",
        le="100 %",
        describe="share of the outline that really touches, all in all; wins over force and time, and is no range",
    )
    gap: float = quantity(
        "1 um",
        "length",
        ge="10 nm",
        le="100 um",
        describe="mean air gap under ridge tops that do not touch",
        reference="from memory",
    )
    filled: float = quantity(
        "0 %", "ratio", ge="0 %", le="100 %", describe="share of the valleys filled with a liquid", deciding=True
    )
    filling: str = name("sweat", describe="liquid in the valleys", what="material")
    skin: str | None = name(None, describe="material of the skin; unset: the range of epidermis", optional=True)
    reflectance: float = quantity(
        "55 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="diffuse reflectance of the skin, measured in air; differs by pigment below 1000 nm",
        reference="forearm near 60 % at 850 nm and 55 % at 940 nm, from memory; open data doi 10.18434/M38597",
    )

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """Low, mid and high; one cover where both the skin and its contact are given."""
        if p.skin is not None and p.contact is not None:
            return {"": _finger(p, p.skin, p.contact)}
        return {
            level: _finger(p, p.skin or SKIN[level], p.contact if p.contact is not None else _touched(p, SPAN[level]))
            for level in SKIN
        }

    @classmethod
    def notes(cls, p: Any) -> tuple[Note, ...]:
        """What is uncertain about every finger."""
        return finger_notes(force=p.force)


def _touched(p: Any, factor: float) -> Any:
    """Share of the outline that touches: by force, growing as the skin softens, at most all ridge tops."""
    settled = finger_share(force=p.force) * factor
    share = settled_share(time=p.time, start=0.4 * settled, end=settled)
    return np.minimum(share, p.ridges)


def _finger(p: Any, skin: str, contact: Any) -> Cover:
    albedo = internal_albedo(reflectance=p.reflectance, n_medium=SKIN_INDEX)
    tops = np.maximum(p.ridges - contact, 0.0)
    valleys = np.maximum(1 - contact - tops, 0.0)
    near = Film("air", p.gap, "exponential")
    return Cover(
        (
            Patch(contact, skin, albedo=albedo),
            Patch(tops, skin, (near,), albedo=albedo),
            Patch(valleys * p.filled, p.filling, albedo=albedo),
            Patch(valleys * (1 - p.filled), "air"),
        )
    )


class WetFinger(Fingertip):
    """A wet fingertip: sweat or water in most of the valleys."""

    what: ClassVar[str] = "wet-finger"
    summary: ClassVar[str] = "wet fingertip: water in most of the valleys (low, mid, high)"

    filled: float = quantity(
        "80 %", "ratio", ge="0 %", le="100 %", describe="share of the valleys filled with a liquid", deciding=True
    )
    filling: str = name("water", describe="liquid in the valleys", what="material")


class GreasyFinger(Fingertip):
    """A greasy fingertip."""

    what: ClassVar[str] = "greasy-finger"
    summary: ClassVar[str] = "greasy fingertip: grease in most of the valleys (low, mid, high)"

    filled: float = quantity(
        "60 %", "ratio", ge="0 %", le="100 %", describe="share of the valleys filled with a liquid", deciding=True
    )
    filling: str = name("sebum", describe="liquid in the valleys", what="material")


class ChildFinger(Fingertip):
    """The dry finger of a child: light, small, little contact."""

    what: ClassVar[str] = "child-finger"
    summary: ClassVar[str] = "dry fingertip of a child: a light touch (low, mid, high)"

    force: float = quantity(
        "0.2 N", "force", ge="0 N", le="50 N", describe="normal force", deciding=True, reference="from memory"
    )
    time: float = quantity("0.2 s", "time", ge="0 s", le="1000 s", describe="since it was put down")


class Palm(Fingertip):
    """A resting palm."""

    what: ClassVar[str] = "palm"
    summary: ClassVar[str] = "resting palm: large, settled, in part lifted (low, mid, high)"

    force: float = quantity(
        "5 N", "force", ge="0 N", le="50 N", describe="normal force", deciding=True, reference="from memory"
    )
    time: float = quantity("20 s", "time", ge="0 s", le="1000 s", describe="since it was put down")
