"""``[materials.<name>]``: a user's own rows for the catalogue."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from pydantic import ValidationError

from outcouple.design.problems import Problem, collect
from outcouple.errors import UserMistake
from outcouple.fields import Section, choice, quantity
from outcouple.materials import Catalogue, material_from_mapping

__all__ = ["OwnMaterial", "material_rows"]


class OwnMaterial(Section):
    """A material by a constant index; tables and formulas are taken as plain lists."""

    index: float | None = quantity(
        None, "number", optional=True, ge=1, le=5, describe="absolute index, constant over wavelength"
    )
    dn_dt: float = quantity(
        "0 1/K", "per_kelvin", ge="-0.01 1/K", le="0.01 1/K", describe="change of the index with temperature"
    )
    temperature: float = quantity(
        "20 degC", "temperature", ge="1 K", le="2000 K", describe="temperature the index holds at"
    )
    absorption: float = quantity(
        "0 1/m", "attenuation", ge="0 1/m", le="1e9 1/m", describe="internal attenuation of power"
    )
    uncertainty: float = quantity(0, "number", ge=0, le=1, describe="of the index")
    kind: str = choice("liquid", ["solid", "liquid", "gas", "tissue", "metal"], describe="what it is")
    source: str = "the user's own value"
    wavelengths: tuple[str, ...] = ()
    indices: tuple[float, ...] = ()
    kappas: tuple[float, ...] = ()
    sellmeier: tuple[tuple[float, float], ...] = ()
    cauchy: tuple[float, ...] = ()


def material_rows(table: Any, catalogue: Catalogue, problems: list[Problem]) -> dict[str, Any]:
    """Checked rows by name, as the catalogue takes them."""
    if not isinstance(table, Mapping):
        problems.append(
            Problem(("materials",), table, "materials are written as [materials.<name>] tables", "")
        )
        return {}
    found = {}
    for name, row in table.items():
        path = ("materials", str(name))
        try:
            own = OwnMaterial.model_validate(row)
            found[str(name)] = material_from_mapping(str(name), own.model_dump(exclude_defaults=False))
        except ValidationError as error:
            problems.extend(collect(error, OwnMaterial, path))
        except UserMistake as mistake:
            problems.append(Problem(path, None, str(mistake), ""))
    return found
