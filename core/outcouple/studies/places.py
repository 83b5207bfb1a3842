"""Where a study may reach into a design: numbers that run as arrays, everything else as other designs.

A place is written as in the file: ``plate.thickness``, ``prism.material``, ``states.NAME.touching.liquid``,
``states.NAME.touching`` for the whole contact, ``states.NAME.object.diameter``, ``materials.NAME.index``.
"""

from __future__ import annotations

import copy
import re
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from outcouple.design import Design, ObjectPlace, design_from_mapping, design_model
from outcouple.errors import UserMistake, nearest
from outcouple.fields import Leaf, leaf_at, leaves, parse_leaf

__all__ = ["Place", "find_place", "with_values"]

Path = tuple[str, ...]

STATE_PARTS = ("touching", "faces", "object", "set", "expect")


@dataclass(frozen=True)
class Place:
    """One input of a design.

    name   as a person writes it
    leaf   what is known about it; None for a whole contact and for values of the user's own materials
    raw    where it stands in the file's data; states by name: ("states", "dry", "touching", "liquid")
    path   path of samples laid over it; empty where it cannot run as an array
    """

    name: str
    raw: Path
    leaf: Leaf | None = None
    path: Path = ()

    def value(self, text: str) -> Any:
        """A value of this input from its text: numbers in SI.

        Raises UserMistake with what is wrong and what is allowed.
        """
        if self.leaf is None:
            return _plain(text)
        if self.leaf.what == "flag":
            return parse_leaf(self.leaf, {"true": True, "false": False}.get(text, text))
        return parse_leaf(self.leaf, _plain(text) if self.leaf.what == "count" else text)

    def text(self, value: Any) -> str:
        """A value as a person writes it."""
        return str(value) if self.leaf is None else self.leaf.text(value)


def _plain(text: str) -> Any:
    """A whole number, a number, or the text."""
    for kind in (int, float):
        try:
            return kind(text)
        except ValueError:
            continue
    return text


def find_place(design: Design, name: str) -> Place:
    """The place of that name.

    Raises UserMistake, with the nearest that there is, where the design has no such input.
    """
    head, _, rest = name.partition(".")
    if head == "states":
        return _state_place(design, name, rest)
    if head == "materials":
        return _material_place(design, name, rest)
    path = tuple(name.split("."))
    known = {leaf.path: leaf for leaf in leaves(design_model(type(design.geometry)))}
    if path not in known:
        names = [leaf.name for leaf in known.values()]
        raise UserMistake(f"{name}: no such input{nearest(name, names)}{_hint(name, names)}")
    leaf = known[path]
    return Place(name, path, leaf, () if leaf.structural else path)


def _hint(name: str, names: list[str]) -> str:
    """Inputs of the same section or with the same last word."""
    head, _, last = name.rpartition(".")
    alike = [one for one in names if one.rpartition(".")[2] == last or (head and one.startswith(f"{head}."))]
    return f"; there are: {', '.join(alike[:12])}" if alike else "; sections: " + ", ".join(_sections(names))


def _sections(names: list[str]) -> list[str]:
    return list(dict.fromkeys(one.partition(".")[0] for one in names))


def _state_place(design: Design, name: str, rest: str) -> Place:
    families = list(dict.fromkeys(state.family for state in design.states))
    if "states" not in design.raw:
        raise UserMistake(f"{name}: the design names no states of its own; write them as [[states]] first")
    rest = re.sub(r'^"([^"]*)"', r"\1", rest)
    family = max((one for one in families if rest == one or rest.startswith(f"{one}.")), key=len, default="")
    if not family:
        given = rest.partition(".")[0]
        raise UserMistake(f"{name}: no state {given!r}{nearest(given, families)}; there are: {', '.join(families)}")
    keys = tuple(rest[len(family) + 1 :].split("."))
    if keys[0] not in STATE_PARTS:
        raise UserMistake(
            f"{name}: a state's inputs are {', '.join(STATE_PARTS)}; write states.{family}.touching in water, ... "
            f"or states.{family}.touching.thickness from ..."
        )
    return _state_leaf(design, name, family, keys)


