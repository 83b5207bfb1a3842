"""Sections of the design file of a plate read around its perimeter."""

from __future__ import annotations

from outcouple.fields import Section, choice, count, quantity
from outcouple_plugins.plate.parameters import ROWS, EdgeEmitter, Plate, Row

__all__ = ["Baseline", "Detectors", "Emitters", "Field", "Parameters", "Scan"]


class Emitters(Row):
    """Rows of equal emitters along edges of the plate, lit in turn, each with its share of emitter.power."""

    edges: str = choice("left and bottom", list(ROWS), describe="edges that carry emitters", deciding=True)
    per_edge: int = count(24, ge=1, le=256, describe="on each of these edges, evenly spaced", deciding=True)


class Detectors(Section):
    """A row of equal detectors along edges of the plate."""

    edges: str = choice("right and top", list(ROWS), describe="edges that carry detectors", deciding=True)
    per_edge: int = count(24, ge=1, le=256, describe="on each of these edges, evenly spaced", deciding=True)
    width: float = quantity(
        "2 mm", "length", ge="0.05 mm", le="200 mm", describe="of one, along the edge", deciding=True
    )
    height: float = quantity("2 mm", "length", ge="0.01 mm", le="50 mm", describe="of one, across the thickness")
    offset: float = quantity(
        "0 mm", "length", ge="-20 mm", le="20 mm", describe="of its middle from the middle of the thickness"
    )
    gap: float = quantity("0.3 mm", "length", ge="0 mm", le="50 mm", describe="between it and the edge")
    half_angle: float = quantity(
        "75 deg",
        "angle",
        gt="0 deg",
        le="90 deg",
        describe="angle from the edge's normal up to which it takes light, in the medium it stands in",
    )
    coupling: str = choice("air", ["air", "bonded"], describe="behind an air gap, or index-matched to the edge")
    outside_share: float = quantity(
        "1 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="outside light a detector gets through plate and frame, as a share of what it would get in the open",
    )


class Scan(Section):
    """How the emitters take turns; all detectors are read at once."""

    slot: float = quantity(
        "50 us", "time", ge="10 ns", le="1 s", describe="one emitter's turn, settling included", slider="log"
    )


class Baseline(Section):
    """The untouched reading of every chord, tracked slowly."""

    drift: float = quantity(
        "0.5 %/K",
        "per_kelvin",
        ge="0 %/K",
        le="10 %/K",
        describe="change of a chord's reading with temperature",
        reference="infrared LEDs lose about 0.5 to 0.9 %/K, common practice, no source",
    )
    change: float = quantity(
        "2 K",
        "temperature_difference",
        ge="0 K",
        le="200 K",
        describe="temperature change that the tracking does not follow",
        deciding=True,
    )


class Field(Section):
    """The part of the plate that must see objects, and the grid that maps of it are computed on."""

    margin: float = quantity(
        "15 mm",
        "length",
        ge="0 mm",
        le="500 mm",
        describe="width along the edges that need not see",
        deciding=True,
    )
    certainty: float = quantity(
        3,
        "number",
        ge=0,
        le=20,
        describe="standard deviations by which a chord's loss must exceed the level to count as seeing an object",
    )
    columns: int = count(200, ge=10, le=2000, describe="cells of the maps along x")
    rows: int = count(120, ge=10, le=2000, describe="cells of the maps along y")


class Parameters(Section):
    """A plate lit at its edges and read around its perimeter."""

    emitter: EdgeEmitter = EdgeEmitter()
    plate: Plate = Plate()
    emitters: Emitters = Emitters()
    detectors: Detectors = Detectors()
    scan: Scan = Scan()
    baseline: Baseline = Baseline()
    field: Field = Field()
