"""Whether a mapping can become a material; every mistake named in a line."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from outcouple.errors import nearest
from outcouple.materials.material import KINDS, VERIFIED
from outcouple.materials.published import LAWS

__all__ = ["KEYS", "extinction_key", "row_problems"]

Row = Mapping[str, Any]

WAYS = ("index", "sellmeier", "resonances", "cauchy", "series", "square_series", "gas", "based_on", "law")
KEYS = (
    *WAYS,
    *("wavelengths", "at_wavelength", "sellmeier_offset", "gas_offset", "offset", "relative_to"),
    *("reference_temperature", "dn_dT", "thermal", "hold_temperature"),
    *("absorption", "extinction", "absorption_wavelengths", "absorption_source"),
    *("wavelength_range", "temperature_range", "uncertainty", "verified"),
    *("kind", "summary", "source", "aliases", "remark"),
)
SINGLE = (
    *("at_wavelength", "sellmeier_offset", "gas_offset", "offset"),
    *("reference_temperature", "dn_dT", "uncertainty"),
)
POSITIVE = ("at_wavelength", "reference_temperature", "uncertainty")
PAIRS = ("sellmeier", "resonances", "series", "square_series", "gas")


def row_problems(name: str, row: Row) -> list[str]:
    """One line for every key of a row that cannot be taken; the keys are explained in ``rows``."""
    at = f"materials.{name}"
    found = [f"{at}.{key}: unknown key{nearest(key, KEYS)}" for key in row if key not in KEYS]
    ways = [way for way in WAYS if way in row]
    if not ways:
        found.append(f"{at}: no index given; write one of {', '.join(WAYS)}")
    elif len(ways) > 1 and set(ways) != {"index", "based_on"}:
        found.append(f"{at}: the index is given twice, by {' and '.join(ways)}; keep one")
    if "offset" in row and ways != ["based_on"]:
        found.append(f'{at}.offset: goes with based_on alone; write based_on = "PMMA" and offset = 0.002')
    for key, allowed in (
        ("kind", KINDS),
        ("verified", VERIFIED),
        ("relative_to", ("vacuum", "air")),
        ("law", tuple(LAWS)),
    ):
        if key in row and row[key] not in allowed:
            found.append(f"{at}.{key} = {row[key]!r}: one of {', '.join(allowed)}{nearest(str(row[key]), allowed)}")
    if sum(key in row for key in ("dn_dT", "thermal")) > 1:
        found.append(f"{at}: dn_dT and thermal exclude each other")
    if "absorption" in row and "extinction" in row:
        found.append(f"{at}: absorption and extinction exclude each other")
    return [*found, *(f"{at}.{text}" for text in _shape_problems(row))]


def _shape_problems(row: Row) -> list[str]:
    found = _pair_problems(row) + _number_problems(row) + _table_problems(row)
    aliases = _listed(row.get("aliases", ()))
    if aliases is None or not all(isinstance(one, str) for one in aliases):
        found.append("aliases: a list of names")
    return found or _sign_problems(row)


def _pair_problems(row: Row) -> list[str]:
    return [
        f"{key}: a list of pairs of numbers"
        for key in PAIRS
        if key in row and not all(_numbers(pair, 2) for pair in _listed(row[key]) or [None])
    ]


def _number_problems(row: Row) -> list[str]:
    found = []
    for key, count in (("cauchy", None), ("thermal", 6)):
        if key in row and not _numbers(row[key], count):
            found.append(f"{key}: a list of {f'{count} ' if count else ''}numbers")
    for key in ("wavelength_range", "temperature_range"):
        if key in row and not _numbers(row[key], 2, rising=True):
            found.append(f"{key}: two numbers, smaller first")
    for key in SINGLE:
        if key in row and not _numbers([row[key]], 1):
            found.append(f"{key} = {row[key]!r}: a number")
        elif key in POSITIVE and row.get(key, 0.0) < 0:
            found.append(f"{key} = {row[key]!r}: must not be below 0")
    return found


def _table_problems(row: Row) -> list[str]:
    """Wavelengths, and the lists that go with them."""
    found = [
        f"{key}: a list of at least two rising lengths"
        for key in ("wavelengths", "absorption_wavelengths")
        if key in row and not (_numbers(row[key], None, rising=True) and len(row[key]) > 1 and row[key][0] > 0)
    ]
    if "wavelengths" in row and ("index" not in row or "based_on" in row):
        found.append("wavelengths: go with a list of index, without based_on")
    if found:
        return found
    pairs = (("index", "wavelengths"), ("absorption", "absorption_wavelengths"), ("extinction", extinction_key(row)))
    for key, across in pairs:
        if key in row and across in row and not _numbers(row[key], len(row[across])):
            found.append(f"{key}: a list of as many numbers as {across} has")
        elif key in row and across not in row and (key == "extinction" or not _numbers([row[key]], 1)):
            listed = key == "extinction" or _listed(row[key]) is not None
            found.append(f"{key}: a list needs {across}" if listed else f"{key} = {row[key]!r}: a number")
    return found


def _sign_problems(row: Row) -> list[str]:
    found = []
    if "index" in row and np.min(row["index"]) <= 0:
        found.append(f"index = {row['index']!r}: must be above 0")
    found += [f"{key}: must not be below 0" for key in ("absorption", "extinction") if np.min(row.get(key, 0.0)) < 0]
    return found


def extinction_key(row: Row) -> str:
    """The key whose wavelengths ``extinction`` goes with."""
    return "absorption_wavelengths" if "absorption_wavelengths" in row else "wavelengths"


def _listed(given: Any) -> list[Any] | None:
    return list(given) if isinstance(given, list | tuple | np.ndarray) else None


def _numbers(given: Any, count: int | None, *, rising: bool = False) -> bool:
    values = _listed(given)
    if values is None or not values or (count is not None and len(values) != count):
        return False
    if not all(isinstance(one, int | float | np.number) and not isinstance(one, bool) for one in values):
        return False
    return bool(np.all(np.isfinite(values))) and (not rising or bool(np.all(np.diff(values) > 0)))
