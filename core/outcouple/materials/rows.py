"""Materials from plain mappings: the rows of the shipped tables, of ``[materials.<name>]`` and of plugins alike.

Keys, numbers in SI; exactly one of the ways marked * gives the index:

    * index                  a number; with ``based_on`` the value the other material's dispersion is scaled to
    * wavelengths, index     a table: wavelengths [m], rising, and an index for each
    * sellmeier              [[B, C], ...]: n^2 = 1 + sum B w^2 / (w^2 - C), w in um, C in um^2;
                             ``sellmeier_offset`` is added
    * resonances             [[B, r], ...]: the same law with C = r^2, r in um
    * cauchy                 [A, B, C, ...]: n = A + B / w^2 + C / w^4 + ..., w in um
    * series, square_series  [[c, p], ...]: n or n^2 = sum c w^p, w in um
    * gas                    [[B, C], ...]: n - 1 = sum B / (C - w^-2), w in um; ``gas_offset`` is added
    * based_on               another material, taken as it is, or with ``offset`` added to its index
    * law                    "water", "sea water" or "air": the published formulas built in
    at_wavelength            where a lone ``index`` of a ``based_on`` row holds [m], 589.3 nm unless given
    relative_to              "vacuum" (as it is unless said otherwise) or "air" (20 degC, one atmosphere)
    reference_temperature    of the index [K], 293.15 unless given
    dn_dT                    [1/K], of the absolute index
    thermal                  [D0, D1, D2, E0, E1, r]: makers' formula for glass (see ``thermal.glass``)
    hold_temperature         true: the index stays what it is at the ends of ``temperature_range``
    absorption               [1/m]: a number, or a list for ``absorption_wavelengths`` [m]
    extinction               kappa: a list for ``absorption_wavelengths``, or for ``wavelengths`` of a table
    absorption_source        where it comes from
    wavelength_range         [m, m]; temperature_range [K, K]
    uncertainty              half-width of the index
    verified                 "published", "computed" or "unverified"
    kind, summary, source, aliases, remark   as in ``Material``
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

import numpy as np
from numpy.typing import NDArray

from outcouple.errors import UserMistake
from outcouple.materials import dispersion, thermal
from outcouple.materials.air import air_index
from outcouple.materials.material import Absorption, Material
from outcouple.materials.mixing import index_from_refraction, refraction
from outcouple.materials.published import LAWS
from outcouple.materials.row_checks import extinction_key, row_problems

__all__ = ["SODIUM_D", "material_from_mapping"]

Floats = NDArray[np.float64]
Row = Mapping[str, Any]

SODIUM_D = 589.3e-9
"""Mean of the two sodium lines [m], in air as handbooks have it; in vacuum 0.16 nm more, 6e-6 in index."""

SMALLEST = 1e-3
"""An extrapolated index stays above this, whatever lies past a resonance."""


def material_from_mapping(name: str, row: Row, *, lookup: Callable[[str], Material] | None = None) -> Material:
    """A material from a plain mapping with SI numbers; the keys stand at the head of this module.

    lookup  finds the material a ``based_on`` names

    UserMistake names every key that cannot be taken.

    >>> complex(material_from_mapping("resin", {"index": 1.52, "source": "own measurement"}).index(850e-9)).real
    1.52
    """
    problems = row_problems(name, row)
    if problems:
        raise UserMistake(*problems)
    base = _base(name, row, lookup)
    span = tuple(row.get("wavelength_range", _default_span(row, base)))
    warm = tuple(row.get("temperature_range", base.temperature_range if base else (273.15, 333.15)))
    source = str(row.get("source", base.source if base else ""))
    return Material(
        name=name,
        kind=str(row.get("kind", base.kind if base else "solid")),
        summary=str(row.get("summary", "")),
        source=source,
        verified=str(row.get("verified", "published" if row.get("source") else "unverified")),
        real=_law(row, base, (float(warm[0]), float(warm[1]))),
        wavelength_range=(float(span[0]), float(span[1])),
        temperature_range=(float(warm[0]), float(warm[1])),
        uncertainty=float(row.get("uncertainty", base.uncertainty if base else 1e-3)),
        absorbs=_absorption(row) or (base.absorbs if base else None),
        aliases=tuple(row.get("aliases", ())),
        remark=str(row.get("remark", "")),
    )


def _base(name: str, row: Row, lookup: Callable[[str], Material] | None) -> Material | None:
    if "based_on" not in row:
        return None
    if lookup is None:
        raise UserMistake(f"materials.{name}.based_on: no catalogue to take {row['based_on']!r} from")
    try:
        return lookup(str(row["based_on"]))
    except UserMistake as mistake:
        raise UserMistake(*(f"materials.{name}.based_on: {line}" for line in mistake.lines)) from None


def _default_span(row: Row, base: Material | None) -> tuple[float, float]:
    if "wavelengths" in row:
        return (row["wavelengths"][0], row["wavelengths"][-1])
    return base.wavelength_range if base else (400e-9, 1100e-9)


def _law(row: Row, base: Material | None, warm: tuple[float, float]) -> Callable[[Floats, Floats], Floats]:
    """Absolute real index by wavelength and temperature."""
    if "law" in row:
        return LAWS[row["law"]]
    reference = float(row.get("reference_temperature", 293.15))
    if base is not None:
        return _law_of_base(row, base, reference, warm)
    at_reference, by_temperature = _dispersion(row), _thermal(row, reference, warm)
    relative = row.get("relative_to") == "air"

    def law(wavelength: Floats, temperature: Floats) -> Floats:
        index = at_reference(wavelength)
        if relative:
            index = index * air_index(wavelength)
        return np.maximum(by_temperature(index, wavelength, temperature), SMALLEST)

    return law


def _law_of_base(
    row: Row, base: Material, reference: float, warm: tuple[float, float]
) -> Callable[[Floats, Floats], Floats]:
    """The other material's index, shifted by ``offset`` or scaled in refraction to ``index``."""
    offset, target = float(row.get("offset", 0.0)), row.get("index")
    own = _thermal(row, reference, warm) if {"dn_dT", "thermal"} & row.keys() else None
    at = np.asarray(row.get("at_wavelength", SODIUM_D), dtype=float)
    scale = 1.0
    if target is not None:
        absolute = float(target) * (float(air_index(at)) if row.get("relative_to") == "air" else 1.0)
        scale = float(refraction(absolute) / refraction(base.real(at, np.asarray(reference))))

    def law(wavelength: Floats, temperature: Floats) -> Floats:
        index = base.real(wavelength, np.full_like(temperature, reference) if own else temperature) + offset
        if target is not None:
            index = index_from_refraction(scale * refraction(index))
        return own(index, wavelength, temperature) if own else index

    return law


