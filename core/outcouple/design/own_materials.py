"""``[materials.<name>]``: a user's own rows, quantities read, everything else as the catalogue takes it."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from outcouple.design.problems import Problem
from outcouple.errors import UserMistake
from outcouple.materials import Catalogue
from outcouple.quantities import parse

__all__ = ["with_own_materials"]

QUANTITIES: Mapping[str, str] = {
    "wavelengths": "length",
    "at_wavelength": "length",
    "absorption_wavelengths": "length",
    "wavelength_range": "length",
    "reference_temperature": "temperature",
    "temperature_range": "temperature",
    "dn_dT": "per_kelvin",
    "absorption": "attenuation",
}
"""Keys whose values carry units in a design file, alone or in a list."""


def with_own_materials(table: Any, catalogue: Catalogue, problems: list[Problem]) -> Catalogue:
    """The catalogue with a user's rows; what cannot be taken is added to ``problems`` and left out."""
    if not isinstance(table, Mapping):
        problems.append(Problem(("materials",), table, "materials are written as [materials.<name>] tables"))
        return catalogue
    rows: dict[str, dict[str, Any]] = {}
    for name, row in table.items():
        if not isinstance(row, Mapping):
            problems.append(Problem(("materials", name), row, "a material is a table", "write [materials.<name>]"))
            continue
        before = len(problems)
        read = {key: _read(key, value, ("materials", name, key), problems) for key, value in row.items()}
        if len(problems) == before:
            rows[name] = read
    for name, row in rows.items():
        catalogue = _added(name, row, catalogue, problems)
    return catalogue


def _read(key: str, value: Any, path: tuple[str, ...], problems: list[Problem]) -> Any:
    kind = QUANTITIES.get(key)
    if kind is None:
        return value
    try:
        return [parse(one, kind) for one in value] if isinstance(value, list) else parse(value, kind)
    except UserMistake as mistake:
        problems.append(Problem(path, value, str(mistake)))
        return None


def _added(name: str, row: Mapping[str, Any], catalogue: Catalogue, problems: list[Problem]) -> Catalogue:
    try:
        grown = catalogue.with_materials({name: row})
        grown.lookup(name)
    except UserMistake as mistake:
        for line in mistake.lines:
            where, _, text = line.partition(": ")
            key = where.removeprefix(f"materials.{name}").removeprefix(".")
            path = ("materials", name, key) if key else ("materials", name)
            problems.append(Problem(path, row.get(key), text or where))
        return catalogue
    return grown
