"""Quantities at the edge: "6 mm" in a file is 0.006 inside, and 0.006 is shown as "6 mm".

The room promises: :func:`parse` (text to SI), :func:`format_quantity` (SI to text), :func:`in_unit`, :func:`from_unit`
and :func:`best_unit` (numbers for tables and axes), :func:`symbol` (a unit as typeset), and the table of kinds behind
:func:`kind_of`. Only the standard library is used here. A new unit is one row in ``table``.
"""

from __future__ import annotations

from outcouple.quantities.parse import parse
from outcouple.quantities.show import best_unit, format_number, format_quantity, from_unit, in_unit, si_unit, symbol
from outcouple.quantities.table import KINDS, Kind, Unit, is_kind, kind_of

__all__ = [
    "KINDS",
    "Kind",
    "Unit",
    "best_unit",
    "format_number",
    "format_quantity",
    "from_unit",
    "in_unit",
    "is_kind",
    "kind_of",
    "parse",
    "si_unit",
    "symbol",
]
