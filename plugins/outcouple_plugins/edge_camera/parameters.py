"""Sections of the design file of a plate that a camera looks at through its back."""

from __future__ import annotations

from outcouple.fields import Section, choice, count, quantity
from outcouple_plugins.plate.parameters import ROWS, EdgeEmitter, Plate, Row

__all__ = ["Emitters", "Field", "Lamps", "Lens", "Outside", "Parameters"]


class Lamps(EdgeEmitter):
    """The lamps along the edges, all lit together."""

    power: float = quantity(
        "300 mW",
        "power",
        ge="0 W",
        le="100 W",
        describe="optical power sent out, all emitters together",
        deciding=True,
        slider="log",
    )


class Emitters(Row):
    """Rows of equal emitters along edges of the plate, all lit together, each with its share of emitter.power."""

    edges: str = choice("left and right", list(ROWS), describe="edges that carry emitters", deciding=True)
    per_edge: int = count(16, ge=1, le=1000, describe="on each of these edges, evenly spaced", deciding=True)


class Lens(Section):
    """The camera behind the plate: it looks straight at the plate through its back."""

    distance: float = quantity(
        "0.6 m", "length", ge="20 mm", le="10 m", unit="m", describe="from the entrance pupil to the plate"
    )
    pupil: float = quantity(
        "2.5 mm", "length", ge="0.05 mm", le="100 mm", describe="diameter of the entrance pupil", deciding=True
    )
    focal_length: float | None = quantity(
        None, "length", optional=True, ge="0.5 mm", le="500 mm", describe="with the f-number it wins over the pupil"
    )
    f_number: float = quantity(2, "number", ge=0.7, le=64, describe="focal length over pupil")
    view: float | None = quantity(
        None, "length", optional=True, ge="5 mm", le="5 m", describe="seen along x; else the width of the plate"
    )
    columns: int = count(1280, ge=8, le=20000, describe="pixels along x")
    x: float = quantity("0 mm", "length", ge="-5 m", le="5 m", describe="where the axis meets the plate")
    y: float = quantity("0 mm", "length", ge="-5 m", le="5 m", describe="where the axis meets the plate")
    transmission: float = quantity("90 %", "ratio", gt="0 %", le="100 %", describe="of the lens")
    filter_index: float = quantity(
        1.8, "number", ge=1, le=3, describe="effective index of an interference filter, bluer off axis",
        reference="1.5 to 2.1, from memory",
    )  # fmt: skip


class Outside(Section):
    """What a pixel sees through the plate beside the touch."""

    reflectance: float = quantity(
        "50 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="brightness of what lies or hovers above, as a share of a white sheet in the outside light; 100 % is "
        "an even sky",
    )
    lit: float = quantity(
        "100 %",
        "ratio",
        ge="0 %",
        le="100 %",
        describe="share of the outside light that falls on its underside: a palm shades itself",
    )


class Field(Section):
    """The part of the plate that must see objects, and the grid of its maps."""

    margin: float = quantity(
        "20 mm", "length", ge="0 mm", le="500 mm", describe="width along the edges that need not see"
    )
    certainty: float = quantity(
        8, "number", ge=1, le=50, describe="signal over noise that counts as seen, for the smallest object"
    )
    columns: int = count(60, ge=4, le=500, describe="cells of the maps along x")
    rows: int = count(36, ge=4, le=500, describe="cells of the maps along y")


class Parameters(Section):
    """A plate lit at its edges and looked at by a camera."""

    emitter: Lamps = Lamps()
    plate: Plate = Plate()
    emitters: Emitters = Emitters()
    lens: Lens = Lens()
    outside: Outside = Outside()
    field: Field = Field()
