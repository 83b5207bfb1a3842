"""Axes of a sweep from sentences: "plate.thickness from 2 mm to 10 mm in 17"."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any, Literal

import numpy as np

from outcouple.design import Design
from outcouple.errors import UserMistake
from outcouple.fields import check_overlay
from outcouple.quantities import format_quantity
from outcouple.studies.places import Place, find_place, with_values

__all__ = ["Axis", "read_axes", "read_axis"]

MOST = 1_000_000
"""Points of a sweep, all axes together."""
EXAMPLE = '"plate.thickness from 2 mm to 10 mm in 17", "... in 17 log", "prism.material in PMMA, polycarbonate"'

_WORD = re.compile(r"\s+(from|in|at)\s+")
_SPAN = re.compile(r"(?P<low>.+?)\s+to\s+(?P<high>.+?)\s+in\s+(?P<count>\S+)(?:\s+(?P<scale>\S+))?\s*")
_LIST = re.compile(r"""\s*(?:"([^"]*)"|'([^']*)'|([^,"']*))\s*(?:,|$)""")


@dataclass(frozen=True)
class Axis:
    """One axis of a sweep.

    place   what varies
    values  as the design holds them: SI numbers, or words
    scale   how the points are spaced
    """

    place: Place
    values: tuple[Any, ...]
    scale: Literal["linear", "log", "list"]

    @property
    def name(self) -> str:
        """The input's name as it was given."""
        return self.place.name

    @property
    def runs(self) -> bool:
        """True where the axis runs as an array within one design."""
        return bool(self.place.path)

    @property
    def numeric(self) -> bool:
        """True where the values are numbers, so that one can stand between two of them."""
        return all(isinstance(value, int | float) and not isinstance(value, bool) for value in self.values)

    @property
    def kind(self) -> str:
        """Kind of quantity; "number" for plain ones, empty for words."""
        if not self.numeric:
            return ""
        return self.place.leaf.kind if self.place.leaf is not None else "number"

    @property
    def unit(self) -> str:
        """Unit the values are shown in."""
        return self.place.leaf.unit if self.place.leaf is not None and self.numeric else ""

    def shown(self, value: Any, *, digits: int = 5) -> str:
        """A value of this axis for reading."""
        if isinstance(value, float):
            return format_quantity(value, self.kind or "number", unit=self.unit or None, digits=digits)
        return self.place.text(value)

    def texts(self) -> list[str]:
        """The values for reading."""
        return [self.shown(value) for value in self.values]


def read_axes(design: Design, texts: Sequence[str]) -> tuple[Axis, ...]:
    """The axes of a sweep; every mistake of every text in one go."""
    if not texts:
        raise UserMistake(f"say what varies: {EXAMPLE}")
    axes, mistakes = [], []
    for text in texts:
        try:
            axes.append(read_axis(design, text))
        except UserMistake as mistake:
            mistakes += [f'"{text}": {line}' for line in mistake.lines]
    mistakes += [_overruled(axis) for axis in axes if _is_overruled(design, axis)]
    names = [axis.place.raw for axis in axes]
    mistakes += [f"{axis.name}: stands on two axes" for axis in axes if names.count(axis.place.raw) > 1]
    total = int(np.prod([len(axis.values) for axis in axes], dtype=float)) if axes else 0
    if total > MOST:
        mistakes.append(f"{total} points are too many (at most {MOST}); take fewer on each axis")
    if mistakes:
        raise UserMistake(*dict.fromkeys(mistakes))
    return tuple(axes)


def _is_overruled(design: Design, axis: Axis) -> bool:
    """True where every state sets the input itself, so that varying it changes nothing."""
    return axis.runs and all(axis.place.path in state.changes for state in design.states)


def _overruled(axis: Axis) -> str:
    return (
        f"{axis.name}: every state sets it by its own expect or set, so varying it here changes nothing; "
        "vary it in a state: states.NAME.expect from ..."
    )


