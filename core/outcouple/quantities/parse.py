"""From "6 mm" to 0.006, and the many ways a quantity can be written wrongly."""

from __future__ import annotations

import math
import re
from functools import lru_cache

from outcouple.errors import UserMistake, nearest
from outcouple.quantities.table import KINDS, Kind, kind_of

__all__ = ["parse"]

_FORM = re.compile(r"\s*([+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?)\s*(.*?)\s*", re.DOTALL)
_NOT_FINITE = re.compile(r"\s*[+-]?(nan|inf|infinity)\b", re.IGNORECASE)
_COMMA = re.compile(r"\s*([+-]?[0-9]+),([0-9]+)\s*(.*?)\s*", re.DOTALL)

# both micro signs, both ohm signs, typographic minus, superscripts, roots and dots
_SIGNS = str.maketrans(
    {"µ": "u", "μ": "u", "Ω": "ohm", "\u2126": "ohm", "−": "-", "²": "2", "³": "3", "√": "rt", "·": ".", "\u00a0": " "}
)  # fmt: skip
_SPELLINGS = (
    (re.compile(r"°(?=[CF])|°"), "deg"),
    (re.compile(r"\s+"), ""),
    (re.compile(r"\^"), ""),
    (re.compile(r"\*"), "."),
    (re.compile(r"Ohm"), "ohm"),
    (re.compile(r"sqrt\(?Hz\)?"), "rtHz"),
    (re.compile(r"(?<![A-Za-z])([num]?)l(?=/|$)"), r"\1L"),
)


def parse(given: object, kind: str | Kind, *, unit: str = "") -> float:
    """The SI value of a quantity as a person writes it.

    given  text with a unit ("6 mm", "-20 degC", "35 %"), or a number where the kind needs no unit
    kind   name of the kind (see ``kind_of``) or the kind
    unit   unit suggested where one is missing; the kind's own by default

    Raises UserMistake saying what is wrong, without naming ``given`` again unless that helps.

    >>> parse("6 mm", "length"), parse("−20 °C", "temperature"), parse("35 %", "ratio")
    (0.006, 253.15, 0.35)
    >>> parse("30", "angle")
    Traceback (most recent call last):
    ...
    outcouple.errors.UserMistake: unit missing; write "30 deg"
    """
    kind = kind_of(kind) if isinstance(kind, str) else kind
    if isinstance(given, str):
        return _parse_text(given, kind.name, unit or kind.unit)
    if isinstance(given, bool) or not isinstance(given, int | float):
        raise UserMistake(f"{kind.a_label} is wanted{_such_as(kind, unit)}")
    try:
        number = float(given)
    except OverflowError:
        raise UserMistake("too large to be a number") from None
    if not math.isfinite(number):
        raise UserMistake("not a finite number")
    if not kind.plain:
        raise UserMistake(f'unit missing; write "{given} {unit or kind.unit}"')
    return _checked(number, kind)


@lru_cache(maxsize=4096)
def _parse_text(text: str, kind_name: str, unit: str) -> float:
    kind = kind_of(kind_name)
    match = _FORM.fullmatch(text if text.isascii() else text.translate(_SIGNS))
    if match is None:
        raise UserMistake(_no_number(text, kind, unit))
    number = float(match[1])
    name = match[2] if match[2] in kind.units else _spelled(match[2], kind)
    if name not in kind.units:
        raise UserMistake(_wrong_unit(text, match[1], match[2], kind, unit))
    if not math.isfinite(number):
        raise UserMistake("too large to be a number")
    return _checked(_to_si(number, kind, name), kind)


def _to_si(number: float, kind: Kind, name: str) -> float:
    try:
        value = float(kind.units[name].to_si(number))
    except OverflowError:
        value = math.inf
    if not math.isfinite(value):
        raise UserMistake("too large to be a number")
    return value


def _checked(value: float, kind: Kind) -> float:
    if kind.name == "count" and not value.is_integer():
        raise UserMistake("a whole number is wanted")
    if kind.name == "temperature" and value < 0.0:
        raise UserMistake("below absolute zero (-273.15 degC)")
    return value


def _spelled(name: str, kind: Kind) -> str:
    """The unit as the table spells it, or as it stands where the table has nothing like it."""
    for pattern, spelling in _SPELLINGS:
        name = pattern.sub(spelling, name)
    if name not in kind.units and name.endswith("e"):
        return f"{name}-"
    return name


def _such_as(kind: Kind, unit: str) -> str:
    return "" if kind.plain and not (unit or kind.unit) else f', as text such as "1 {unit or kind.unit}"'


def _no_number(text: str, kind: Kind, unit: str) -> str:
    if not text.strip():
        return f"empty; {kind.a_label} is wanted{_such_as(kind, unit)}"
    if _NOT_FINITE.match(text):
        return "not a finite number"
    return f"no number; {kind.a_label} is wanted{_such_as(kind, unit)}"


def _wrong_unit(text: str, number: str, name: str, kind: Kind, unit: str) -> str:
    if not name:
        return f'unit missing; write "{number} {unit}"'
    comma = _COMMA.fullmatch(text)
    if comma:
        whole, part, rest = comma.groups()
        tail = f" {rest}" if rest else ""
        other = f' or "{whole}{part}{tail}"' if len(part) == 3 else ""
        return f'comma in the number; write "{whole}.{part}{tail}"{other}'
    for other_kind in map(kind_of, KINDS):
        if _spelled(name, other_kind) in other_kind.units:
            return f'"{text.strip()}" is {other_kind.a_label}; {kind.a_label} is wanted'
    if name[0] in "0123456789.,_+-±" or re.search(r"\s[0-9]", name):
        return f"not one number with a unit; {kind.a_label} is wanted{_such_as(kind, unit)}"
    allowed = [known for known in kind.units if known]
    names = f"; units of {kind.a_label}: {', '.join(allowed)}" if allowed else f"; {kind.a_label} is wanted"
    return f'unknown unit "{name}"{_near_unit(name, allowed)}{names}'


def _near_unit(name: str, allowed: list[str]) -> str:
    """Like ``nearest``, but mPa and MPa, which differ by their capitals alone, are both offered."""
    alike = [unit for unit in allowed if unit.lower() == name.lower()]
    return f" (did you mean {' or '.join(map(repr, alike))}?)" if alike else nearest(name, allowed)
