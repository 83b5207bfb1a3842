"""The inputs of a design as a form sees them, made from the parameter models alone; no page is known here."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from typing import Any

from outcouple.design import Design, design_model
from outcouple.design.states import ObjectPlace
from outcouple.errors import UserMistake
from outcouple.fields import Leaf, leaves, parse_leaf
from outcouple.metrics import metrics_of
from outcouple.quantities import format_quantity, from_unit, in_unit
from outcouple.touching import Touching
from outcouple_dashboard.edits import get_value

__all__ = [
    "Entry",
    "Group",
    "contact_of",
    "entry_at",
    "join",
    "requirement_entries",
    "section_groups",
    "short_text",
    "slider_position",
    "slider_text",
    "split",
    "state_entries",
    "within",
]

Path = tuple[str, ...]
STEPS = 1000
"""Positions of a slider."""
SHARED = ("emitter", "readout", "decision", "environment")
"""Sections that every sensor has; its own stand before them."""
DECADES = 8
"""Decades a logarithmic slider spans where the lower limit is zero."""


@dataclass(frozen=True)
class Entry:
    """One input.

    text     as a person would write it now
    given    the file sets it itself; otherwise it is a default
    """

    path: Path
    leaf: Leaf
    text: str
    given: bool

    @property
    def label(self) -> str:
        """Its name in words."""
        return words(self.path[-1])

    @property
    def value(self) -> float | None:
        """SI value of a number, None where it is no number or unset."""
        try:
            found = parse_leaf(self.leaf, self.text) if self.text else None
        except UserMistake:
            return None
        return float(found) if isinstance(found, int | float) and not isinstance(found, bool) else None


@dataclass(frozen=True)
class Group:
    """A section of the form."""

    name: str
    about: str
    entries: tuple[Entry, ...]


def words(key: str) -> str:
    """A key of a file in words."""
    return key.replace("_", " ")


def join(path: Path) -> str:
    """A path as part of an id."""
    return "/".join(path)


def split(text: str) -> Path:
    """The reverse of :func:`join`."""
    return tuple(text.split("/"))


def _entry(design: Design, path: Path, leaf: Leaf, fallback: str) -> Entry:
    given = get_value(design.raw, path)
    if isinstance(given, bool):
        text = "true" if given else "false"
    else:
        text = fallback if given is None else str(given)
    return Entry(path, leaf, text, given is not None)


def section_groups(design: Design) -> list[Group]:
    """The sections of the design, the geometry's own first, then emitter, read-out, decision, surroundings."""
    found: dict[str, list[Entry]] = {}
    about: dict[str, str] = {}
    for leaf in leaves(design_model(type(design.geometry))):
        found.setdefault(leaf.path[0], []).append(_entry(design, leaf.path, leaf, leaf.default_text))
        about.setdefault(leaf.path[0], leaf.section)
    own = [name for name in design.geometry.Parameters.model_fields if name not in SHARED]
    order = [*own, *SHARED]
    return [Group(name, about[name], tuple(found[name])) for name in order if name in found]


def contact_of(design: Design, row: Mapping[str, Any]) -> tuple[str, type[Touching] | None]:
    """(what a picker shows for a state's contact, the preset whose numbers can be set)."""
    given = row.get("touching", "dry")
    if isinstance(given, str):
        return given, design.host.touching.get(given)
    what = str(given.get("what", "patches" if "patches" in given else ""))
    if what == "immersed":
        return str(given.get("liquid", "water")), None
    return what, design.host.touching.get(what)


def state_entries(design: Design, at: int) -> list[Entry]:
    """Numbers of one state: of its contact, of the object, and what it changes."""
    row = design.raw["states"][at]
    path = ("states", str(at))
    _, preset = contact_of(design, row)
    found = []
    if preset is not None and "faces" not in row:
        for leaf in leaves(preset):
            if len(leaf.path) == 1:
                found.append(_entry(design, (*path, "touching", *leaf.path), leaf, leaf.default_text))
    if isinstance(row.get("object"), Mapping):
        found += [
            _entry(design, (*path, "object", *leaf.path), leaf, leaf.default_text) for leaf in leaves(ObjectPlace)
        ]
    known = {leaf.name: leaf for leaf in leaves(design_model(type(design.geometry)))}
    for keys in _flat(row.get("set", {})):
        changed = known.get(".".join(keys))
        if changed is not None:
            found.append(_entry(design, (*path, "set", *keys), replace(changed, describe=f"here: {changed.name}"), ""))
    return found


