"""What is known about one input: its unit, bounds, meaning, reference."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any, Literal

import numpy as np

from outcouple.quantities import format_number, format_quantity, kind_of, parse, si_unit

__all__ = ["Bound", "Leaf", "bound"]

Path = tuple[str, ...]


@dataclass(frozen=True)
class Bound:
    """A limit of a number: in SI, as a person writes it, and whether the limit itself is left out."""

    value: float
    text: str
    open: bool


def bound(closed: str | float | None, opened: str | float | None, kind: str) -> Bound | None:
    """The bound given by one of a closed limit (ge, le) and an open one (gt, lt)."""
    given = closed if closed is not None else opened
    if given is None:
        return None
    text = given if isinstance(given, str) else format_number(float(given), 12)
    return Bound(parse(given, kind), text, closed is None)


@dataclass(frozen=True)
class Leaf:
    """One input of a section.

    path          sections and key, ("prism", "base")
    what          "quantity", "count", "choice", "flag", or what a name stands for ("material")
    kind, unit    kind of quantity, and the unit it is shown and asked for in
    default       as the model holds it (SI); None where required, or where optional and unset
    default_text  as a person writes it; "" where there is none
    lowest, highest  limits, None where there is none
    describe      what it is, for people
    reference     where the default comes from; empty for a plain choice
    section       first line about the section it stands in
    group         heading within the section, for forms
    deciding      shown open in forms; counted when it is left at an unverified default
    optional      may be left unset
    slider        scale a slider should have
    """

    what: str
    describe: str
    kind: str = ""
    unit: str = ""
    default: Any = None
    default_text: str = ""
    required: bool = False
    lowest: Bound | None = None
    highest: Bound | None = None
    choices: tuple[str, ...] = ()
    reference: str = ""
    group: str = ""
    deciding: bool = False
    optional: bool = False
    slider: Literal["linear", "log"] = "linear"
    path: Path = ()
    section: str = ""

    @property
    def name(self) -> str:
        """Dotted path."""
        return ".".join(self.path)

    @property
    def structural(self) -> bool:
        """True where the leaf cannot vary over samples: everything but quantities."""
        return self.what != "quantity"

    @property
    def si_unit(self) -> str:
        """SI unit, empty for plain numbers and words."""
        return si_unit(self.kind) if self.kind else ""

    @property
    def low(self) -> float | None:
        """Lower limit in SI."""
        return None if self.lowest is None else self.lowest.value

    @property
    def high(self) -> float | None:
        """Upper limit in SI."""
        return None if self.highest is None else self.highest.value

    @property
    def bounds(self) -> str:
        """The limits as a person reads them: "1 to 60 mm", "above 0, at most 90 deg"; empty where there are none."""
        low, high = self.lowest, self.highest
        if low is not None and high is not None:
            left = _shared(low, high, self.kind)
            if low.open or high.open:
                return f"{_at_least(low)} {left}, {_at_most(high)} {high.text}"
            return f"{left} to {high.text}"
        if low is not None:
            return f"{_at_least(low)} {low.text}"
        return f"{_at_most(high)} {high.text}" if high is not None else ""

    @property
    def allowed(self) -> str:
        """Limits and meaning, for the end of a message."""
        return ", ".join(part for part in (self.bounds, self.describe) if part)

    def below(self, values: Any) -> Any:
        """True where a value (or each of an array) lies under the lower limit."""
        if self.lowest is None:
            return np.zeros(np.shape(values), dtype=bool)
        return values <= self.lowest.value if self.lowest.open else values < self.lowest.value

    def above(self, values: Any) -> Any:
        """True where a value (or each of an array) lies over the upper limit."""
        if self.highest is None:
            return np.zeros(np.shape(values), dtype=bool)
        return values >= self.highest.value if self.highest.open else values > self.highest.value

    def clip(self, value: float) -> float:
        """The value moved into the limits; a billionth inside an open one."""
        if self.lowest is not None and self.below(value):
            value = self.lowest.value + self._inwards(self.lowest)
        if self.highest is not None and self.above(value):
            value = self.highest.value - self._inwards(self.highest)
        return value

    def _inwards(self, limit: Bound) -> float:
        return 1e-9 * (abs(limit.value) or abs(self.high or self.low or 1.0)) if limit.open else 0.0

    def small_step(self) -> float:
        """A step for an input that stands at zero: a hundredth of its range, one unit where it has none."""
        if self.low is not None and self.high is not None and math.isfinite(self.high - self.low):
            return (self.high - self.low) / 100
        return 1.0

    def text(self, value: Any) -> str:
        """A value of this leaf as a person writes it in a design file, without quotes; empty for None."""
        if value is None:
            return ""
        if self.what == "quantity":
            return format_quantity(float(value), self.kind, unit=self.unit, digits=10)
        if self.what == "flag":
            return "true" if value else "false"
        return str(value)


def _at_least(limit: Bound) -> str:
    return "above" if limit.open else "at least"


def _at_most(limit: Bound) -> str:
    return "below" if limit.open else "at most"


def _shared(low: Bound, high: Bound, kind: str) -> str:
    """The lower limit without its unit where the upper one says it again."""
    number, _, unit = low.text.partition(" ")
    zero = low.value == 0.0 and not kind.startswith("temperature")
    return number if unit and (zero or unit == high.text.partition(" ")[2]) else low.text


def unit_for(kind: str, *texts: Any) -> str:
    """The unit the first of the texts is written in, else the kind's own."""
    units = kind_of(kind).units
    for text in texts:
        unit = text.strip().partition(" ")[2].strip() if isinstance(text, str) else ""
        if unit and unit in units:
            return unit
    return kind_of(kind).unit
