"""SI numbers to texts with units."""

from __future__ import annotations

import math

from outcouple.quantities.units import kind_of

__all__ = ["format_quantity", "in_unit", "si_unit"]


def si_unit(kind: str) -> str:
    """SI unit text of a kind, empty for plain numbers."""
    return kind_of(kind).si


def in_unit(value: float, kind: str, unit: str) -> float:
    """An SI value in one of its kind's units."""
    factor, offset = kind_of(kind).units[unit]
    return (value - offset) / factor


def format_quantity(value: float, kind: str, *, unit: str | None = None, digits: int = 4) -> str:
    """A value for people: "6 mm". ``unit`` where the kind knows it, else the one that gives a number from 1 to 1000.

    A unit text the kind does not know is printed behind the plain value (composite units of metrics).

    >>> format_quantity(0.006, "length")
    '6 mm'
    >>> format_quantity(253.15, "temperature")
    '-20 degC'
    """
    if value is None or not math.isfinite(value):
        return (
            "unlimited" if value == math.inf else "-" if value is None or math.isnan(value) else "-unlimited"
        )
    known = kind_of(kind)
    if unit and unit not in known.units:
        return f"{_number(value, digits)} {unit}"
    chosen = unit if unit is not None and _readable(value, kind, unit) else _best(value, kind)
    text = _number(in_unit(value, kind, chosen), digits)
    return f"{text} {chosen}" if chosen else text


def _readable(value: float, kind: str, unit: str) -> bool:
    """A preferred unit is kept while its number has at most four digits before or three zeros after the point."""
    size = abs(in_unit(value, kind, unit))
    return value == 0 or 1e-2 <= size < 1e4 or len(kind_of(kind).shown) == 1


def _best(value: float, kind: str) -> str:
    shown = kind_of(kind).shown
    for unit in shown:
        if abs(in_unit(value, kind, unit)) >= 0.9995:
            return unit
    return shown[-1] if value else shown[len(shown) // 2]


def _number(value: float, digits: int) -> str:
    rounded = float(f"{value:.{digits}g}")
    if rounded == 0:
        return "0"
    if 1e-4 <= abs(rounded) < 1e6:
        text = f"{rounded:.{max(digits - 1 - math.floor(math.log10(abs(rounded))), 0)}f}"
        return text.rstrip("0").rstrip(".") if "." in text else text
    return f"{rounded:.{digits - 1}e}".replace("e-0", "e-").replace("e+0", "e").replace("e+", "e")
