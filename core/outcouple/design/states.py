"""States of the sensor as a design file names them, and requirements."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any, Literal

import numpy as np
from numpy.typing import NDArray

from outcouple.contact.cover import Cover
from outcouple.fields import Section, quantity
from outcouple.touching import Touching

__all__ = ["ObjectPlace", "Requirement", "State"]

Floats = NDArray[np.float64]
ROUNDING = 1e-9
"""Share of a limit by which a value may miss it through rounding alone."""


class ObjectPlace(Section):
    """An object of limited size on the touched face."""

    diameter: float = quantity(
        "9 mm", "length", ge="0.1 mm", le="500 mm", describe="diameter of the object's footprint"
    )
    x: float | None = quantity(
        None, "length", optional=True, ge="-5 m", le="5 m", describe="x of its centre; the middle"
    )
    y: float | None = quantity(
        None, "length", optional=True, ge="-5 m", le="5 m", describe="y of its centre; the middle"
    )


@dataclass(frozen=True)
class State:
    """One state of the sensor.

    name      unique within the design
    family    name in the file; a state whose contact is known as a range stands for it as "name (low)" and so on
    expect    "absent", "present" or a number in SI for continuous sensors
    touching  face -> preset parameters, for the faces the state says something about
    level     which of the preset's covers: "", "low", "mid" or "high"
    object    an object's size and place, or None where the contact is all over
    changes   dotted path -> SI value of parameters that differ in this state
    """

    name: str
    family: str
    expect: str | float
    touching: Mapping[str, Touching]
    level: str = ""
    object: ObjectPlace | None = None
    changes: Mapping[tuple[str, ...], float] = field(default_factory=dict)
    role: Literal["normal", "fault"] = "normal"
    describe: str = ""

    @property
    def changes_key(self) -> tuple[tuple[tuple[str, ...], float], ...]:
        """What the light of this state depends on beyond the design."""
        return tuple(sorted(self.changes.items()))

    def covers(self, p: Any) -> Mapping[str, Cover]:
        """Face -> cover under parameters ``p``; one preset gives one cover object for all its faces."""
        views = p.states[self.family].touching
        built: dict[int, Cover] = {}
        found = {}
        for face, preset in self.touching.items():
            if id(preset) not in built:
                levels = type(preset).build(views[face])
                built[id(preset)] = levels[self.level if self.level in levels else ""]
            found[face] = built[id(preset)]
        return found

    def place(self, p: Any, samples: int) -> Mapping[str, Floats]:
        """Diameter and place of the object, each (S,); the middle of the face is x = y = 0."""
        view = p.states[self.family].object
        values = {"diameter": view.diameter, "x": view.x, "y": view.y}
        return {
            key: np.broadcast_to(np.asarray(0.0 if value is None else value, dtype=float), (samples,))
            for key, value in values.items()
        }


@dataclass(frozen=True)
class Requirement:
    """A metric and the limit it must keep.

    at_least, at_most  limit in SI; one of them is set
    state              restrict to one state (or object, or pair); empty for the worst
    over               "nominal", "corners" or "yield"
    area               share of a map that must keep the limit, for map metrics
    share              share of draws that must keep it, for a yield
    """

    metric: str
    at_least: float | None = None
    at_most: float | None = None
    state: str = ""
    over: Literal["nominal", "corners", "yield"] = "nominal"
    area: float = 1.0
    share: float = 1.0
    text: str = ""

    @property
    def limit(self) -> float:
        """The limit in SI."""
        return self.at_least if self.at_least is not None else float(self.at_most or 0.0)

    def met(self, value: Any) -> Any:
        """True where a value keeps the limit; nan never does."""
        return self.margin(value) >= 0.0

    def margin(self, value: Any) -> Any:
        """Distance to the limit in the metric's own unit, positive where it is met; zero within rounding of the limit.

        A level set for one false alarm a year gives 1 + 1e-14 of them: that is the limit, not a miss.
        """
        sign = 1.0 if self.at_least is not None else -1.0
        distance = np.asarray(sign * (np.asarray(value) - self.limit))
        return np.where(np.abs(distance) <= ROUNDING * abs(self.limit), 0.0, distance)