def _dispersion(row: Row) -> dispersion.Dispersion:
    if "index" in row:
        if "wavelengths" in row:
            return dispersion.interpolated(row["wavelengths"], row["index"])
        return dispersion.constant(float(row["index"]))
    if "sellmeier" in row:
        return dispersion.sellmeier(row["sellmeier"], row.get("sellmeier_offset", 0.0))
    if "resonances" in row:
        squared = [(b, r * r) for b, r in row["resonances"]]
        return dispersion.sellmeier(squared, row.get("sellmeier_offset", 0.0))
    if "cauchy" in row:
        return dispersion.cauchy(row["cauchy"])
    if "gas" in row:
        return dispersion.gas(row["gas"], row.get("gas_offset", 0.0))
    return dispersion.series(row["series"]) if "series" in row else dispersion.square_series(row["square_series"])


def _thermal(row: Row, reference: float, warm: tuple[float, float]) -> thermal.Thermal:
    if "thermal" in row:
        return thermal.glass(row["thermal"], reference)
    if row.get("kind") == "gas" and "dn_dT" not in row:
        return thermal.gas_law(reference)
    return thermal.linear(float(row.get("dn_dT", 0.0)), reference, warm if row.get("hold_temperature") else None)


def _absorption(row: Row) -> Absorption | None:
    source = str(row.get("absorption_source", row.get("source", "")))
    if "extinction" in row:
        across = np.asarray(row[extinction_key(row)], dtype=float)
        return Absorption(across, 4 * np.pi * np.asarray(row["extinction"], dtype=float) / across, source)
    if "absorption" not in row:
        return None
    across = np.asarray(row.get("absorption_wavelengths", [SODIUM_D]), dtype=float)
    return Absorption(across, np.atleast_1d(np.asarray(row["absorption"], dtype=float)), source)