def _flat(table: Any, before: Path = ()) -> Iterator[Path]:
    for key, value in table.items() if isinstance(table, Mapping) else ():
        if isinstance(value, Mapping):
            yield from _flat(value, (*before, key))
        else:
            yield (*before, key)


def requirement_entries(design: Design) -> list[Entry]:
    """The limit of every requirement."""
    known = metrics_of(design.geometry)
    found = []
    for at, row in enumerate(design.raw.get("requirements", [])):
        sense = "at_least" if "at_least" in row else "at_most"
        metric = known[row["metric"]]
        kind = metric.kind
        leaf = Leaf("quantity", metric.meaning, kind=kind, unit=metric.unit if metric.unit in _units(kind) else "")
        found.append(_entry(design, ("requirements", str(at), sense), leaf, ""))
    return found


def _units(kind: str) -> Mapping[str, Any]:
    from outcouple.quantities import kind_of

    return kind_of(kind).units


def entry_at(design: Design, path: Path) -> Entry | None:
    """The entry at a path, None where the form has no such input."""
    if path[0] == "states" and len(path) > 3:
        return next((one for one in state_entries(design, int(path[1])) if one.path == path), None)
    if path[0] == "requirements":
        return next((one for one in requirement_entries(design) if one.path == path), None)
    for leaf in leaves(design_model(type(design.geometry))):
        if leaf.path == path:
            return _entry(design, path, leaf, leaf.default_text)
    return None


def within(leaf: Leaf, value: float) -> float:
    """A value moved into the limits; a thousandth of the range inside one that is itself left out."""
    low, high = leaf.low, leaf.high
    step = (high - low) / STEPS if low is not None and high is not None else abs(low or high or 1.0) / STEPS
    if low is not None and leaf.lowest is not None and leaf.below(value):
        value = low + (step if leaf.lowest.open else 0.0)
    if high is not None and leaf.highest is not None and leaf.above(value):
        value = high - (step if leaf.highest.open else 0.0)
    return value


def _scale(leaf: Leaf) -> tuple[float, float, bool] | None:
    """(lower end, upper end, logarithmic) of a slider in the leaf's own unit; None where it can have none."""
    if leaf.what not in ("quantity", "count") or leaf.low is None or leaf.high is None or math.isinf(leaf.high):
        return None
    low, high = (float(in_unit(within(leaf, end), leaf.kind, leaf.unit)) for end in (leaf.low, leaf.high))
    if leaf.slider == "log" and high > 0:
        return max(low, high / 10**DECADES), high, True
    return low, high, False


def slider_position(entry: Entry) -> int | None:
    """Where the slider of an input stands, 0 to 1000; None where it has none."""
    scale, value = _scale(entry.leaf), entry.value
    if scale is None or value is None:
        return None
    low, high, logarithmic = scale
    shown = float(in_unit(value, entry.leaf.kind, entry.leaf.unit))
    if logarithmic:
        share = math.log(max(shown, low) / low) / math.log(high / low)
    else:
        share = (shown - low) / (high - low)
    return round(STEPS * min(max(share, 0.0), 1.0))


def slider_text(leaf: Leaf, position: float) -> str:
    """What stands in the field when the slider is moved there: three digits, in the unit of the leaf."""
    scale = _scale(leaf)
    if scale is None:
        return ""
    low, high, logarithmic = scale
    share = min(max(position / STEPS, 0.0), 1.0)
    shown = low * (high / low) ** share if logarithmic else low + share * (high - low)
    if leaf.what == "count":
        return str(round(shown))
    shown = float(f"{shown:.3g}")
    value = within(leaf, float(from_unit(shown, leaf.kind, leaf.unit)))
    return short_text(leaf, value, 4)


def short_text(leaf: Leaf, value: float, digits: int) -> str:
    """A value in a few digits; in more, where rounding would carry it over a limit."""
    text = format_quantity(value, leaf.kind, unit=leaf.unit or None, digits=digits)
    try:
        parse_leaf(leaf, text)
    except UserMistake:
        return leaf.text(value)
    return text