def _state_leaf(design: Design, name: str, family: str, keys: Path) -> Place:
    state = next(one for one in design.states if one.family == family)
    raw = ("states", family, *keys)
    if keys[0] == "set":
        inner = find_place(design, ".".join(keys[1:]))
        return Place(name, ("states", family, "set", inner.name), inner.leaf)
    if keys == ("expect",) and isinstance(state.expect, float):
        known = leaves(design_model(type(design.geometry)))
        return Place(name, raw, next(leaf for leaf in known if leaf.path == design.geometry.measurand))
    if keys[0] == "expect" or len(keys) == (2 if keys[0] == "faces" else 1):
        return Place(name, raw)
    if keys[0] == "object":
        leaf, _ = leaf_at(state.object if state.object is not None else ObjectPlace(), keys[1:])
        return Place(name, raw, leaf, ("states", family, *keys) if state.object is not None else ())
    presets = dict.fromkeys(state.touching.values()) if keys[0] == "touching" else [state.touching.get(keys[1])]
    below = keys[1:] if keys[0] == "touching" else keys[2:]
    mistakes: list[str] = []
    for preset in presets:
        if preset is None:
            raise UserMistake(f"{name}: no face {keys[1]!r}; faces: {', '.join(design.geometry.wetted)}")
        try:
            leaf, _ = leaf_at(preset, below)
        except UserMistake as mistake:
            mistakes.append(f"{name}: what touches is {type(preset).what!r}; {mistake}")
            continue
        laid = keys[0] == "touching" and not leaf.structural
        return Place(name, raw, leaf, ("states", family, *below) if laid else ())
    raise UserMistake(mistakes[-1] if mistakes else f"{name}: nothing touches in this state")


def _material_place(design: Design, name: str, rest: str) -> Place:
    own = design.raw.get("materials", {})
    known = [f"{material}.{key}" for material, row in own.items() for key in row]
    if rest not in known:
        there = ", ".join(f"materials.{one}" for one in known) or "the design has none of its own"
        raise UserMistake(f"{name}: no such input of the design's own materials{nearest(rest, known)}; {there}")
    material = max((one for one in own if rest.startswith(f"{one}.")), key=len)
    return Place(name, ("materials", material, *rest[len(material) + 1 :].split(".")))


def with_values(design: Design, values: Mapping[Place, Any]) -> Design:
    """Another design with some places set: read and checked like a file.

    Raises UserMistake where the values cannot stand together.
    """
    if not values:
        return design
    data = copy.deepcopy(dict(design.raw))
    for place, value in values.items():
        _put(design, data, place, value)
    return design_from_mapping(data, file=design.file, host=design.host)


def _put(design: Design, data: dict[str, Any], place: Place, value: Any) -> None:
    """Write a value into the file's data, in the file's own way: quantities as texts."""
    here: Any = data
    keys = place.raw
    if keys[0] == "states":
        here = next(row for row in data["states"] if row.get("name") == keys[1])
        keys = keys[2:]
        if len(keys) > 1 and keys[0] in ("touching", "faces"):
            at = 0 if keys[0] == "touching" else 1
            _as_table(design, here if at == 0 else here["faces"], keys[at])
    for key in keys[:-1]:
        here = here[int(key)] if isinstance(here, list) else here.setdefault(key, {})
    here[keys[-1]] = value if place.leaf is None or place.leaf.what in ("count", "flag") else _written(place, value)


def _written(place: Place, value: Any) -> Any:
    leaf = place.leaf
    if leaf is None or leaf.structural:
        return value
    return float(value) if not leaf.unit else f"{float(value)!r} {leaf.si_unit}" if leaf.si_unit else float(value)


def _as_table(design: Design, row: dict[str, Any], key: str) -> None:
    """A contact that is given by name alone, written out as a table."""
    given = row.get(key, "dry")
    if isinstance(given, str):
        row[key] = {"what": given} if given in design.host.touching else {"what": "immersed", "liquid": given}
