"""Texts with units to SI numbers."""

from __future__ import annotations

import math
import re
from functools import lru_cache

from outcouple.errors import UserMistake, nearest
from outcouple.quantities.units import KINDS, Kind, kind_of

__all__ = ["parse"]

PATTERN = re.compile(r"([-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?)\s*(.*)")
SAME = str.maketrans(
    {"\u00b5": "u", "\u03bc": "u", "\u2212": "-", "\u00b2": "2", "\u00b3": "3", "\u00a0": " "}
)


def parse(text: str | int | float, kind: str) -> float:
    """The SI value of a quantity as a person writes it: "6 mm", "-20 degC", "35 %".

    A plain number is taken only by kinds without a unit. Both micro signs and the typographic minus are known. UserMistake says
    what is wrong and what to write instead.

    >>> parse("6 mm", "length")
    0.006
    >>> parse("-20 degC", "temperature")
    253.15
    """
    if isinstance(text, bool):
        raise UserMistake(f"a truth value is no quantity; {_want(kind_of(kind))}")
    return _parse(text, kind)


@lru_cache(maxsize=4096)
def _parse(text: str | int | float, name: str) -> float:
    kind = kind_of(name)
    if isinstance(text, int | float):
        return _bare(float(text), repr(text), kind)
    if not isinstance(text, str):
        raise UserMistake(f"{type(text).__name__} is no quantity; {_want(kind)}")
    given = text.strip().translate(SAME)
    match = PATTERN.fullmatch(given)
    if match is None:
        raise UserMistake(_no_number(given, kind))
    number, unit = (
        float(match[1]),
        match[2].strip().replace("√Hz", "rtHz").replace("^", "").replace("Ohm", "ohm"),
    )
    unit = unit.replace("*", ".").replace("·", ".")
    if not math.isfinite(number):
        raise UserMistake("too large to be a number")
    if not unit:
        return _bare(number, match[1], kind)
    if unit not in kind.units:
        raise UserMistake(_wrong_unit(match[1], unit, given, kind))
    factor, offset = kind.units[unit]
    return _rounded(number, factor, offset)


def _rounded(number: float, factor: float, offset: float) -> float:
    """factor * number + offset without the last digit's noise of a decimal factor (6 mm is 0.006)."""
    if offset:
        return round(number * factor + offset, 10)
    inverse = 1 / factor
    return (
        number / round(inverse)
        if factor < 1 and abs(inverse - round(inverse)) < 1e-6 * inverse
        else number * factor
    )


def _bare(number: float, given: str, kind: Kind) -> float:
    if not math.isfinite(number):
        raise UserMistake(f"{given} is not a finite number")
    if not kind.bare:
        unit = kind.shown[min(1, len(kind.shown) - 1)]
        raise UserMistake(f'unit missing; write "{given} {unit}"')
    if kind.name == "count" and number != int(number):
        raise UserMistake(f"{given} is not a whole number")
    return number


def _want(kind: Kind) -> str:
    units = ", ".join(unit for unit in kind.units if unit)
    return f"{kind.label} is wanted" + (f" (units: {units})" if units else "")


def _no_number(given: str, kind: Kind) -> str:
    if re.match(r"[-+]?(nan|inf)", given, re.IGNORECASE):
        return f"not a finite number; {_want(kind)}"
    if re.match(r"[-+]?\d+,\d", given):
        return f'write a decimal point: "{given.replace(",", ".", 1)}"'
    return f"does not begin with a number; {_want(kind)}"


def _wrong_unit(number: str, unit: str, given: str, kind: Kind) -> str:
    for other in KINDS.values():
        if unit in other.units and other.name != kind.name:
            return f'"{given}" is {other.label}; {_want(kind)}'
    if re.fullmatch(r",\d+.*", unit):
        return f'write a decimal point: "{given.replace(",", ".", 1)}"'
    guess = nearest(unit, [name for name in kind.units if name])
    return f"unknown unit {unit!r}{guess}; {_want(kind)}"
