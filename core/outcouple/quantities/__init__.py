"""Quantities as people write them, and SI numbers: the only place where units exist.

``units`` is the table of kinds; ``parse`` reads, ``format_quantity`` writes.
"""

from __future__ import annotations

from outcouple.quantities.parse import parse
from outcouple.quantities.show import format_quantity, in_unit, si_unit
from outcouple.quantities.units import KINDS, Kind, kind_of

__all__ = ["KINDS", "Kind", "format_quantity", "in_unit", "kind_of", "parse", "si_unit"]
