"""What can be varied in a design, and from where to where it makes sense to vary it."""

from __future__ import annotations

from dataclasses import dataclass

from outcouple.design import Design
from outcouple.errors import UserMistake
from outcouple.fields import Leaf, parse_leaf
from outcouple_dashboard.entries import Entry, section_groups, short_text, state_entries, within, words

__all__ = ["Varying", "find_varying", "sentence", "span_of", "varying"]

Path = tuple[str, ...]
POINTS = 33
"""Points of a curve."""
MAP_POINTS = 15
"""Points along each side of a map."""
DEGREES = 30.0
"""Kelvin to each side of a temperature."""


@dataclass(frozen=True)
class Varying:
    """One input that can run.

    name   as a study takes it: ``prism.base``, ``states.film.touching.thickness``
    label  for people
    group  heading in a picker
    """

    name: str
    label: str
    group: str
    entry: Entry

    @property
    def numeric(self) -> bool:
        """True where it runs between two ends; otherwise over a list."""
        return self.entry.leaf.what in ("quantity", "count")


def varying(design: Design) -> list[Varying]:
    """Everything that can run, decisive inputs first within their section; not what every state sets for itself."""
    found = []
    overruled = set.intersection(*(set(state.changes) for state in design.states)) if design.states else set()
    for group in section_groups(design):
        rows = sorted(group.entries, key=lambda one: not one.leaf.deciding)
        for entry in rows:
            if _can_run(entry) and entry.path not in overruled:
                found.append(Varying(entry.leaf.name, entry.label, words(group.name), entry))
    for at, row in enumerate(design.raw.get("states", [])):
        for entry in state_entries(design, at):
            if _can_run(entry) and entry.path[2] in ("touching", "object"):
                name = ".".join(("states", str(row["name"]), *entry.path[2:]))
                found.append(Varying(name, entry.label, f"state: {row['name']}", entry))
    return found


def _can_run(entry: Entry) -> bool:
    if entry.leaf.what in ("quantity", "count"):
        return entry.value is not None
    return entry.leaf.what in ("choice", "material")


def find_varying(design: Design, name: str | None) -> Varying | None:
    """The input of that name."""
    return next((one for one in varying(design) if one.name == name), None)


def span_of(one: Varying) -> tuple[str, str]:
    """Ends to start from: half to double the present value, inside the limits; a list where there is no between."""
    leaf = one.entry.leaf
    if not one.numeric:
        others = [choice for choice in leaf.choices if choice != one.entry.text]
        return ", ".join([one.entry.text, *others]), ""
    value = one.entry.value or 0.0
    if leaf.kind == "temperature":
        low, high = value - DEGREES, value + DEGREES
    elif value == 0.0:
        low, high = 0.0, 10 * leaf.small_step()
    else:
        low, high = sorted((value / 2, value * 2))
    low, high = within(leaf, low), within(leaf, high)
    if leaf.what == "count":
        low, high = max(int(low), 1), max(int(high), int(low) + 1)
        return str(low), str(high)
    return short_text(leaf, low, 3), short_text(leaf, high, 3)


def sentence(one: Varying, start: str, stop: str, points: int) -> str:
    """The axis as a study reads it."""
    if not one.numeric:
        return f"{one.name} in {start}"
    if one.entry.leaf.what == "count":
        return f"{one.name} in {', '.join(_counts(start, stop, points))}"
    spaced = " log" if one.entry.leaf.slider == "log" and _positive(one.entry.leaf, start, stop) else ""
    return f"{one.name} from {start} to {stop} in {points}{spaced}"


def _positive(leaf: Leaf, *texts: str) -> bool:
    """True where all texts are values above zero; what does not read is left for the study to refuse."""
    try:
        return all(float(parse_leaf(leaf, text)) > 0 for text in texts)
    except UserMistake:
        return False


def _counts(start: str, stop: str, points: int) -> list[str]:
    """Whole numbers between two ends, at most so many; what is no number is left for the study to refuse."""
    try:
        low, high = sorted((int(start), int(stop)))
    except ValueError:
        return [start, stop]
    step = max(1, -(-(high - low) // max(points - 1, 1)))
    return [str(number) for number in range(low, high + 1, step)]
