"""From 0.006 to "6 mm": numbers and units as people read them."""

from __future__ import annotations

import math
from typing import Any

from outcouple.quantities.table import Kind, kind_of

__all__ = ["best_unit", "format_number", "format_quantity", "from_unit", "in_unit", "si_unit", "symbol"]

_TYPESET = {"degC": "°C", "degF": "°F", "deg": "°", "ohm": "Ω", "rtHz": "√Hz", "m2": "m²", "m3": "m³", "e-": "e⁻"}


def format_quantity(value: float | None, kind: str | Kind, unit: str | None = None, digits: int = 4) -> str:
    """A quantity as text that :func:`outcouple.quantities.parse` reads back.

    value   in SI; None and nan show as "-", infinity as "unlimited"
    unit    preferred unit, kept while its number lies from 0.01 to 10,000; else, and by default, the unit that
            suits the size. Of a plain number it is a label behind the value.
    digits  significant digits

    >>> format_quantity(0.006, "length"), format_quantity(253.14999999999998, "temperature")
    ('6 mm', '-20 degC')
    >>> format_quantity(0.0123456, "length", "um"), format_quantity(1.2e-6, "length", "mm")
    ('12.35 mm', '1.2 um')
    """
    if value is None or math.isnan(value):
        return "-"
    if math.isinf(value):
        return "unlimited" if value > 0 else "-unlimited"
    kind = kind_of(kind) if isinstance(kind, str) else kind
    if kind.plain and unit and unit not in kind.units:
        return f"{format_number(float(value), digits)} {unit}"
    if unit is None or not _readable(value, kind, unit):
        unit = best_unit(value, kind, digits=digits)
    number = in_unit(float(value), kind, unit)
    if math.isinf(number):  # zero has no decibels
        unit, number = kind.si_unit, float(value)
    text = format_number(number, digits)
    return f"{text} {unit}" if unit else text


def _readable(value: float, kind: Kind, unit: str) -> bool:
    number = in_unit(value, kind, unit)
    return value == 0.0 or len(kind.shown) < 2 or 1e-2 <= abs(number) < 1e4


def best_unit(value: float, kind: str | Kind, *, digits: int = 4) -> str:
    """The largest shown unit that leaves a number of at least one after rounding; the kind's own for zero.

    >>> best_unit(850e-9, "length"), best_unit(0.0, "length")
    ('nm', 'mm')
    """
    kind = kind_of(kind) if isinstance(kind, str) else kind
    if len(kind.shown) < 2:
        return kind.shown[0] if kind.shown else ""
    if value == 0.0 or not math.isfinite(value):
        return kind.unit if kind.unit in kind.shown else kind.shown[0]
    for unit in reversed(kind.shown):
        if abs(float(f"{in_unit(value, kind, unit):.{digits}g}")) >= 1.0:
            return unit
    return kind.shown[0]


def si_unit(kind: str | Kind) -> str:
    """SI unit of a kind, empty for plain numbers."""
    return (kind_of(kind) if isinstance(kind, str) else kind).si_unit


def in_unit(value: Any, kind: str | Kind, unit: str) -> Any:
    """An SI value, or an array of them, as a number in ``unit``. Raises KeyError where the kind lacks the unit."""
    kind = kind_of(kind) if isinstance(kind, str) else kind
    return kind.units[unit].from_si(value)


def from_unit(number: Any, kind: str | Kind, unit: str) -> Any:
    """A number (or array) in ``unit`` in SI; the reverse of :func:`in_unit`."""
    kind = kind_of(kind) if isinstance(kind, str) else kind
    return kind.units[unit].to_si(number)


def format_number(number: float, digits: int = 4) -> str:
    """A number to significant digits, positional between 1e-4 and 1e6, else with a bare exponent.

    >>> format_number(12345.6), format_number(1.5e-7), format_number(-0.0), format_number(3e9)
    ('12350', '1.5e-7', '0', '3e9')
    """
    if not math.isfinite(number):
        return str(number)
    rounded = float(f"{number:.{digits}g}")
    if rounded == 0.0:
        return "0"
    if 1e-4 <= abs(rounded) < 1e6:
        places = max(0, digits - 1 - math.floor(math.log10(abs(rounded))))
        text = f"{rounded:.{places}f}"
        return text.rstrip("0").rstrip(".") if "." in text else text
    mantissa, exponent = f"{rounded:.{digits - 1}e}".split("e")
    if "." in mantissa:
        mantissa = mantissa.rstrip("0").rstrip(".")
    return f"{mantissa}e{int(exponent)}"


def symbol(unit: str) -> str:
    """A unit as it is typeset; for reading only.

    >>> symbol("um"), symbol("degC"), symbol("mW/cm2"), symbol("nV/rtHz"), symbol("Mohm")
    ('µm', '°C', 'mW/cm²', 'nV/√Hz', 'MΩ')
    """
    return "/".join(_typeset(part) for part in unit.split("/"))


def _typeset(part: str) -> str:
    prefix = "µ" if len(part) > 1 and part[0] == "u" else part[:1]
    part = prefix + part[1:]
    for ending, sign in _TYPESET.items():
        if part.endswith(ending):
            return part[: -len(ending)] + sign
    return part
