"""Sections for the tests of inputs: one field of every sort."""

from __future__ import annotations

from typing import Self

from pydantic import model_validator

from outcouple.fields import Section, choice, count, flag, name, quantity


class Plate(Section):
    """The plate. Further words nobody shows."""

    material: str = name("acrylic", describe="material of the plate", deciding=True)
    thickness: float = quantity(
        "6 mm",
        "length",
        ge="0.5 mm",
        le="50 mm",
        describe="thickness of the plate",
        reference="common practice, no source",
        group="size",
        deciding=True,
        slider="log",
    )
    gap: float = quantity("200 nm", "length", gt="0 nm", lt="1 um", describe="air under the plate")
    tilt: float = quantity("0 mrad", "angle", ge="-1 deg", describe="tilt of the plate")
    warmth: float = quantity("-20 degC", "temperature", ge="0 K", le="100 degC", describe="its temperature")
    sides: int = count(4, ge=1, le=4, describe="sides that are lit")
    polished: bool = flag(True, describe="edges are polished")
    finish: str = choice("clear", ["clear", "matt"], describe="finish of the faces")
    haze: float | None = quantity(None, "ratio", ge=0, le="5 %", optional=True, describe="measured haze")


class Lamp(Section):
    """The lamp."""

    power: float = quantity("10 mW", "power", ge="0 W", le="1 W", describe="optical power")
    exponent: float = quantity(1, "number", ge=0, le=200, describe="m of the lobe")


class Row(Section):
    """A row of a list."""

    share: float = quantity(..., "ratio", ge="0 %", le="100 %", describe="share of the face")
    cover: str = name(..., describe="what covers it", what="cover")


class Sensor(Section):
    """A whole sensor."""

    plate: Plate = Plate()
    lamp: Lamp = Lamp(power="20 mW")  # type: ignore[arg-type]  # a text, as in a file
    rows: tuple[Row, ...] = ()
    notes: str = ""

    @model_validator(mode="after")
    def _lit(self) -> Self:
        if self.lamp.power > 0.5 and self.plate.thickness < 1e-3:
            raise ValueError("a plate this thin melts under this lamp")
        return self
