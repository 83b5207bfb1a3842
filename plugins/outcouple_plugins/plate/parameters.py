"""Sections that every edge-lit plate shares."""

from __future__ import annotations

from outcouple.design.sections import Emitter
from outcouple.fields import Section, choice, count, name, quantity

__all__ = ["ROWS", "EdgeEmitter", "Plate", "Row", "edges_of"]

ROWS: dict[str, tuple[str, ...]] = {
    "left": ("left",),
    "right": ("right",),
    "bottom": ("bottom",),
    "top": ("top",),
    "left and right": ("left", "right"),
    "bottom and top": ("bottom", "top"),
    "left and bottom": ("left", "bottom"),
    "right and top": ("right", "top"),
    "all": ("left", "right", "bottom", "top"),
}
"""Edges by the words of a design file."""


def edges_of(words: str) -> tuple[str, ...]:
    """The edges that the words of a design file name."""
    return ROWS[words]


class EdgeEmitter(Emitter):
    """The lamps along the edges, equal ones; a plate needs them wide, for only steep rays leak into a touch."""

    half_angle: float = quantity(
        "75 deg",
        "angle",
        gt="0 deg",
        le="90 deg",
        describe="angle from the axis at which the lobe is cut, in the medium it emits into",
        deciding=True,
    )


class Plate(Section):
    """A rectangular plate that guides light between its faces; x runs along the width, the middle is (0, 0)."""

    material: str = name("PMMA", describe="material of the plate", deciding=True)
    width: float = quantity("400 mm", "length", ge="10 mm", le="5 m", describe="along x", deciding=True)
    height: float = quantity("300 mm", "length", ge="10 mm", le="5 m", describe="along y", deciding=True)
    thickness: float = quantity("5 mm", "length", ge="0.3 mm", le="50 mm", describe="between the faces", deciding=True)
    haze: float = quantity(
        "0 %", "ratio", ge="0 %", le="20 %", describe="share that either face scatters widely at each hit"
    )
    back: str = name("air", describe="what lies on the back face: air, a low-index layer, a glue")
    rim: float = quantity(
        "0 mm",
        "length",
        ge="0 mm",
        le="100 mm",
        describe="width of a strip along the edges that a gasket or frame touches",
    )
    rim_material: str = name("air", describe="what touches the front face along the rim")
    edges: str = choice(
        "absorbing",
        ["absorbing", "polished", "mirrored"],
        describe="finish of the edges. absorbing: black; polished: reflect by Fresnel; mirrored: those without "
        "emitters or detectors carry a mirror, the others are polished",
    )
    mirror: float = quantity("95 %", "ratio", ge="0 %", le="100 %", describe="reflectance of mirrored edges")


class Row(Section):
    """A row of equal emitters along edges of the plate."""

    edges: str = choice("left", list(ROWS), describe="edges that carry emitters", deciding=True)
    per_edge: int = count(12, ge=1, le=1000, describe="on each of these edges, evenly spaced", deciding=True)
    width: float = quantity("2 mm", "length", ge="0.05 mm", le="200 mm", describe="of one, along the edge")
    height: float = quantity(
        "1 mm", "length", ge="0.01 mm", le="50 mm", describe="of one, across the thickness", deciding=True
    )
    offset: float = quantity(
        "0 mm", "length", ge="-20 mm", le="20 mm", describe="of its middle from the middle of the thickness"
    )
    gap: float = quantity("0.3 mm", "length", ge="0 mm", le="50 mm", describe="between it and the edge")
    coupling: str = choice(
        "air",
        ["air", "bonded"],
        describe="air: behind an air gap, all of its light is guided where n > 1.414; bonded: index-matched, part "
        "of it is not",
    )