def read_axis(design: Design, text: str) -> Axis:
    """One axis: ``PLACE from A to B in N``, the same with ``log`` behind it, or ``PLACE in A, B, C``.

    Raises UserMistake saying what would be right.
    """
    place, word, rest = _split(design, text)
    if word == "from":
        return _span(place, rest)
    values, mistakes = [], []
    for item in _items(rest):
        try:
            values.append(place.value(item))
        except UserMistake as mistake:
            mistakes += [f"{item!r}: {line}" for line in mistake.lines]
    if mistakes:
        raise UserMistake(*mistakes)
    if len(set(map(str, values))) < len(values):
        raise UserMistake("names a value twice")
    axis = Axis(place, tuple(values), "list")
    _check(design, axis)
    return axis


def _split(design: Design, text: str) -> tuple[Place, str, str]:
    """Place, keyword and what follows it. A state's name may hold a keyword: the first split that fits counts."""
    first: UserMistake | None = None
    for match in _WORD.finditer(text):
        try:
            return find_place(design, text[: match.start()].strip()), match[1], text[match.end() :]
        except UserMistake as mistake:
            first = first or mistake
    if first is not None:
        raise first
    place = find_place(design, text.strip()) if text.strip() else None
    known = f"{place.name} how? " if place is not None else ""
    raise UserMistake(f"{known}an axis reads like {EXAMPLE}")


def _span(place: Place, rest: str) -> Axis:
    match = _SPAN.fullmatch(rest)
    if match is None:
        raise UserMistake(f'write "{place.name} from A to B in N", with "log" behind it for even ratios')
    if place.leaf is not None and place.leaf.what not in ("quantity", "count"):
        raise UserMistake(f'a {place.leaf.what} has no between; write "{place.name} in A, B, C"{_choices(place)}')
    low, high = (_end(place, match[end]) for end in ("low", "high"))
    count = _count(match["count"])
    scale = match["scale"] or "linear"
    if scale not in ("log", "linear"):
        raise UserMistake(f'{scale!r} after the number of points: write "log", or leave it out')
    if low == high:
        raise UserMistake("begins where it ends")
    if scale == "log" and not (low > 0 and high > 0):
        raise UserMistake('"log" needs both ends above zero')
    values = np.geomspace(low, high, count) if scale == "log" else np.linspace(low, high, count)
    values[0], values[-1] = low, high
    if place.leaf is not None and place.leaf.what == "count":
        whole = np.round(values)
        if scale == "linear" and np.any(np.abs(whole - values) > 1e-9):
            raise UserMistake(f"{count} points do not fall on whole numbers; {_whole(low, high)}")
        whole_values = tuple(dict.fromkeys(int(value) for value in whole))
        return Axis(place, whole_values, "log" if scale == "log" else "linear")
    return Axis(place, tuple(float(value) for value in values), "log" if scale == "log" else "linear")


def _end(place: Place, text: str) -> float:
    try:
        value = place.value(text)
    except UserMistake as mistake:
        raise UserMistake(*(f"{text!r}: {line}" for line in mistake.lines)) from None
    if not isinstance(value, int | float):
        raise UserMistake(f"{text!r}: a number is wanted")
    return float(value)


def _whole(low: float, high: float) -> str:
    return f'"in {int(abs(high - low)) + 1}" takes every one'


def _choices(place: Place) -> str:
    choices = place.leaf.choices if place.leaf is not None else ()
    return f"; one of: {', '.join(choices)}" if choices else ""


def _count(text: str) -> int:
    if not text.isascii() or not text.isdigit() or int(text) < 2:
        raise UserMistake(f"{text!r} points: a whole number of at least 2 is wanted")
    return int(text)


def _items(rest: str) -> Iterator[str]:
    """The items of a list; quotes keep a comma inside one."""
    at = 0
    while at < len(rest):
        match = _LIST.match(rest, at)
        if match is None or match.end() == at:
            raise UserMistake(f"{rest[at:]!r}: items are separated by commas; quotes stand around a whole item")
        item = next(part for part in match.groups() if part is not None).strip()
        if not item:
            raise UserMistake("an empty item in the list")
        yield item
        at = match.end()


def _check(design: Design, axis: Axis) -> None:
    """Try the words of an axis at once, so that a wrong one is told before any work."""
    mistakes = []
    if not axis.runs:
        for value in axis.values:
            try:
                with_values(design, {axis.place: value})
            except UserMistake as mistake:
                mistakes += list(mistake.lines)
    elif axis.place.path[0] != "states":
        check_overlay(design.sections, {axis.place.path: np.array(axis.values, dtype=float)})
    if mistakes:
        raise UserMistake(*mistakes)
