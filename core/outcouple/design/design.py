"""A design: one variant of one sensor, checked and immutable."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from outcouple.design.states import Requirement, State
from outcouple.fields import Section, leaf_text, leaves
from outcouple.geometry import Geometry
from outcouple.hooks import Host
from outcouple.materials import Catalogue

__all__ = ["Design", "Tolerance"]

Path = tuple[str, ...]


@dataclass(frozen=True)
class Tolerance:
    """How one numeric input may deviate: limits about its value, and the group it moves with.

    low, high  absolute limits in SI
    group      inputs of one group go to their limits together; empty for a group of its own
    """

    path: Path
    low: float
    high: float
    distribution: str = "uniform"
    group: str = ""


@dataclass(frozen=True)
class Design:
    """What ``load_design`` returns.

    sections      all sections of the file except the states: a pydantic model, SI inside
    states        expanded: a contact known as a range stands as three states
    raw           the file as plain data, texts as the user wrote them; what-if edits start from it
    given         paths the file sets itself; every other leaf is a default
    """

    title: str
    geometry: Geometry
    sections: Section
    states: tuple[State, ...]
    requirements: tuple[Requirement, ...]
    tolerances: tuple[Tolerance, ...]
    catalogue: Catalogue
    host: Host
    raw: Mapping[str, Any]
    given: frozenset[Path] = field(default_factory=frozenset)
    file: str = ""

    def unverified(self) -> tuple[str, ...]:
        """Decisive inputs that the file leaves at their defaults."""
        return tuple(leaf.name for leaf in leaves(type(self.sections)) if leaf.deciding and leaf.path not in self.given)

    def text(self, path: Path) -> str:
        """The text of a leaf as the user wrote it, or its default's."""
        here: Any = self.raw
        for key in path:
            here = here.get(key) if isinstance(here, Mapping) else None
        return str(here) if here is not None else leaf_text(self.sections, path)
