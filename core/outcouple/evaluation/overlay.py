"""A design's parameters over samples: a scalar, checked design with arrays laid over some of its leaves."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.design import Design, State
from outcouple.errors import UserMistake
from outcouple.fields import Overlay, check_overlay, overlaid
from outcouple.touching.clear import Dry

__all__ = ["UNTOUCHED", "Samples", "StateView", "View", "check_samples", "samples_count", "view_of"]

Floats = NDArray[np.float64]
Path = tuple[str, ...]
Samples = Mapping[Path, Floats]


UNTOUCHED = "(untouched)"
"""Name of the state in which nothing touches; every view knows it."""


@dataclass(frozen=True)
class StateView:
    """A state's own numbers: per face the preset's parameters, and the object's."""

    touching: Mapping[str, Overlay]
    object: Overlay | None


class View:
    """The whole design as attributes: sections by name, states by ``states[family]``."""

    def __init__(self, sections: Overlay, states: Mapping[str, StateView]) -> None:
        self._sections = sections
        self.states = states

    def __getattr__(self, name: str) -> Any:
        return getattr(self._sections, name)


def samples_count(samples: Samples) -> int:
    """S: the common length of all sample arrays, 1 where there are none."""
    sizes = {len(array) for array in samples.values()}
    if len(sizes) > 1:
        raise ValueError(f"sample arrays differ in length: {sorted(sizes)}")
    return sizes.pop() if sizes else 1


def check_samples(design: Design, samples: Samples) -> None:
    """Raise UserMistake where a sample leaves its leaf's bounds or a path is not a number of the design."""
    own, states = _split(samples)
    check_overlay(design.sections, own)
    families = {state.family: state for state in design.states}
    for family, leaves in states.items():
        if family not in families:
            raise UserMistake(f"states.{family}: no such state; there are: {', '.join(families)}")
        for path, values in leaves.items():
            for model in _models(families[family], path):
                check_overlay(model, {path[1:] if path[0] == "object" else path: values})


def _split(samples: Samples) -> tuple[dict[Path, Floats], dict[str, dict[Path, Floats]]]:
    own: dict[Path, Floats] = {}
    states: dict[str, dict[Path, Floats]] = {}
    for path, values in samples.items():
        if path[0] == "states":
            states.setdefault(path[1], {})[path[2:]] = values
        else:
            own[path] = values
    return own, states


def _models(state: State, path: Path) -> list[Any]:
    """The models of a state that a path below it speaks of: ("object", leaf), or (leaf,) of every face's preset."""
    if path[0] == "object":
        return [state.object] if state.object is not None else []
    presets = list(state.touching.values())
    return [preset for preset in presets if path[0] in type(preset).model_fields] or presets


def view_of(design: Design, samples: Samples, changes: Mapping[Path, float] | None = None) -> View:
    """The design with samples laid over it, and over those what a state changes."""
    own, states = _split(samples)
    own.update({path: np.array([value]) for path, value in (changes or {}).items()})
    dry = overlaid(Dry(), {})
    views = {UNTOUCHED: StateView(dict.fromkeys(design.geometry.wetted, dry), None)}
    for state in design.states:
        if state.family in views:
            continue
        mine = states.get(state.family, {})
        preset = {path: values for path, values in mine.items() if path[0] != "object"}
        place = {path[1:]: values for path, values in mine.items() if path[0] == "object"}
        touching: dict[str, Overlay] = {}
        for face, model in state.touching.items():
            touching[face] = overlaid(model, preset)
        thing = overlaid(state.object, place) if state.object is not None else None
        views[state.family] = StateView(touching, thing)
    return View(overlaid(design.sections, own), views)
